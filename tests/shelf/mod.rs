//! Problems with known ends; every scheme runs every problem.

#![allow(dead_code, reason = "each test file uses its own part")]

pub mod order;

use std::f64::consts::TAU;

use abide::integrate::{
    Advance, Block, Coordinates, Scheme, State, Tangent, advance, energy, from_map, to_map,
};

/// A problem with a known end.
pub struct Problem {
    pub name: &'static str,
    pub start: State,
    /// Longest step that is asked of a scheme here, and the span; whole numbers of steps fit.
    pub step: f64,
    pub steps: usize,
    /// Where the planets are at the end, in the coordinates of [`State`].
    pub end: State,
    /// Substeps after which the motion is pure Kepler drift: only rounding is left.
    pub kepler: bool,
    /// By how much a small relative change of the start has grown at the end.
    pub conditioning: f64,
}

/// Runs `steps` steps from true state to true state.
pub fn run(start: &State, scheme: &Scheme, step: f64, steps: usize) -> State {
    let tangent = Tangent { pos: start.pos.clone(), vel: start.vel.clone() };
    let mut block = Block::new(1, start.gm.len());
    block.start(0, start, &tangent, step, 1.0);
    to_map(&mut block, scheme);
    advance(Advance { block: &mut block, scheme, steps, tangent: false });
    from_map(&mut block, scheme);
    block.state(0)
}

/// Largest distance between two states' planets.
pub fn gap(a: &State, b: &State) -> f64 {
    let distance = |p: &[f64; 3], q: &[f64; 3]| (0..3).map(|k| (p[k] - q[k]).powi(2)).sum::<f64>().sqrt();
    a.pos.iter().zip(&b.pos).map(|(p, q)| distance(p, q)).fold(0.0, f64::max)
}

/// Largest |E − E₀|/|E₀| at every `every`-th step.
pub fn worst_energy(start: &State, scheme: &Scheme, step: f64, steps: usize, every: usize) -> f64 {
    worst_energy_in(Coordinates::Heliocentric, start, scheme, step, steps, every)
}

/// The same in the coordinates given.
pub fn worst_energy_in(
    coordinates: Coordinates,
    start: &State,
    scheme: &Scheme,
    step: f64,
    steps: usize,
    every: usize,
) -> f64 {
    let tangent = Tangent { pos: start.pos.clone(), vel: start.vel.clone() };
    let mut block = Block::in_coordinates(coordinates, 1, start.gm.len());
    block.start(0, start, &tangent, step, 1.0);
    to_map(&mut block, scheme);
    let first = energy(start);
    let mut worst = 0.0f64;
    for _ in 0..steps / every {
        advance(Advance { block: &mut block, scheme, steps: every, tangent: false });
        let mut true_states = block.clone();
        from_map(&mut true_states, scheme);
        worst = worst.max(((energy(&true_states.state(0)) - first) / first).abs());
    }
    worst
}

/// The planar orbit with a = 1 around GM = 1 at an eccentric anomaly: position and velocity.
pub fn on_ellipse(e: f64, anomaly: f64) -> ([f64; 3], [f64; 3]) {
    let (root, r) = ((1.0 - e * e).sqrt(), 1.0 - e * anomaly.cos());
    let pos = [anomaly.cos() - e, root * anomaly.sin(), 0.0];
    (pos, [-anomaly.sin() / r, root * anomaly.cos() / r, 0.0])
}

/// A planar orbit turned by an angle and scaled to a semi-major axis, around GM = 1.
pub fn placed(axis: f64, e: f64, anomaly: f64, turn: f64) -> ([f64; 3], [f64; 3]) {
    let (pos, vel) = on_ellipse(e, anomaly);
    let (c, s) = (turn.cos(), turn.sin());
    let turned = |v: [f64; 3], by: f64| [by * (c * v[0] - s * v[1]), by * (s * v[0] + c * v[1]), 0.0];
    (turned(pos, axis), turned(vel, axis.powf(-0.5)))
}

