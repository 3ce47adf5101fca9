//! Roots of functions of one variable.

/// The function has the same sign at both ends.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
#[error("no change of sign between {low} and {high}")]
pub struct NoBracket {
    pub low: f64,
    pub high: f64,
}

/// The root of `function` between `low` and `high`, by halving until two neighbouring numbers are left.
///
/// Takes two ends of opposite sign, in the caller's units. Errors: [`NoBracket`], also when an end gives NaN.
pub fn bisect(function: impl Fn(f64) -> f64, low: f64, high: f64) -> Result<f64, NoBracket> {
    let (mut below, mut above) = (low, high);
    let at_low = function(low);
    let at_high = function(high);
    if at_low == 0.0 {
        return Ok(low);
    }
    if at_high == 0.0 {
        return Ok(high);
    }
    if at_low.is_nan() || at_high.is_nan() || (at_low > 0.0) == (at_high > 0.0) {
        return Err(NoBracket { low, high });
    }
    loop {
        let middle = below + 0.5 * (above - below);
        if middle == below || middle == above {
            return Ok(middle);
        }
        if (function(middle) > 0.0) == (at_low > 0.0) {
            below = middle;
        } else {
            above = middle;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn root_of_two_to_the_last_digit() {
        let root = bisect(|x| x * x - 2.0, 0.0, 2.0).unwrap();
        assert!((root - std::f64::consts::SQRT_2).abs() <= f64::EPSILON);
        let falling = bisect(|x| 2.0 - x * x, 0.0, 2.0).unwrap();
        assert!((falling - std::f64::consts::SQRT_2).abs() <= f64::EPSILON);
    }

    #[test]
    fn same_sign_at_both_ends_is_an_error() {
        assert_eq!(bisect(|x| x * x + 1.0, -1.0, 1.0), Err(NoBracket { low: -1.0, high: 1.0 }));
        assert!(bisect(|_| f64::NAN, -1.0, 1.0).is_err());
    }
}
