//! Inertial states, to and from the heliocentric ones.

use super::super::{State, Tangent};
use super::phase::{Phase, two_sum};

/// Bodies at inertial places, the star first: G × mass in au³ day⁻², au, au/day. For a displacement of such a state
/// the masses are not read.
#[derive(Clone, Debug, PartialEq)]
pub struct Bodies {
    pub gm: Vec<f64>,
    pub pos: Vec<[f64; 3]>,
    pub vel: Vec<[f64; 3]>,
}

impl Bodies {
    /// Barycentric positions and velocities of a [`State`].
    ///
    /// x₀ = −Σ mᵢqᵢ/Σm, v₀ = −Σ mᵢvᵢ/m₀, xᵢ = qᵢ + x₀.
    pub fn from_state(state: &State) -> Bodies {
        let gm: Vec<f64> = std::iter::once(state.star_gm).chain(state.gm.iter().copied()).collect();
        let (pos, vel) = barycentric(&gm, &state.pos, &state.vel);
        Bodies { gm, pos, vel }
    }

    /// Heliocentric positions and barycentric velocities.
    pub fn to_state(&self) -> State {
        let (pos, vel) = heliocentric(&self.gm, &self.pos, &self.vel);
        State { star_gm: self.gm[0], gm: self.gm[1..].to_vec(), pos, vel }
    }

    /// The displacement of all bodies that a displacement of a [`State`] with these masses is.
    pub fn displaced(&self, tangent: &Tangent) -> Bodies {
        let (pos, vel) = barycentric(&self.gm, &tangent.pos, &tangent.vel);
        Bodies { gm: self.gm.clone(), pos, vel }
    }

    /// The displacement of a [`State`] that this displacement of all bodies is.
    pub fn to_tangent(&self) -> Tangent {
        let (pos, vel) = heliocentric(&self.gm, &self.pos, &self.vel);
        Tangent { pos, vel }
    }

    /// How many numbers are missing or too many: found and needed.
    pub(super) fn shape(&self) -> (usize, usize) {
        (3 * (self.pos.len() + self.vel.len()), 6 * self.gm.len())
    }
}

/// The state of the star, then of the planets moved by it.
fn barycentric(gm: &[f64], pos: &[[f64; 3]], vel: &[[f64; 3]]) -> (Vec<[f64; 3]>, Vec<[f64; 3]>) {
    let total: f64 = gm.iter().sum();
    let mean = |what: &[[f64; 3]], over: f64| {
        [0, 1, 2].map(|k| -gm[1..].iter().zip(what).map(|(m, x)| m * x[k]).sum::<f64>() / over)
    };
    let (star_pos, star_vel) = (mean(pos, total), mean(vel, gm[0]));
    let moved = pos.iter().map(|q| [0, 1, 2].map(|k| q[k] + star_pos[k]));
    let pos = std::iter::once(star_pos).chain(moved).collect();
    (pos, std::iter::once(star_vel).chain(vel.iter().copied()).collect())
}

/// Positions relative to the star; velocities relative to the barycentre, of whose motion nothing is assumed.
fn heliocentric(gm: &[f64], pos: &[[f64; 3]], vel: &[[f64; 3]]) -> (Vec<[f64; 3]>, Vec<[f64; 3]>) {
    let total: f64 = gm.iter().sum();
    let drift = [0, 1, 2].map(|k| gm.iter().zip(vel).map(|(m, v)| m * v[k]).sum::<f64>() / total);
    (
        pos[1..].iter().map(|x| [0, 1, 2].map(|k| x[k] - pos[0][k])).collect(),
        vel[1..].iter().map(|v| [0, 1, 2].map(|k| v[k] - drift[k])).collect(),
    )
}

/// Bodies and displacements as one run of numbers.
pub(super) fn to_phase(bodies: &Bodies, tangents: &[Bodies]) -> Phase {
    let flat = |pick: fn(&Bodies) -> &Vec<[f64; 3]>| -> Vec<f64> {
        std::iter::once(bodies).chain(tangents).flat_map(|b| pick(b).iter().flatten().copied()).collect()
    };
    let (at, vel) = (flat(|b| &b.pos), flat(|b| &b.vel));
    let low = vec![0.0; at.len()];
    Phase { at, at_low: low.clone(), vel, vel_low: low }
}

/// Adds what rounding took from xᵢ = qᵢ + x₀.
pub(super) fn restore_lows(phase: &mut Phase, state: &State) {
    for (planet, q) in state.pos.iter().enumerate() {
        for (k, x) in q.iter().enumerate() {
            phase.at_low[3 * (planet + 1) + k] = two_sum(*x, phase.at[k]).1;
        }
    }
}

/// Block `block` of a phase: 0 the bodies, then the tangent vectors.
pub(super) fn from_phase(phase: &Phase, gm: &[f64], block: usize) -> Bodies {
    let first = 3 * gm.len() * block;
    let triples = |x: &[f64]| (0..gm.len()).map(|b| [0, 1, 2].map(|k| x[first + 3 * b + k])).collect();
    Bodies { gm: gm.to_vec(), pos: triples(&phase.at), vel: triples(&phase.vel) }
}

/// Heliocentric positions with the lows taken in.
pub(super) fn state_of(phase: &Phase, gm: &[f64]) -> State {
    let mut state = from_phase(phase, gm, 0).to_state();
    for (planet, q) in state.pos.iter_mut().enumerate() {
        *q = phase.apart(0, planet + 1).0;
    }
    state
}
