//! The readings and what became of them, as plain data.

use serde::Serialize;

use super::angles::telling;
use super::cases::{Case, Reading};
use super::pool::Outcome;
use crate::assess::{Plan, innermost_period_day};
use crate::cli::command::inspect::view::frame_word;
use crate::coords::Configuration;
use crate::observe::{AngleMotion, WhyNot};
use crate::system::{Pericentre, System, Transit};
use crate::units::{DEGREE, YEAR_DAY};
use crate::verdict::Verdict;

#[derive(Debug, Serialize)]
pub struct View {
    pub title: String,
    pub innermost: String,
    pub span_orbits: f64,
    pub span_yr: f64,
    pub scheme: &'static str,
    /// The angles that librate in some reading, one of each pair or chain; the states of a reading are in this order.
    pub telling_angles: Vec<String>,
    /// How many angles were looked at.
    pub angles_looked_at: usize,
    pub readings: Vec<ReadingView>,
}

#[derive(Debug, Serialize)]
pub struct ReadingView {
    pub number: usize,
    /// What the file says.
    pub own: bool,
    #[serde(flatten)]
    pub words: ReadingWords,
    /// Readings that are the same motion, turned or mirrored as a whole at most.
    pub same: Vec<ReadingWords>,
    /// Why it cannot start; then nothing below is known.
    pub refused: Option<String>,
    pub verdict: Option<&'static str>,
    pub end_time_yr: Option<f64>,
    pub lost_how: Option<&'static str>,
    pub lost_body: Option<String>,
    pub megno: Option<f64>,
    pub lyapunov_time_yr: Option<f64>,
    pub energy_error: Option<f64>,
    /// Of the telling angles; empty where the motion ended early.
    pub telling: Vec<StateView>,
    /// Of every angle looked at.
    pub angles: Vec<AngleView>,
}

/// A reading in the words of system files.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ReadingWords {
    pub elements: &'static str,
    pub pericentre: &'static str,
    /// Whose mean longitudes are stated.
    pub mean_longitude: &'static str,
    pub transit: &'static str,
}

#[derive(Debug, Serialize)]
pub struct AngleView {
    pub angle: String,
    #[serde(flatten)]
    pub state: StateView,
}

#[derive(Clone, Debug, PartialEq, Serialize)]
#[serde(tag = "state", rename_all = "snake_case")]
pub enum StateView {
    Librates { centre_deg: f64, amplitude_deg: f64, period_yr: f64 },
    Circulates { deg_yr: f64 },
    Alternates { turns: f64 },
    CannotTell { why: &'static str },
}

impl StateView {
    fn of(motion: &AngleMotion) -> StateView {
        match motion {
            AngleMotion::Librates(found) => StateView::Librates {
                centre_deg: found.centre / DEGREE,
                amplitude_deg: found.amplitude / DEGREE,
                period_yr: found.main_period_day / YEAR_DAY,
            },
            AngleMotion::Circulates { rate_rad_day } => {
                StateView::Circulates { deg_yr: rate_rad_day * YEAR_DAY / DEGREE }
            }
            AngleMotion::Alternates { turns } => StateView::Alternates { turns: *turns },
            AngleMotion::CannotTell(why) => StateView::CannotTell {
                why: match why {
                    WhyNot::ShortSpan { .. } => "short_span",
                    WhyNot::Drifting { .. } => "drifting",
                    WhyNot::SparseSamples => "sparse_samples",
                },
            },
        }
    }
}

impl ReadingWords {
    fn of(reading: &Reading) -> ReadingWords {
        let owner = |whose: Pericentre| match whose {
            Pericentre::Planet => "planet",
            Pericentre::Star => "star",
        };
        ReadingWords {
            elements: frame_word(reading.elements),
            pericentre: owner(reading.pericentre),
            mean_longitude: owner(reading.longitudes),
            transit: match reading.transit {
                Transit::Plus90 => "+90 deg",
                Transit::Minus90 => "-90 deg",
            },
        }
    }
}

impl View {
    pub fn new(
        system: &System,
        stated: &Configuration,
        plan: &Plan,
        cases: &[Case],
        found: &[Option<Outcome>],
    ) -> View {
        let names: Vec<String> = stated.planets.iter().map(|planet| planet.name.clone()).collect();
        let whole: Vec<&Outcome> = found.iter().flatten().filter(|found| !found.angles.is_empty()).collect();
        let telling = telling(&whole);
        let angle = |index: usize| whole.first().map(|outcome| outcome.angles[index].angle.words(&names));
        let period_day = innermost_period_day(stated);
        let readings = cases.iter().zip(found).enumerate();
        View {
            title: system.title.clone(),
            innermost: innermost(stated, period_day),
            span_orbits: plan.span_day / period_day,
            span_yr: plan.span_day / YEAR_DAY,
            scheme: plan.scheme,
            telling_angles: telling.iter().filter_map(|index| angle(*index)).collect(),
            angles_looked_at: whole.first().map_or(0, |outcome| outcome.angles.len()),
            readings: readings
                .map(|(index, (case, found))| reading(index + 1, case, found.as_ref(), &names, &telling))
                .collect(),
        }
    }

    /// The verdicts with the numbers of their readings, in the order of the verdicts.
    pub fn verdicts(&self) -> Vec<(&'static str, Vec<usize>)> {
        let of = |word: &'static str| {
            let with = self.readings.iter().filter(|reading| reading.verdict == Some(word));
            (word, with.map(|reading| reading.number).collect::<Vec<usize>>())
        };
        let all = Verdict::ALL.iter().map(|verdict| of(verdict.word()));
        all.filter(|(_, numbers)| !numbers.is_empty()).collect()
    }
}

fn innermost(stated: &Configuration, period_day: f64) -> String {
    let orbits = stated.orbits();
    let gap = |planet: &usize| (orbits[*planet].period_day().unwrap_or(f64::INFINITY) - period_day).abs();
    let planet = stated.planet_indices().min_by(|one, other| gap(one).total_cmp(&gap(other)));
    planet.map_or(String::new(), |planet| stated.planets[planet].name.clone())
}

fn reading(
    number: usize,
    case: &Case,
    outcome: Option<&Outcome>,
    names: &[String],
    telling: &[usize],
) -> ReadingView {
    let found = outcome.map(|outcome| &outcome.assessment);
    let reports = outcome.map(|outcome| outcome.angles.as_slice()).unwrap_or_default();
    let loss = found.and_then(|found| found.loss.as_ref());
    ReadingView {
        number,
        own: case.own,
        words: ReadingWords::of(&case.reading),
        same: case.same.iter().map(ReadingWords::of).collect(),
        refused: case.start.as_ref().err().map(ToString::to_string),
        verdict: found.map(|found| found.verdict.word()),
        end_time_yr: found.map(|found| found.end_time_day / YEAR_DAY),
        lost_how: loss.map(|loss| loss.how.word()),
        lost_body: loss.map(|loss| names[loss.planet].clone()),
        megno: found.and_then(|found| found.megno),
        lyapunov_time_yr: found
            .and_then(|found| found.lyapunov)
            .map(|lyapunov| 1.0 / lyapunov.per_day / YEAR_DAY),
        energy_error: found.and_then(|found| found.energy_error),
        telling: telling
            .iter()
            .filter_map(|index| reports.get(*index))
            .map(|report| StateView::of(&report.motion))
            .collect(),
        angles: reports
            .iter()
            .map(|report| AngleView {
                angle: report.angle.words(names),
                state: StateView::of(&report.motion),
            })
            .collect(),
    }
}
