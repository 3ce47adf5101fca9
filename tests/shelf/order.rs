//! Slopes of the energy error in the step and in the mass ratio ε.

use std::f64::consts::TAU;

use abide::integrate::{Coordinates, Scheme, State};

use super::{placed, state, worst_energy_in};

/// Measured slopes of one scheme. Generalised order (n₁, …, n_last): error = O(ε hⁿ¹) + … + O(εᵏ hⁿˡᵃˢᵗ), relative.
#[derive(Clone, Debug)]
pub struct Slopes {
    pub scheme: &'static Scheme,
    pub orders: Vec<i32>,
    /// Of the first term: in the step and in ε.
    pub first_step: f64,
    pub first_ratio: f64,
    /// Of the last term.
    pub last_step: f64,
    pub last_ratio: f64,
}

/// Two planets on circles a factor 4 apart: few harmonics, so the first term is a power of the step before rounding
/// hides it.
fn far(mass_ratio: f64) -> State {
    let bodies = [placed(1.0, 0.0, 0.4, 0.0), placed(4.0, 0.0, 2.3, 1.1)];
    state(1.0, &[mass_ratio, 0.5 * mass_ratio], &bodies)
}

/// Two planets of e = 0.3 that pull hard on each other: at short steps the last term is all there is.
fn near(mass_ratio: f64) -> State {
    let bodies = [placed(1.0, 0.3, 0.4, 0.0), placed(2.2, 0.3, 2.3, 1.1)];
    state(1.0, &[mass_ratio, 0.5 * mass_ratio], &bodies)
}

/// Largest relative energy error over twelve inner revolutions.
pub fn energy_error(coordinates: Coordinates, start: &State, scheme: &Scheme, per_orbit: usize) -> f64 {
    worst_energy_in(coordinates, start, scheme, TAU / per_orbit as f64, 12 * per_orbit, 1)
}

/// Measures a scheme.
pub fn slopes(coordinates: Coordinates, scheme: &'static Scheme) -> Slopes {
    let orders = scheme.orders();
    // The higher the order, the longer the steps at which its term still stands above rounding.
    let (coarse, fine) = match orders[0] {
        0..=5 => (8, 16),
        6..=7 => (4, 8),
        _ => (3, 5),
    };
    let first = |ratio: f64, per_orbit| energy_error(coordinates, &far(ratio), scheme, per_orbit);
    let last = |ratio: f64, per_orbit| energy_error(coordinates, &near(ratio), scheme, per_orbit);
    Slopes {
        scheme,
        orders,
        first_step: (first(1e-5, coarse) / first(1e-5, fine)).ln() / (fine as f64 / coarse as f64).ln(),
        first_ratio: (first(1e-4, 4) / first(1e-5, 4)).log10(),
        last_step: (last(1e-1, 64) / last(1e-1, 192)).ln() / 3f64.ln(),
        last_ratio: (last(1e-1, 96) / last(1e-2, 96)).log10(),
    }
}
