//! A study in words from what was typed after `--vary`.

use std::path::Path;

use crate::cli::CliError;
use crate::cli::args::SurveyArgs;
use crate::input::{self, InputError, StudyFile, SystemFile};

const DEFAULT_SPAN: &str = "1e4 orbits";
const DEFAULT_CELLS: usize = 100;

/// The study that `--vary`, `--cells` and `--span` describe, over ±3σ of the stated uncertainties.
///
/// Its text is one that `abide survey` reads as a study beside the copy of the system in the run folder.
/// Errors: what was typed, each pointing at the word.
pub fn study_of(args: &SurveyArgs) -> Result<StudyFile, CliError> {
    let system = input::read_system(&args.study).map_err(CliError::input)?;
    let span = args.span.as_deref().unwrap_or(DEFAULT_SPAN);
    let cells = args.cells.unwrap_or(DEFAULT_CELLS);
    check(args, span, cells, &system)?;
    let text = text(&args.study, &args.vary, span, cells);
    input::parse_study("study of --vary", &text, system).map_err(CliError::input)
}

/// Here complaints point at the words that were typed, in the text at a line that nobody wrote.
fn check(args: &SurveyArgs, span: &str, cells: usize, system: &SystemFile) -> Result<(), CliError> {
    if args.vary.len() > 2 {
        let found = args.vary.join(", ");
        return Err(CliError::Input(format!(
            "--vary is given {} times ({found}), but a map has one or two axes; leave the others out",
            args.vary.len()
        )));
    }
    let axes = (args.vary.iter())
        .map(|path| input::axis_from_uncertainty(path, &system.system, cells))
        .collect::<Result<Vec<_>, InputError>>()
        .map_err(CliError::input)?;
    input::check_axes(&axes, &system.system).map_err(CliError::input)?;
    input::parse_span(span).map_err(CliError::input)?;
    Ok(())
}

fn text(system: &Path, vary: &[String], span: &str, cells: usize) -> String {
    let file = system.file_name().unwrap_or_default().to_string_lossy();
    let mut text = format!(
        "# Written by `abide survey {file}` with --vary: over ±3σ of the stated uncertainties.\n\
         system = \"system.toml\"\nspan = {}\n",
        quoted(span)
    );
    for path in vary {
        text.push_str(&format!("\n[[axis]]\nvary = {}\ncells = {cells}\n", quoted(path)));
    }
    text
}

fn quoted(word: &str) -> String {
    toml::Value::String(word.to_string()).to_string()
}

/// The name of the run: the system's and the keys', without what a folder name should not have.
pub fn run_name(args: &SurveyArgs) -> String {
    let stem = args.study.file_stem().unwrap_or_default().to_string_lossy().into_owned();
    let words = std::iter::once(stem).chain(args.vary.iter().map(|path| {
        let plain = |c: char| if c.is_alphanumeric() || c == '.' || c == '_' { c } else { ' ' };
        path.chars().map(plain).collect::<String>().split_whitespace().collect::<Vec<_>>().join("-over-")
    }));
    words.collect::<Vec<_>>().join("-")
}
