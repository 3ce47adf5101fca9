//! What is known about a configuration after it was followed.

pub use crate::observe::{Extent, Lyapunov, Range};
use crate::verdict::{LostHow, Verdict};

/// When, which and how.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Loss {
    pub time_day: f64,
    /// Index of the planet (the less massive of a pair).
    pub planet: usize,
    /// The other planet of an encounter or a collision.
    pub other: Option<usize>,
    pub how: LostHow,
}

/// Closest approach of two planets.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Approach {
    pub au: f64,
    /// In mutual Hill radii of the pair at the epoch.
    pub hill: f64,
    pub pair: (usize, usize),
}

/// The outcome of one cell. Absent is `None`, never 0.
#[derive(Clone, Debug, PartialEq)]
pub struct Assessment {
    pub verdict: Verdict,
    /// Time reached, day.
    pub end_time_day: f64,
    pub loss: Option<Loss>,
    /// Time-averaged MEGNO ⟨Y⟩ at the end.
    pub megno: Option<f64>,
    /// Given when ⟨Y⟩ says chaos; on a regular orbit the number would only reflect the span.
    pub lyapunov: Option<Lyapunov>,
    /// Per planet, in the order of the configuration; empty when not measured.
    pub extent: Vec<Extent>,
    pub smallest_approach: Option<Approach>,
    /// Largest relative energy error seen at the samples.
    pub energy_error: Option<f64>,
    /// Largest relative error of the total angular momentum.
    pub angular_momentum_error: Option<f64>,
    /// As used in the end, e.g. "(2,2)".
    pub scheme: &'static str,
    pub step_day: f64,
    /// Steps of the final attempt.
    pub steps: u64,
    /// How many times the cell was redone with a smaller step.
    pub redone: u32,
}
