//! What was asked for, checked.

use std::path::PathBuf;
use std::time::Duration;

use crate::assess::{MOST_SAMPLES, Plan, auto_step_day, innermost_period_day, plan_for_rows};
use crate::cli::CliError;
use crate::cli::args::{CompensationWord, CoordinateWord, EngineWord, FollowArgs};
use crate::cli::unfit;
use crate::coords::Configuration;
use crate::input::{self, SystemFile};
use crate::integrate::Scheme;
use crate::report::time_words;
use crate::system::{Compensation, CoordinateChoice, Engine, Limits, Span};
use crate::units::DAY_S;

/// More rows than this are more than a run can keep at hand.
const MOST_ROWS: usize = 1_000_000;
/// Beyond so many steps sums are compensated unless asked otherwise.
const COMPENSATED_FROM_STEPS: f64 = 1e8;

pub struct Wish {
    pub file: SystemFile,
    pub configuration: Configuration,
    pub plan: Plan,
    pub rows: usize,
    pub folder: PathBuf,
    pub span: Span,
    /// Every option that has an influence on the series: its flag, what it means, what was typed.
    pub options: Vec<Choice>,
    /// Between two checkpoints.
    pub pause: Duration,
    pub quiet: bool,
    pub json: bool,
}

/// An option as it was chosen.
#[derive(Clone, Debug, PartialEq, serde::Serialize, serde::Deserialize)]
pub struct Choice {
    pub flag: String,
    /// Equal for words that mean the same.
    pub meaning: String,
    pub typed: String,
}

/// The word as typed.
fn lower(word: impl std::fmt::Debug) -> String {
    format!("{word:?}").to_lowercase()
}

fn coordinates(word: CoordinateWord) -> CoordinateChoice {
    match word {
        CoordinateWord::Auto => CoordinateChoice::Auto,
        CoordinateWord::Heliocentric => CoordinateChoice::Heliocentric,
        CoordinateWord::Jacobi => CoordinateChoice::Jacobi,
    }
}

fn compensation(word: CompensationWord) -> Compensation {
    match word {
        CompensationWord::Auto => Compensation::Auto,
        CompensationWord::On => Compensation::On,
        CompensationWord::Off => Compensation::Off,
    }
}

/// Steps of the configuration under the plan.
fn steps(plan: &Plan, configuration: &Configuration) -> f64 {
    plan.span_day / plan.step_day.unwrap_or_else(|| auto_step_day(configuration))
}

impl Wish {
    /// Errors: what was typed, each pointing at the word; what the file says.
    pub fn check(args: &FollowArgs) -> Result<Wish, CliError> {
        let file = input::read_system(&args.system).map_err(CliError::input)?;
        let span = input::parse_span(&args.span).map_err(CliError::input)?;
        let engine = Engine {
            scheme: scheme(&args.scheme)?,
            coordinates: coordinates(args.coordinates),
            compensated: compensation(args.compensated),
            step: input::parse_step(&args.step).map_err(CliError::input)?,
            energy_error: input::parse_energy_error(&args.energy_error).map_err(CliError::input)?,
        };
        let limits = Limits {
            escape_au: args
                .escape
                .as_deref()
                .map(input::parse_escape)
                .transpose()
                .map_err(CliError::input)?,
            encounter: input::parse_encounter(&args.encounter).map_err(CliError::input)?,
            stop_when_chaotic: false,
        };
        let rows = rows(args.rows)?;
        let configuration = unfit::startable(&file)?;
        let mut plan = Plan::new(span, &limits, &engine, &configuration);
        plan.adaptive = args.engine == EngineWord::Adaptive;
        plan.compensated |=
            engine.compensated == Compensation::Auto && steps(&plan, &configuration) > COMPENSATED_FROM_STEPS;
        let plan = plan_for_rows(&plan, &configuration, rows.max(MOST_SAMPLES));
        check_plan(args, &plan, &configuration)?;
        let meanings = [
            ("--span", format!("{span:?}"), args.span.clone()),
            ("--step", format!("{:?}", engine.step), args.step.clone()),
            ("--scheme", engine.scheme.clone(), args.scheme.clone()),
            ("--coordinates", format!("{:?}", args.coordinates), lower(args.coordinates)),
            ("--compensated", plan.compensated.to_string(), lower(args.compensated)),
            ("--engine", format!("{:?}", args.engine), lower(args.engine)),
            ("--energy-error", engine.energy_error.to_string(), args.energy_error.clone()),
            ("--escape", format!("{:?}", limits.escape_au), args.escape.clone().unwrap_or_default()),
            ("--encounter", format!("{:?}", limits.encounter), args.encounter.clone()),
            ("--rows", rows.to_string(), rows.to_string()),
        ];
        let options =
            meanings.map(|(flag, meaning, typed)| Choice { flag: flag.to_owned(), meaning, typed }).to_vec();
        Ok(Wish {
            folder: args.into.clone().unwrap_or_else(|| default_folder(args)),
            configuration,
            plan,
            rows,
            span,
            pause: pause(&args.checkpoint)?,
            options,
            quiet: args.quiet,
            json: args.json,
            file,
        })
    }

