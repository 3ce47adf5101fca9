//! Whether rounding gives the energy of a pure Kepler drift a preferred sense.

use std::f64::consts::TAU;

use abide::integrate::{Advance, Block, Coordinates, Scheme, State, Tangent, advance};

use super::random::Random;
use super::report::{Report, short};
use super::round_off::mean;
use super::shelf::{placed, state};

const LANES: usize = 8;
const WORDS: &str = "
Massless planets (eight phases and axes each) in 1e7 drifts of one step, no kicks: mean change of the energy per drift, relative, its
standard error from the eight, and the root mean square at the end. For comparison: a walk of one unit in the last place (2.2e-16) per drift would
end at 7e-13, and one unit each time in the same sense at 2.2e-9. Allowed drift per step: what ends no higher than such a walk, 7e-20,
or two standard errors. At a whole number of drifts per turn (P/10, P/20, P/40) an orbit meets the same places again turn after turn and with them the same
roundings, so that each start drifts by itself, one up, another down; the rows beside them (P/10.0123 and so on) are as an integration would be.
";

pub fn write() {
    let rows = kepler_rows(&mut Random::new(20_261_201));
    let columns = vec!["what", "found", "standard_error", "allowed", "met"];
    Report {
        name: "round-off-kepler",
        title: "Rounding of the Kepler drift",
        words: WORDS.to_string(),
        columns,
        rows,
    }
    .write();
}

const SHAPES: [f64; 6] = [0.0, 1e-6, 0.01, 0.1, 0.3, 0.6];
const DRIFTS: usize = 10_000_000;

fn kepler_rows(random: &mut Random) -> Vec<Vec<String>> {
    let mut rows = Vec::new();
    for per_turn in [10.0, 10.0123, 20.0, 20.0123, 40.0, 40.0123] {
        let found = kepler(random, per_turn);
        for (e, ends) in SHAPES.iter().zip(found) {
            let per_step: Vec<f64> = ends.iter().map(|end| end / DRIFTS as f64).collect();
            let (drift, error) = mean(&per_step);
            let rms = (ends.iter().map(|x| x * x).sum::<f64>() / LANES as f64).sqrt();
            let allowed = (f64::EPSILON / (DRIFTS as f64).sqrt()).max(2.0 * error);
            rows.push(vec![
                format!("Kepler drift, e = {e}, P/{per_turn}, rms at end {}", short(rms)),
                short(drift),
                short(error),
                short(allowed),
                if drift.abs() <= allowed { "yes" } else { "NO" }.to_string(),
            ]);
        }
    }
    rows
}

/// Per shape and lane: relative change of the orbit's energy after all drifts.
fn kepler(random: &mut Random, per_turn: f64) -> Vec<Vec<f64>> {
    let mut block = Block::with_massless(Coordinates::Heliocentric, LANES, SHAPES.len(), SHAPES.len());
    let orbit_energy = |state: &State, k: usize| {
        let square = |v: &[f64; 3]| v.iter().map(|x| x * x).sum::<f64>();
        0.5 * square(&state.vel[k]) - 1.0 / square(&state.pos[k]).sqrt()
    };
    let mut first = Vec::new();
    for lane in 0..LANES {
        let axis = random.between(0.9, 1.1);
        let bodies = SHAPES.map(|e| placed(axis, e, random.between(0.0, TAU), random.between(0.0, TAU)));
        let start = state(1.0, &[0.0; SHAPES.len()], &bodies);
        let tangent = Tangent { pos: start.pos.clone(), vel: start.vel.clone() };
        block.start(lane, &start, &tangent, TAU * axis.powf(1.5) / per_turn, 1.0);
        first.push((0..SHAPES.len()).map(|k| orbit_energy(&start, k)).collect::<Vec<f64>>());
    }
    advance(Advance { block: &mut block, scheme: Scheme::leapfrog(), steps: DRIFTS, tangent: false });
    let change =
        |k: usize, lane: usize| (orbit_energy(&block.state(lane), k) - first[lane][k]) / first[lane][k];
    (0..SHAPES.len()).map(|k| (0..LANES).map(|lane| change(k, lane)).collect()).collect()
}
