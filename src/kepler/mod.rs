//! Two-body motion on numbers.

mod drift;
mod stumpff;
mod universal;

pub use drift::{Body, Midway, drift};
