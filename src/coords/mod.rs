//! From statements to masses, orbits and states, and back.

mod configure;
mod convert;
mod elements;
mod error;
mod hierarchy;
mod masses;
mod outline;
mod restate;
mod start;

pub use configure::{StatedState, configure};
pub use convert::{States, elements_in, star_centred};
pub use elements::{Elements, Shape};
pub use error::CoordsError;
pub use hierarchy::Orbit;
pub use restate::restate;
pub use start::check_start;

use crate::system::Frame;

/// What a body of a configuration is; the integrator treats both alike.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub enum BodyKind {
    #[default]
    Planet,
    /// A second star, of any mass.
    Companion,
}

/// A planet of a configuration, or its companion.
#[derive(Clone, Debug, PartialEq)]
pub struct Planet {
    pub name: String,
    pub kind: BodyKind,
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
    /// Strength K of its averaged satellite, au² ([`crate::system::satellite_strength_au2`]); absent without one.
    pub satellite_k_au2: Option<f64>,
}

/// The terms of the star on the planets beside Newton's.
#[derive(Clone, Copy, Debug, PartialEq, Default)]
pub struct Terms {
    /// First post-Newtonian term.
    pub relativity: bool,
    pub oblateness: Option<StarOblateness>,
}

/// The star's second zonal harmonic in the axes of the states.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct StarOblateness {
    pub j2: f64,
    /// The radius that J₂ refers to.
    pub radius_au: f64,
    /// Unit vector.
    pub pole: [f64; 3],
}

/// One concrete set of masses and orbits.
#[derive(Clone, Debug, PartialEq)]
pub struct Configuration {
    pub star_gm: f64,
    pub star_radius_au: f64,
    pub frame: Frame,
    /// In the order of [`crate::system::System::orbiting`]: the planets of the system file, then the companion.
    pub planets: Vec<Planet>,
    pub terms: Terms,
}
