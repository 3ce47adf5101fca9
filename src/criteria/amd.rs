//! Angular momentum deficit: whether what the planets could exchange is enough for a close encounter.
//!
//! Notation: α = a₁/a₂ < 1, γ = m₁/m₂, ε = (m₁ + m₂)/m₀, inner planet first. The relative AMD of a pair is
//! 𝒞 = C/Λ₂ with C = Σ Λ (1 − √(1−e²) cos i) and Λ = m √(G m₀ a).

use super::OutOfDomain;
use super::domain::Domain;
use crate::num::bisect;

/// r of the resonance widths: 0.80199 (Petit, Laskar & Boué 2017, from memory).
const WIDTH: f64 = 0.801_99;

/// A critical relative AMD, with the eccentricity of the inner planet where the limit is touched.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CriticalAmd {
    pub relative: f64,
    pub inner_eccentricity: f64,
}

fn check_pair(domain: &Domain, alpha: f64, gamma: f64) -> Result<(), OutOfDomain> {
    domain.need(alpha > 0.0 && alpha < 1.0, "a1/a2", alpha, "0 < a1/a2 < 1")?;
    domain.need(gamma > 0.0 && gamma.is_finite(), "m1/m2", gamma, "0 < m1/m2")
}

/// Least relative AMD with which two coplanar orbits can touch.
///
/// Minimum of γ√α (1 − √(1−e₁²)) + 1 − √(1−e₂²) on α (1 + e₁) = 1 − e₂, by its derivative, which rises with e₁ alone.
/// Errors: [`OutOfDomain`] unless 0 < α < 1 and γ > 0. Source: Laskar & Petit (2017).
pub fn collision_critical_amd(alpha: f64, gamma: f64) -> Result<CriticalAmd, OutOfDomain> {
    let domain = Domain("AMD-stability against collision (Laskar & Petit 2017)");
    check_pair(&domain, alpha, gamma)?;
    let momentum = gamma * alpha.sqrt();
    let outer = |inner: f64| 1.0 - alpha * (1.0 + inner);
    let root = |e: f64| ((1.0 - e) * (1.0 + e)).sqrt();
    // Multiplied by both roots, so that it is finite at the ends.
    let slope = |e: f64| momentum * e * root(outer(e)) - alpha * outer(e) * root(e);
    let highest = (1.0 / alpha - 1.0).min(1.0);
    let inner_eccentricity = bisect(slope, 0.0, highest).map_err(|_| OutOfDomain {
        criterion: domain.0,
        quantity: "a1/a2",
        found: alpha,
        allowed: "axes that differ by more than rounding",
    })?;
    // 1 − √(1 − e²) without cancellation.
    let deficit = |e: f64| e * e / (1.0 + root(e));
    let relative = momentum * deficit(inner_eccentricity) + deficit(outer(inner_eccentricity));
    Ok(CriticalAmd { relative, inner_eccentricity })
}

/// Relative AMD below which a pair is Hill stable; negative when even circular orbits are not.
///
/// γ√α + 1 − (1 + γ)^{3/2} √[α/(γ + α) · (1 + 3^{4/3} ε^{2/3} γ/(1 + γ)²)].
/// Errors: [`OutOfDomain`] unless 0 < α < 1, γ > 0 and 0 < ε ≤ 0.1. Source: Petit, Laskar & Boué (2018).
pub fn hill_critical_amd(alpha: f64, gamma: f64, epsilon: f64) -> Result<f64, OutOfDomain> {
    let domain = Domain("AMD-stability in the sense of Hill (Petit et al. 2018)");
    check_pair(&domain, alpha, gamma)?;
    domain.need(epsilon > 0.0 && epsilon <= 0.1, "(m1 + m2)/m0", epsilon, "0 < (m1 + m2)/m0 <= 0.1")?;
    let share = gamma / (1.0 + gamma).powi(2);
    let limit = 1.0 + 3f64.powf(4.0 / 3.0) * epsilon.powf(2.0 / 3.0) * share;
    Ok(gamma * alpha.sqrt() + 1.0 - (1.0 + gamma).powf(1.5) * (alpha / (gamma + alpha) * limit).sqrt())
}

/// Least relative AMD with which first-order resonances of a pair overlap; 0 when they do on circular orbits.
///
/// g² γ√α/(2 (1 + γ√α)), g = 3⁴ (1−α)⁵/(2⁹ r ε) − 32 r ε/(9 (1−α)²), r = 0.80199; 0 where g ≤ 0, which is where
/// 1 − α < 1.46 ε^{2/7}. It is the least ½(γ√α e₁² + e₂²) with e₁ + e₂ = g. Far apart it exceeds the collision value,
/// and the smaller of the two counts. Errors: [`OutOfDomain`] unless 0 < α < 1, γ > 0 and 0 < ε ≤ 0.01.
/// Source: Petit, Laskar & Boué (2017), from memory; checked: its circular limit is the 1.46 of Deck et al. (2013).
pub fn overlap_critical_amd(alpha: f64, gamma: f64, epsilon: f64) -> Result<f64, OutOfDomain> {
    let domain = Domain("AMD-stability against overlap (Petit et al. 2017)");
    check_pair(&domain, alpha, gamma)?;
    domain.need(epsilon > 0.0 && epsilon <= 0.01, "(m1 + m2)/m0", epsilon, "0 < (m1 + m2)/m0 <= 0.01")?;
    let gap = 1.0 - alpha;
    let strength = WIDTH * epsilon;
    let g = 81.0 * gap.powi(5) / (512.0 * strength) - 32.0 * strength / (9.0 * gap * gap);
    let momentum = gamma * alpha.sqrt();
    Ok(if g > 0.0 { g * g * momentum / (2.0 * (1.0 + momentum)) } else { 0.0 })
}

