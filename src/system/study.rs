//! A study: what varies, how long to follow each cell, what to measure.

use std::path::PathBuf;

use super::Key;

/// Which body or bodies a path names.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum BodyRef {
    Star,
    /// Index into `System::planets`.
    Planet(usize),
    /// The second star.
    Companion,
    /// Every planet (never the companion).
    All,
}

/// One key of one body (or of all planets), as `c.period` or `all.inclination`.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Target {
    pub body: BodyRef,
    pub key: Key,
}

/// What an axis counts.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Quantity {
    /// The key itself, in its unit.
    Value,
    /// A factor on the stated value (`as = "factor"`).
    Factor,
    /// The target's key over another body's key (`c.period / b.period`); the target moves, the other stays.
    RatioTo(Target),
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub enum Spacing {
    #[default]
    Linear,
    Log,
}

/// One axis of a study: the cell centres run from `from` to `to` inclusive.
#[derive(Clone, Debug, PartialEq)]
pub struct Axis {
    /// As written, e.g. `c.period / b.period`: the name of the column.
    pub path: String,
    pub target: Target,
    pub quantity: Quantity,
    /// In `unit`, not in inner units.
    pub from: f64,
    pub to: f64,
    /// The unit of `from`, `to` and of the column; empty for plain numbers.
    pub unit: &'static str,
    /// One `unit` in inner units.
    pub scale: f64,
    pub cells: usize,
    pub spacing: Spacing,
}

/// How long each cell is followed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Span {
    /// Periods of the innermost planet of the *stated* system (the same time for every cell).
    Orbits(f64),
    Days(f64),
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Measure {
    Megno,
    Lyapunov,
    Extent,
    /// Of the mean motions between the two halves of the span.
    FrequencyDrift,
}

/// An angle to be watched: Σ j λ + Σ k ϖ, the coefficients summing to 0.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct AngleTerms {
    /// As written.
    pub text: String,
    /// Coefficients of the mean longitudes and of the longitudes of pericentre, per body in the order of
    /// [`super::System::orbiting`].
    pub longitudes: Vec<i32>,
    pub pericentres: Vec<i32>,
}

#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Encounter {
    /// Stop when two planets come closer than this many mutual Hill radii.
    Stop { hill: f64 },
    /// Go through encounters with the adaptive integrator; only collisions end a cell.
    Resolve,
    /// Go on through encounters as if there were none; only collisions end a cell.
    Off,
}

#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Limits {
    /// Distance from the star beyond which a planet has escaped, au. Absent: 20 times the largest
    /// apocentre of the configuration.
    pub escape_au: Option<f64>,
    pub encounter: Encounter,
    /// End a cell as chaotic once its chaos is certain: cheaper, but blind to a later loss.
    pub stop_when_chaotic: bool,
}

/// Absent means auto.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Step {
    Auto,
    Days(f64),
    /// Steps per period of the innermost planet.
    PerOrbit(f64),
}

/// The splittings that a study may name, beside "auto": their generalised orders, those whose steps begin with a kick last.
pub const SCHEMES: [&str; 16] = [
    "(2,2)",
    "(4,2)",
    "(6,2)",
    "(8,2)",
    "(10,2)",
    "(12,2)",
    "(8,4)",
    "(10,4)",
    "(8,6,4)",
    "(10,6,4)",
    "(2,2) kick-first",
    "(4,2) kick-first",
    "(6,2) kick-first",
    "(8,2) kick-first",
    "(10,2) kick-first",
    "(12,2) kick-first",
];

/// In which coordinates the study wants its cells integrated.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub enum CoordinateChoice {
    /// Jacobi where a companion makes a hierarchy or a planet is heavy, else heliocentric.
    #[default]
    Auto,
    /// Democratic heliocentric.
    Heliocentric,
    Jacobi,
}

/// Whether positions and velocities are compensated sums, which keep what rounding cuts off.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub enum Compensation {
    /// Where one configuration is followed for very many steps.
    #[default]
    Auto,
    On,
    Off,
}

#[derive(Clone, Debug, PartialEq)]
pub struct Engine {
    /// "auto" or one of [`SCHEMES`].
    pub scheme: String,
    pub coordinates: CoordinateChoice,
    pub compensated: Compensation,
    pub step: Step,
    pub energy_error: f64,
}

/// A study as described by a file.
#[derive(Clone, Debug, PartialEq)]
pub struct Study {
    /// Title of the figure; absent: the system's.
    pub title: Option<String>,
    /// Path of the system file, resolved against the study's folder.
    pub system_path: PathBuf,
    pub span: Span,
    pub measure: Vec<Measure>,
    /// Whose libration is told of every cell.
    pub angle: Option<AngleTerms>,
    /// One or two.
    pub axes: Vec<Axis>,
    pub limits: Limits,
    pub engine: Engine,
}
