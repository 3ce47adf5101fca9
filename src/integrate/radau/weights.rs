//! Weights of the force's polynomial in velocity and position, with what rounding left of them.
//!
//! The weights are the same in every step, and so is what rounding left of them: 1/3 and 1/6 as doubles err by 2e-17 and 9e-18, and
//! since the derivatives of the force point the same way along the orbit in every step, that alone moves the energy by
//! 3e-17 h⁴ per step of h rad, of one sign (worked out for a circle; measured so on the giant planets). So the first weights carry their rest.

use super::nodes::{NODES, STAGES, TABLE};
use super::pair::{Pair, add, less, over, times};

/// Coefficients F₀, B₁, B₂ have weights with a rest; the others are too small for theirs to count.
const KEPT: usize = 3;

/// Weights of F₀, B₁ … B₇.
#[derive(Clone, Copy)]
pub(super) struct Series {
    high: [f64; STAGES + 1],
    low: [f64; KEPT],
}

impl Series {
    const NONE: Series = Series { high: [0.0; STAGES + 1], low: [0.0; KEPT] };

    /// Σ weight × coefficient, the smallest terms first: what is added late is lost in the rounding of what is there.
    #[inline(always)]
    pub fn sum(&self, force: &[f64], b: &[&[f64]; STAGES], c: usize) -> f64 {
        let mut sum = self.low[2] * b[1][c] + (self.low[1] * b[0][c] + self.low[0] * force[c]);
        for k in (1..=STAGES).rev() {
            sum += self.high[k] * b[k - 1][c];
        }
        sum + self.high[0] * force[c]
    }
}

/// Weights in velocity (per length) and position (per length²) at s.
#[derive(Clone, Copy)]
pub(super) struct Weights {
    pub s: f64,
    pub vel: Series,
    pub at: Series,
}

impl Weights {
    /// As doubles: s^{k+1}/(k + 1) and s^{k+2}/((k + 1)(k + 2)).
    pub const fn plain(s: f64) -> Weights {
        let mut all = Weights { s, vel: Series::NONE, at: Series::NONE };
        let (mut power, mut k) = (s, 0);
        while k <= STAGES {
            all.vel.high[k] = power / (k + 1) as f64;
            power *= s;
            all.at.high[k] = power / ((k + 1) * (k + 2)) as f64;
            k += 1;
        }
        all
    }

    /// With the rests of the first ones.
    const fn with_rests(s: f64) -> Weights {
        let mut all = Weights::plain(s);
        let (mut power, mut k): (Pair, usize) = ((s, 0.0), 0);
        while k < KEPT {
            all.vel.low[k] = rest(over(power, (k + 1) as f64), all.vel.high[k]);
            power = times(power, (s, 0.0));
            all.at.low[k] = rest(over(power, ((k + 1) * (k + 2)) as f64), all.at.high[k]);
            k += 1;
        }
        all
    }
}

const fn rest(exact: Pair, high: f64) -> f64 {
    less(exact, (high, 0.0)).0
}

pub(super) const AT_NODE: [Weights; STAGES + 1] = {
    let mut all = [Weights::plain(0.0); STAGES + 1];
    let mut i = 1;
    while i <= STAGES {
        all[i] = Weights::with_rests(NODES[i]);
        i += 1;
    }
    all
};

/// At the end of a step; the rests also take back by how much the rounded tables miss the integrals of s and s².
pub(super) const END: Weights = {
    let mut end = Weights::plain(1.0);
    let mut degree = 1;
    while degree < KEPT {
        let (vel, at) = integrals(degree, &end);
        end.vel.low[degree] = less(over((1.0, 0.0), (degree + 1) as f64), vel).0;
        end.at.low[degree] = less(over((1.0, 0.0), ((degree + 1) * (degree + 2)) as f64), at).0;
        degree += 1;
    }
    end
};

/// ∫₀¹ s^d and ∫₀¹ (1 − s) s^d, d > 0, through the table and the weights as they are, to 32 digits.
const fn integrals(degree: usize, weights: &Weights) -> (Pair, Pair) {
    let mut g = [(0.0, 0.0); STAGES];
    let mut i = 1;
    while i <= STAGES {
        let mut value: Pair = (1.0, 0.0);
        let mut d = 0;
        while d < degree {
            value = times(value, (NODES[i], 0.0));
            d += 1;
        }
        // The force at node 0 is 0.
        let mut j = 0;
        while j < i {
            let before = if j == 0 { (0.0, 0.0) } else { g[j - 1] };
            value = times(less(value, before), (TABLE.inverse_gap[i][j], 0.0));
            j += 1;
        }
        g[i - 1] = value;
        i += 1;
    }
    let (mut vel, mut at): (Pair, Pair) = ((0.0, 0.0), (0.0, 0.0));
    let mut k = 0;
    while k < STAGES {
        let mut j = 0;
        while j <= k {
            let b = times(g[k], (TABLE.power[k][j], 0.0));
            vel = add(vel, times(b, (weights.vel.high[j + 1], 0.0)));
            at = add(at, times(b, (weights.at.high[j + 1], 0.0)));
            j += 1;
        }
        k += 1;
    }
    (vel, at)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// high + low against s^{k+1}/(k + 1): multiplied back, in 32 digits.
    #[test]
    fn the_first_weights_at_the_nodes_are_good_to_thirty_digits() {
        for (node, weights) in NODES.iter().zip(&AT_NODE).skip(1) {
            let mut power = (*node, 0.0);
            for k in 0..KEPT {
                let n = (k + 1) as f64;
                let back = times((weights.vel.high[k], weights.vel.low[k]), (n, 0.0));
                assert!(less(back, power).0.abs() < 1e-31 * n, "{node} {k}");
                power = times(power, (*node, 0.0));
                let n = ((k + 1) * (k + 2)) as f64;
                let back = times((weights.at.high[k], weights.at.low[k]), (n, 0.0));
                assert!(less(back, power).0.abs() < 1e-31 * n, "{node} {k}");
            }
        }
    }

    /// The quadrature through the rounded tables misses s and s² by 1e-17 without the rests, by nothing with them.
    #[test]
    fn the_tables_integrate_the_first_powers_beyond_double_precision() {
        for degree in 1..KEPT {
            let n = (degree + 1) as f64;
            let exact = [over((1.0, 0.0), n), over((1.0, 0.0), n * (n + 1.0))];
            let (vel, at) = integrals(degree, &END);
            for (found, (low, exact)) in
                [vel, at].into_iter().zip([END.vel.low, END.at.low].into_iter().zip(exact))
            {
                let without = less(found, exact).0;
                assert!((3e-19..3e-17).contains(&without.abs()), "{degree}: {without:e}");
                let with = less(add(found, (low[degree], 0.0)), exact).0;
                assert!(with.abs() < 1e-30, "{degree}: {with:e}");
            }
        }
    }
}