/// The three calls on one pair, with the AMD of the whole system.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct AmdPair {
    /// C of the whole system over Λ of the outer planet.
    pub relative: f64,
    pub collision: f64,
    pub hill: f64,
    /// Absent outside the domain of the overlap criterion.
    pub overlap: Option<f64>,
}

impl AmdPair {
    pub fn collision_stable(&self) -> bool {
        self.relative < self.collision
    }

    pub fn hill_stable(&self) -> bool {
        self.relative < self.hill
    }

    /// Stable against overlap and against collision.
    pub fn overlap_stable(&self) -> Option<bool> {
        self.overlap.map(|overlap| self.relative < overlap.min(self.collision))
    }
}

/// Calls on a pair from the AMD of its system.
///
/// `relative` is C/Λ₂ with the AMD of all planets, as if all of it could go to this pair. Mass ratios to the star and axes
/// in au, inner first. Errors: [`OutOfDomain`] of the collision or Hill criterion.
pub fn amd_pair(
    relative: f64,
    mass_ratio: [f64; 2],
    semi_major_axis_au: [f64; 2],
) -> Result<AmdPair, OutOfDomain> {
    let alpha = semi_major_axis_au[0] / semi_major_axis_au[1];
    let gamma = mass_ratio[0] / mass_ratio[1];
    let epsilon = mass_ratio[0] + mass_ratio[1];
    Domain("AMD-stability").need(relative >= 0.0, "the relative AMD", relative, "AMD >= 0")?;
    Ok(AmdPair {
        relative,
        collision: collision_critical_amd(alpha, gamma)?.relative,
        hill: hill_critical_amd(alpha, gamma, epsilon)?,
        overlap: overlap_critical_amd(alpha, gamma, epsilon).ok(),
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::criteria::{circular_limit, hill_balance};
    use proptest::prelude::*;

    proptest! {
        /// The slow twin: no point of a fine grid on the limit lies below the minimum found, and one comes close.
        #[test]
        fn the_least_amd_on_the_limit(alpha in 0.05..0.99f64, log_gamma in -6.0..6.0f64) {
            let gamma = log_gamma.exp();
            let critical = collision_critical_amd(alpha, gamma).unwrap();
            let deficit = |e: f64| 1.0 - (1.0 - e * e).sqrt();
            let highest = (1.0 / alpha - 1.0).min(1.0);
            let least = (0..=20000)
                .map(|k| highest * f64::from(k) / 20000.0)
                .map(|e| gamma * alpha.sqrt() * deficit(e) + deficit(1.0 - alpha * (1.0 + e)))
                .fold(f64::MAX, f64::min);
            prop_assert!(critical.relative <= least + 1e-14 * (1.0 + gamma));
            prop_assert!(least - critical.relative < 1e-5 * least, "{} {}", least, critical.relative);
        }

        /// The same condition as the Hill balance, seen as an AMD: both change sign together.
        #[test]
        fn hill_in_both_forms(alpha in 0.3..0.95f64, log_gamma in -4.0..4.0f64, e in 0.0..0.5f64, f in 0.0..0.5f64) {
            let gamma = log_gamma.exp();
            let masses = [1e-3 * gamma / (1.0 + gamma), 1e-3 / (1.0 + gamma)];
            let balance = hill_balance(masses, [alpha, 1.0], [e, f]).unwrap();
            let deficit = |e: f64| 1.0 - (1.0 - e * e).sqrt();
            let relative = gamma * alpha.sqrt() * deficit(e) + deficit(f);
            let spare = hill_critical_amd(alpha, gamma, 1e-3).unwrap() - relative;
            prop_assume!(spare.abs() > 1e-12);
            prop_assert_eq!(balance.stable(), spare > 0.0);
        }
    }

    #[test]
    fn the_hill_amd_vanishes_at_the_circular_limit() {
        let gap = circular_limit([3e-5, 7e-5]).unwrap();
        let critical = hill_critical_amd(1.0 / (1.0 + gap), 3.0 / 7.0, 1e-4).unwrap();
        assert!(critical.abs() < 1e-13, "{critical:e}");
    }

    /// (14.455 ε²)^{1/7}: 1.46 ε^{2/7} to the three digits of Deck et al. (2013).
    #[test]
    fn overlap_begins_at_the_circular_width() {
        for epsilon in [1e-6f64, 1e-4, 1e-3] {
            let width = bisect(
                |gap| overlap_critical_amd(1.0 - gap, 1.0, epsilon).unwrap() - 1e-12,
                0.2 * epsilon.powf(2.0 / 7.0),
                3.0 * epsilon.powf(2.0 / 7.0),
            )
            .unwrap();
            let coefficient = width / epsilon.powf(2.0 / 7.0);
            assert!((coefficient - 1.46).abs() < 0.006, "{coefficient}");
        }
    }

    #[test]
    fn outside_its_domain_it_refuses() {
        for (alpha, gamma) in [(1.0, 1.0), (0.0, 1.0), (0.5, 0.0), (f64::NAN, 1.0), (0.5, f64::INFINITY)] {
            assert!(collision_critical_amd(alpha, gamma).is_err());
            assert!(hill_critical_amd(alpha, gamma, 1e-3).is_err());
        }
        assert!(hill_critical_amd(0.5, 1.0, 0.2).is_err() && overlap_critical_amd(0.5, 1.0, 0.02).is_err());
        assert!(amd_pair(-1.0, [1e-3; 2], [1.0, 2.0]).is_err());
        let pair = amd_pair(0.01, [1e-3; 2], [1.0, 2.0]).unwrap();
        assert!(pair.collision_stable() && pair.overlap_stable().is_some());
    }
}
