//! Orbits that cross.

use super::OutOfDomain;
use super::domain::Domain;
use crate::coords::Elements;

/// Whether two orbits in one plane have a point in common.
///
/// r₁(θ) = r₂(θ) has a solution iff |p₂ e⃗₁ − p₁ e⃗₂| ≥ |p₁ − p₂|, with p = a (1 − e²) and e⃗ the vector of length e towards
/// the pericentre: subtract the two conics p/r = 1 + e⃗·r̂. Exact. Takes elements of which a, e and the longitude of
/// pericentre are used; the plane is the caller's to check ([`super::Neighbours::mutual_inclination`]).
/// Errors: [`OutOfDomain`] for orbits that are not bound.
pub fn coplanar_orbits_cross(one: &Elements, other: &Elements) -> Result<bool, OutOfDomain> {
    let domain = Domain("the crossing of two ellipses in a plane");
    for orbit in [one, other] {
        domain.need((0.0..1.0).contains(&orbit.eccentricity), "e", orbit.eccentricity, "0 <= e < 1")?;
    }
    let width =
        |orbit: &Elements| orbit.semi_major_axis_au * (1.0 - orbit.eccentricity) * (1.0 + orbit.eccentricity);
    let (first, second) = (width(one), width(other));
    let (sin_one, cos_one) = one.longitude_of_pericentre().sin_cos();
    let (sin_other, cos_other) = other.longitude_of_pericentre().sin_cos();
    let along = second * one.eccentricity * cos_one - first * other.eccentricity * cos_other;
    let across = second * one.eccentricity * sin_one - first * other.eccentricity * sin_other;
    Ok(along.hypot(across) >= (first - second).abs())
}

/// Eccentricity of the outer planet from which on its pericentre lies inside the inner apocentre: 1 − a₁ (1 + e₁)/a₂.
///
/// Beyond it the orbits cross for some orientation, so it bounds the region where no encounter is possible in the near
/// term; the limit of collision of Laskar & Petit (2017). Negative when the inner apocentre lies beyond a₂.
/// Errors: [`OutOfDomain`] unless 0 < a₁ < a₂ and 0 ≤ e₁ < 1.
pub fn outer_eccentricity_at_crossing(
    semi_major_axis_au: [f64; 2],
    inner_eccentricity: f64,
) -> Result<f64, OutOfDomain> {
    let domain = Domain("the crossing eccentricity");
    let alpha = semi_major_axis_au[0] / semi_major_axis_au[1];
    domain.need(alpha > 0.0 && alpha < 1.0, "a1/a2", alpha, "0 < a1/a2 < 1")?;
    domain.need((0.0..1.0).contains(&inner_eccentricity), "e1", inner_eccentricity, "0 <= e1 < 1")?;
    Ok(1.0 - alpha * (1.0 + inner_eccentricity))
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn orbit(axis: f64, eccentricity: f64, pericentre: f64) -> Elements {
        Elements {
            semi_major_axis_au: axis,
            eccentricity,
            inclination: 0.0,
            ascending_node: 0.0,
            argument_of_pericentre: pericentre,
            mean_anomaly: 0.0,
        }
    }

    proptest! {
        /// The slow twin: the difference of the two radii in 20000 directions changes sign or not.
        #[test]
        fn as_seen_along_the_orbits(a in 0.3..3.0f64, e in 0.0..0.9f64, f in 0.0..0.9f64, w in 0.0..6.3f64) {
            let (one, other) = (orbit(1.0, e, 0.4), orbit(a, f, w));
            let radius = |o: &Elements, theta: f64| {
                o.semi_major_axis_au * (1.0 - o.eccentricity.powi(2))
                    / (1.0 + o.eccentricity * (theta - o.argument_of_pericentre).cos())
            };
            let gaps: Vec<f64> = (0..20000)
                .map(|k| std::f64::consts::TAU * f64::from(k) / 20000.0)
                .map(|theta| radius(&one, theta) / radius(&other, theta) - 1.0)
                .collect();
            let nearest = gaps.iter().fold(f64::MAX, |least, gap| least.min(gap.abs()));
            let signs = gaps.iter().any(|g| *g > 0.0) && gaps.iter().any(|g| *g < 0.0);
            // Grazing within the spacing of the directions is not decided by the twin.
            prop_assume!(signs || nearest > 1e-5);
            prop_assert_eq!(coplanar_orbits_cross(&one, &other).unwrap(), signs);
        }
    }

    #[test]
    fn aligned_ellipses_nest_where_apsides_overlap() {
        let nested = coplanar_orbits_cross(&orbit(1.0, 0.4, 0.0), &orbit(1.3, 0.4, 0.0)).unwrap();
        let turned = coplanar_orbits_cross(&orbit(1.0, 0.4, 0.0), &orbit(1.3, 0.4, 3.0)).unwrap();
        assert!(!nested && turned);
        assert!(coplanar_orbits_cross(&orbit(1.0, 0.4, 0.0), &orbit(-1.3, 1.4, 0.0)).is_err());
    }

    #[test]
    fn the_crossing_eccentricity() {
        assert!((outer_eccentricity_at_crossing([1.0, 2.0], 0.2).unwrap() - 0.4).abs() < 1e-15);
        assert!(outer_eccentricity_at_crossing([2.0, 1.0], 0.2).is_err());
        assert!(outer_eccentricity_at_crossing([1.0, 2.0], f64::NAN).is_err());
    }
}
