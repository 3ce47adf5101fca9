//! The study file: raw entries → a checked [`Study`].

use std::ops::Range;
use std::path::{Path, PathBuf};

use super::angle;
use super::axis::{self, AxisWish, Part};
use super::error::{Fault, InputError};
use super::later;
use super::nearest::nearest;
use super::plane;
use super::quantity::{self, Fail};
use super::raw::{Entry, RawTable, RawValue};
use super::source::{Complaint, Source};
use crate::system::{
    Axis, Compensation, CoordinateChoice, Encounter, Engine, Limits, Measure, SCHEMES, Spacing, Span, Step,
    Study, System,
};
use crate::units::{Dimension, Unit};

const TOP_KEYS: [&str; 9] =
    ["title", "system", "span", "measure", "angle", "axis", "limits", "engine", "figure"];
/// What a study may measure; the first three are measured where it does not say.
const MEASURES: [(&str, Measure); 4] = [
    ("megno", Measure::Megno),
    ("lyapunov", Measure::Lyapunov),
    ("extent", Measure::Extent),
    ("frequency_drift", Measure::FrequencyDrift),
];
const DEFAULT_MEASURES: usize = 3;
const AXIS_KEYS: [&str; 6] = ["vary", "from", "to", "cells", "spacing", "as"];
const LIMITS_KEYS: [&str; 3] = ["escape", "encounter", "stop_when_chaotic"];
const ENGINE_KEYS: [&str; 5] = ["scheme", "coordinates", "step", "energy_error", "compensated"];

const COORDINATES: [(&str, CoordinateChoice); 3] = [
    ("auto", CoordinateChoice::Auto),
    ("heliocentric", CoordinateChoice::Heliocentric),
    ("jacobi", CoordinateChoice::Jacobi),
];

const COMPENSATION: [(&str, Compensation); 3] =
    [("auto", Compensation::Auto), ("on", Compensation::On), ("off", Compensation::Off)];

/// Cells along an axis that does not say.
pub(crate) const DEFAULT_CELLS: usize = 100;
/// Relative energy error that a cell may have, where the study does not say.
pub(crate) const DEFAULT_ENERGY_ERROR: f64 = 1e-6;
/// Mutual Hill radii at which an encounter ends a cell, where the study does not say.
pub(crate) const DEFAULT_ENCOUNTER_HILL: f64 = 1.0;

impl Default for Limits {
    fn default() -> Limits {
        let encounter = Encounter::Stop { hill: DEFAULT_ENCOUNTER_HILL };
        Limits { escape_au: None, encounter, stop_when_chaotic: false }
    }
}

impl Default for Engine {
    fn default() -> Engine {
        Engine {
            scheme: "auto".to_string(),
            coordinates: CoordinateChoice::Auto,
            step: Step::Auto,
            energy_error: DEFAULT_ENERGY_ERROR,
            compensated: Compensation::Auto,
        }
    }
}

/// The `system = "…"` of a study and the path it means: relative to the folder of the study.
pub(crate) fn system_path<'r>(
    source: &Source,
    top: &'r RawTable,
) -> Result<(&'r Entry, PathBuf), InputError> {
    let Some(entry) = top.get("system") else {
        let complaint = Complaint::new(Fault::MissingKey, "no system").allowed("system = \"FILE.toml\"");
        let advice = "name the system file, relative to the folder of the study";
        return Err(source.at(0..0, complaint.advice(advice)));
    };
    let text = entry.text(source, "", "the path of a system file")?;
    let folder = Path::new(source.name).parent().unwrap_or(Path::new(""));
    Ok((entry, folder.join(text)))
}

