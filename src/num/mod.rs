//! Small mathematics without physics: angles, root finding, whole numbers, frequency analysis, numbers kept to the bit.

mod angle;
mod fourier;
mod fourier_fit;
mod fourier_window;
mod kept;
mod root;
mod wave;
mod whole;

pub use angle::{turn_near, wrap_half_turn, wrap_turn};
pub use fourier::{
    Complex, Ended, FEWEST_SAMPLES, FourierError, Line, Search, Spectrum, Wave, decompose, decompose_real,
    strongest_line,
};
pub use kept::{Kept, KeptReader};
pub use root::{NoBracket, bisect};
pub use whole::greatest_common_divisor;
