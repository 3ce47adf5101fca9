//! The tangent vector that a cell starts with.

use super::length;
use crate::integrate::{State, Tangent};

/// A displacement in no special direction: MEGNO of a regular orbit tends to 2 from it (along constant energy it
/// would tend to 0). The same fixed numbers for every cell, in units of each planet's distance and speed.
pub(super) fn generic_tangent(state: &State) -> Tangent {
    // Fractional parts of multiples of the golden section: evenly spread, in no simple ratio.
    const GOLDEN: f64 = 0.618_033_988_749_894_9;
    let number = |index: usize| 2.0 * ((index as f64 + 1.0) * GOLDEN).fract() - 1.0;
    let scaled = |vectors: &[[f64; 3]], offset: usize| -> Vec<[f64; 3]> {
        let each = vectors.iter().enumerate();
        each.map(|(p, v)| [0, 1, 2].map(|k| length(v) * number(6 * p + offset + k))).collect()
    };
    Tangent { pos: scaled(&state.pos, 0), vel: scaled(&state.vel, 3) }
}
