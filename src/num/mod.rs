//! Small mathematics without physics: angles, root finding, whole numbers, numbers kept to the bit.

mod angle;
mod kept;
mod root;
mod whole;

pub use angle::{turn_near, wrap_half_turn, wrap_turn};
pub use kept::{Kept, KeptReader};
pub use root::{NoBracket, bisect};
pub use whole::greatest_common_divisor;
