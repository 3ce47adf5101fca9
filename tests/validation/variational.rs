//! Tangent vectors and MEGNO against 128-bit integrations.

use super::report::{Report, met, short};
use super::truth_support::tangent::{Comparison, Problem, compare};

const WORDS: &str = "
Source: tests/truth/variational-orbits.csv, 128-bit Taylor integrations (a few late rows 80-bit), definitions of Cincotta & Simó
(2000). Followed here in double precision with (10,6,4). `tangent` is the relative departure of the whole tangent vector, `limit` what rounding
may do to it: four units times the root of the number of substeps, times the measured sensitivity of the tangent vector to a small change
of the start. ln growth must meet the limit, Y and its mean four times the limit and the error of their integrals (`…_sum`, the change when every
second sample is left out). Rows whose limit is above 0.1 are past what double precision can follow; they are shown and not judged.
";

/// Name, steps per year, years: to the last row of the table.
const PROBLEMS: [(&str, u32, f64); 5] = [
    ("kepler-two-body", 1024, 10_000.0),
    ("cr3bp-regular", 64, 50_000.0),
    ("cr3bp-chaotic-2to1", 64, 5000.0),
    ("cr3bp-chaotic-strong", 128, 2000.0),
    ("compact-two-planet-chaotic", 256, 400.0),
];

pub fn write() {
    for (name, _, years) in PROBLEMS {
        let last = Problem::read(name).marks().iter().map(|m| m.time).fold(0.0, f64::max);
        assert_eq!(last, years, "the rows of {name} are all compared");
    }
    let rows = PROBLEMS.iter().flat_map(|(name, per_year, years)| {
        compare(&Problem::read(name), *per_year, *years).into_iter().map(|row| cells(name, &row))
    });
    let report = Report {
        name: "variational",
        title: "Tangent vectors, growth and MEGNO",
        words: WORDS.to_string(),
        columns: vec![
            "problem",
            "years",
            "tangent",
            "limit",
            "ln_growth",
            "departure",
            "Y",
            "departure_Y",
            "Y_sum",
            "mean_Y",
            "departure_mean_Y",
            "mean_Y_sum",
            "met",
        ],
        rows: rows.collect(),
    };
    report.write();
}

fn cells(name: &str, row: &Comparison) -> Vec<String> {
    let departures =
        [row.found.log - row.stated.log, row.found.y - row.stated.y, row.found.mean_y - row.stated.mean_y];
    let limits = [row.rounding, 4.0 * row.rounding + row.quadrature.0, 4.0 * row.rounding + row.quadrature.1];
    let worst =
        departures.iter().zip(limits).map(|(d, l)| d.abs() / l).fold(row.tangent / row.rounding, f64::max);
    let judged = if row.rounding > 0.1 { "not judged".to_string() } else { met(worst, 1.0) };
    vec![
        name.to_string(),
        row.stated.time.to_string(),
        short(row.tangent),
        short(row.rounding),
        format!("{:.6}", row.stated.log),
        short(departures[0]),
        format!("{:.6}", row.stated.y),
        short(departures[1]),
        short(row.quadrature.0),
        format!("{:.6}", row.stated.mean_y),
        short(departures[2]),
        short(row.quadrature.1),
        judged,
    ]
}