/// Checks a whole study file against its system.
pub(crate) fn check(source: &Source, top: &RawTable, system: &System) -> Result<Study, InputError> {
    later::refuse(source, "", top)?;
    top.check_keys(source, "", &TOP_KEYS)?;
    let title =
        top.get("title").map(|e| e.text(source, "", "text in quotes").map(str::to_string)).transpose()?;
    let (_, system_path) = system_path(source, top)?;
    let span = match top.get("span") {
        Some(entry) => {
            let text = entry.text(source, "", SPAN_FORMS)?;
            read_span(text).map_err(|fail| entry.fail(source, "", fail))?
        }
        None => {
            let complaint = Complaint::new(Fault::MissingKey, "no span").allowed(SPAN_FORMS);
            return Err(source.at(0..0, complaint.advice("add how long each cell is followed")));
        }
    };
    let measure = measure(source, top)?;
    let angle = top.get("angle").map(|entry| angle::read(source, entry, system)).transpose()?;
    let axes = axes(source, top, system)?;
    let limits = limits(source, top)?;
    let engine = engine(source, top)?;
    Ok(Study { title, system_path, span, measure, angle, axes, limits, engine })
}

pub(crate) const SPAN_FORMS: &str = "\"1e5 orbits\" (of the innermost planet) or a time, as \"2 Myr\"";

/// Reads a span.
pub(crate) fn read_span(text: &str) -> Result<Span, Fail> {
    let written = exact(text)?;
    let is_orbits = matches!(written.unit.as_str(), "orbits" | "orbit");
    let span = if is_orbits {
        Span::Orbits(written.value)
    } else {
        let measured = written.measured(Dimension::Time).map_err(|(range, complaint)| {
            let complaint = complaint.allowed(format!("orbits, {}", Dimension::Time.unit_words()));
            let is_orbits = nearest(&written.unit, ["orbits"]).is_some();
            (range, if is_orbits { complaint.advice("did you mean \"orbits\"?") } else { complaint })
        })?;
        Span::Days(measured.value)
    };
    above_zero(written.value, written.value_at).map(|()| span)
}

/// Reads a time, day; may be 0 or negative only where the caller allows it.
pub(crate) fn read_time(text: &str) -> Result<f64, Fail> {
    Ok(exact(text)?.measured(Dimension::Time)?.value)
}

fn exact(text: &str) -> Result<quantity::Written, Fail> {
    let written = quantity::read(text)?;
    if written.plus.is_none() {
        return Ok(written);
    }
    let complaint =
        Complaint::new(Fault::Malformed, "an uncertainty").allowed("one exact number with its unit");
    Err((0..text.len(), complaint.advice("leave the uncertainty out; this is chosen, not measured")))
}

fn above_zero(value: f64, at: Range<usize>) -> Result<(), Fail> {
    if value > 0.0 {
        return Ok(());
    }
    let complaint = Complaint::new(Fault::OutOfRange, value.to_string()).allowed("a number above 0");
    Err((at, complaint.advice("check the sign and the number")))
}

fn measure(source: &Source, top: &RawTable) -> Result<Vec<Measure>, InputError> {
    let Some(entry) = top.get("measure") else {
        return Ok(MEASURES.iter().take(DEFAULT_MEASURES).map(|(_, measure)| *measure).collect());
    };
    let mut measures = Vec::new();
    for (text, at) in entry.words(source)? {
        let one = Entry { value: RawValue::Text(text.to_string()), value_at: at, ..entry.clone() };
        let measure = one.choice(source, "", &MEASURES)?;
        if measures.contains(&measure) {
            let complaint =
                Complaint::new(Fault::Twice, format!("\"{text}\" twice")).allowed("each measure once");
            return Err(one.refuse(source, "", complaint.advice("take one of them out")));
        }
        measures.push(measure);
    }
    if measures.is_empty() {
        let complaint =
            Complaint::new(Fault::Count, "an empty list").allowed("megno, lyapunov, extent, frequency_drift");
        return Err(entry.refuse(
            source,
            "",
            complaint.advice("name at least one, or leave measure out for the first three"),
        ));
    }
    Ok(measures)
}

