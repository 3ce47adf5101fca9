//! The cells of a study as the pool draws them.
//!
//! A cell that cannot be followed never ends a night's run; it becomes a record at time 0:
//! - two planets at one place or touching: `lost`, `collision`;
//! - a planet inside the star: `lost`, `star`;
//! - no configuration at all (a mass that would be infinite, an orbit that is not bound, a key outside its
//!   range): `undecided`, with no evidence and no steps.
//!
//! The same in the system as stated is an error before the long part, since then every figure would be about
//! nothing.

use super::axis::{cell_count, cell_system, cell_values, order_of_axes};
use super::pool::{Made, Source};
use super::SurveyError;
use crate::assess::{Assessment, Loss};
use crate::coords::{self, Configuration, CoordsError};
use crate::system::{Study, System};
use crate::verdict::{LostHow, Verdict};

/// A study and its system, checked: every cell can be made or settled.
#[derive(Debug)]
pub struct Grid {
    system: System,
    study: Study,
    order: Vec<usize>,
}

impl Grid {
    /// Checks the axes and the system as stated.
    ///
    /// Errors: axes that cannot be set together, a nominal system that is no configuration or that starts inside
    /// a collision.
    pub fn new(system: System, study: Study) -> Result<Grid, SurveyError> {
        let order = order_of_axes(&study)?;
        let nominal = coords::configure(&system).map_err(SurveyError::Nominal)?;
        if let Some(loss) = overlap(&nominal) {
            return Err(SurveyError::NominalOverlap { what: words(&nominal, &loss) });
        }
        let grid = Grid { system, study, order };
        // What is wrong with every cell alike (a key to count from that is not stated) shows in the first.
        match cell_system(&grid.system, &grid.study, &grid.order, 0) {
            Err(error @ SurveyError::NotStated { .. }) => Err(error),
            _ => Ok(grid),
        }
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
        let system = cell_system(&self.system, &self.study, &self.order, cell).map_err(|error| match error {
            SurveyError::Underivable { source, .. } => self.no_configuration(&source),
            other => Settled { loss: None, text: chain(&other) },
        })?;
        let configuration = coords::configure(&system).map_err(|error| self.no_configuration(&error))?;
        match overlap(&configuration) {
            Some(loss) => Err(Settled { text: words(&configuration, &loss), loss: Some(loss) }),
            None => Ok(configuration),
        }
    }

    fn no_configuration(&self, error: &CoordsError) -> Settled {
        let index = |name: &str| self.system.planet_index(name);
        let loss = match error {
            CoordsError::Coincident { first, second, .. } => {
                index(first).zip(index(second)).map(|(first, second)| collision(second, first))
            }
            #[allow(unreachable_patterns, reason = "the room coords may learn more reasons")]
            _ => None,
        };
        Settled { loss, text: chain(error) }
    }
}

impl Source for Grid {
    fn cells(&self) -> u64 {
        cell_count(&self.study)
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
        Assessment {
            verdict: if self.loss.is_some() { Verdict::Lost } else { Verdict::Undecided },
            end_time_day: 0.0,
            loss: self.loss,
            megno: None,
            lyapunov: None,
            extent: Vec::new(),
            smallest_approach: None,
            energy_error: None,
            angular_momentum_error: None,
            scheme: "",
            step_day: 0.0,
            steps: 0,
            redone: 0,
        }
    }
}

fn collision(planet: usize, other: usize) -> Loss {
    Loss { time_day: 0.0, planet, other: Some(other), how: LostHow::Collision }
}

/// The first planet that starts inside the star or touching another planet.
fn overlap(configuration: &Configuration) -> Option<Loss> {
    let planets = &configuration.planets;
    for (index, planet) in planets.iter().enumerate() {
        if distance(planet.position_au, [0.0; 3]) < configuration.star_radius_au {
            return Some(Loss { time_day: 0.0, planet: index, other: None, how: LostHow::Star });
        }
        for (earlier, other) in planets[..index].iter().enumerate() {
            if distance(planet.position_au, other.position_au) < planet.radius_au + other.radius_au {
                let lighter = if other.gm < planet.gm { (earlier, index) } else { (index, earlier) };
                return Some(collision(lighter.0, lighter.1));
            }
        }
    }
    None
}

fn distance(a: [f64; 3], b: [f64; 3]) -> f64 {
    let d = [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
    (d[0] * d[0] + d[1] * d[1] + d[2] * d[2]).sqrt()
}

fn words(configuration: &Configuration, loss: &Loss) -> String {
    let name = |index: usize| configuration.planets[index].name.as_str();
    match loss.other {
        Some(other) => format!("planets {} and {} touch at the epoch", name(loss.planet), name(other)),
        None => format!("planet {} is inside the star at the epoch", name(loss.planet)),
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
