//! Every scheme on problems with known ends, and the slopes of its energy error.

use abide::integrate::{Coordinates, Scheme};

use super::report::{Report, short};
use super::shelf::order::{energy_error, slopes};
use super::shelf::{gap, pair, run};
use super::truth_support::{state, sun_jupiter_saturn, table};

const WORDS: &str = "
Slopes of the largest relative energy error over twelve inner revolutions of two planets. A scheme of generalised order (n1, …, nk) has
the error O(ε h^n1) + … + O(ε^k h^nk). `first` slopes are measured where the first term stands above all others (circles a factor 4 apart, ε = 1e-5
and 1e-4, 3 to 5 steps per revolution, 12 to 24 for orders below 6; ε = 1e-6 and 1e-5 for (10,2) and (12,2), a factor 2 apart for (12,2)), `last` slopes where the last does (e = 0.3, a ratio of 2.2, ε = 0.1, 64 to 192
steps). Leapfrog is run with its corrector, which removes its first term; what stands there is of no stated order. `error` columns: the same energy error
for two planets with ε = 1e-3 at 16, 32 and 64 steps per inner revolution. `sun_jupiter_saturn_au`: largest distance from the 128-bit end state of
tests/truth/sun-jupiter-saturn.csv after 1000 and 10 000 years in steps of 50 days.
";

pub fn write() {
    let report = Report {
        name: "schemes",
        title: "Schemes: slopes and ends",
        words: WORDS.to_string(),
        columns: vec![
            "scheme",
            "kicks_per_step",
            "first_step",
            "first_ratio",
            "last_step",
            "last_ratio",
            "error_16",
            "error_32",
            "error_64",
            "sun_jupiter_saturn_au_1000",
            "sun_jupiter_saturn_au_10000",
        ],
        rows: Scheme::all().iter().map(row).collect(),
    };
    report.write();
}

fn row(scheme: &'static Scheme) -> Vec<String> {
    let found = slopes(Coordinates::Heliocentric, scheme);
    let first = |value: f64| if scheme.corrected { format!("({value:.2})") } else { format!("{value:.2}") };
    let mut cells = vec![
        scheme.name.to_string(),
        scheme.stages().to_string(),
        first(found.first_step),
        first(found.first_ratio),
        format!("{:.2}", found.last_step),
        found.last_ratio.map_or("-".to_string(), |ratio| format!("{ratio:.2}")),
    ];
    cells.extend(
        [16, 32, 64].map(|steps| short(energy_error(Coordinates::Heliocentric, &pair(1e-3), scheme, steps))),
    );
    cells.extend([1000.0, 10_000.0].map(|years| short(end_error_au(scheme, years))));
    cells
}

/// Largest distance of Jupiter or Saturn from the 128-bit state after so many years, either way.
pub fn end_error_au(scheme: &Scheme, years: f64) -> f64 {
    let start = state(&sun_jupiter_saturn());
    let steps = (years.abs() * 365.25 / 50.0).ceil();
    let mut end = run(&start, scheme, years * 365.25 / steps, steps as usize);
    let mut truth = end.clone();
    let rows = table("sun-jupiter-saturn.csv");
    let stated = rows.iter().filter(|e| e.text("part") == "trajectory" && e.number("t") == Some(years));
    truth.pos = stated.map(|e| e.triple(["x", "y", "z"])).collect();
    assert_eq!(truth.pos.len(), 2);
    end.vel.clear();
    gap(&end, &truth)
}
