//! Small mathematics without physics: angles and root finding.

mod angle;
mod root;

pub use angle::{turn_near, wrap_half_turn, wrap_turn};
pub use root::{NoBracket, bisect};
