//! Three-body (Laplace-type) resonances near the periods of three planets.

use crate::num::greatest_common_divisor;

/// Largest coefficient looked at.
const LARGEST: i32 = 12;
/// How far a combination may be from 0, as |Σ k n|/(n₁ Σ|k|); ours.
const REACH: f64 = 2e-3;
const MOST: usize = 3;

/// A combination k₁ n₁ + k₂ n₂ + k₃ n₃ near 0, planets from the inside out.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct NearChain {
    /// k₁ > 0.
    pub coefficients: [i32; 3],
    /// Σ k n, rad/day.
    pub drift_rad_day: f64,
    /// |Σ k n|/(n₁ Σ|k|).
    pub distance: f64,
}

impl NearChain {
    /// |k₁ + k₂ + k₃|: 0 for Laplace-type combinations, whose strength needs no eccentricity.
    pub fn order(&self) -> u32 {
        self.coefficients.iter().sum::<i32>().unsigned_abs()
    }
}

/// Zeroth- and first-order three-body combinations near three periods (day), from the inside out; at most three.
///
/// k₁ > 0 > k₂, k₃ ≠ 0, |k| ≤ 12 in lowest terms, within 0.002 in |Σ k n|/(n₁ Σ|k|); ranked by distance times
/// (order + 1)² Σ|k|, since they are the weaker the higher order and coefficients. Empty unless 0 < P₁ < P₂ < P₃. A chain of
/// two-body resonances appears too. Source: Laplace (1788) for Jupiter's moons; Quillen (2011); the ranking is ours.
pub fn near_chains(periods_day: [f64; 3]) -> Vec<NearChain> {
    let [first, second, third] = periods_day;
    if !(first > 0.0 && second > first && third > second && third.is_finite()) {
        return Vec::new();
    }
    let motions = periods_day.map(|period| std::f64::consts::TAU / period);
    let size = |near: &NearChain| near.coefficients.iter().map(|k| k.abs()).sum::<i32>();
    let rank = |near: &NearChain| {
        near.distance.max(1e-12) * f64::from((near.order() + 1).pow(2)) * f64::from(size(near))
    };
    let mut found = Vec::new();
    for inner in 1..=LARGEST {
        for outer in (-LARGEST..=LARGEST).filter(|k| *k != 0) {
            for order in -1..=1 {
                let coefficients = [inner, order - inner - outer, outer];
                if let Some(near) = near(coefficients, motions) {
                    found.push(near);
                }
            }
        }
    }
    found.sort_by(|one: &NearChain, other| rank(one).total_cmp(&rank(other)));
    found.truncate(MOST);
    found
}

fn near(coefficients: [i32; 3], motions: [f64; 3]) -> Option<NearChain> {
    let [inner, middle, outer] = coefficients;
    let common = coefficients.iter().fold(0, |common, k| greatest_common_divisor(common, k.unsigned_abs()));
    if !(-2 * LARGEST..0).contains(&middle) || common != 1 {
        return None;
    }
    let drift_rad_day =
        f64::from(inner) * motions[0] + f64::from(middle) * motions[1] + f64::from(outer) * motions[2];
    let size = f64::from(inner + middle.abs() + outer.abs());
    let distance = drift_rad_day.abs() / (motions[0] * size);
    (distance <= REACH).then_some(NearChain { coefficients, drift_rad_day, distance })
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Io, Europa, Ganymede: n₁ − 3 n₂ + 2 n₃ = 0 (Laplace); sidereal periods from memory of common tables.
    #[test]
    fn the_moons_of_jupiter() {
        let near = near_chains([1.769_137_786, 3.551_181_041, 7.154_552_96]);
        assert_eq!(near[0].coefficients, [1, -3, 2]);
        assert_eq!(near[0].order(), 0);
        assert!(near[0].distance < 1e-8, "{:e}", near[0].distance);
    }

    #[test]
    fn periods_out_of_order_have_none() {
        assert!(near_chains([2.0, 1.0, 3.0]).is_empty());
        assert!(near_chains([0.0, 1.0, 3.0]).is_empty());
        assert!(near_chains([1.0, 2.0, f64::NAN]).is_empty());
    }

    #[test]
    fn lowest_terms_only() {
        for near in near_chains([1.0, 1.5, 2.25]) {
            let [a, b, c] = near.coefficients.map(i32::unsigned_abs);
            assert_eq!(greatest_common_divisor(greatest_common_divisor(a, b), c), 1);
        }
    }
}
