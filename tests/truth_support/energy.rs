//! Energy along the motion: how it swings, and whether it drifts.

use abide::coords::Configuration;
use abide::integrate::{Advance, Block, Scheme, State, Tangent, advance, energy, from_map, to_map};

use super::line::slope;
use super::state;

/// A block of one lane in the map's variables.
pub fn block(start: &State, scheme: &Scheme, step_day: f64) -> Block {
    let mut block = Block::new(1, start.gm.len());
    let tangent = Tangent { pos: start.pos.clone(), vel: start.vel.clone() };
    block.start(0, start, &tangent, step_day, 1.0);
    to_map(&mut block, scheme);
    block
}

/// (E − E₀)/E₀ at even times.
pub fn energy_errors(
    configuration: &Configuration,
    scheme: &Scheme,
    step_day: f64,
    steps: usize,
    samples: usize,
) -> Vec<f64> {
    let start = state(configuration);
    let first = energy(&start);
    let mut block = block(&start, scheme, step_day);
    let mut sample = || {
        advance(Advance { block: &mut block, scheme, steps: steps / samples, tangent: false });
        let mut true_state = block.clone();
        from_map(&mut true_state, scheme);
        (energy(&true_state.state(0)) - first) / first
    };
    (0..samples).map(|_| sample()).collect()
}

/// Slope of a straight line through values at even steps with its standard error from independent pieces: the slopes of
/// sixteen pieces' means. What is correlated inside a piece does not make the error look smaller than it is.
pub fn slope_of_pieces(values: &[f64]) -> (f64, f64) {
    let length = values.len() / 16;
    let means: Vec<f64> = values.chunks(length).map(|p| p.iter().sum::<f64>() / length as f64).collect();
    slope(&means, length as f64)
}