fn axes(source: &Source, top: &RawTable, system: &System) -> Result<Vec<Axis>, InputError> {
    let none = |at| {
        let complaint = Complaint::new(Fault::MissingKey, "no axis").allowed("one or two [[axis]] tables");
        source.at(at, complaint.advice("add [[axis]] with vary, from, to and cells"))
    };
    let Some(entry) = top.get("axis") else { return Err(none(0..0)) };
    let tables = entry.tables(source)?;
    if let Some(third) = tables.get(2) {
        let complaint =
            Complaint::new(Fault::BadAxis, format!("{} axes", tables.len())).allowed("one or two");
        let at = third.get("vary").map_or(third.at.clone(), |vary| vary.value_at.clone());
        return Err(source.at(at, complaint.advice("make a study for each plane")));
    }
    let axes: Vec<Axis> =
        tables.iter().map(|table| one_axis(source, table, system)).collect::<Result<_, _>>()?;
    if axes.is_empty() {
        return Err(none(entry.value_at.clone()));
    }
    plane::check_together(&axes, system).map_err(|(index, complaint)| {
        let at = tables[index].get("vary").map_or(entry.value_at.clone(), |vary| vary.value_at.clone());
        source.at(at, complaint)
    })?;
    Ok(axes)
}

fn one_axis(source: &Source, table: &RawTable, system: &System) -> Result<Axis, InputError> {
    let about = "axis";
    table.check_keys(source, about, &AXIS_KEYS)?;
    let Some(vary) = table.get("vary") else {
        let complaint =
            Complaint::new(Fault::MissingKey, "an axis without vary").allowed("vary = \"c.period\"");
        return Err(source.at(table.at.clone(), complaint.advice("add what the axis varies")));
    };
    let path = vary.text(source, about, "a path in quotes, as \"c.period\"")?.to_string();
    let end = |key: &str| table.get(key).map(|entry| entry.exact(source, about)).transpose();
    let spacings = [("linear", Spacing::Linear), ("log", Spacing::Log)];
    let kinds = [("value", false), ("factor", true)];
    let wish = AxisWish {
        path,
        factor: table.get("as").map_or(Ok(false), |entry| entry.choice(source, about, &kinds))?,
        from: end("from")?,
        to: end("to")?,
        cells: table.get("cells").map_or(Ok(DEFAULT_CELLS), |e| e.count(source, about, Fault::EmptyAxis))?,
        spacing: table.get("spacing").map_or(Ok(Spacing::Linear), |e| e.choice(source, about, &spacings))?,
    };
    axis::lay_out(&wish, system).map_err(|(part, complaint)| {
        let (key, range) = match part {
            Part::Path(range) => ("vary", range),
            Part::From(range) => ("from", range),
            Part::To(range) => ("to", range),
            Part::Cells => ("cells", 0..0),
            Part::Spacing => ("spacing", 0..0),
            Part::As => ("as", 0..0),
        };
        let entry = table.get(key).unwrap_or(vary);
        if range.is_empty() {
            entry.refuse(source, about, complaint)
        } else {
            entry.fail(source, about, (range, complaint))
        }
    })
}

fn limits(source: &Source, top: &RawTable) -> Result<Limits, InputError> {
    let mut limits = Limits::default();
    let Some(entry) = top.get("limits") else { return Ok(limits) };
    let table = entry.table(source)?;
    let about = "limits";
    later::refuse(source, about, table)?;
    table.check_keys(source, about, &LIMITS_KEYS)?;
    if let Some(entry) = table.get("escape") {
        let written = entry.exact(source, about)?;
        limits.escape_au = Some(escape_au(&written).map_err(|fail| entry.fail(source, about, fail))?);
    }
    if let Some(entry) = table.get("encounter") {
        let text = entry.text(source, about, ENCOUNTER_FORMS)?;
        limits.encounter = read_encounter(text).map_err(|fail| entry.fail(source, about, fail))?;
    }
    if let Some(entry) = table.get("stop_when_chaotic") {
        limits.stop_when_chaotic = entry.flag(source, about)?;
    }
    Ok(limits)
}

/// Reads a distance from the star, au.
pub(crate) fn read_escape(text: &str) -> Result<f64, Fail> {
    escape_au(&exact(text)?)
}

fn escape_au(written: &quantity::Written) -> Result<f64, Fail> {
    let measured = written.measured(Dimension::Length)?;
    above_zero(measured.value, written.value_at.clone()).map(|()| measured.value)
}

const ENCOUNTER_FORMS: &str = "mutual Hill radii as \"1 hill\", \"resolve\" or \"off\"";

