//! The functions Gₙ(β, s) = sⁿ cₙ(β s²) of universal variables, n = 1 … 5.
//!
//! cₙ(z) = Σₖ (−z)ᵏ/(n + 2k)! (Stumpff 1962; Battin 1987). G₀ = 1 − β G₂ is left to the caller.

use crate::lanes::{Mask, Real};

/// G₁ … G₅ at one s.
#[derive(Clone, Copy)]
pub(super) struct Gs<R> {
    pub g1: R,
    pub g2: R,
    pub g3: R,
    pub g4: R,
    pub g5: R,
}

/// 1/24, 1/120, 1/6 and 1/720 are not doubles; what they miss is added before the last rounding. Left out, the error
/// always points the same way and the energy drifts linearly; so it does with seven terms in place of eight.
const LOW_24: f64 = 2.312_964_634_635_742_7e-18;
const LOW_120: f64 = 1.156_482_317_317_871_4e-19;
const LOW_6: f64 = 9.251_858_538_542_97e-18;
const LOW_720: f64 = -5.300_543_954_373_577e-20;

/// Largest |β s²| for which [`series`] is exact to round-off.
pub(super) const SERIES_REACH: f64 = 1.25;

/// G₁ … G₅ from the series of c₄ and c₅; |β s²| at most [`SERIES_REACH`].
#[inline(always)]
pub(super) fn series<R: Real>(beta: R, s: R) -> Gs<R> {
    const C4: [f64; 8] = [
        1.0 / 720.0,
        1.0 / 40_320.0,
        1.0 / 3_628_800.0,
        1.0 / 479_001_600.0,
        1.0 / 87_178_291_200.0,
        1.0 / 20_922_789_888_000.0,
        1.0 / 6_402_373_705_728_000.0,
        1.0 / 2_432_902_008_176_640_000.0,
    ];
    const C5: [f64; 8] = [
        1.0 / 5_040.0,
        1.0 / 362_880.0,
        1.0 / 39_916_800.0,
        1.0 / 6_227_020_800.0,
        1.0 / 1_307_674_368_000.0,
        1.0 / 355_687_428_096_000.0,
        1.0 / 121_645_100_408_832_000.0,
        1.0 / 51_090_942_171_709_440_000.0,
    ];
    let s2 = s * s;
    let z = beta * s2;
    let z2 = z * z;
    let z4 = z2 * z2;
    let p4 = tail(&C4, z, z2, z4);
    let p5 = tail(&C5, z, z2, z4);
    let c4 = p4.neg_mul_add(z, z.neg_mul_add(R::splat(LOW_720), R::splat(LOW_24))) + R::splat(1.0 / 24.0);
    let c5 = p5.neg_mul_add(z, R::splat(LOW_120)) + R::splat(1.0 / 120.0);
    let c3 = c5.neg_mul_add(z, R::splat(LOW_6)) + R::splat(1.0 / 6.0);
    let c2 = c4.neg_mul_add(z, R::splat(0.5));
    let s3 = s2 * s;
    let g3 = s3 * c3;
    Gs { g1: g3.neg_mul_add(beta, s), g2: s2 * c2, g3, g4: s2 * s2 * c4, g5: s3 * s2 * c5 }
}

/// Σ cₖ (−z)ᵏ in pairs and pairs of pairs: three operations deep instead of six.
#[inline(always)]
fn tail<R: Real>(c: &[f64; 8], z: R, z2: R, z4: R) -> R {
    let ab = z.neg_mul_add(R::splat(c[1]), R::splat(c[0]));
    let cd = z.neg_mul_add(R::splat(c[3]), R::splat(c[2]));
    let ef = z.neg_mul_add(R::splat(c[5]), R::splat(c[4]));
    let gh = z.neg_mul_add(R::splat(c[7]), R::splat(c[6]));
    z4.mul_add(z2.mul_add(gh, ef), z2.mul_add(cd, ab))
}

/// G₁ … G₅ for any s: s is halved until the series holds, then doubled back, each lane by its own count.
///
/// Only lanes in `wanted` decide how often the loops turn.
#[inline(always)]
pub(super) fn full_range<R: Real>(beta: R, s: R, wanted: R::Mask) -> Gs<R> {
    const MOST_HALVINGS: usize = 16;
    let one = R::splat(1.0);
    let mut s = s;
    let mut halvings = R::splat(0.0);
    let mut most = 0;
    while most < MOST_HALVINGS {
        let z = (beta * s * s).abs();
        let large = one.lt(z).and(wanted);
        if !large.any() {
            break;
        }
        s = R::select(large, s * R::splat(0.5), s);
        halvings = R::select(large, halvings + one, halvings);
        most += 1;
    }
    let mut g = series(beta, s);
    for turn in 0..most {
        let due = R::splat(turn as f64).lt(halvings);
        let doubled = at_sum(beta, &g, s, &g);
        g = blend(due, &doubled, &g);
        s = R::select(due, s + s, s);
    }
    g
}

