//! Between elements in any frame and star-centred states.

use super::Elements;
use crate::system::Frame;

/// Osculating elements of every planet in `frame` from star-centred positions and velocities.
pub fn elements_in(
    frame: Frame,
    star_gm: f64,
    gm: &[f64],
    pos: &[[f64; 3]],
    vel: &[[f64; 3]],
) -> Vec<Elements> {
    let _ = (frame, star_gm, gm, pos, vel);
    Vec::new()
}

/// Star-centred positions and velocities from elements in `frame`.
pub fn star_centred(
    frame: Frame,
    star_gm: f64,
    gm: &[f64],
    elements: &[Elements],
) -> (Vec<[f64; 3]>, Vec<[f64; 3]>) {
    let _ = (frame, star_gm, gm, elements);
    (Vec::new(), Vec::new())
}
