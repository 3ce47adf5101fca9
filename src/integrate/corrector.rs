//! The symplectic corrector of the leapfrog: between true states and the map's own variables.
//!
//! To first order in ε the leapfrog A(h/2)B(h)A(h/2) has the Hamiltonian A + (x/2)/sinh(x/2) B with x = h{·,A};
//! so it is the true motion seen through exp(χ), χ = h g(x) B, g(x) = (1 − (x/2)/sinh(x/2))/x, an odd series. Each
//! pair of kicks ±β at the times ±kαh adds 2β sinh(kαx); eight pairs match the series through x¹⁵.
//! Source: Wisdom, Holman & Touma (1996) for the idea; spacing and coefficients solved here (the test does it again).

use super::advance::{Sequence, run_sequence};
use super::{Block, Scheme};

/// Spacing of the kicks, steps.
const SPACING: f64 = 0.375;

/// Kick at k × spacing, k = 1 … 8, in steps.
const KICKS: [f64; 8] = [
    -0.270_626_272_765_386_79,
    0.217_675_385_492_472_268_8,
    -0.117_704_051_955_022_834_56,
    0.046_358_964_793_907_783_34,
    -0.013_240_563_686_079_363_627,
    0.002_616_843_115_174_434_573,
    -0.000_321_474_526_831_920_256_7,
    0.000_018_540_542_687_214_990_487,
];

/// (drift, kick) pairs in order of time from −8 to +8 spacings, and the drift back to 0 with no kick.
fn sequence() -> Vec<(f64, f64)> {
    let mut at = 0;
    let mut stages = Vec::new();
    for k in (-8i32..=8).filter(|k| *k != 0) {
        let kick = KICKS[k.unsigned_abs() as usize - 1] * f64::from(k.signum());
        stages.push((f64::from(k - at) * SPACING, kick));
        at = k;
    }
    stages.push((f64::from(-at) * SPACING, 0.0));
    stages
}

/// Turns true states into the map's variables, in every lane; nothing to do for uncorrected schemes.
pub fn to_map(block: &mut Block, scheme: &Scheme) {
    if scheme.corrected {
        run_sequence(Sequence { block, stages: &sequence() });
    }
}

/// Turns the map's variables into true states: the exact inverse of [`to_map`].
pub fn from_map(block: &mut Block, scheme: &Scheme) {
    if scheme.corrected {
        let forward = sequence();
        let drifts = forward.iter().rev().map(|s| -s.0);
        let kicks = forward.iter().rev().skip(1).map(|s| -s.1).chain([0.0]);
        let stages: Vec<(f64, f64)> = drifts.zip(kicks).collect();
        run_sequence(Sequence { block, stages: &stages });
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Σₖ 2βₖ (kα)²ʲ⁻¹/(2j−1)! must equal the coefficient of x²ʲ⁻¹ in g, from the series of y/sinh y:
    /// 1 − Σ (2²ⁿ − 2) B₂ₙ y²ⁿ/(2n)! (Abramowitz & Stegun 4.5.65), y = x/2.
    #[test]
    fn kicks_match_the_series() {
        let bernoulli = [
            1.0 / 6.0,
            -1.0 / 30.0,
            1.0 / 42.0,
            -1.0 / 30.0,
            5.0 / 66.0,
            -691.0 / 2730.0,
            7.0 / 6.0,
            -3617.0 / 510.0,
        ];
        let factorial = |n: usize| (1..=n).fold(1.0, |f, k| f * k as f64);
        for j in 1..=8usize {
            let want =
                -(4f64.powi(j as i32) - 2.0) * bernoulli[j - 1] * 0.25f64.powi(j as i32) / factorial(2 * j);
            let term = |k: usize| {
                2.0 * KICKS[k - 1] * (k as f64 * SPACING).powi(2 * j as i32 - 1) / factorial(2 * j - 1)
            };
            let got: f64 = (1..=8).map(term).sum();
            let size: f64 = (1..=8).map(|k| term(k).abs()).sum();
            assert!((got - want).abs() < 1e-15 * size, "x^{}: {got} {want}", 2 * j - 1);
        }
    }
}
