//! Overlap of mean-motion resonances: where chaos begins.

use super::OutOfDomain;
use super::domain::Domain;
use crate::coords::Elements;

/// Largest mass ratio for which the expansions in small mass are used; ours.
const LARGEST_MASS: f64 = 0.01;
const MASS_WORDS: &str = "0 < mass ratio <= 0.01";

fn small_mass(domain: &Domain, mass_ratio: f64) -> Result<(), OutOfDomain> {
    domain.need(mass_ratio > 0.0 && mass_ratio <= LARGEST_MASS, "mass ratio", mass_ratio, MASS_WORDS)
}

/// Half-width of the chaotic zone of a massless body near a planet on a circular orbit, as Δa/a: 1.3 μ^{2/7}.
///
/// Errors: [`OutOfDomain`] unless 0 < μ ≤ 0.01. Source: Wisdom (1980), coefficient seen quoted.
pub fn chaotic_zone(mass_ratio: f64) -> Result<f64, OutOfDomain> {
    small_mass(&Domain("the overlap criterion of Wisdom (1980)"), mass_ratio)?;
    Ok(1.3 * mass_ratio.powf(2.0 / 7.0))
}

/// (a₂ − a₁)/a₁ within which first-order resonances of two planets on circular orbits overlap: 1.46 ε^{2/7}.
///
/// ε = (m₁ + m₂)/m₀. Errors: [`OutOfDomain`] unless 0 < ε ≤ 0.01. Source: Deck, Payne & Holman (2013), coefficient from
/// memory; it is the circular limit of [`super::overlap_critical_amd`] to its three digits.
pub fn first_order_overlap(total_mass_ratio: f64) -> Result<f64, OutOfDomain> {
    small_mass(&Domain("the overlap criterion of Deck et al. (2013)"), total_mass_ratio)?;
    Ok(1.46 * total_mass_ratio.powf(2.0 / 7.0))
}

/// Half-width of the chaotic zone of eccentric massless bodies near a circular planet, as Δa/a: 1.8 (e μ)^{1/5} where
/// e > 0.21 μ^{3/7}, else [`chaotic_zone`].
///
/// Errors: [`OutOfDomain`] unless 0 < μ ≤ 0.01 and 0 ≤ e ≤ 0.3 (the expansion is in small e; the bound is ours).
/// Source: Mustill & Wyatt (2012), coefficients from memory.
pub fn eccentric_chaotic_zone(mass_ratio: f64, eccentricity: f64) -> Result<f64, OutOfDomain> {
    let domain = Domain("the eccentric overlap criterion of Mustill & Wyatt (2012)");
    small_mass(&domain, mass_ratio)?;
    domain.need((0.0..=0.3).contains(&eccentricity), "e", eccentricity, "0 <= e <= 0.3")?;
    if eccentricity > 0.21 * mass_ratio.powf(3.0 / 7.0) {
        Ok(1.8 * (eccentricity * mass_ratio).powf(0.2))
    } else {
        chaotic_zone(mass_ratio)
    }
}

/// Relative eccentricity Z of two planets: |e₂ exp(iϖ₂) − e₁ exp(iϖ₁)|/√2.
pub fn relative_eccentricity(one: &Elements, other: &Elements) -> f64 {
    let (sin_one, cos_one) = one.longitude_of_pericentre().sin_cos();
    let (sin_other, cos_other) = other.longitude_of_pericentre().sin_cos();
    let along = other.eccentricity * cos_other - one.eccentricity * cos_one;
    let across = other.eccentricity * sin_other - one.eccentricity * sin_one;
    along.hypot(across) * std::f64::consts::FRAC_1_SQRT_2
}

/// Relative eccentricity at which resonances of every order overlap and chaos begins.
///
/// Z_crit = (a₂ − a₁)/(√2 a₁) exp[−2.2 ε^{1/3} (a₂/(a₂ − a₁))^{4/3}], ε = (m₁ + m₂)/m₀: the crossing value, lowered by the
/// widths of the resonances. Compare [`relative_eccentricity`]. Takes (a₂ − a₁)/a₁ from `semi_major_axis_au`, inner first.
/// Errors: [`OutOfDomain`] unless 0 < ε ≤ 0.01 and 1 < a₂/a₁ ≤ 2 (close pairs; the bounds are ours).
/// Source: Hadden & Lithwick (2018); the constants from memory.
pub fn critical_relative_eccentricity(
    total_mass_ratio: f64,
    semi_major_axis_au: [f64; 2],
) -> Result<f64, OutOfDomain> {
    let domain = Domain("the overlap criterion of Hadden & Lithwick (2018)");
    small_mass(&domain, total_mass_ratio)?;
    let ratio = semi_major_axis_au[1] / semi_major_axis_au[0];
    domain.need(ratio > 1.0 && ratio <= 2.0, "a2/a1", ratio, "1 < a2/a1 <= 2")?;
    let crossing = (ratio - 1.0) * std::f64::consts::FRAC_1_SQRT_2;
    let fill = 2.2 * total_mass_ratio.cbrt() * (ratio / (ratio - 1.0)).powf(4.0 / 3.0);
    Ok(crossing * (-fill).exp())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_eccentric_zone_joins_the_circular_one_within_the_rounding_of_its_coefficients() {
        let mu = 1e-5f64;
        let joint = 0.21 * mu.powf(3.0 / 7.0);
        let (below, above) = (
            eccentric_chaotic_zone(mu, joint * 0.999).unwrap(),
            eccentric_chaotic_zone(mu, joint * 1.001).unwrap(),
        );
        assert_eq!(below, chaotic_zone(mu).unwrap());
        assert!((above / below - 1.0).abs() < 0.02, "{above} {below}");
    }

    #[test]
    fn relative_eccentricity_is_a_vector_difference() {
        let orbit = |eccentricity: f64, pericentre: f64| Elements {
            semi_major_axis_au: 1.0,
            eccentricity,
            inclination: 0.0,
            ascending_node: 0.0,
            argument_of_pericentre: pericentre,
            mean_anomaly: 0.0,
        };
        assert!(relative_eccentricity(&orbit(0.1, 1.0), &orbit(0.1, 1.0)) < 1e-16);
        let opposed = relative_eccentricity(&orbit(0.1, 0.0), &orbit(0.2, std::f64::consts::PI));
        assert!((opposed - 0.3 / 2f64.sqrt()).abs() < 1e-15);
    }

    #[test]
    fn outside_its_domain_it_refuses() {
        for mass in [0.0, 0.02, f64::NAN, -1e-3] {
            assert!(chaotic_zone(mass).is_err() && first_order_overlap(mass).is_err());
            assert!(critical_relative_eccentricity(mass, [1.0, 1.3]).is_err());
        }
        assert!(eccentric_chaotic_zone(1e-4, 0.5).is_err());
        assert!(critical_relative_eccentricity(1e-4, [1.0, 2.5]).is_err());
        assert!(critical_relative_eccentricity(1e-4, [1.3, 1.0]).is_err());
    }
}
