//! The description of a planetary system and of a study, as checked values in inner units.
//!
//! A body is what was *stated* about it: a map from [`Key`] to [`Measured`]. Varying one key replaces the
//! statement of its [`Group`] and leaves every other statement as it was; the room `coords` turns
//! statements into masses and orbits.

mod companion;
mod criterion;
mod key;
mod path;
mod physics;
mod range;
mod stated;
mod study;
mod vary;

pub use companion::CompanionPlace;
pub use criterion::Criterion;
pub use key::{Group, Key};
pub use path::{COMPANION, PathError, is_planet_name};
pub use physics::{Oblateness, Physics, satellite_strength_au2};
pub use range::{Allowed, Holder, Unsound};
pub use stated::{Body, Measured, Pair, SetError, Stated};
pub use study::{
    AngleTerms, Axis, BodyRef, Compensation, CoordinateChoice, Encounter, Engine, Limits, Measure, Quantity,
    SCHEMES, Spacing, Span, Step, Study, Target,
};
pub use vary::VaryError;

/// In which frame the stated orbits are osculating.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub enum Frame {
    /// Planet relative to the star; mass parameter G (star + planet).
    #[default]
    Astrocentric,
    /// Planet relative to the centre of mass of the star and the planets before it (ordered by
    /// period, a companion among them); mass parameter G (star + bodies up to and including this one).
    Jacobi,
    /// Planet relative to the centre of mass of the whole system; mass parameter G (total mass).
    Barycentric,
}

/// Whose argument of pericentre is stated.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub enum Pericentre {
    #[default]
    Planet,
    /// The star's, 180° from the planet's.
    Star,
}

/// At which true anomaly + argument of pericentre (of the planet) a planet is in front of the star.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub enum Transit {
    #[default]
    Plus90,
    Minus90,
}

/// How the stated numbers are to be read.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub struct Convention {
    pub elements: Frame,
    pub pericentre: Pericentre,
    pub transit: Transit,
}

/// A planetary system as described by a file; every number in inner units.
#[derive(Clone, Debug, PartialEq)]
pub struct System {
    pub title: String,
    /// Julian day (TDB) at which phases hold. Absent: phases hold at time 0, dates cannot be used.
    pub epoch_jd: Option<f64>,
    /// Keys `mass` (needed), `radius`, `age`.
    pub star: Body,
    /// In the order of the file. Names are unique.
    pub planets: Vec<Body>,
    /// A second star, outside the planets' orbits or inside them. Its orbit is read in the frame of the convention.
    pub companion: Option<Body>,
    pub convention: Convention,
    pub physics: Physics,
}
