//! From statements to masses, orbits and states, and back.

mod configure;
mod convert;
mod elements;
mod error;
mod masses;
mod outline;
mod restate;
mod start;

pub use configure::{StatedState, configure};
pub use convert::{States, elements_in, star_centred};
pub use elements::Elements;
pub use error::CoordsError;
pub use restate::restate;
pub use start::check_start;

use crate::system::Frame;

/// A planet of a configuration.
#[derive(Clone, Debug, PartialEq)]
pub struct Planet {
    pub name: String,
    /// G × mass, au³ day⁻².
    pub gm: f64,
    /// Physical radius, au: stated, or from the mass and a density.
    pub radius_au: f64,
    /// Relative to the star, axes of the stated elements (sky plane), at the epoch.
    pub position_au: [f64; 3],
    /// Relative to the star's velocity.
    pub velocity_au_day: [f64; 3],
    /// Osculating elements in `Configuration::frame`.
    pub elements: Elements,
}

/// One concrete set of masses and orbits.
#[derive(Clone, Debug, PartialEq)]
pub struct Configuration {
    pub star_gm: f64,
    pub star_radius_au: f64,
    pub frame: Frame,
    /// In the order of the system file.
    pub planets: Vec<Planet>,
}
