//! `abide inspect --readings`: the same numbers under every reading that papers use, each integrated.

mod angles;
mod cases;
mod pool;
mod text;
mod view;

use std::process::ExitCode;

use super::json;
use crate::assess::{Plan, innermost_period_day, plan_for_rows};
use crate::cli::CliError;
use crate::cli::args::InspectArgs;
use crate::cli::manners::{INTERRUPTED, print, stop_on_signal};
use crate::coords::Configuration;
use crate::input;
use crate::system::{Compensation, CoordinateChoice, Encounter, Engine, Limits, Span, Step, System};
use view::View;

/// How long each reading is followed when nothing else is asked, orbits of the innermost planet.
const USUAL_ORBITS: f64 = 1e5;
/// Steps of one body that all readings together may take when nothing else is asked: about a minute on one core.
const MOST_BODY_STEPS: f64 = 4e8;
/// Rows per orbit of the innermost planet, and at most so many elements kept per reading.
const ROWS_PER_ORBIT: f64 = 4.0;
const MOST_ELEMENTS: usize = 240_000;
const FEWEST_ROWS: usize = 512;
const ENERGY_ERROR: f64 = 1e-6;

pub fn run(args: &InspectArgs, system: &System, stated: &Configuration) -> Result<ExitCode, CliError> {
    let cases = cases::distinct(system, stated);
    let plan = plan(args, stated, cases.iter().filter(|case| case.start.is_ok()).count())?;
    let stop = stop_on_signal()?;
    let Some(found) = pool::integrate(&cases, &plan, &stop) else {
        eprintln!("stopped; readings keep nothing: the same command begins again");
        return Ok(ExitCode::from(INTERRUPTED));
    };
    let view = View::new(system, stated, &plan.plan, &cases, &found);
    let output = if args.json { json(&view)? } else { text::page(&view) };
    print(&output)?;
    Ok(ExitCode::SUCCESS)
}

/// One plan for all readings, with the rows that are kept of each.
pub struct Work {
    pub plan: Plan,
    pub rows: usize,
}

fn plan(args: &InspectArgs, stated: &Configuration, readings: usize) -> Result<Work, CliError> {
    let typed = args.span.as_deref().map(input::parse_span).transpose().map_err(CliError::input)?;
    let limits =
        Limits { escape_au: None, encounter: Encounter::Stop { hill: 1.0 }, stop_when_chaotic: false };
    let engine = Engine {
        scheme: "auto".to_string(),
        coordinates: CoordinateChoice::Auto,
        step: Step::Auto,
        energy_error: ENERGY_ERROR,
        compensated: Compensation::Auto,
    };
    let period_day = innermost_period_day(stated);
    let steps_per_orbit = period_day / crate::assess::auto_step_day(stated);
    let span = typed.unwrap_or_else(|| {
        let steps = steps_per_orbit * (readings * stated.planets.len()) as f64;
        Span::Orbits(one_digit((MOST_BODY_STEPS / steps).min(USUAL_ORBITS)))
    });
    let orbits = match span {
        Span::Orbits(orbits) => orbits,
        Span::Days(day) => day / period_day,
    };
    // Beyond this many steps, counting them in whole numbers of f64 would no longer be exact.
    let steps = orbits * steps_per_orbit;
    if !(steps.is_finite() && steps <= 1e15) {
        return Err(CliError::Input(format!(
            "--span takes {steps:.1e} steps, which is not a number that can be counted to 1e15\n  to do:   shorten it"
        )));
    }
    let most = (MOST_ELEMENTS / stated.planets.len()).max(FEWEST_ROWS);
    let rows = ((ROWS_PER_ORBIT * orbits) as usize).clamp(FEWEST_ROWS, most);
    let plan = Plan::new(span, &limits, &engine, stated);
    Ok(Work { plan: plan_for_rows(&plan, stated, rows), rows })
}

/// The number rounded down to one digit.
fn one_digit(number: f64) -> f64 {
    let decade = 10f64.powf(number.log10().floor());
    // A decade that rounding made too large for the number itself would leave 0.
    (number / decade * (1.0 + 1e-12)).floor().max(1.0) * decade
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn round_numbers_stay_and_others_lose_their_digits() {
        for (number, rounded) in [(1e5, 1e5), (99_999.0, 9e4), (2500.0, 2000.0), (1.0, 1.0)] {
            assert!((one_digit(number) / rounded - 1.0).abs() < 1e-12, "{number}");
        }
    }
}
