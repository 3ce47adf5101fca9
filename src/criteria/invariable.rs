//! Orbits seen from the invariable plane, and the angular momentum deficit of a system.

use super::domain::Domain;
use super::{AmdPair, OutOfDomain, amd_pair};
use crate::coords::{Configuration, Elements};
use nalgebra::{Rotation3, Vector3};

/// Astrocentric elements with the invariable plane as reference plane.
///
/// The state is turned by the shortest way that brings the total angular momentum to z, so longitudes are counted from
/// the image of the old x axis. A system without angular momentum is left as it is.
pub fn invariable_elements(configuration: &Configuration) -> Vec<Elements> {
    let total: f64 =
        configuration.star_gm + configuration.planets.iter().map(|planet| planet.gm).sum::<f64>();
    let weighted = configuration.planets.iter().map(|p| p.gm * Vector3::from(p.velocity_au_day));
    let centre: Vector3<f64> = weighted.sum::<Vector3<f64>>() / total;
    let momentum: Vector3<f64> = configuration
        .planets
        .iter()
        .map(|p| p.gm * Vector3::from(p.position_au).cross(&(Vector3::from(p.velocity_au_day) - centre)))
        .sum();
    elements_to_pole(configuration, momentum)
}

/// Astrocentric elements with the plane across `pole` as reference plane, turned as in [`invariable_elements`].
pub(super) fn elements_to_pole(configuration: &Configuration, pole: Vector3<f64>) -> Vec<Elements> {
    // An exactly retrograde plane has no shortest way; any half turn about an axis in the plane does.
    let turn = Rotation3::rotation_between(&pole, &Vector3::z())
        .unwrap_or_else(|| Rotation3::from_axis_angle(&Vector3::x_axis(), std::f64::consts::PI));
    let turn = if pole.norm() > 0.0 { turn } else { Rotation3::identity() };
    configuration
        .planets
        .iter()
        .map(|planet| {
            let place = turn * Vector3::from(planet.position_au);
            let speed = turn * Vector3::from(planet.velocity_au_day);
            Elements::from_state(configuration.star_gm + planet.gm, place.into(), speed.into())
        })
        .collect()
}

/// Angular momentum of a circular orbit: Λ = m M/(M + m) √(G (M + m) a), times G: au⁵ day⁻³.
fn circular_momentum(star_gm: f64, gm: f64, semi_major_axis_au: f64) -> f64 {
    gm * star_gm / (star_gm + gm) * ((star_gm + gm) * semi_major_axis_au).sqrt()
}

/// The angular momentum deficit of a system, and the calls on its neighbours.
#[derive(Clone, Debug, PartialEq)]
pub struct AmdBudget {
    /// Per planet in the order of the configuration: Λ (1 − √(1−e²) cos i), times G: au⁵ day⁻³.
    pub of_planets: Vec<f64>,
    /// Neighbours from the inside out: indices (inner, outer) and the calls.
    pub pairs: Vec<(usize, usize, AmdPair)>,
    /// C/Λ of the innermost planet; below 1 it cannot be driven into the star.
    pub innermost_relative: f64,
}

impl AmdBudget {
    pub fn total(&self) -> f64 {
        self.of_planets.iter().sum()
    }

    /// Whether no pair can be brought to collision.
    pub fn collision_stable(&self) -> bool {
        self.pairs.iter().all(|(_, _, pair)| pair.collision_stable())
    }
}

/// AMD of every planet relative to the invariable plane, and the pairs judged with the AMD of the whole system.
///
/// C = Σ Λ (1 − √(1−e²) cos i), Λ = m M/(M+m) √(G (M+m) a), astrocentric. Errors: [`OutOfDomain`] for planets without mass,
/// unbound planets, or a pair outside the domain of [`amd_pair`]. Source: Laskar (1997); Laskar & Petit (2017).
pub fn amd_budget(configuration: &Configuration) -> Result<AmdBudget, OutOfDomain> {
    let domain = Domain("the angular momentum deficit");
    let orbits = invariable_elements(configuration);
    let (mut of_planets, mut circular) = (Vec::new(), Vec::new());
    for (planet, orbit) in configuration.planets.iter().zip(&orbits) {
        domain.need(planet.gm > 0.0, "a mass (G times it)", planet.gm, "planets with mass")?;
        let bound = (0.0..1.0).contains(&orbit.eccentricity);
        domain.need(bound, "e", orbit.eccentricity, "0 <= e < 1")?;
        let lambda = circular_momentum(configuration.star_gm, planet.gm, orbit.semi_major_axis_au);
        let square = orbit.eccentricity * orbit.eccentricity;
        let root = (1.0 - square).sqrt();
        // 1 − √(1−e²) cos i without cancellation.
        let tilt = 2.0 * (0.5 * orbit.inclination).sin().powi(2);
        of_planets.push(lambda * (square / (1.0 + root) + root * tilt));
        circular.push(lambda);
    }
    let total: f64 = of_planets.iter().sum();
    let mut order: Vec<usize> = (0..orbits.len()).collect();
    order.sort_by(|a, b| orbits[*a].semi_major_axis_au.total_cmp(&orbits[*b].semi_major_axis_au));
    let pairs = order
        .windows(2)
        .map(|pair| {
            let masses = [pair[0], pair[1]].map(|k| configuration.planets[k].gm / configuration.star_gm);
            let axes = [pair[0], pair[1]].map(|k| orbits[k].semi_major_axis_au);
            Ok((pair[0], pair[1], amd_pair(total / circular[pair[1]], masses, axes)?))
        })
        .collect::<Result<_, OutOfDomain>>()?;
    let innermost_relative = order.first().map_or(0.0, |first| total / circular[*first]);
    Ok(AmdBudget { of_planets, pairs, innermost_relative })
}
