//! Real systems and outside numbers from tests/truth, for the checks that use them.

#![allow(dead_code, reason = "each test file uses its own part")]

pub mod catalogue;
pub mod energy;
pub mod hd_45364;
pub mod line;
pub mod tangent;

use std::collections::HashMap;
use std::path::PathBuf;

use abide::assess::Plan;
use abide::coords::{Configuration, StatedState, configure};
use abide::input::read_system;
use abide::integrate::State;
use abide::system::{Encounter, Engine, Limits, Span, Step};

/// A file of tests/truth.
pub fn truth_path(name: &str) -> PathBuf {
    PathBuf::from(concat!(env!("CARGO_MANIFEST_DIR"), "/tests/truth")).join(name)
}

/// One line of a table, by column name.
#[derive(Clone)]
pub struct Entry(HashMap<String, String>);

impl Entry {
    pub fn text(&self, column: &str) -> &str {
        self.0.get(column).unwrap_or_else(|| panic!("no column {column}"))
    }

    /// None where the table is empty.
    pub fn number(&self, column: &str) -> Option<f64> {
        let text = self.text(column);
        (!text.is_empty()).then(|| text.parse().unwrap_or_else(|_| panic!("{column}: {text}")))
    }

    pub fn triple(&self, columns: [&str; 3]) -> [f64; 3] {
        columns.map(|column| self.number(column).unwrap())
    }
}

/// The lines of a table of tests/truth.
pub fn table(name: &str) -> Vec<Entry> {
    let mut reader = csv::ReaderBuilder::new()
        .comment(Some(b'#'))
        .from_path(truth_path(name))
        .expect("the table is there");
    let names: Vec<String> = reader.headers().unwrap().iter().map(str::to_string).collect();
    let entry = |record: csv::StringRecord| {
        Entry(names.iter().cloned().zip(record.iter().map(str::to_string)).collect())
    };
    reader.records().map(|record| entry(record.unwrap())).collect()
}

/// The configuration of a system file of tests/truth.
pub fn configuration(file: &str) -> Configuration {
    let system = read_system(truth_path(file)).unwrap_or_else(|error| panic!("{error}")).system;
    configure(&system).unwrap()
}

/// Sun and eight planets from the states of eight-planets-j2000.csv.
pub fn solar_system() -> Configuration {
    let entries = table("eight-planets-j2000.csv");
    let gm = |entry: &Entry| entry.number("gm_au3_per_day2").unwrap();
    let body = |entry: &Entry| StatedState {
        name: entry.text("body").to_string(),
        gm: gm(entry),
        radius_au: 1e-6,
        position_au: entry.triple(["x_au", "y_au", "z_au"]),
        velocity_au_day: entry.triple(["vx_au_per_day", "vy_au_per_day", "vz_au_per_day"]),
    };
    Configuration::from_states(gm(&entries[0]), 1e-5, entries[1..].iter().map(body).collect())
}

/// Sun, Jupiter and Saturn as sun-jupiter-saturn.csv starts them.
pub fn sun_jupiter_saturn() -> Configuration {
    let entries = table("sun-jupiter-saturn.csv");
    let body = |entry: &Entry| StatedState {
        name: entry.text("body").to_string(),
        gm: entry.number("gm").unwrap(),
        radius_au: 1e-6,
        position_au: entry.triple(["x", "y", "z"]),
        velocity_au_day: entry.triple(["vx", "vy", "vz"]),
    };
    Configuration::from_states(
        entries[0].number("gm").unwrap(),
        1e-5,
        entries[1..3].iter().map(body).collect(),
    )
}

/// Everything on, encounters end a cell at one mutual Hill radius.
pub fn plan(nominal: &Configuration, span: Span, energy_error: f64) -> Plan {
    let limits =
        Limits { escape_au: None, encounter: Encounter::Stop { hill: 1.0 }, stop_when_chaotic: false };
    let engine = Engine {
        scheme: "auto".to_string(),
        coordinates: abide::system::CoordinateChoice::Auto,
        compensated: abide::system::Compensation::Auto,
        step: Step::Auto,
        energy_error,
    };
    Plan::new(span, &limits, &engine, nominal)
}

/// Heliocentric positions and barycentric velocities of a configuration.
pub fn state(configuration: &Configuration) -> State {
    let planets = &configuration.planets;
    let total = configuration.star_gm + planets.iter().map(|p| p.gm).sum::<f64>();
    let star = [0, 1, 2].map(|k| -planets.iter().map(|p| p.gm * p.velocity_au_day[k]).sum::<f64>() / total);
    State {
        star_gm: configuration.star_gm,
        gm: planets.iter().map(|p| p.gm).collect(),
        pos: planets.iter().map(|p| p.position_au).collect(),
        vel: planets.iter().map(|p| [0, 1, 2].map(|k| p.velocity_au_day[k] + star[k])).collect(),
    }
}
