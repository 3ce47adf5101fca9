//! Slopes of the energy error in the step and in the mass ratio ε.

use std::f64::consts::TAU;

use abide::integrate::{Coordinates, Scheme, State};

use super::{placed, state, worst_energy_in};

/// Measured slopes of one scheme. Generalised order (n₁, …, n_last): error = O(ε hⁿ¹) + … + O(εᵏ hⁿˡᵃˢᵗ), relative.
#[derive(Clone, Debug)]
pub struct Slopes {
    pub scheme: &'static str,
    pub orders: Vec<i32>,
    /// Of the first term: in the step and in ε.
    pub first_step: f64,
    pub first_ratio: f64,
    /// Of the last term.
    pub last_step: f64,
    /// Absent where it cannot be measured: in Jacobi coordinates the third term is below rounding at small ε, and at
    /// large ε the motion itself changes with it.
    pub last_ratio: Option<f64>,
}

/// Two planets on circles a factor apart: few harmonics, so the first term is a power of the step before rounding
/// hides it.
fn far(mass_ratio: f64, apart: f64) -> State {
    let bodies = [placed(1.0, 0.0, 0.4, 0.0), placed(apart, 0.0, 2.3, 1.1)];
    state(1.0, &[mass_ratio, 0.5 * mass_ratio], &bodies)
}

/// Two eccentric planets that pull hard on each other: at short steps the last term is all there is.
fn near(mass_ratio: f64, [axis, eccentricity]: [f64; 2]) -> State {
    let bodies = [placed(1.0, eccentricity, 0.4, 0.0), placed(axis, eccentricity, 2.3, 1.1)];
    state(1.0, &[mass_ratio, 0.5 * mass_ratio], &bodies)
}

/// Largest relative energy error over twelve inner revolutions.
pub fn energy_error(coordinates: Coordinates, start: &State, scheme: &Scheme, per_orbit: usize) -> f64 {
    worst_energy_in(coordinates, start, scheme, TAU / per_orbit as f64, 12 * per_orbit, 1)
}

/// Slope between two numbers of steps per orbit.
fn in_step([coarse, fine]: [usize; 2], error: impl Fn(usize) -> f64) -> f64 {
    (error(coarse) / error(fine)).ln() / (fine as f64 / coarse as f64).ln()
}

/// Slope between ten times a mass ratio and the ratio itself.
fn in_ratio(ratio: f64, error: impl Fn(f64) -> f64) -> f64 {
    (error(10.0 * ratio) / error(ratio)).log10()
}

/// Measures a scheme.
pub fn slopes(coordinates: Coordinates, scheme: &'static Scheme) -> Slopes {
    let orders = scheme.orders();
    // The higher the order, the longer the steps at which its term still stands above rounding and above ε² h².
    let counts = if orders[0] < 6 { [12, 24] } else { [3, 5] };
    let (ratio, apart) = match (orders[0], orders[1]) {
        (12, _) => (1e-6, 2.0),
        (10, 2) => (1e-6, 4.0),
        _ => (1e-5, 4.0),
    };
    let long = if orders[0] < 10 { 4 } else { 3 };
    let first = |ratio, per_orbit| energy_error(coordinates, &far(ratio, apart), scheme, per_orbit);
    let last = |ratio, kind, per_orbit| energy_error(coordinates, &near(ratio, kind), scheme, per_orbit);
    let (wide, close) = ([2.2, 0.3], [1.8, 0.2]);
    let (last_step, last_ratio) = match (coordinates, orders.len()) {
        (Coordinates::Heliocentric, _) => (
            in_step([64, 192], |per_orbit| last(1e-1, wide, per_orbit)),
            Some(in_ratio(1e-2, |ratio| last(ratio, wide, 96))),
        ),
        (Coordinates::Jacobi, terms) => {
            let short = if scheme.least_order() == 2 { 192 } else { 48 };
            let ratio = (terms == 2).then(|| in_ratio(1e-3, |ratio| last(ratio, wide, short)));
            (in_step([24, 64], |per_orbit| last(3e-2, close, per_orbit)), ratio)
        }
    };
    Slopes {
        scheme: scheme.name,
        orders,
        first_step: in_step(counts, |per_orbit| first(ratio, per_orbit)),
        first_ratio: in_ratio(ratio, |ratio| first(ratio, long)),
        last_step,
        last_ratio,
    }
}
