//! Numbers of 32 digits as unevaluated sums of two, for constants that are worked out when the program is compiled.
//!
//! Source: Dekker (1971). No fused operations, which constants cannot use.

/// High and low part.
pub(super) type Pair = (f64, f64);

/// a + b, rounded, and the rest of it, exactly (Møller 1965; Knuth 1969).
const fn sum(a: f64, b: f64) -> Pair {
    let high = a + b;
    let part = high - a;
    (high, (a - (high - part)) + (b - part))
}

/// a b, rounded, and the rest of it, exactly: halves of 26 digits have exact products.
const fn product(a: f64, b: f64) -> Pair {
    const fn halves(x: f64) -> Pair {
        let big = 134_217_729.0 * x;
        let high = big - (big - x);
        (high, x - high)
    }
    let (a_high, a_low) = halves(a);
    let (b_high, b_low) = halves(b);
    let high = a * b;
    (high, ((a_high * b_high - high) + a_high * b_low + a_low * b_high) + a_low * b_low)
}

pub(super) const fn add(a: Pair, b: Pair) -> Pair {
    let (high, low) = sum(a.0, b.0);
    sum(high, low + (a.1 + b.1))
}

pub(super) const fn less(a: Pair, b: Pair) -> Pair {
    add(a, (-b.0, -b.1))
}

pub(super) const fn times(a: Pair, b: Pair) -> Pair {
    let (high, low) = product(a.0, b.0);
    sum(high, low + (a.0 * b.1 + a.1 * b.0))
}

pub(super) const fn over(a: Pair, b: f64) -> Pair {
    let first = a.0 / b;
    let rest = less(a, product(first, b));
    let second = rest.0 / b;
    let third = less(rest, product(second, b)).0 / b;
    add((first, 0.0), (second, third))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn thirds_and_sevenths_come_back_whole() {
        for n in [3.0, 7.0, 30.0, 56.0, 72.0] {
            let back = times(over((1.0, 0.0), n), (n, 0.0));
            assert!((back.0 - 1.0 + back.1).abs() < 1e-31, "{n}: {back:?}");
        }
        // 1/3 = 0.333… in binary digits 01 01 01 …: the rest of a double is 2⁻⁵⁴/3.
        assert_eq!(over((1.0, 0.0), 3.0).1, f64::EPSILON / 12.0);
    }

    #[test]
    fn what_is_lost_in_a_product_is_kept() {
        let x = 1.0 + f64::EPSILON;
        assert_eq!(product(x, x), (1.0 + 2.0 * f64::EPSILON, f64::EPSILON * f64::EPSILON));
        assert_eq!(less((1.0, 1e-20), (1.0, 0.0)), (1e-20, 0.0));
    }
}
