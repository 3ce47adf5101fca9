//! The forty catalogue systems as system files, and what becomes of them.
//!
//! What the catalogue leaves open is filled by these rules, each noted per system in the table:
//! * `90 deg`: no inclination → 90°, the default of system files (a minimum mass is then the true one);
//! * `node 0`: no ascending node → 0°, the default of system files;
//! * `epoch of phases`: mean anomalies and longitudes have no date in the catalogue → they hold at the epoch;
//! * `epoch`: the day of the first date of the system, or JD 2455000.5 when it has none;
//! * `star radius`, `radii`: not stated → the system file's own defaults (the Sun's, Jupiter's mean density);
//! * `mass kind`: not called msini → a true mass.
//!
//! Elements are read as astrocentric, the argument of pericentre as the planet's, longitudes as mean longitudes; the
//! catalogue does not say. Periods are taken before semi-major axes where both are given.

use std::fmt::Write as _;

use abide::assess::{Assessment, assess};
use abide::coords::{Configuration, configure};
use abide::input::parse_system;
use abide::system::Span;

use super::{Entry, plan, table};

/// A catalogue system as a file.
pub struct CatalogueSystem {
    pub name: String,
    pub planets: usize,
    pub file: String,
    pub filled: Vec<&'static str>,
}

/// All systems of catalogue-systems.csv.
pub fn systems() -> Vec<CatalogueSystem> {
    let entries = table("catalogue-systems.csv");
    let groups = entries.chunk_by(|a, b| a.text("system") == b.text("system"));
    groups.map(CatalogueSystem::new).collect()
}

impl CatalogueSystem {
    fn new(entries: &[Entry]) -> CatalogueSystem {
        let name = entries[0].text("system").to_string();
        let mut filled = Vec::new();
        let mut file = format!("title = \"{name}\"\nepoch = \"{} JD\"\n", epoch_jd(entries, &mut filled));
        star(&entries[0], &mut file, &mut filled);
        for entry in entries {
            planet(entry, &mut file, &mut filled);
        }
        filled.sort_unstable();
        filled.dedup();
        CatalogueSystem { name, planets: entries.len(), file, filled }
    }

    /// Name of a file for it.
    pub fn file_name(&self) -> String {
        format!("{}.toml", self.name.to_lowercase().replace([' ', '+'], "-"))
    }

    pub fn configuration(&self) -> Configuration {
        let system =
            parse_system(&self.file_name(), &self.file).unwrap_or_else(|error| panic!("{error}")).system;
        configure(&system).unwrap_or_else(|error| panic!("{}: {error}", self.name))
    }

    /// Follows it for so many orbits of its innermost planet.
    pub fn follow(&self, orbits: f64) -> Assessment {
        let configuration = self.configuration();
        assess(&configuration, &plan(&configuration, Span::Orbits(orbits), 1e-6))
    }
}

fn epoch_jd(entries: &[Entry], filled: &mut Vec<&'static str>) -> f64 {
    let dates = entries.iter().flat_map(|e| [e.number("transittime_jd"), e.number("periastrontime_jd")]);
    let first = dates.flatten().next().map(|date| (date - 0.5).floor() + 0.5);
    if first.is_none() {
        filled.push("epoch");
    }
    first.unwrap_or(2_455_000.5)
}

fn star(entry: &Entry, file: &mut String, filled: &mut Vec<&'static str>) {
    writeln!(file, "\n[star]\nmass = \"{} Msun\"", quantity(entry, "star_mass_msun", "star_mass")).unwrap();
    match entry.number("star_radius_rsun") {
        Some(radius) => writeln!(file, "radius = \"{radius} Rsun\"").unwrap(),
        None => filled.push("star radius"),
    }
    if let Some(age) = entry.number("star_age_gyr") {
        writeln!(file, "age = \"{age} Gyr\"").unwrap();
    }
}

fn planet(entry: &Entry, file: &mut String, filled: &mut Vec<&'static str>) {
    let name = entry.text("planet").rsplit(' ').next().unwrap();
    writeln!(file, "\n[[planet]]\nname = \"{name}\"").unwrap();
    let mass_key = if entry.text("mass_kind") == "msini" { "minimum_mass" } else { "mass" };
    if entry.text("mass_kind").is_empty() {
        filled.push("mass kind");
    }
    let mut line = |key: &str, column: &str, unit: &str| {
        let stated = entry.number(column).is_some();
        if stated {
            let text = quantity(entry, column, column);
            writeln!(file, "{key} = \"{}\"", format!("{text} {unit}").trim_end()).unwrap();
        }
        stated
    };
    assert!(line("period", "period_d", "d") && line(mass_key, "mass_mjup", "Mjup"));
    assert!(
        line("eccentricity", "eccentricity", "") && line("argument_of_pericentre", "periastron_deg", "deg")
    );
    let mut or_note = |stated: bool, note| {
        if !stated {
            filled.push(note);
        }
    };
    or_note(line("radius", "radius_rjup", "Rjup"), "radii");
    or_note(line("inclination", "inclination_deg", "deg"), "90 deg");
    or_note(line("ascending_node", "ascendingnode_deg", "deg"), "node 0");
    let dated =
        line("transit_time", "transittime_jd", "JD") || line("pericentre_time", "periastrontime_jd", "JD");
    or_note(dated, "epoch of phases");
    let phased = dated
        || line("mean_anomaly", "meananomaly_deg", "deg")
        || line("mean_longitude", "longitude_deg", "deg");
    assert!(phased, "{name}: every planet of the catalogue has a phase");
}

/// The value with its uncertainties where both are given; no uncertainty where the value is at the edge.
fn quantity(entry: &Entry, column: &str, stem: &str) -> String {
    let value = entry.text(column);
    let side = |sign: &str| entry.text(&format!("{stem}_{sign}")).trim_start_matches('-').to_string();
    match (entry.number(&format!("{stem}_plus")), entry.number(&format!("{stem}_minus"))) {
        (Some(plus), Some(minus)) if plus != 0.0 && minus != 0.0 => {
            format!("{value} +{} -{}", side("plus"), side("minus"))
        }
        _ => value.to_string(),
    }
}