/// Gₙ(s + w) from Gₙ(s) and Gₙ(w): the addition theorem.
#[inline(always)]
pub(super) fn at_sum<R: Real>(beta: R, at_s: &Gs<R>, w: R, at_w: &Gs<R>) -> Gs<R> {
    let one = R::splat(1.0);
    let g0 = at_s.g2.neg_mul_add(beta, one);
    let w0 = at_w.g2.neg_mul_add(beta, one);
    let half_w2 = R::splat(0.5) * w * w;
    let sixth_w3 = R::splat(1.0 / 3.0) * half_w2 * w;
    let g1 = at_s.g1.mul_add(w0, g0 * at_w.g1);
    let g2 = at_s.g2 + at_s.g1.mul_add(at_w.g1, g0 * at_w.g2);
    let g3 = at_s.g3 + at_s.g2.mul_add(w, at_s.g1.mul_add(at_w.g2, g0 * at_w.g3));
    let g4 = at_s.g4 + at_s.g3.mul_add(w, at_s.g2.mul_add(half_w2, at_s.g1.mul_add(at_w.g3, g0 * at_w.g4)));
    let g5 = at_s.g5
        + at_s.g4.mul_add(
            w,
            at_s.g3.mul_add(half_w2, at_s.g2.mul_add(sixth_w3, at_s.g1.mul_add(at_w.g4, g0 * at_w.g5))),
        );
    Gs { g1, g2, g3, g4, g5 }
}

/// [`at_sum`] for |β w²| ≤ 5e-6, where three terms of each series are exact to round-off.
///
/// G₁ = (s + w) − β G₃ anew, with s added last: G₁(s) is rounded already, and what w adds to it vanishes whole, again
/// and again with the same sign, when it is below half of its last place.
#[inline(always)]
pub(super) fn at_small_sum<R: Real>(beta: R, s: R, at_s: &Gs<R>, w: R) -> Gs<R> {
    let w2 = w * w;
    let z = beta * w2;
    let c3 = z.mul_add(z.mul_add(R::splat(1.0 / 5040.0), R::splat(-1.0 / 120.0)), R::splat(1.0 / 6.0));
    let c2 = z.mul_add(z.mul_add(R::splat(1.0 / 720.0), R::splat(-1.0 / 24.0)), R::splat(0.5));
    let g3 = w2 * w * c3;
    let at_w = Gs {
        g1: g3.neg_mul_add(beta, w),
        g2: w2 * c2,
        g3,
        g4: w2 * w2 * R::splat(1.0 / 24.0),
        g5: w2 * w2 * w * R::splat(1.0 / 120.0),
    };
    let sum = at_sum(beta, at_s, w, &at_w);
    Gs { g1: s + sum.g3.neg_mul_add(beta, w), ..sum }
}

/// `mask ? yes : no` for all five.
#[inline(always)]
pub(super) fn blend<R: Real>(mask: R::Mask, yes: &Gs<R>, no: &Gs<R>) -> Gs<R> {
    Gs {
        g1: R::select(mask, yes.g1, no.g1),
        g2: R::select(mask, yes.g2, no.g2),
        g3: R::select(mask, yes.g3, no.g3),
        g4: R::select(mask, yes.g4, no.g4),
        g5: R::select(mask, yes.g5, no.g5),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Closed forms, away from the cancellation at small arguments.
    fn closed(beta: f64, s: f64) -> [f64; 5] {
        let x = beta.abs().sqrt();
        let (g0, g1) = if beta > 0.0 {
            ((x * s).cos(), (x * s).sin() / x)
        } else {
            ((x * s).cosh(), (x * s).sinh() / x)
        };
        let g2 = (1.0 - g0) / beta;
        let g3 = (s - g1) / beta;
        let g4 = (0.5 * s * s - g2) / beta;
        let g5 = (s * s * s / 6.0 - g3) / beta;
        [g1, g2, g3, g4, g5]
    }

    fn numbers(g: Gs<f64>) -> [f64; 5] {
        [g.g1, g.g2, g.g3, g.g4, g.g5]
    }

    #[test]
    fn every_route_agrees_with_the_closed_forms() {
        for beta in [1.3f64, -0.7] {
            for s in [0.8, 2.5, 6.0, 9.0] {
                let want = closed(beta, s);
                let split =
                    at_sum(beta, &full_range(beta, 0.6 * s, true), 0.4 * s, &full_range(beta, 0.4 * s, true));
                let nudged = at_small_sum(beta, s - 1e-3, &full_range(beta, s - 1e-3, true), 1e-3);
                for (route, got) in [("full", full_range(beta, s, true)), ("sum", split), ("nudge", nudged)] {
                    for (n, (g, w)) in numbers(got).into_iter().zip(want).enumerate() {
                        let slack = 1e-12 * (1.0 + want.iter().fold(0.0f64, |a, b| a.max(b.abs())));
                        assert!((g - w).abs() < slack, "{route} beta {beta} s {s}: G{} {g} {w}", n + 1);
                    }
                }
            }
        }
    }
}
