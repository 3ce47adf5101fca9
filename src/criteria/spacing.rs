//! Spacing of neighbouring planets in the units that survival times are given in.

use super::OutOfDomain;
use super::domain::Domain;

/// Spacing of a pair in units of ε^{1/4}.
///
/// 2 (a₂ − a₁)/(a₂ + a₁) / ε^{1/4} with ε = (m₁ + m₂)/(2 m₀). The width of the three-body resonances that drive compact
/// systems of small mass scales with ε^{1/4}, not with the Hill radius (ε^{1/3}): Quillen (2011); Petit et al. (2020).
/// The mean of the two masses and of the two axes is our choice; the papers use equal masses and spacings.
/// Takes mass ratios to the star, axes in au, inner first. Errors: [`OutOfDomain`] unless 0 < a₁ < a₂ and the mean mass
/// ratio is positive and at most 0.01.
pub fn quarter_power_spacing(mass_ratio: [f64; 2], semi_major_axis_au: [f64; 2]) -> Result<f64, OutOfDomain> {
    let domain = Domain("the spacing in the fourth root of the mass ratio");
    let epsilon = 0.5 * (mass_ratio[0] + mass_ratio[1]);
    domain.need(
        epsilon > 0.0 && epsilon <= 0.01,
        "mean mass ratio",
        epsilon,
        "0 < mean mass ratio <= 0.01",
    )?;
    let [inner, outer] = semi_major_axis_au;
    let alpha = inner / outer;
    domain.need(alpha > 0.0 && alpha < 1.0, "a1/a2", alpha, "0 < a1/a2 < 1")?;
    Ok(2.0 * (outer - inner) / (outer + inner) / epsilon.sqrt().sqrt())
}

/// Spacing of a pair in mutual Hill radii: (a₂ − a₁)/R_H, R_H = ((m₁ + m₂)/(3 m₀))^{1/3} (a₁ + a₂)/2.
///
/// Takes mass ratios to the star, axes in au, inner first. Errors: [`OutOfDomain`] unless 0 < a₁ < a₂ and the total mass
/// ratio is positive and at most 0.1 (beyond that the Hill radius is no small length). Source: Chambers et al. (1996);
/// Gladman (1993) for the radius.
pub fn hill_spacing(mass_ratio: [f64; 2], semi_major_axis_au: [f64; 2]) -> Result<f64, OutOfDomain> {
    let domain = Domain("the spacing in mutual Hill radii");
    let total = mass_ratio[0] + mass_ratio[1];
    domain.need(total > 0.0 && total <= 0.1, "total mass ratio", total, "0 < total mass ratio <= 0.1")?;
    let [inner, outer] = semi_major_axis_au;
    let alpha = inner / outer;
    domain.need(alpha > 0.0 && alpha < 1.0, "a1/a2", alpha, "0 < a1/a2 < 1")?;
    Ok((outer - inner) / super::mutual_hill_radius_au(1.0, mass_ratio, semi_major_axis_au))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// By hand: ε = 1e-4 has the fourth root 0.1; 2 · 0.2/2.2 = 0.181818….
    #[test]
    fn by_hand() {
        let spacing = quarter_power_spacing([1e-4; 2], [1.0, 1.2]).unwrap();
        assert!((spacing - 20.0 / 11.0).abs() < 1e-13, "{spacing}");
        // R_H = (3e-3/3)^{1/3} · 1.1 = 0.11.
        let hill = hill_spacing([1.5e-3; 2], [1.0, 1.2]).unwrap();
        assert!((hill - 20.0 / 11.0).abs() < 1e-13, "{hill}");
    }

    #[test]
    fn outside_its_domain_it_refuses() {
        for masses in [[0.0, 0.0], [0.02, 0.02], [f64::NAN, 1e-4]] {
            assert!(quarter_power_spacing(masses, [1.0, 1.2]).is_err());
        }
        assert!(hill_spacing([0.1, 0.1], [1.0, 1.2]).is_err());
        assert!(quarter_power_spacing([1e-4; 2], [1.2, 1.0]).is_err());
        assert!(hill_spacing([1e-4; 2], [1.0, f64::NAN]).is_err());
    }
}
