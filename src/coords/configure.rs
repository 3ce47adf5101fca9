//! Statements → masses and orbits → a state at the epoch.

use super::{Configuration, CoordsError};
use crate::system::System;

pub fn configure(system: &System) -> Result<Configuration, CoordsError> {
    let _ = system;
    Err(CoordsError::Coincident { first: String::new(), second: String::new() })
}
