//! The energy of the eight planets over a million steps.

use abide::assess::auto_step_day;
use abide::integrate::Scheme;

use super::report::{Report, short};
use super::truth_support::energy::{energy_errors, slope_of_pieces};
use super::truth_support::solar_system;

const WORDS: &str = "
Source of the start: JPL DE406 at J2000 (tests/truth/eight-planets-j2000.csv), eight planets, point masses. A million steps of 1/20 of Mercury's
pericentre passage (2.84 d, about 7800 years), energy looked at 4000 times. `trend` is the slope of a straight line through the relative
energy error times the span, with its standard error from sixteen pieces of the span. It must be within three standard errors, or
within what rounding adds: two units times the root of the number of kicks (Brouwer 1937).
";

pub fn write() {
    let report = Report {
        name: "solar-system",
        title: "Energy of the Solar System over 1e6 steps",
        words: WORDS.to_string(),
        columns: vec!["scheme", "largest", "trend", "trend_error", "rounding", "met"],
        rows: Scheme::all().iter().map(row).collect(),
    };
    report.write();
}

fn row(scheme: &Scheme) -> Vec<String> {
    let sun = solar_system();
    let (steps, samples) = (1_000_000, 4000);
    let errors = energy_errors(&sun, scheme, auto_step_day(&sun), steps, samples);
    let largest = errors.iter().fold(0.0f64, |most, e| most.max(e.abs()));
    let (slope, error) = slope_of_pieces(&errors);
    let (trend, spread) = (slope * samples as f64, error * samples as f64);
    let rounding = 2.0 * f64::EPSILON * ((steps * scheme.stages()) as f64).sqrt();
    let met = if trend.abs() <= rounding.max(3.0 * spread) { "yes" } else { "NO" };
    vec![
        scheme.name.to_string(),
        short(largest),
        short(trend),
        short(spread),
        short(rounding),
        met.to_string(),
    ]
}
