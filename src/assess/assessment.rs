//! What is known about a configuration after it was followed.

use crate::observe::AngleMotion;
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

/// How the watched angle moved over the whole span.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum AngleFound {
    /// Centre (in [0, 2π)) and largest departure from it, rad.
    Librates {
        centre: f64,
        amplitude: f64,
    },
    Circulates,
    /// It changes between the two.
    Alternates,
    /// The span is too short to tell slow circulation from libration, or the samples too far apart.
    CannotTell,
}

impl AngleFound {
    const ALL: [AngleFound; 4] = [
        AngleFound::Librates { centre: f64::NAN, amplitude: f64::NAN },
        AngleFound::Circulates,
        AngleFound::Alternates,
        AngleFound::CannotTell,
    ];

    pub(super) fn of(motion: AngleMotion) -> AngleFound {
        match motion {
            AngleMotion::Librates(found) => {
                AngleFound::Librates { centre: found.centre, amplitude: found.amplitude }
            }
            AngleMotion::Circulates { .. } => AngleFound::Circulates,
            AngleMotion::Alternates { .. } => AngleFound::Alternates,
            AngleMotion::CannotTell(_) => AngleFound::CannotTell,
        }
    }

    /// The word used in tables and output.
    pub fn word(self) -> &'static str {
        match self {
            AngleFound::Librates { .. } => "librates",
            AngleFound::Circulates => "circulates",
            AngleFound::Alternates => "alternates",
            AngleFound::CannotTell => "cannot tell",
        }
    }

    /// From its word, with centre and amplitude where it librates (and only there).
    pub fn from_word(word: &str, libration: Option<[f64; 2]>) -> Option<AngleFound> {
        let found = AngleFound::ALL.into_iter().find(|found| found.word() == word)?;
        match (found, libration) {
            (AngleFound::Librates { .. }, Some([centre, amplitude])) => {
                Some(AngleFound::Librates { centre, amplitude })
            }
            (AngleFound::Librates { .. }, None) | (_, Some(_)) => None,
            (other, None) => Some(other),
        }
    }

    /// Centre and amplitude, rad.
    pub fn libration(self) -> Option<[f64; 2]> {
        match self {
            AngleFound::Librates { centre, amplitude } => Some([centre, amplitude]),
            _ => None,
        }
    }
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
    /// Per planet, log₁₀ of the relative change of the mean motion between the halves of the span; empty when not measured
    /// or when the cell did not live through the span.
    pub frequency_drift: Vec<f64>,
    /// Absent when no angle is watched or the cell did not live through the span.
    pub angle: Option<AngleFound>,
    pub smallest_approach: Option<Approach>,
    /// Largest relative energy error seen at the samples.
    pub energy_error: Option<f64>,
    /// Largest relative error of the total angular momentum.
    pub angular_momentum_error: Option<f64>,
    /// Blocks of steps that the adaptive engine did for the scheme, around close approaches; absent where it could not do
    /// any, and where it did all.
    pub passages: Option<u64>,
    /// Largest relative energy error over one of them; absent where there was none.
    pub passage_energy_error: Option<f64>,
    /// As used in the end, e.g. "(2,2)".
    pub scheme: &'static str,
    pub step_day: f64,
    /// Steps of the final attempt.
    pub steps: u64,
    /// How many times the cell was redone with a smaller step.
    pub redone: u32,
}

impl Assessment {
    /// What is known of a cell that was not followed.
    pub fn unseen(verdict: Verdict, loss: Option<Loss>) -> Assessment {
        Assessment {
            verdict,
            end_time_day: 0.0,
            loss,
            megno: None,
            lyapunov: None,
            extent: Vec::new(),
            frequency_drift: Vec::new(),
            angle: None,
            smallest_approach: None,
            energy_error: None,
            angular_momentum_error: None,
            passages: None,
            passage_energy_error: None,
            scheme: "",
            step_day: 0.0,
            steps: 0,
            redone: 0,
        }
    }

    /// The frequency drift of the planet with the largest.
    pub fn worst_drift(&self) -> Option<f64> {
        self.frequency_drift.iter().copied().reduce(f64::max)
    }
}
