//! Where all bodies are, with what rounding left.

/// Numbers x, y, z of the bodies one after another, then of each tangent vector; au and au/day.
///
/// Each is an unevaluated sum: the number and the rest that rounding would have lost (Kahan 1965; Møller 1965).
#[derive(Clone, Debug, Default, PartialEq)]
pub(super) struct Phase {
    pub at: Vec<f64>,
    pub at_low: Vec<f64>,
    pub vel: Vec<f64>,
    pub vel_low: Vec<f64>,
}

impl Phase {
    pub fn zero(len: usize) -> Phase {
        Phase { at: vec![0.0; len], at_low: vec![0.0; len], vel: vec![0.0; len], vel_low: vec![0.0; len] }
    }

    pub fn is_finite(&self) -> bool {
        self.at.iter().chain(&self.vel).all(|x| x.is_finite())
    }

    /// Separation and relative velocity of bodies `i` and `j`, from the first to the second.
    pub fn apart(&self, i: usize, j: usize) -> ([f64; 3], [f64; 3]) {
        let difference = |a: &[f64], low: &[f64]| {
            [0, 1, 2].map(|k| (a[3 * j + k] - a[3 * i + k]) + (low[3 * j + k] - low[3 * i + k]))
        };
        (difference(&self.at, &self.at_low), difference(&self.vel, &self.vel_low))
    }
}

/// a + b as a rounded sum and its rest, exactly (Møller 1965; Knuth 1969).
#[inline(always)]
pub(super) fn two_sum(a: f64, b: f64) -> (f64, f64) {
    let sum = a + b;
    let part = sum - a;
    (sum, (a - (sum - part)) + (b - part))
}

pub(super) fn dot(a: &[f64; 3], b: &[f64; 3]) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}
