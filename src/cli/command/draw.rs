//! `abide draw`: figures from a stored run; nothing is integrated.

use std::path::{Path, PathBuf};
use std::process::ExitCode;

use crate::cli::CliError;
use crate::cli::args::DrawArgs;
use crate::cli::outputs::{MARGINS, write_margins};
use crate::coords;
use crate::disk;
use crate::figure::render::{self, RenderError, Width};
use crate::figure::{self, Figure, MapInput};
use crate::input::{self, StudyFile};
use crate::report;
use crate::survey::{self, COARSEST, Record, STUDY, SYSTEM, Stored, cell_count};
use crate::system::Criterion;

/// Shown when no column is asked for and the run measured it.
const FIRST_CHOICE: &str = "megno";
/// Shown otherwise; every run has it.
const SECOND_CHOICE: &str = "verdict";

pub fn run(args: DrawArgs) -> Result<ExitCode, CliError> {
    let width = parse_width(&args.width)?;
    let stored = survey::read_run(&args.run).map_err(CliError::input)?;
    let file = read_back(&args.run, &stored)?;
    let criteria = criteria(&args.criterion, &file.criteria)?;
    if args.margins && criteria.is_empty() {
        let words = "--margins needs a criterion; add --criterion hill, or another";
        return Err(CliError::Input(words.to_string()));
    }
    let (mut figure, column) = draw(&file, &stored.records, args.column.as_deref())?;
    let (study, system) = (&file.study, &file.system.system);
    figure::add_criteria(&mut figure, study, system, &criteria).map_err(CliError::input)?;
    let path = args.into.unwrap_or_else(|| args.run.join(file_name(&column)));
    let bytes = render::png(&figure, width).map_err(told)?;
    disk::write_beside_then_rename(&path, &bytes).map_err(CliError::input)?;
    if args.margins {
        write_margins(&args.run, study, system, &criteria)?;
        eprintln!("wrote {}", args.run.join(MARGINS).display());
    }
    say(&file, stored.records.len(), &path);
    Ok(ExitCode::SUCCESS)
}

/// The study and its system from the copies in the run.
fn read_back(folder: &Path, stored: &Stored) -> Result<StudyFile, CliError> {
    let name = |file: &str| folder.join(file).display().to_string();
    let system = input::parse_system(&name(SYSTEM), &stored.system_text).map_err(CliError::input)?;
    input::parse_study(&name(STUDY), &stored.study_text, system).map_err(CliError::input)
}

/// The map and the name of the column that it shows.
fn draw(file: &StudyFile, records: &[Record], asked: Option<&str>) -> Result<(Figure, String), CliError> {
    let (study, system) = (&file.study, &file.system.system);
    let nominal = coords::configure(system).map_err(CliError::input)?;
    let plan = survey::plan_of(study, system, &nominal);
    let measured = records.iter().any(|record| record.assessment.megno.is_some());
    let column = asked.unwrap_or(if measured { FIRST_CHOICE } else { SECOND_CHOICE });
    let caption = report::caption(study, system, &plan, records, column);
    // Cells are integrated coarse grid first, so that a run that is not complete has a coarse map.
    let reach = COARSEST / 2;
    let map = MapInput { study, system, records, reach, column, span_day: plan.span_day, caption: &caption };
    Ok((figure::map(&map).map_err(CliError::input)?, column.to_owned()))
}

/// The criteria that were asked for, else those of the study.
fn criteria(asked: &[String], of_study: &[Criterion]) -> Result<Vec<Criterion>, CliError> {
    if asked.is_empty() {
        return Ok(of_study.to_vec());
    }
    if asked.len() == 1 && asked[0] == "none" {
        return Ok(Vec::new());
    }
    let mut found = Vec::new();
    for word in asked {
        let criterion = Criterion::from_word(word).ok_or_else(|| {
            let known: Vec<&str> = Criterion::ALL.iter().map(|criterion| criterion.word()).collect();
            let known = known.join(", ");
            CliError::Input(format!(
                "--criterion {word:?} is not known; there are {known}, or \"none\" alone"
            ))
        })?;
        if found.contains(&criterion) {
            return Err(CliError::Input(format!("--criterion {word} is given twice; leave one out")));
        }
        found.push(criterion);
    }
    Ok(found)
}

fn file_name(column: &str) -> PathBuf {
    if column == FIRST_CHOICE { "map.png".into() } else { format!("map-{column}.png").into() }
}

fn say(file: &StudyFile, finished: usize, path: &Path) {
    let cells = cell_count(&file.study);
    if (finished as u64) < cells {
        eprintln!("note: {finished} of {cells} cells are done; each is shown over the cells around it");
    }
    eprintln!("wrote {}", path.display());
}

/// A width on paper: a number with mm, cm or in.
fn parse_width(text: &str) -> Result<Width, CliError> {
    let refuse = || {
        CliError::Input(format!(
            "--width {text:?} is not a width; write a number with mm, cm or in, such as \"88 mm\" for one column"
        ))
    };
    let text = text.trim();
    let start = text.find(|c: char| c.is_ascii_alphabetic() && c != 'e').ok_or_else(refuse)?;
    let number: f64 = text[..start].trim().parse().map_err(|_| refuse())?;
    let mm = match text[start..].trim() {
        "mm" => number,
        "cm" => number * 10.0,
        "in" => number * 25.4,
        _ => return Err(refuse()),
    };
    if Width::ALLOWED_MM.contains(&mm) {
        return Ok(Width { mm });
    }
    Err(CliError::Input(format!(
        "--width {text:?}: {}; one column is about 88 mm",
        RenderError::Width { mm }
    )))
}

fn told(error: RenderError) -> CliError {
    match error {
        RenderError::Width { .. } => CliError::input(error),
        _ => CliError::working(error),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_width_has_a_number_and_a_unit_and_is_drawable() {
        assert_eq!(parse_width("88 mm").unwrap(), Width { mm: 88.0 });
        assert_eq!(parse_width("8.8cm").unwrap(), Width { mm: 88.0 });
        assert_eq!(parse_width(" 4 in ").unwrap(), Width { mm: 101.6 });
        for wrong in ["", "88", "mm", "88 pt", "-88 mm", "nan mm", "5 mm", "9 m"] {
            let error = parse_width(wrong).unwrap_err().to_string();
            assert!(error.contains("--width") && error.contains("mm"), "{wrong}: {error}");
        }
    }
}
