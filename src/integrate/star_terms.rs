//! What the star does to each planet beside Newton's pull, for the symplectic schemes: all from potentials.
//!
//! Per unit mass, r from the star: relativity −C/(2r²) with C = 6 (GM)²/c² (right precession, Nobili & Roxburgh 1986; the
//! mean motion is set right by the start, see `forces`), oblateness k (3 (n·r)²/r² − 1)/(3 r³) with k = (3/2) GM J₂ R²,
//! an averaged satellite orbit −S/(3r³) with S = K GM.

use super::State;
use crate::lanes::Real;

/// The terms of one configuration. All zero: Newton alone.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct StarTerms {
    /// 6 (GM)²/c², au⁴ day⁻².
    pub relativity: f64,
    /// (3/2) GM J₂ R², au⁵ day⁻².
    pub oblateness: f64,
    /// Unit vector.
    pub pole: [f64; 3],
    /// K GM per planet, au⁵ day⁻²; empty: none.
    pub satellites: Vec<f64>,
}

impl StarTerms {
    /// Whether nothing acts beside Newton's pull.
    pub fn none(&self) -> bool {
        self.relativity == 0.0 && self.oblateness == 0.0 && self.satellites.iter().all(|s| *s == 0.0)
    }

    /// Energy of the terms times G, au⁵ day⁻⁴.
    pub fn energy(&self, state: &State) -> f64 {
        if self.none() {
            return 0.0;
        }
        let each = state.gm.iter().zip(&state.pos).enumerate();
        each.map(|(k, (gm, pos))| {
            let r2: f64 = pos.iter().map(|x| x * x).sum();
            let height: f64 = pos.iter().zip(&self.pole).map(|(x, n)| x * n).sum();
            let cube = r2 * r2.sqrt();
            let satellite = self.satellites.get(k).copied().unwrap_or(0.0);
            let flat = self.oblateness * (3.0 * height * height / r2 - 1.0);
            gm * (-0.5 * self.relativity / r2 + (flat - satellite) / (3.0 * cube))
        })
        .sum()
    }
}

/// The terms in the lanes, without the satellites, which stand with their planets.
#[derive(Clone, Copy)]
pub(super) struct Terms<R> {
    pub relativity: R,
    pub oblateness: R,
    pub pole: [R; 3],
}

#[inline(always)]
fn dot<R: Real>(a: &[R; 3], b: &[R; 3]) -> R {
    a[2].mul_add(b[2], a[1].mul_add(b[1], a[0] * b[0]))
}

impl<R: Real> Terms<R> {
    /// Acceleration of a planet at `r` from the star and, with `TANGENT`, its change for a displacement `dr`.
    ///
    /// a = −(C/r⁴ + S/r⁵) r − (k/r⁵) [(1 − 5z²/r²) r + 2 z n], z = n·r.
    #[inline(always)]
    pub fn pull<const TANGENT: bool>(&self, satellite: R, r: &[R; 3], dr: &[R; 3]) -> ([R; 3], [R; 3]) {
        let two = R::splat(2.0);
        let inv2 = R::splat(1.0) / dot(r, r);
        let inv4 = inv2 * inv2;
        let inv5 = inv4 * inv2.sqrt();
        let from_relativity = self.relativity * inv4;
        let from_satellite = satellite * inv5;
        let flat = self.oblateness * inv5;
        let z = dot(&self.pole, r);
        let z2 = z * z * inv2;
        let along_r =
            -(from_relativity + from_satellite) - flat * z2.neg_mul_add(R::splat(5.0), R::splat(1.0));
        let along_pole = -(two * flat * z);
        let mut a = [along_r; 3];
        for k in 0..3 {
            a[k] = along_r.mul_add(r[k], along_pole * self.pole[k]);
        }
        let mut da = a;
        if TANGENT {
            let closer = dot(r, dr) * inv2;
            let dz = dot(&self.pole, dr);
            let central = from_relativity.mul_add(R::splat(4.0), from_satellite * R::splat(5.0));
            // d[(1 − 5z²/r²)/r⁵] = (−5 closer (1 − 5z²/r²) − 10 (z dz/r² − z² closer/r²))/r⁵
            let inside = z2.neg_mul_add(R::splat(5.0), R::splat(1.0));
            let turn = (z * dz).mul_add(inv2, -(z2 * closer));
            let flat_change = flat * (closer * inside).mul_add(R::splat(5.0), turn * R::splat(10.0));
            let d_along_r = central.mul_add(closer, flat_change);
            let d_along_pole = -(two * flat) * closer.mul_add(-(z * R::splat(5.0)), dz);
            for k in 0..3 {
                let moved = along_r.mul_add(dr[k], d_along_r * r[k]);
                da[k] = d_along_pole.mul_add(self.pole[k], moved);
            }
        }
        (a, da)
    }
}
