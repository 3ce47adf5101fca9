//! What acts in a configuration, in the form each engine wants.

use crate::coords::{BodyKind, Configuration};
use crate::integrate::StarTerms;
use crate::integrate::State;
use crate::integrate::forces::{Forces, StarTerm, rate_matched, rate_unmatched};
use crate::units::LIGHT;

/// Heliocentric positions with barycentric velocities.
pub(super) fn barycentric(configuration: &Configuration) -> State {
    let total = configuration.star_gm + configuration.planets.iter().map(|p| p.gm).sum::<f64>();
    let mut star = [0.0; 3];
    for planet in &configuration.planets {
        for k in 0..3 {
            star[k] -= planet.gm * planet.velocity_au_day[k] / total;
        }
    }
    let moved = |v: &[f64; 3]| [0, 1, 2].map(|k| v[k] + star[k]);
    State {
        star_gm: configuration.star_gm,
        gm: configuration.planets.iter().map(|p| p.gm).collect(),
        pos: configuration.planets.iter().map(|p| p.position_au).collect(),
        vel: configuration.planets.iter().map(|p| moved(&p.velocity_au_day)).collect(),
    }
}

/// The start for the symplectic schemes: with relativity, velocities that give the potential the right mean motion.
pub(super) fn symplectic_start(configuration: &Configuration) -> State {
    let state = barycentric(configuration);
    if configuration.terms.relativity { rate_matched(&state, LIGHT) } else { state }
}

/// The way back from [`symplectic_start`], for a state that a symplectic scheme with relativity has reached.
pub(super) fn as_stated(state: &State) -> State {
    rate_unmatched(state, LIGHT)
}

/// The star's terms as potentials, for the symplectic schemes.
pub(super) fn star_terms(configuration: &Configuration) -> StarTerms {
    let gm = configuration.star_gm;
    let relativity = if configuration.terms.relativity { 6.0 * gm * gm / (LIGHT * LIGHT) } else { 0.0 };
    let (oblateness, pole) = match configuration.terms.oblateness {
        Some(o) => (1.5 * gm * o.j2 * o.radius_au * o.radius_au, o.pole),
        None => (0.0, [0.0; 3]),
    };
    let satellites = configuration.planets.iter().map(|p| gm * p.satellite_k_au2.unwrap_or(0.0)).collect();
    StarTerms { relativity, oblateness, pole, satellites }
}

/// The same in full, for the adaptive engine from the stated start on.
pub(super) fn forces(configuration: &Configuration) -> Forces {
    with_relativity(configuration, StarTerm::Relativity { light_au_day: LIGHT })
}

/// The law of [`star_terms`], for the adaptive engine on states of a symplectic scheme: those have the velocities of
/// [`symplectic_start`], and the energy that is conserved is that of the potentials.
pub(super) fn potential_forces(configuration: &Configuration) -> Forces {
    with_relativity(configuration, StarTerm::PrecessionPotential { light_au_day: LIGHT })
}

fn with_relativity(configuration: &Configuration, relativity: StarTerm) -> Forces {
    let mut forces = Forces::newton();
    if configuration.terms.relativity {
        forces = forces.with(relativity);
    }
    if let Some(o) = configuration.terms.oblateness {
        forces = forces.with(StarTerm::Oblateness { j2: o.j2, radius_au: o.radius_au, pole: o.pole });
    }
    for (index, planet) in configuration.planets.iter().enumerate() {
        if let Some(k_au2) = planet.satellite_k_au2 {
            forces = forces.with_on(StarTerm::Satellite { k_au2 }, index);
        }
    }
    forces
}

/// Whether a second star is among the bodies.
pub(super) fn has_companion(configuration: &Configuration) -> bool {
    configuration.planets.iter().any(|p| p.kind == BodyKind::Companion)
}

/// How many planets have no mass.
pub(super) fn massless(configuration: &Configuration) -> usize {
    configuration.planets.iter().filter(|p| p.gm == 0.0).count()
}
