//! Force models of the Solar System and the advance of a lone planet, for the tests of the adaptive integrator.

use std::ops::ControlFlow;

use abide::integrate::forces::{Forces, StarTerm};
use abide::integrate::radau::{Engine, EventKind, Stop, TOLERANCE, Watch};

use super::*;

/// Averaged lunar orbit, au² (tests/truth/reference-integrations.csv was made with it), on the third planet.
pub const MOON_K_AU2: f64 = 5.6494891e-8;
pub const EARTH: usize = 2;

/// The forces of a model of the tables: `newton` and what comes on top of it, with plus signs between.
pub fn model(name: &str) -> Forces {
    let add = |forces: Forces, part: &str| match part {
        "newton" => forces,
        "1pn" => forces.with(StarTerm::Relativity { light_au_day: LIGHT }),
        "potential" => forces.with(StarTerm::PrecessionPotential { light_au_day: LIGHT }),
        "quad" => forces.with_on(StarTerm::Satellite { k_au2: MOON_K_AU2 }, EARTH),
        other => panic!("{other} in model {name}"),
    };
    name.split('+').fold(Forces::newton(), add)
}

/// Advance of the pericentre of one planet alone with the Sun, arcsec per century, between closest approaches.
pub fn advance_per_century(planet: usize, forces: &Forces, orbits: usize) -> f64 {
    let (_, all) = solar_system("DE406");
    let one = only(&all, &[planet]);
    // Massless, as in the table: the mass of Jupiter would change its advance by half a per cent.
    let helio = one.vel[0].map(|v| v * (1.0 + one.gm[0] / one.star_gm));
    let state = from_heliocentric(vec![0.0], one.pos, vec![helio]);
    let mut engine = Engine::from_state(&state, &[], forces, TOLERANCE).unwrap();
    let watch = Watch { approach_au: f64::INFINITY, ..Watch::default() };
    let mut passages = Vec::new();
    for _ in 0..=orbits {
        let stop = engine.advance(1e9, &watch, |_| ControlFlow::Break(())).unwrap();
        assert!(matches!(stop, Stop::At(event) if event.kind == EventKind::Approach));
        passages.push((engine.day(), engine.state().pos[0]));
    }
    let (first, last) = (&passages[0], &passages[orbits]);
    let cross = |a: &[f64; 3], b: &[f64; 3]| {
        [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]
    };
    let area = cross(&first.1, &last.1);
    let sine = distance(&area, &[0.0; 3]).copysign(area[2]);
    let cosine: f64 = (0..3).map(|k| first.1[k] * last.1[k]).sum();
    sine.atan2(cosine).to_degrees() * 3600.0 / ((last.0 - first.0) / 36_525.0)
}
