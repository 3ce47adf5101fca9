//! `abide inspect` on forty catalogue systems: how long it takes and how wide its page is.

use std::process::Command;
use std::time::Instant;

use super::report::{Report, met};
use super::truth_support::catalogue::{CatalogueSystem, systems};

const LIMIT_S: f64 = 1.0;
const LIMIT_COLUMNS: usize = 100;
/// The fastest of so many runs: what is slower is the machine at other work.
const RUNS: usize = 5;

const WORDS: &str = "
Source: Open Exoplanet Catalogue (arXiv:1211.7121), snapshot of 2026-08-22, tests/truth/catalogue-systems.csv, each system as the
file that the table `catalogue` describes. The program is started, reads the file, prints the page and ends; the time is that of the
whole process, the fastest of five, and the slowest beside it. Limits: a second, and 100 columns for the widest line.
`cargo test` holds the width (tests/truth_catalogue.rs), not the time.
";

pub fn write() {
    let report = Report {
        name: "inspect",
        title: "`abide inspect` on forty catalogue systems",
        words: WORDS.to_string(),
        columns: vec![
            "system",
            "planets",
            "fastest_s",
            "slowest_s",
            "limit_s",
            "lines",
            "widest",
            "limit_columns",
            "met",
        ],
        rows: systems().iter().map(row).collect(),
    };
    report.write();
}

fn row(system: &CatalogueSystem) -> Vec<String> {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join(system.file_name());
    std::fs::write(&file, &system.file).unwrap();
    let mut times = Vec::new();
    let mut page = String::new();
    for _ in 0..RUNS {
        let began = Instant::now();
        let output = Command::new(env!("CARGO_BIN_EXE_abide")).arg("inspect").arg(&file).output().unwrap();
        times.push(began.elapsed().as_secs_f64());
        assert!(output.status.success(), "{}", system.name);
        page = String::from_utf8(output.stdout).unwrap();
    }
    let fastest = times.iter().copied().fold(f64::MAX, f64::min);
    let slowest = times.iter().copied().fold(0.0, f64::max);
    let widest = page.lines().map(|line| line.chars().count()).max().unwrap();
    vec![
        system.name.clone(),
        system.planets.to_string(),
        format!("{fastest:.4}"),
        format!("{slowest:.4}"),
        LIMIT_S.to_string(),
        page.lines().count().to_string(),
        widest.to_string(),
        LIMIT_COLUMNS.to_string(),
        met((fastest / LIMIT_S).max(widest as f64 / LIMIT_COLUMNS as f64), 1.0),
    ]
}
