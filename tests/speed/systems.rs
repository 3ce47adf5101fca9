//! Invented systems for the benches, in units G = star = 1.

#![allow(dead_code, reason = "each bench uses its own part")]

use abide::coords::{Elements, star_centred};
use abide::integrate::{Block, State, Tangent};
use abide::system::Frame;

/// Of every planet in the first lane, and of the innermost in all.
pub const ECCENTRICITY: f64 = 0.05;

/// Mass and semi-major axis of each planet.
fn planets(n: usize) -> Vec<(f64, f64)> {
    match n {
        2 => vec![(1e-3, 1.0), (3e-4, 1.83)],
        3 => vec![(1e-4, 1.0), (1e-3, 1.83), (3e-4, 3.3)],
        5 => vec![(3e-6, 1.0), (1e-5, 1.6), (5e-5, 2.7), (1e-3, 5.2), (3e-4, 9.5)],
        _ => (0..n).map(|k| (1e-6 * (1.0 + k as f64), 1.7f64.powi(k as i32))).collect(),
    }
}

/// The start in a lane: neighbouring configurations.
pub fn start(n: usize, lane: usize) -> (State, Tangent) {
    let (gm, elements): (Vec<f64>, Vec<Elements>) = planets(n)
        .into_iter()
        .enumerate()
        .map(|(k, (gm, axis))| {
            let nudge = if k == 1 { 1.0 + 1e-3 * lane as f64 } else { 1.0 };
            let elements = Elements {
                semi_major_axis_au: axis * nudge,
                eccentricity: ECCENTRICITY + if k == 1 { 2e-3 * lane as f64 } else { 0.0 },
                inclination: 0.02 * k as f64,
                ascending_node: 1.1 * k as f64,
                argument_of_pericentre: 0.7 * k as f64,
                mean_anomaly: 2.1 * k as f64,
            };
            (gm, elements)
        })
        .unzip();
    let (pos, vel) = star_centred(Frame::Astrocentric, 1.0, &gm, &elements);
    let total: f64 = 1.0 + gm.iter().sum::<f64>();
    let star: Vec<f64> =
        (0..3).map(|k| -gm.iter().zip(&vel).map(|(m, v)| m * v[k]).sum::<f64>() / total).collect();
    let vel = vel.iter().map(|v| [v[0] + star[0], v[1] + star[1], v[2] + star[2]]).collect();
    let tangent = Tangent { pos: vec![[1.0, 0.3, -0.2]; n], vel: vec![[0.1, -0.7, 0.4]; n] };
    (State { star_gm: 1.0, gm, pos, vel }, tangent)
}

/// `lanes` neighbouring configurations.
pub fn block(n: usize, lanes: usize, steps_per_orbit: f64) -> Block {
    let mut block = Block::new(lanes, n);
    for lane in 0..lanes {
        let (state, tangent) = start(n, lane);
        block.start(lane, &state, &tangent, std::f64::consts::TAU / steps_per_orbit, 1.0);
    }
    block
}
