//! Where the two engines take one of the fifty systems: the gap at the end, and when their trajectories part.

use std::f64::consts::{PI, TAU};
use std::ops::ControlFlow;

use abide::assess::{Plan, innermost_period_day};
use abide::coords::Configuration;
use abide::integrate::forces::Forces;
use abide::integrate::radau::{Engine, TOLERANCE, Watch};
use abide::integrate::{Advance, Block, State, Tangent, advance, from_map, to_map};

use super::truth_support::state;

/// Two trajectories count as parted when a planet's two places are farther from each other than this share of its distance from
/// the star. Regular ones end nearer over either span, but for one at the coarsest step.
const PARTED_RAD: f64 = 0.03;
/// Inner orbits between two looks.
const LOOK_ORBITS: f64 = 5.0;

/// Whether the gap is what was expected.
pub fn agrees([gap, expected, rounding]: [f64; 3]) -> bool {
    gap <= 1.5 * expected + rounding
}

/// Gap of the ends, the expected error of the step, and what rounding may add; rad.
pub fn ends(system: &Configuration, orbits: f64, plan: &Plan, step_day: f64) -> [f64; 3] {
    let start = state(system);
    let day = orbits * innermost_period_day(system);
    let steps = (day / step_day).ceil() as usize;
    let end = |steps: usize| {
        let mut block = begin(&start, plan, day / steps as f64);
        go_on(&mut block, plan, steps)
    };
    let (coarse, fine) = (end(steps), end(2 * steps));
    let mut engine = Engine::from_state(&start, &[], &Forces::newton(), TOLERANCE).unwrap();
    engine.advance(day, &Watch::default(), |_| ControlFlow::Continue(())).unwrap();
    let kicks = (steps * plan.splitting().stages()) as f64;
    let rounding = 3.0 * PI * orbits * 4.0 * f64::EPSILON * kicks.sqrt();
    debug_assert!(rounding < TAU);
    [apart(&coarse, &engine.state()), apart(&coarse, &fine) / 0.75, rounding]
}

/// Inner orbits after which the trajectories of the two engines have parted; none when they have not within `day`.
pub fn parted_orbits(system: &Configuration, day: f64, plan: &Plan, step_day: f64) -> Option<f64> {
    let start = state(system);
    let period = innermost_period_day(system);
    let steps = (LOOK_ORBITS * period / step_day).ceil().max(1.0) as usize;
    let mut block = begin(&start, plan, step_day);
    let mut engine = Engine::from_state(&start, &[], &Forces::newton(), TOLERANCE).ok()?;
    let looks = (day / (steps as f64 * step_day)).floor() as usize;
    (1..=looks).map(|look| (look * steps) as f64 * step_day).find_map(|now| {
        let symplectic = go_on(&mut block, plan, steps);
        engine.advance(now, &Watch::default(), |_| ControlFlow::Continue(())).ok()?;
        // Asked this way round, so that what is not a number has parted.
        let together = apart(&symplectic, &engine.state()) <= PARTED_RAD;
        (!together).then_some(now / period)
    })
}

/// A block of one lane at the start, in the map's variables.
fn begin(start: &State, plan: &Plan, step_day: f64) -> Block {
    let mut block = Block::in_coordinates(plan.coordinates, 1, start.gm.len());
    let still = Tangent { pos: start.pos.clone(), vel: start.vel.clone() };
    block.start(0, start, &still, step_day, 1.0);
    to_map(&mut block, plan.splitting());
    block
}

/// Takes so many steps and says where it is then.
fn go_on(block: &mut Block, plan: &Plan, steps: usize) -> State {
    advance(Advance { block, scheme: plan.splitting(), steps, tangent: false });
    let mut seen = block.clone();
    from_map(&mut seen, plan.splitting());
    seen.state(0)
}

/// Largest distance of a planet's two places over its distance from the star.
fn apart(a: &State, b: &State) -> f64 {
    let length = |v: [f64; 3]| v.iter().map(|x| x * x).sum::<f64>().sqrt();
    let each = a.pos.iter().zip(&b.pos);
    each.map(|(p, q)| length([0, 1, 2].map(|k| p[k] - q[k])) / length(*q)).fold(0.0, f64::max)
}
