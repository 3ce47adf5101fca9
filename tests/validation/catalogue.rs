//! Forty catalogue systems followed for 1e3 orbits of their innermost planets.

use abide::units::YEAR_DAY;

use super::report::{Report, short};
use super::truth_support::catalogue::{CatalogueSystem, systems};

const WORDS: &str = "
Source: Open Exoplanet Catalogue (arXiv:1211.7121), snapshot of 2026-08-22, tests/truth/catalogue-systems.csv. Each system
becomes a system file and is followed for 1000 orbits of its innermost planet with the defaults: (2,2), step auto, energy error
asked 1e-6, a cell ends when two planets come within one mutual Hill radius. This shows that real input is read and followed to a
verdict that carries its energy error; it is no statement about these systems, whose catalogue values are mixed from several papers.

Gaps are filled by rule, and each rule used is named in the last column:
`90 deg` no inclination, so 90 deg (a minimum mass is then the true one); `node 0` no ascending node, so 0 deg; `epoch of phases`
mean anomalies and longitudes have no date in the catalogue, so they hold at the epoch; `epoch` no date at all, so JD 2455000.5,
else the epoch is the day of the first date; `star radius`, `radii` not stated, so the Sun's and Jupiter's mean density;
`mass kind` not called msini, so a true mass. Elements are read as astrocentric, arguments of pericentre as the planet's,
longitudes as mean longitudes.
";

pub fn write() {
    let report = Report {
        name: "catalogue",
        title: "Forty catalogue systems, 1000 inner orbits each",
        words: WORDS.to_string(),
        columns: vec![
            "system",
            "planets",
            "verdict",
            "end_yr",
            "lost_how",
            "megno",
            "energy_error",
            "step_day",
            "steps",
            "redone",
            "filled",
        ],
        rows: systems().iter().map(row).collect(),
    };
    report.write();
}

fn row(system: &CatalogueSystem) -> Vec<String> {
    let found = system.follow(1e3);
    let absent = |value: Option<f64>| value.map(short).unwrap_or_default();
    vec![
        system.name.clone(),
        system.planets.to_string(),
        found.verdict.word().to_string(),
        short(found.end_time_day / YEAR_DAY),
        found.loss.map(|loss| loss.how.word().to_string()).unwrap_or_default(),
        absent(found.megno),
        absent(found.energy_error),
        short(found.step_day),
        found.steps.to_string(),
        found.redone.to_string(),
        system.filled.join("; "),
    ]
}