/// Reads at which distance an encounter ends a configuration.
pub(crate) fn read_encounter(text: &str) -> Result<Encounter, Fail> {
    let allowed = ENCOUNTER_FORMS;
    match text {
        "off" => return Ok(Encounter::Off),
        "resolve" => return Ok(Encounter::Resolve),
        _ => {}
    }
    let restate = |(range, complaint): Fail| (range, complaint.allowed(allowed));
    let written = exact(text).map_err(restate)?;
    if written.unit != "hill" {
        let (fault, at) = match written.unit.as_str() {
            "" => (Fault::MissingUnit, written.value_at),
            unit if Unit::from_word(unit).is_some() => (Fault::WrongUnit, written.unit_at),
            _ => (Fault::UnknownUnit, written.unit_at),
        };
        let complaint = Complaint::new(fault, format!("\"{text}\"")).allowed(allowed);
        return Err((at, complaint.advice("write, as an example, \"1 hill\"")));
    }
    above_zero(written.value, written.value_at)?;
    Ok(Encounter::Stop { hill: written.value })
}

fn engine(source: &Source, top: &RawTable) -> Result<Engine, InputError> {
    let mut engine = Engine::default();
    let Some(entry) = top.get("engine") else { return Ok(engine) };
    let table = entry.table(source)?;
    let about = "engine";
    later::refuse(source, about, table)?;
    table.check_keys(source, about, &ENGINE_KEYS)?;
    if let Some(entry) = table.get("scheme") {
        let words: Vec<(&str, &str)> = ["auto"].into_iter().chain(SCHEMES).map(|word| (word, word)).collect();
        let scheme = entry.choice(source, about, &words)?;
        engine.scheme = scheme.to_string();
    }
    if let Some(entry) = table.get("coordinates") {
        engine.coordinates = entry.choice(source, about, &COORDINATES)?;
    }
    if let Some(entry) = table.get("step") {
        let text = entry.text(source, about, STEP_FORMS)?;
        engine.step = read_step(text).map_err(|fail| entry.fail(source, about, fail))?;
    }
    if let Some(entry) = table.get("energy_error") {
        let written = entry.exact(source, about)?;
        engine.energy_error = energy_error(&written).map_err(|fail| entry.fail(source, about, fail))?;
    }
    if let Some(entry) = table.get("compensated") {
        engine.compensated = entry.choice(source, about, &COMPENSATION)?;
    }
    Ok(engine)
}

/// Reads the relative energy error asked for.
pub(crate) fn read_energy_error(text: &str) -> Result<f64, Fail> {
    energy_error(&exact(text)?)
}

fn energy_error(written: &quantity::Written) -> Result<f64, Fail> {
    let value = written.measured(Dimension::Number)?.value;
    if value > 0.0 && value < 1.0 {
        return Ok(value);
    }
    let complaint = Complaint::new(Fault::OutOfRange, value.to_string()).allowed("0 < energy_error < 1");
    Err((written.value_at.clone(), complaint.advice("write, as an example, 1e-6")))
}

const STEP_FORMS: &str = "\"auto\", a time as \"0.5 d\", or \"30 per orbit\" (of the innermost planet)";

/// Reads a step.
pub(crate) fn read_step(text: &str) -> Result<Step, Fail> {
    if text.trim() == "auto" {
        return Ok(Step::Auto);
    }
    let restate = |(range, complaint): Fail| (range, complaint.allowed(STEP_FORMS));
    if let Some(number) = text.trim_end().strip_suffix("per orbit") {
        let written = exact(number).map_err(restate)?;
        if !written.unit.is_empty() {
            let complaint = Complaint::new(Fault::WrongUnit, format!("\"{text}\"")).allowed(STEP_FORMS);
            return Err((written.unit_at, complaint.advice("write a plain number before \"per orbit\"")));
        }
        above_zero(written.value, written.value_at)?;
        return Ok(Step::PerOrbit(written.value));
    }
    let written = exact(text).map_err(restate)?;
    let measured = written.measured(Dimension::Time).map_err(restate)?;
    above_zero(written.value, written.value_at)?;
    Ok(Step::Days(measured.value))
}
