//! TOML files and the words of the command line → checked descriptions.
//!
//! Two steps: a text becomes a tree of raw entries with their places, then the entries become a
//! [`System`] or a [`Study`], of which every number is finite, in range and in inner units. What is wrong is said
//! once, as an [`InputError`]: where, what was found, what is allowed, what to do.

mod angle;
mod axis;
mod companion;
mod error;
mod figure;
mod later;
mod nearest;
mod physics;
mod plane;
mod quantity;
mod raw;
mod source;
mod study_file;
mod system_file;

pub use error::{Fault, InputError, Place, Spot, Texts};
pub use quantity::Written;

use std::path::{Path, PathBuf};

use crate::system::{Axis, Criterion, Encounter, Measured, Spacing, Span, Step, Study, System};
use crate::units::Dimension;
use axis::{AxisWish, Part};
use source::{Complaint, Source};

/// A system file: where it is, what it says, what that means.
#[derive(Clone, Debug, PartialEq)]
pub struct SystemFile {
    pub path: PathBuf,
    pub text: String,
    pub system: System,
}

impl SystemFile {
    /// What is wrong with a body as a whole, told at its name: a planet by its name, or "companion", "star"; without
    /// one at the beginning of the file.
    pub fn at_body(&self, body: Option<&str>, fault: Fault, texts: Texts) -> InputError {
        let name = self.path.to_string_lossy();
        let source = Source { name: &name, text: &self.text };
        let at = body.and_then(|body| {
            let top = raw::parse(&source).ok()?;
            system_file::place_of(&source, &top, body)
        });
        let complaint = Complaint::new(fault, texts.found).about(texts.about);
        source.at(at.unwrap_or(0..0), complaint.allowed(texts.allowed).advice(texts.advice))
    }
}

/// A study file with its system file.
#[derive(Clone, Debug, PartialEq)]
pub struct StudyFile {
    pub path: PathBuf,
    pub text: String,
    pub study: Study,
    /// Whose borders its map shows; they have no influence on the cells.
    pub criteria: Vec<Criterion>,
    pub system: SystemFile,
}

/// What a file describes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FileKind {
    System,
    Study,
}

/// Reads and checks a system file.
pub fn read_system(path: impl AsRef<Path>) -> Result<SystemFile, InputError> {
    let path = path.as_ref();
    parse_system(&path.to_string_lossy(), &read_text(path)?)
}

/// Reads and checks a study file and the system file that it names.
///
/// Errors: as for [`parse_study`] and [`read_system`]; a system file that is not there is told at the line of the study.
pub fn read_study(path: impl AsRef<Path>) -> Result<StudyFile, InputError> {
    let path = path.as_ref();
    let text = read_text(path)?;
    let name = path.to_string_lossy();
    let source = Source { name: &name, text: &text };
    let top = raw::parse(&source)?;
    if kind_of(&top) == Some(FileKind::System) {
        return Err(not_a_study(&source));
    }
    let (entry, system_path) = study_file::system_path(&source, &top)?;
    let system = read_system(&system_path).map_err(|error| match error.fault {
        Fault::NoFile if error.place.spot.is_none() => {
            let complaint =
                Complaint::new(Fault::NoFile, format!("{}: {}", error.place.file, error.texts.found));
            let complaint =
                complaint.allowed("the path of a system file, relative to the folder of the study");
            entry.refuse(&source, "", complaint.advice("correct the path, or move the file there"))
        }
        _ => error,
    })?;
    parse_study(&name, &text, system)
}

/// Checks the text of a system file; `name` stands for the path in messages.
pub fn parse_system(name: &str, text: &str) -> Result<SystemFile, InputError> {
    let source = Source { name, text };
    let top = raw::parse(&source)?;
    if kind_of(&top) == Some(FileKind::Study) {
        let complaint = Complaint::new(Fault::StudyFile, "a study where a system is needed");
        let complaint = complaint.allowed("a system file: one with [star] and [[planet]]");
        let advice = "give it to `abide survey`, or name the system file that it is about";
        return Err(source.at(0..0, complaint.advice(advice)));
    }
    let system = system_file::check(&source, &top)?;
    Ok(SystemFile { path: PathBuf::from(name), text: text.to_string(), system })
}

/// Checks the text of a study file over a system that is already read; the study's `system = ` is not followed.
pub fn parse_study(name: &str, text: &str, system: SystemFile) -> Result<StudyFile, InputError> {
    let source = Source { name, text };
    let top = raw::parse(&source)?;
    if kind_of(&top) == Some(FileKind::System) {
        return Err(not_a_study(&source));
    }
    let study = study_file::check(&source, &top, &system.system)?;
    let criteria = figure::criteria(&source, &top)?;
    Ok(StudyFile { path: PathBuf::from(name), text: text.to_string(), study, criteria, system })
}

fn not_a_study(source: &Source) -> InputError {
    let complaint = Complaint::new(Fault::SystemFile, "a system where a study is needed");
    let complaint = complaint.allowed("a study file: one with system, span and [[axis]]");
    source.at(0..0, complaint.advice("name a study, or keys of this system with --vary"))
}

