//! Hill stability of two planets without expansion in the masses.

use super::domain::Domain;
use super::{HillBalance, OutOfDomain};
use crate::coords::Configuration;
use crate::num::bisect;
use nalgebra::Vector3;

/// Hill balance of a star and two planets of any masses, eccentricities and inclinations.
///
/// `found` = −2 M c² h/(G² M*³) with the total mass M, M* = Σ mᵢmⱼ, angular momentum c and energy h about the centre of
/// mass. Sundman's inequality allows only shapes with (ρ/ν)² ≥ `found`, where M*ρ² = Σ mᵢmⱼ rᵢⱼ² and M*/ν = Σ mᵢmⱼ/rᵢⱼ.
/// `needed` is the larger of (ρ/ν)² at the two collinear equilibria with a planet in the middle: above it the planets
/// can never come near to each other, nor change their order. Exact for point masses under Newton's law.
/// Errors: [`OutOfDomain`] unless there are two planets with positive masses and h < 0.
/// Source: Marchal & Bozis (1982); its leading order is [`super::hill_balance`].
pub fn exact_hill_balance(configuration: &Configuration) -> Result<HillBalance, OutOfDomain> {
    let domain = Domain("the Hill stability of Marchal & Bozis (1982)");
    let count = configuration.planets.len();
    domain.need(count == 2, "the number of planets", count as f64, "two planets")?;
    let gm = [configuration.star_gm, configuration.planets[0].gm, configuration.planets[1].gm];
    for mass in gm {
        domain.need(mass > 0.0, "a mass (G times it)", mass, "positive masses")?;
    }
    let (energy, momentum) = conserved(configuration, gm);
    domain.need(energy < 0.0, "the energy (au^5/day^4, G times it)", energy, "bound systems")?;
    let total: f64 = gm.iter().sum();
    let star = pair_sum(gm);
    let found = -2.0 * total * momentum.norm_squared() * energy / star.powi(3);
    let middle = [[gm[0], gm[1], gm[2]], [gm[0], gm[2], gm[1]]].map(|order| collinear(order, star));
    Ok(HillBalance { found, needed: middle[0].max(middle[1]) })
}

fn pair_sum(gm: [f64; 3]) -> f64 {
    gm[0] * gm[1] + gm[0] * gm[2] + gm[1] * gm[2]
}

/// Energy and angular momentum about the centre of mass, both times G (masses are G × mass).
fn conserved(configuration: &Configuration, gm: [f64; 3]) -> (f64, Vector3<f64>) {
    let place = configuration.planets.iter().map(|p| Vector3::from(p.position_au));
    let speed = configuration.planets.iter().map(|p| Vector3::from(p.velocity_au_day));
    let positions: Vec<Vector3<f64>> = std::iter::once(Vector3::zeros()).chain(place).collect();
    let velocities: Vec<Vector3<f64>> = std::iter::once(Vector3::zeros()).chain(speed).collect();
    let total: f64 = gm.iter().sum();
    let mean = |of: &[Vector3<f64>]| of.iter().zip(gm).map(|(v, m)| v * m).sum::<Vector3<f64>>() / total;
    let (centre, drift) = (mean(&positions), mean(&velocities));
    let (mut energy, mut momentum) = (0.0, Vector3::zeros());
    for body in 0..3 {
        let (place, speed) = (positions[body] - centre, velocities[body] - drift);
        momentum += gm[body] * place.cross(&speed);
        energy += 0.5 * gm[body] * speed.norm_squared();
        for other in 0..body {
            energy -= gm[body] * gm[other] / (positions[body] - positions[other]).norm();
        }
    }
    (energy, momentum)
}

