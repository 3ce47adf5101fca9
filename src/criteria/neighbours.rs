//! Pairs of planets next to each other.

use super::{HillBalance, NearResonance, hill_balance, mutual_hill_radius_au, near_resonances};
use crate::coords::{BodyKind, Configuration, Elements, Orbit};
use crate::system::Frame;

/// Mutual inclination up to which two orbits count as coplanar for [`two_planet_balance`], rad (5°).
pub(super) const COPLANAR: f64 = 0.087_266_462_599_716_48;

/// Two planets next to each other by period.
#[derive(Clone, Debug, PartialEq)]
pub struct Neighbours {
    /// Indices into `Configuration::planets`.
    pub inner: usize,
    pub outer: usize,
    /// Outer over inner, of the elements in the frame of the configuration.
    pub period_ratio: f64,
    pub mutual_hill_radius_au: f64,
    /// (a₂ − a₁) over the mutual Hill radius, about what both circle ([`Configuration::own_frame`]); infinite for massless planets.
    pub spacing_hill: f64,
    /// Angle between the orbits, rad.
    pub mutual_inclination: f64,
    /// Whether the inner apocentre reaches the outer pericentre, in the same frame.
    pub crossing: bool,
    pub resonances: Vec<NearResonance>,
}

/// All neighbouring pairs of bound planets, from the inside out. A companion is no neighbour, and planets with its
/// orbit between theirs are none either: Hill radii and resonances say nothing about a body as heavy as a star.
pub fn neighbours(configuration: &Configuration) -> Vec<Neighbours> {
    let orbits: Vec<Elements> = configuration.orbits().iter().map(|orbit| orbit.elements).collect();
    let periods = configuration.periods_day();
    let mut bound: Vec<(usize, f64)> = configuration
        .planet_indices()
        .filter(|planet| orbits[*planet].eccentricity < 1.0)
        .filter_map(|planet| periods[planet].map(|period| (planet, period)))
        .collect();
    bound.sort_by(|one, other| one.1.total_cmp(&other.1));
    bound
        .windows(2)
        .filter(|pair| configuration.circles_pair(pair[0].0) == configuration.circles_pair(pair[1].0))
        .map(|pair| pair_of(configuration, &orbits, pair[0], pair[1]))
        .collect()
}

fn pair_of(
    configuration: &Configuration,
    all: &[Elements],
    (inner, inner_day): (usize, f64),
    (outer, outer_day): (usize, f64),
) -> Neighbours {
    let gm = [inner, outer].map(|planet| configuration.planets[planet].gm);
    let orbits = [inner, outer].map(|planet| all[planet]);
    let axes = orbits.map(|orbit| orbit.semi_major_axis_au);
    let mutual_hill_radius_au = mutual_hill_radius_au(configuration.central_gm(inner), gm, axes);
    Neighbours {
        inner,
        outer,
        period_ratio: outer_day / inner_day,
        mutual_hill_radius_au,
        spacing_hill: (axes[1] - axes[0]) / mutual_hill_radius_au,
        mutual_inclination: mutual_inclination(&orbits[0], &orbits[1]),
        crossing: orbits[0].apocentre_au() >= orbits[1].pericentre_au(),
        resonances: near_resonances(outer_day / inner_day),
    }
}

/// Mutual Hill radius of two bodies, au, from their orbits about what they circle; none where one is the companion,
/// whose encounters Hill radii do not measure.
pub fn encounter_radius_au(configuration: &Configuration, orbits: &[Orbit], pair: [usize; 2]) -> Option<f64> {
    let bodies = pair.map(|index| &configuration.planets[index]);
    if bodies.iter().any(|body| body.kind == BodyKind::Companion) {
        return None;
    }
    let central = configuration.central_gm(pair[0]).max(configuration.central_gm(pair[1]));
    let axes = pair.map(|index| orbits[index].elements.semi_major_axis_au);
    Some(mutual_hill_radius_au(central, bodies.map(|body| body.gm), axes))
}

/// Angle between two orbits, rad: half-angle form, exact for small ones.
///
/// sin²(I/2) = sin²((i₁−i₂)/2) + sin i₁ sin i₂ sin²((Ω₁−Ω₂)/2).
pub(super) fn mutual_inclination(one: &Elements, other: &Elements) -> f64 {
    let tilt = (0.5 * (one.inclination - other.inclination)).sin();
    let twist = (0.5 * (one.ascending_node - other.ascending_node)).sin();
    let square = tilt * tilt + one.inclination.sin() * other.inclination.sin() * twist * twist;
    2.0 * square.sqrt().min(1.0).asin()
}