/// Whether a file is a study or a system, from its top-level keys.
///
/// Errors: the file cannot be read, is not TOML, or looks like neither.
pub fn sniff(path: impl AsRef<Path>) -> Result<FileKind, InputError> {
    let path = path.as_ref();
    let text = read_text(path)?;
    let name = path.to_string_lossy();
    let source = Source { name: &name, text: &text };
    let top = raw::parse(&source)?;
    kind_of(&top).ok_or_else(|| {
        let complaint =
            Complaint::new(Fault::MissingKey, "neither [star] and [[planet]] nor system and [[axis]]");
        let complaint = complaint.allowed("a system file or a study file");
        source.at(0..0, complaint.advice("the demos under systems/ show both"))
    })
}

/// [`sniff`], as a question.
pub fn is_study(path: impl AsRef<Path>) -> Result<bool, InputError> {
    Ok(sniff(path)? == FileKind::Study)
}

fn kind_of(top: &raw::RawTable) -> Option<FileKind> {
    let has = |keys: &[&str]| keys.iter().any(|key| top.get(key).is_some());
    if has(&["star", "planet", "companion"]) {
        Some(FileKind::System)
    } else if has(&["system", "axis", "span", "samples"]) {
        Some(FileKind::Study)
    } else {
        None
    }
}

/// A span such as `1e5 orbits` or `2 Myr`.
pub fn parse_span(text: &str) -> Result<Span, InputError> {
    study_file::read_span(text).map_err(|fail| in_words("span", text, fail))
}

/// A step such as `auto`, `0.5 d` or `30 per orbit`.
pub fn parse_step(text: &str) -> Result<Step, InputError> {
    study_file::read_step(text).map_err(|fail| in_words("step", text, fail))
}

/// A distance from the star such as `100 au`, in au.
pub fn parse_escape(text: &str) -> Result<f64, InputError> {
    study_file::read_escape(text).map_err(|fail| in_words("escape", text, fail))
}

/// Where an encounter ends a configuration, such as `1 hill` or `off`.
pub fn parse_encounter(text: &str) -> Result<Encounter, InputError> {
    study_file::read_encounter(text).map_err(|fail| in_words("encounter", text, fail))
}

/// A relative energy error such as `1e-7`.
pub fn parse_energy_error(text: &str) -> Result<f64, InputError> {
    study_file::read_energy_error(text).map_err(|fail| in_words("energy-error", text, fail))
}

/// A time such as `0.5 d`, in days.
pub fn parse_time(text: &str) -> Result<f64, InputError> {
    study_file::read_time(text).map_err(|fail| in_words("time", text, fail))
}

/// A quantity of one dimension with its uncertainties, such as `12.40 ± 0.05 d`, in inner units.
pub fn parse_quantity(text: &str, dimension: Dimension) -> Result<Measured, InputError> {
    quantity::read(text)
        .and_then(|written| written.measured(dimension))
        .map_err(|fail| in_words("quantity", text, fail))
}

/// An axis over ±3σ of the stated uncertainty of the key that `path` names, cut at the key's physical range.
///
/// Errors: the path leads nowhere; no uncertainty is stated; `cells` is below 2.
pub fn axis_from_uncertainty(path: &str, system: &System, cells: usize) -> Result<Axis, InputError> {
    let spacing = Spacing::Linear;
    let wish = AxisWish { path: path.to_string(), factor: false, from: None, to: None, cells, spacing };
    axis::lay_out(&wish, system).map_err(|(part, complaint)| {
        let range = if let Part::Path(range) = part { range } else { 0..path.len() };
        in_words("--vary", path, (range, complaint))
    })
}

/// Whether axes go together: they move different things, and every corner of the map can be had.
///
/// The study file is checked already; this is for axes made by [`axis_from_uncertainty`].
pub fn check_axes(axes: &[Axis], system: &System) -> Result<(), InputError> {
    plane::check_together(axes, system).map_err(|(index, complaint)| {
        let path = axes[index].path.as_str();
        in_words("--vary", path, (0..path.len(), complaint))
    })
}

/// The error about words that stand in no file.
fn in_words(name: &str, text: &str, fail: quantity::Fail) -> InputError {
    let (range, complaint) = fail;
    Source { name, text }.at(range, complaint)
}

fn read_text(path: &Path) -> Result<String, InputError> {
    let name = path.to_string_lossy().into_owned();
    let bytes = std::fs::read(path).map_err(|error| {
        let complaint =
            Complaint::new(Fault::NoFile, error.to_string()).allowed("a TOML file that can be read");
        complaint.advice("check the path and its permissions").of_file(name.clone())
    })?;
    String::from_utf8(bytes).map_err(|error| {
        let good = error.utf8_error().valid_up_to();
        let text = String::from_utf8_lossy(error.as_bytes()).into_owned();
        let found = format!("byte {:#04x} at place {good} of the file", error.as_bytes()[good]);
        let complaint = Complaint::new(Fault::NotText, found).allowed("UTF-8 text");
        let complaint = complaint.advice("save the file as UTF-8 (± and σ may come from another encoding)");
        Source { name: &name, text: &text }.at(good..good, complaint)
    })
}