/// Planets given by heliocentric states; velocities are made barycentric.
pub fn state(star_gm: f64, gm: &[f64], bodies: &[([f64; 3], [f64; 3])]) -> State {
    let total = star_gm + gm.iter().sum::<f64>();
    let star = [0, 1, 2].map(|k| -bodies.iter().zip(gm).map(|(b, m)| m * b.1[k]).sum::<f64>() / total);
    State {
        star_gm,
        gm: gm.to_vec(),
        pos: bodies.iter().map(|b| b.0).collect(),
        vel: bodies.iter().map(|b| [0, 1, 2].map(|k| b.1[k] + star[k])).collect(),
    }
}

/// Two planets with the mass ratios ε and ε/2 far from low-order resonance.
pub fn pair(mass_ratio: f64) -> State {
    let bodies = [placed(1.0, 0.05, 0.4, 0.0), placed(1.9, 0.08, 2.3, 1.1)];
    state(1.0, &[mass_ratio, 0.5 * mass_ratio], &bodies)
}

/// Every problem.
pub fn all() -> Vec<Problem> {
    vec![eccentric_ellipse(), hyperbolic_passage(), equilateral_triangle(), there_and_back()]
}

/// A massless planet with e = 0.9 over a hundred revolutions: it comes back to where it was.
fn eccentric_ellipse() -> Problem {
    let start = state(1.0, &[0.0], &[on_ellipse(0.9, 2.0)]);
    let steps = 100 * 37;
    Problem {
        name: "ellipse of e = 0.9",
        end: start.clone(),
        step: 100.0 * TAU / steps as f64,
        steps,
        kepler: true,
        // The phase after N revolutions moves by 3πN times a relative change of the axis.
        conditioning: 3.0 * std::f64::consts::PI * 100.0 / 0.1,
        start,
    }
}

/// A massless planet that comes from one branch of a hyperbola of e = 1.5 and leaves on the other: a mirror image.
fn hyperbolic_passage() -> Problem {
    let (e, h) = (1.5f64, 3.0f64);
    let (root, r) = ((e * e - 1.0).sqrt(), e * h.cosh() - 1.0);
    let at = |h: f64| {
        let pos = [e - h.cosh(), root * h.sinh(), 0.0];
        (pos, [-h.sinh() / r, root * h.cosh() / r, 0.0])
    };
    let steps = 64;
    Problem {
        name: "hyperbola of e = 1.5",
        start: state(1.0, &[0.0], &[at(-h)]),
        end: state(1.0, &[0.0], &[at(h)]),
        step: 2.0 * (e * h.sinh() - h) / steps as f64,
        steps,
        kepler: true,
        conditioning: 2.0 * (e * h.sinh() - h),
    }
}

/// Lagrange's triangle, star and two planets of 1e-3 and 5e-4 star masses at distances 1: it turns as a whole with
/// ω² = M_total, for ten turns. The planets pull as hard on each other as planets can without passing close.
fn equilateral_triangle() -> Problem {
    let gm = [1e-3, 5e-4];
    let rate = (1.0f64 + gm[0] + gm[1]).sqrt();
    let corner = |angle: f64| {
        let pos = [angle.cos(), angle.sin(), 0.0];
        (pos, [-rate * angle.sin(), rate * angle.cos(), 0.0])
    };
    let start = state(1.0, &gm, &[corner(0.2), corner(0.2 + TAU / 6.0)]);
    let steps = 10 * 128;
    Problem {
        name: "Lagrange's triangle",
        end: start.clone(),
        step: 10.0 * TAU / rate / steps as f64,
        steps,
        kepler: false,
        conditioning: 3.0 * std::f64::consts::PI * 10.0,
        start,
    }
}

/// Marks the problem that [`super`] runs forwards and then backwards: two planets in 2:1 resonance.
fn there_and_back() -> Problem {
    let bodies = [placed(1.0, 0.1, 0.0, 0.0), placed(1.5874, 0.05, 3.0, 0.3)];
    let start = state(1.0, &[1e-4, 3e-4], &bodies);
    Problem {
        name: RESONANT_PAIR,
        end: start.clone(),
        step: TAU / 24.0,
        steps: 24 * 200,
        kepler: false,
        conditioning: 3.0 * std::f64::consts::PI * 200.0,
        start,
    }
}

/// Its end is its start: what was done is undone by the same steps with the opposite sign.
pub const RESONANT_PAIR: &str = "resonant pair, there and back";