/// Hill balance of a system of exactly two planets and no companion whose orbits lie within 5° of each other; none otherwise.
pub fn two_planet_balance(configuration: &Configuration) -> Option<HillBalance> {
    let pairs = neighbours(configuration);
    let [pair] = pairs.as_slice() else { return None };
    if configuration.planets.len() != 2 || pair.mutual_inclination > COPLANAR {
        return None;
    }
    let astrocentric = configuration.elements_in(Frame::Astrocentric);
    let both = [pair.inner, pair.outer];
    hill_balance(
        both.map(|planet| configuration.planets[planet].gm / configuration.star_gm),
        both.map(|planet| astrocentric[planet].semi_major_axis_au),
        both.map(|planet| astrocentric[planet].eccentricity),
    )
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::coords::{StatedState, star_centred};

    fn orbit(axis: f64, eccentricity: f64, inclination: f64, node: f64) -> Elements {
        Elements {
            semi_major_axis_au: axis,
            eccentricity,
            inclination,
            ascending_node: node,
            argument_of_pericentre: 0.3,
            mean_anomaly: 1.0,
        }
    }

    fn configuration(orbits: &[Elements]) -> Configuration {
        let gm = vec![3e-9; orbits.len()];
        let (pos, vel) = star_centred(Frame::Astrocentric, 3e-4, &gm, orbits);
        let bodies = pos.iter().zip(&vel).enumerate().map(|(index, (pos, vel))| StatedState {
            name: index.to_string(),
            gm: gm[index],
            radius_au: 1e-5,
            position_au: *pos,
            velocity_au_day: *vel,
        });
        Configuration::from_states(3e-4, 4e-3, bodies.collect())
    }

    #[test]
    fn pairs_go_from_the_inside_out() {
        let orbits = [orbit(3.0, 0.0, 0.1, 0.0), orbit(1.0, 0.2, 0.1, 0.0), orbit(1.5, 0.3, 0.1, 0.0)];
        let pairs = neighbours(&configuration(&orbits));
        let order: Vec<(usize, usize)> = pairs.iter().map(|pair| (pair.inner, pair.outer)).collect();
        assert_eq!(order, [(1, 2), (2, 0)]);
        // 1 (1 + 0.2) > 1.5 (1 − 0.3) but 1.5 (1 + 0.3) < 3.
        assert!(pairs[0].crossing && !pairs[1].crossing);
        assert!((pairs[0].period_ratio - 1.5f64.powf(1.5)).abs() < 1e-12);
        // (2e-5 / 3)^{1/3} · 1.25 au by hand.
        let hill = (2e-5f64 / 3.0).cbrt() * 1.25;
        assert!((pairs[0].mutual_hill_radius_au - hill).abs() < 1e-12);
        assert!((pairs[0].spacing_hill - 0.5 / hill).abs() < 1e-9);
    }

    #[test]
    fn mutual_inclination_is_the_angle_between_the_poles() {
        let pole = |orbit: &Elements| {
            let (sin_node, cos_node) = orbit.ascending_node.sin_cos();
            let (sin, cos) = orbit.inclination.sin_cos();
            [sin * sin_node, -sin * cos_node, cos]
        };
        for (i, node) in [(0.3, 2.0), (1.5, 0.1), (3.0, 6.0)] {
            let (one, other) = (orbit(1.0, 0.0, 0.9, 0.4), orbit(1.0, 0.0, i, node));
            let cos: f64 = pole(&one).iter().zip(pole(&other)).map(|(a, b)| a * b).sum();
            assert!((mutual_inclination(&one, &other) - cos.acos()).abs() < 1e-12);
        }
    }

    #[test]
    fn the_balance_is_for_two_coplanar_planets_only() {
        let flat = [orbit(1.0, 0.0, 0.1, 0.0), orbit(1.5, 0.0, 0.1, 0.0)];
        assert!(two_planet_balance(&configuration(&flat)).unwrap().stable());
        let tilted = [orbit(1.0, 0.0, 0.1, 0.0), orbit(1.5, 0.0, 0.4, 0.0)];
        assert!(two_planet_balance(&configuration(&tilted)).is_none());
        let three = [flat[0], flat[1], orbit(3.0, 0.0, 0.1, 0.0)];
        assert!(two_planet_balance(&configuration(&three)).is_none());
    }
}
