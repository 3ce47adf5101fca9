//! The table of one configuration followed through time.

use super::VERSION;
use super::table::{Column, Datatype, Entry, Meta, Table};
use crate::assess::Extent;
use crate::coords::Elements;
use crate::units::{DEGREE, YEAR_DAY};

/// One planet through time.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct PlanetSeries {
    pub name: String,
    /// Astrocentric osculating elements, one per time.
    pub elements: Vec<Elements>,
}

/// One configuration through time: every list is as long as `time_day`, or empty when not measured.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Series {
    pub title: String,
    pub time_day: Vec<f64>,
    pub planets: Vec<PlanetSeries>,
    /// Per planet, one per time: ranges since the time before.
    pub extents: Vec<Vec<Extent>>,
    /// Relative.
    pub energy_error: Vec<f64>,
    pub angular_momentum_error: Vec<f64>,
    /// MEGNO Y.
    pub megno: Vec<f64>,
    /// Its mean ⟨Y⟩.
    pub megno_mean: Vec<f64>,
    /// Estimate of the maximal Lyapunov exponent up to this time.
    pub lyapunov_per_day: Vec<f64>,
    pub scheme: String,
    pub step_day: f64,
    /// Of the engine; empty where it has none.
    pub coordinates: String,
    /// Whether positions and velocities were compensated sums.
    pub compensated: bool,
    /// Why scheme, step and coordinates are what they are: names as in `run.json`, and words.
    pub reasons: Vec<(String, String)>,
}

/// The series as a table: time in yr, lengths in au, angles in deg.
pub fn series_table(series: &Series) -> Table {
    let rows = vec![Vec::new(); series.time_day.len()];
    let mut table = Table { meta: meta(series), rows, ..Table::default() };
    let years: Vec<f64> = series.time_day.iter().map(|t| t / YEAR_DAY).collect();
    push(&mut table, "time", "yr", "time from the epoch", &years);
    for (index, planet) in series.planets.iter().enumerate() {
        push_planet(&mut table, planet);
        if let Some(extents) = series.extents.get(index) {
            push_extents(&mut table, &planet.name, extents);
        }
    }
    push(&mut table, "energy_error", "", "relative error of the energy", &series.energy_error);
    let momentum = "relative error of the total angular momentum";
    push(&mut table, "angular_momentum_error", "", momentum, &series.angular_momentum_error);
    push(&mut table, "megno", "", "MEGNO Y", &series.megno);
    push(&mut table, "megno_mean", "", "mean MEGNO <Y>; tends to 2 for regular motion", &series.megno_mean);
    let per_year: Vec<f64> = series.lyapunov_per_day.iter().map(|l| l * YEAR_DAY).collect();
    push(&mut table, "lyapunov", "1/yr", "maximal Lyapunov exponent, estimate up to this time", &per_year);
    table
}

/// What was followed, and how: scheme, step and coordinates with their reasons.
fn meta(series: &Series) -> Vec<(String, Meta)> {
    let text = |name: &str, words: &str| (name.to_owned(), Meta::Text(words.to_owned()));
    let mut meta = vec![
        text("title", &series.title),
        text("version", VERSION),
        text("scheme", &series.scheme),
        ("step_d".to_owned(), Meta::Float(series.step_day)),
    ];
    if !series.coordinates.is_empty() {
        meta.push(text("coordinates", &series.coordinates));
    }
    meta.push(text("compensated", if series.compensated { "yes" } else { "no" }));
    meta.extend(series.reasons.iter().map(|(name, words)| text(name, words)));
    meta
}

type Part = (&'static str, &'static str, &'static str, fn(&Elements) -> f64);

const PARTS: [Part; 6] = [
    ("a", "au", "osculating semi-major axis (negative on a hyperbola)", |e| e.semi_major_axis_au),
    ("e", "", "eccentricity", |e| e.eccentricity),
    ("i", "deg", "inclination to the sky plane", |e| e.inclination / DEGREE),
    ("ascending_node", "deg", "ascending node", |e| e.ascending_node / DEGREE),
    ("argument_of_pericentre", "deg", "argument of pericentre", |e| e.argument_of_pericentre / DEGREE),
    ("mean_anomaly", "deg", "mean anomaly", |e| e.mean_anomaly / DEGREE),
];

fn push_planet(table: &mut Table, planet: &PlanetSeries) {
    for (part, unit, meaning, take) in PARTS {
        let values: Vec<f64> = planet.elements.iter().map(take).collect();
        let meaning = format!("{meaning} of {}", planet.name);
        push(table, &format!("{}.{part}", planet.name), unit, &meaning, &values);
    }
}

type Bound = (&'static str, &'static str, &'static str, fn(&Extent) -> f64);

const BOUNDS: [Bound; 6] = [
    ("a_min", "au", "smallest semi-major axis while bound", |e| e.semi_major_axis_au.min),
    ("a_max", "au", "largest semi-major axis while bound", |e| e.semi_major_axis_au.max),
    ("e_min", "", "smallest eccentricity", |e| e.eccentricity.min),
    ("e_max", "", "largest eccentricity", |e| e.eccentricity.max),
    ("i_min", "deg", "smallest inclination", |e| e.inclination.min / DEGREE),
    ("i_max", "deg", "largest inclination", |e| e.inclination.max / DEGREE),
];

fn push_extents(table: &mut Table, name: &str, extents: &[Extent]) {
    for (bound, unit, meaning, take) in BOUNDS {
        let values: Vec<f64> = extents.iter().map(take).collect();
        let meaning = format!("{meaning} of {name} since the row before");
        push(table, &format!("{name}.{bound}"), unit, &meaning, &values);
    }
}

/// Appends a column unless nothing was measured; entries beyond the measured ones are absent, and so is what is not finite.
fn push(table: &mut Table, name: &str, unit: &'static str, meaning: &str, values: &[f64]) {
    if values.is_empty() {
        return;
    }
    table.columns.push(Column::new(name, unit, Datatype::Float, meaning));
    for (index, row) in table.rows.iter_mut().enumerate() {
        row.push(values.get(index).copied().filter(|v| v.is_finite()).map_or(Entry::Absent, Entry::Float));
    }
}