    pub fn say(&self, words: std::fmt::Arguments<'_>) {
        if !self.quiet {
            eprintln!("{words}");
        }
    }

    pub fn title(&self) -> &str {
        &self.file.system.title
    }

    /// Of planets and companion, in the order of the configuration.
    pub fn names(&self) -> Vec<String> {
        self.configuration.planets.iter().map(|planet| planet.name.clone()).collect()
    }

    pub fn planet(&self, index: usize) -> &str {
        &self.configuration.planets[index].name
    }

    /// Index and period (day) of the planet whose orbits are counted.
    pub fn innermost(&self) -> (usize, f64) {
        let period = innermost_period_day(&self.configuration);
        let frame = crate::system::Frame::Astrocentric;
        let periods = self.configuration.periods_of(frame, &self.configuration.elements_in(frame));
        (periods.iter().position(|p| *p == Some(period)).unwrap_or(0), period)
    }

    /// The span in orbits of the innermost planet and as a time.
    pub fn span_words(&self) -> String {
        let (planet, period) = self.innermost();
        let orbits = match self.span {
            Span::Orbits(orbits) => orbits,
            Span::Days(days) => days / period,
        };
        format!("{} orbits of {} ({})", count(orbits), self.planet(planet), time_words(self.plan.span_day))
    }
}

/// A number of orbits or steps: whole up to a million, then to three digits.
pub fn count(number: f64) -> String {
    let text = if number >= 999_999.5 {
        format!("{number:.2e}")
    } else if number >= 100.0 {
        return format!("{number:.0}");
    } else {
        format!("{number:.2}")
    };
    let (digits, power) =
        text.split_once('e').map_or((text.as_str(), String::new()), |(d, p)| (d, format!("e{p}")));
    format!("{}{power}", digits.trim_end_matches('0').trim_end_matches('.'))
}

fn scheme(word: &str) -> Result<String, CliError> {
    if word == "auto" || Scheme::named(word).is_some() {
        return Ok(word.to_owned());
    }
    let known: Vec<&str> = Scheme::all().iter().map(|scheme| scheme.name).collect();
    Err(CliError::Input(format!(
        "--scheme {word:?} is not known\n  allowed: auto, {}\n  to do:   write one of them in quotes, as --scheme \
         \"(10,6,4)\"",
        known.join(", ")
    )))
}

fn pause(text: &str) -> Result<Duration, CliError> {
    let seconds = input::parse_time(text).map_err(CliError::input)? * DAY_S;
    Duration::try_from_secs_f64(seconds).map_err(|_| {
        CliError::Input(format!("--checkpoint {text:?} is no time to wait; write, as an example, \"10 s\""))
    })
}

fn rows(rows: usize) -> Result<usize, CliError> {
    if (2..=MOST_ROWS).contains(&rows) {
        return Ok(rows);
    }
    Err(CliError::Input(format!(
        "--rows is {rows}, but a series has 2 to {MOST_ROWS}: one at the start, one at the end, and what is between"
    )))
}

fn check_plan(args: &FollowArgs, plan: &Plan, configuration: &Configuration) -> Result<(), CliError> {
    let steps = steps(plan, configuration);
    if !steps.is_finite() {
        return Err(CliError::Input(format!(
            "{}: no planet is bound to the star alone, so no step can be chosen; give --step and --span as times",
            args.system.display()
        )));
    }
    // Beyond this many steps, counting them in whole numbers of f64 would no longer be exact.
    if steps > 1e15 {
        return Err(CliError::Input(format!(
            "--span {:?} takes {steps:.1e} steps of {:.1e} d, more than 1e15; shorten it or lengthen --step",
            args.span,
            plan.span_day / steps
        )));
    }
    Ok(())
}

fn default_folder(args: &FollowArgs) -> PathBuf {
    let stem = args.system.file_stem().unwrap_or_default();
    PathBuf::from("reports/runs").join(stem)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn counts_are_whole_as_long_as_they_are_short() {
        for (number, text) in [
            (3.0, "3"),
            (12.346, "12.35"),
            (4941.7, "4942"),
            (100_000.0, "100000"),
            (1e9, "1e9"),
            (2.5432e7, "2.54e7"),
            (1e6, "1e6"),
            (999_999.9, "1e6"),
        ] {
            assert_eq!(count(number), text);
        }
    }

    #[test]
    fn an_unknown_scheme_names_the_known_ones() {
        let error = scheme("(3,3)").unwrap_err().to_string();
        assert!(error.contains("(10,6,4)") && error.contains("auto"), "{error}");
        assert_eq!(scheme("(8,4)").unwrap(), "(8,4)");
    }
}