/// (ρ/ν)² at the collinear equilibrium with the second mass in the middle: its least value over the place x of that mass
/// between the outer two at 0 and 1.
fn collinear(gm: [f64; 3], star: f64) -> f64 {
    let (near, far, ends) = (gm[0] * gm[1], gm[1] * gm[2], gm[0] * gm[2]);
    let square = |x: f64| near * x * x + far * (1.0 - x) * (1.0 - x) + ends;
    let inverse = |x: f64| near / x + far / (1.0 - x) + ends;
    // d ln(R V²)/dx, times R V.
    let slope = |x: f64| {
        let square_slope = 2.0 * (near * x - far * (1.0 - x));
        let inverse_slope = far / (1.0 - x).powi(2) - near / (x * x);
        square_slope * inverse(x) + 2.0 * square(x) * inverse_slope
    };
    // The slope goes from −∞ to +∞, so there is a root between.
    let x = bisect(slope, 1e-12, 1.0 - 1e-12).unwrap_or(0.5);
    square(x) * inverse(x).powi(2) / star.powi(3)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::coords::{Elements, StatedState, star_centred};
    use crate::criteria::hill_balance;
    use crate::system::Frame;

    fn orbit(axis: f64, eccentricity: f64, inclination: f64, phase: f64) -> Elements {
        Elements {
            semi_major_axis_au: axis,
            eccentricity,
            inclination,
            ascending_node: 0.2,
            argument_of_pericentre: 2.0 * phase,
            mean_anomaly: phase,
        }
    }

    fn two(gm: [f64; 2], orbits: [Elements; 2]) -> Configuration {
        let (pos, vel) = star_centred(Frame::Jacobi, 1.0, &gm, &orbits);
        let bodies = (0..2).map(|k| StatedState {
            name: k.to_string(),
            gm: gm[k],
            radius_au: 0.0,
            position_au: pos[k],
            velocity_au_day: vel[k],
        });
        Configuration::from_states(1.0, 0.0, bodies.collect())
    }

    /// At small masses both sides tend to those of the leading order; the next terms are of order μ.
    #[test]
    fn its_leading_order_is_the_published_form() {
        for (inner, outer) in [(1e-7, 1e-7), (3e-7, 1e-8), (1e-8, 3e-7)] {
            let orbits = [orbit(1.0, 0.1, 0.0, 1.0), orbit(1.6, 0.2, 0.0, 2.5)];
            let exact = exact_hill_balance(&two([inner, outer], orbits)).unwrap();
            let leading = hill_balance([inner, outer], [1.0, 1.6], [0.1, 0.2]).unwrap();
            let total = inner + outer;
            assert!((exact.found / leading.found - 1.0).abs() < 10.0 * total, "{exact:?} {leading:?}");
            let (excess, expected) = (exact.needed - 1.0, leading.needed - 1.0);
            assert!((excess / expected - 1.0).abs() < 3.0 * total.cbrt(), "{excess:e} {expected:e}");
        }
    }

    /// Three equal masses: collinear with r = 1, 1, 2: ρ² = (1 + 1 + 4)/3, 1/ν = (1 + 1 + ½)/3, so (ρ/ν)² = 2 · 25/36.
    #[test]
    fn equal_masses_by_hand() {
        assert!((collinear([1.0; 3], 3.0) - 50.0 / 36.0).abs() < 1e-14);
    }

    /// Sundman: no shape has a smaller (ρ/ν)² than `found`, and along a motion `found` is conserved; mutual inclination
    /// takes stability away as eccentricity does.
    #[test]
    fn inclination_uses_up_stability() {
        let at = |tilt: f64| {
            exact_hill_balance(&two([1e-3, 1e-3], [orbit(1.0, 0.05, 0.0, 1.0), orbit(1.45, 0.05, tilt, 4.0)]))
                .unwrap()
        };
        assert!(at(0.0).stable() && !at(0.9).stable());
        assert_eq!(at(0.0).needed, at(0.9).needed);
    }

    #[test]
    fn outside_its_domain_it_refuses() {
        let massless = two([1e-3, 0.0], [orbit(1.0, 0.1, 0.0, 1.0), orbit(1.6, 0.2, 0.0, 2.5)]);
        assert!(exact_hill_balance(&massless).is_err());
        let unbound = two([1e-3, 1e-3], [orbit(1.0, 0.1, 0.0, 1.0), orbit(-1e-4, 1e4, 0.0, 0.0)]);
        assert!(exact_hill_balance(&unbound).is_err());
        assert!(exact_hill_balance(&Configuration::from_states(1.0, 0.0, Vec::new())).is_err());
    }
}
