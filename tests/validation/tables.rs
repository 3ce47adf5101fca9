//! Tables of reports/validation: what was checked, against what, how far off, what was allowed.
//!
//! `cargo bench --bench validation` writes all of them; `cargo bench --bench validation -- catalogue` one. The same facts
//! are held by `cargo test`; here they are spread out with longer spans.

#[path = "../criteria_support/mod.rs"]
mod criteria_support;
#[path = "../speed/hues.rs"]
mod hues;
#[path = "../radau_support/mod.rs"]
mod radau_support;
#[path = "../shelf/mod.rs"]
mod shelf;
#[path = "../truth_support/mod.rs"]
mod truth_support;

mod catalogue;
mod classics;
mod cost_figure;
mod criteria;
mod de406;
mod fifty;
mod fifty_ends;
mod fifty_losses;
mod fifty_passages;
mod fifty_systems;
mod giants;
mod hd_45364;
mod inspect;
mod long_runs;
mod lyapunov;
mod mercury;
mod overlap;
mod random;
mod reference_integrations;
mod report;
mod round_off;
mod round_off_kepler;
mod schemes;
mod schemes_cost;
mod solar_system;
mod variational;

use std::process::ExitCode;

/// Name of a table and what makes it.
const TABLES: &[(&str, fn())] = &[
    ("hd-45364", hd_45364::write),
    ("hd-45364-map", hd_45364::write_map),
    ("catalogue", catalogue::write),
    ("inspect", inspect::write),
    ("variational", variational::write),
    ("lyapunov", lyapunov::write),
    ("solar-system", solar_system::write),
    ("schemes", schemes::write),
    ("classics", classics::write),
    ("reference-integrations", reference_integrations::write),
    ("de406", de406::write),
    ("mercury", mercury::write),
    ("giants", giants::write),
    ("round-off", round_off::write),
    ("round-off-kepler", round_off_kepler::write),
    ("schemes-cost", schemes_cost::write),
    ("fifty", fifty::write),
    ("fifty-losses", fifty_losses::write),
    ("overlap", overlap::write),
    ("criteria", criteria::write),
];

fn main() -> ExitCode {
    // The bench harness' own flag is not a name.
    let asked: Vec<String> = std::env::args().skip(1).filter(|word| !word.starts_with("--")).collect();
    let known = |word: &String| TABLES.iter().any(|(name, _)| name == word);
    if let Some(word) = asked.iter().find(|word| !known(word)) {
        let names: Vec<&str> = TABLES.iter().map(|(name, _)| *name).collect();
        eprintln!("no table is called {word}; there are {}", names.join(", "));
        return ExitCode::from(2);
    }
    for (name, write) in TABLES {
        if asked.is_empty() || asked.iter().any(|word| word == name) {
            write();
            eprintln!("wrote reports/validation/{name}");
        }
    }
    ExitCode::SUCCESS
}
