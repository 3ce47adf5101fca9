//! The cells of a study as the pool draws them.
//!
//! A cell that cannot be followed never ends a night's run; it becomes a record at time 0:
//! - two planets at one place or touching: `lost`, `collision` (of the less massive, else the later one);
//! - a pericentre inside the star: `lost`, `star`;
//! - an orbit that is not bound: `lost`, `escape`;
//! - no configuration at all (a mass that would be infinite, a key outside its range): `undecided`, with no
//!   evidence and no steps.
//!
//! The same in the system as stated is an error before the long part, since then every figure would be about
//! nothing.

use super::SurveyError;
use super::axis::{cell_count, cell_system, cell_values};
use super::pool::{Made, Source};
use crate::assess::{Assessment, Loss, auto_step_day};
use crate::coords::{self, Configuration, CoordsError};
use crate::system::{Study, System};
use crate::verdict::{LostHow, Verdict};

/// A study and its system, checked: every cell can be made or settled.
#[derive(Debug)]
pub struct Grid {
    system: System,
    study: Study,
}

impl Grid {
    /// Checks the system as stated.
    ///
    /// Errors: it is no configuration, or starts with planets touching each other or the star.
    pub fn new(system: System, study: Study) -> Result<Grid, SurveyError> {
        coords::configure(&system)
            .and_then(|nominal| coords::check_start(&nominal))
            .map_err(SurveyError::Nominal)?;
        Ok(Grid { system, study })
    }

    /// The cells that cannot be followed, among those that `which` yields: how many, and the first with its reason.
    pub fn settled(&self, which: impl Iterator<Item = u64>) -> Option<(u64, u64, String)> {
        let mut found: Option<(u64, u64, String)> = None;
        for cell in which {
            if let Err(reason) = self.configuration(cell) {
                match &mut found {
                    Some((count, ..)) => *count += 1,
                    None => found = Some((1, cell, reason.text)),
                }
            }
        }
        found
    }

    fn configuration(&self, cell: u64) -> Result<Configuration, Settled> {
        let system = cell_system(&self.system, &self.study, cell)
            .map_err(|error| Settled { loss: None, text: chain(&error) })?;
        let configuration = coords::configure(&system).map_err(|error| self.impossible(&error, None))?;
        coords::check_start(&configuration).map_err(|error| self.impossible(&error, Some(&configuration)))?;
        Ok(configuration)
    }

    fn impossible(&self, error: &CoordsError, configuration: Option<&Configuration>) -> Settled {
        let index = |name: &str| self.system.orbiting_index(name);
        let gm = |planet: usize| configuration.map_or(0.0, |c| c.planets[planet].gm);
        let at_start = |planet, other, how| Loss { time_day: 0.0, planet, other, how };
        let loss = match error {
            CoordsError::Coincident { first, second, .. } => index(first).zip(index(second)).map(|pair| {
                let (lost, other) = if gm(pair.0) < gm(pair.1) { pair } else { (pair.1, pair.0) };
                at_start(lost, Some(other), LostHow::Collision)
            }),
            CoordsError::InsideStar { planet, .. } => {
                index(planet).map(|planet| at_start(planet, None, LostHow::Star))
            }
            CoordsError::NotBound { planet, .. } => {
                index(planet).map(|planet| at_start(planet, None, LostHow::Escape))
            }
            _ => None,
        };
        Settled { loss, text: chain(error) }
    }
}

impl Source for Grid {
    fn cells(&self) -> u64 {
        cell_count(&self.study)
    }

    fn shape(&self) -> [usize; 2] {
        let along = |axis: usize| self.study.axes.get(axis).map_or(1, |axis| axis.cells);
        [along(0), along(1)]
    }

    /// In steps per day: the span is the same for all.
    fn price(&self, cell: u64) -> f64 {
        self.configuration(cell).map_or(0.0, |configuration| 1.0 / auto_step_day(&configuration))
    }

    fn values(&self, cell: u64) -> Vec<f64> {
        cell_values(&self.study, cell)
    }

    fn make(&self, cell: u64) -> Made {
        match self.configuration(cell) {
            Ok(configuration) => Made::ToFollow(configuration),
            Err(settled) => Made::Settled(settled.assessment()),
        }
    }
}

/// Why a cell is not followed.
struct Settled {
    loss: Option<Loss>,
    text: String,
}

impl Settled {
    fn assessment(&self) -> Assessment {
        let verdict = if self.loss.is_some() { Verdict::Lost } else { Verdict::Undecided };
        Assessment::unseen(verdict, self.loss)
    }
}

fn chain(error: &dyn std::error::Error) -> String {
    let mut text = error.to_string();
    let mut cause = error.source();
    while let Some(inner) = cause {
        text = format!("{text}: {inner}");
        cause = inner.source();
    }
    text
}
