//! Small mathematics without physics: angles, root finding, whole numbers.

mod angle;
mod root;
mod whole;

pub use angle::{turn_near, wrap_half_turn, wrap_turn};
pub use root::{NoBracket, bisect};
pub use whole::greatest_common_divisor;
