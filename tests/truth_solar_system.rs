//! The eight planets of the Sun: what must be kept is kept, and planets without mass move as Kepler says.

mod truth_support;

use std::f64::consts::TAU;

use abide::assess::auto_step_day;
use abide::coords::Elements;
use abide::integrate::{Advance, Scheme, advance, from_map};
use truth_support::energy::{block, energy_errors, slope_of_pieces};
use truth_support::{solar_system, state};

/// 1e6 steps of 1/20 of Mercury's pericentre passage (about 7800 years): the error swings, and any trend is within
/// three of its own standard errors or within what rounding adds: one unit per substep and step, at random (Brouwer 1937).
#[test]
fn energy_error_of_the_solar_system_has_no_trend() {
    let sun = solar_system();
    let step = auto_step_day(&sun);
    for (name, step, bound) in [("(2,2)", step, 1e-10), ("(10,6,4)", step, 3e-12)] {
        let scheme = Scheme::named(name).unwrap();
        let (steps, samples) = (1_000_000, 4000);
        let errors = energy_errors(&sun, scheme, step, steps, samples);
        let worst = errors.iter().fold(0.0f64, |most, e| most.max(e.abs()));
        let (slope, error) = slope_of_pieces(&errors);
        let (trend, spread) = (slope * samples as f64, error * samples as f64);
        let rounding = 2.0 * f64::EPSILON * ((steps * scheme.stages()) as f64).sqrt();
        assert!(trend.abs() <= (3.0 * spread).max(rounding), "{name}: {trend:e} ± {spread:e}");
        assert!(worst < bound, "{name}: {worst:e}");
        // The second half is no worse than the first: bounded, not only without a straight trend.
        let largest = |part: &[f64]| part.iter().fold(0.0f64, |most, e| most.max(e.abs()));
        let (early, late) = errors.split_at(samples / 2);
        assert!(largest(late) < 1.2 * largest(early) + rounding, "{name}");
    }
}

/// Without masses every scheme is the Kepler drift alone: after 1e5 steps each planet is where its first elements say.
///
/// Each substep rounds the state by about a unit: the semi-major axis walks by √n units and the longitude runs off by
/// 1.5 n t/√3 of that (three times as much is allowed), beside the rounding of the first elements; near the pericentre
/// more by 1/(1 − e)².
#[test]
fn massless_planets_move_as_kepler_says() {
    let mut sun = solar_system();
    sun.planets.iter_mut().for_each(|p| p.gm = 0.0);
    let start = state(&sun);
    let step = auto_step_day(&sun);
    let steps = 100_000;
    for scheme in Scheme::all() {
        let mut block = block(&start, scheme, step);
        advance(Advance { block: &mut block, scheme, steps, tangent: false });
        from_map(&mut block, scheme);
        let end = block.state(0);
        for (planet, p) in sun.planets.iter().enumerate() {
            let first = Elements::from_state(start.star_gm, start.pos[planet], start.vel[planet]);
            let n = (start.star_gm / first.semi_major_axis_au.powi(3)).sqrt();
            let turned = n * step * steps as f64;
            let stated = Elements { mean_anomaly: (first.mean_anomaly + turned) % TAU, ..first };
            let (position, _) = stated.to_state(start.star_gm);
            let gap: f64 = (0..3).map(|k| (end.pos[planet][k] - position[k]).powi(2)).sum::<f64>().sqrt();
            let substeps = (steps * (scheme.stages() + 1)) as f64;
            let phase = f64::EPSILON * turned * (3.0 * 1.5 * substeps.sqrt() / 3f64.sqrt() + 4.0);
            let limit = phase * first.semi_major_axis_au / (1.0 - first.eccentricity).powi(2);
            assert!(gap < limit, "{} {}: {gap:e} {limit:e}", scheme.name, p.name);
        }
    }
}
