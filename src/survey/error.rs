//! What can go wrong with a survey.

use std::path::PathBuf;

use crate::coords::CoordsError;
use crate::disk::DiskError;

/// Why a survey cannot start, go on or end.
#[derive(Debug, thiserror::Error)]
pub enum SurveyError {
    #[error(transparent)]
    Disk(#[from] DiskError),
    #[error("the system as stated cannot be surveyed")]
    Nominal(#[source] CoordsError),
    #[error(
        "{} holds a run of other input, so its cells cannot be mixed with these:\n{}\n\
         Give the new study its own folder with --into, or delete that folder to start afresh",
        folder.display(), list(changes)
    )]
    Changed { folder: PathBuf, changes: Vec<String> },
    #[error(
        "{} is no run, but has a {file} of its own, which would be overwritten; choose another folder with --into",
        folder.display()
    )]
    Foreign { folder: PathBuf, file: &'static str },
    #[error(
        "{} is no run, but holds other files, as {other}; choose another folder with --into, a new or an empty one",
        folder.display()
    )]
    Occupied { folder: PathBuf, other: String },
    #[error(
        "{}: {file} was edited since the run was begun, so its cells are of other input; restore it, or survey the \
         edited one into a folder of its own", folder.display()
    )]
    Edited { folder: PathBuf, file: &'static str },
    #[error("{} is no run: it has no {file}; name the folder that `abide survey` filled", folder.display())]
    NoRun { folder: PathBuf, file: &'static str },
    #[error("{} cannot be understood: {what}; if it was edited, restore it, else delete the folder and start afresh",
        path.display())]
    Manifest { path: PathBuf, what: String },
    #[error("the worker threads cannot be started: {0}; give fewer with --threads")]
    Threads(#[from] rayon::ThreadPoolBuildError),
    #[error(
        "{} of {total} cells failed and are not in the journal, all others are: {}\n\
         This is a fault of the program; the same command tries only these cells again",
        failed.len(), failures(failed)
    )]
    Failed { total: u64, failed: Vec<Failure> },
    #[error(
        "the run is not complete: {missing} of {total} cells are missing; `abide survey` with the same study goes on"
    )]
    Incomplete { missing: u64, total: u64 },
}

/// A cell whose computation broke off.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Failure {
    pub cell: u64,
    pub what: String,
}

impl SurveyError {
    /// Whether other input (exit code 2) would help, rather than another try.
    pub fn is_input(&self) -> bool {
        !matches!(
            self,
            SurveyError::Failed { .. }
                | SurveyError::Threads(_)
                | SurveyError::Incomplete { .. }
                | SurveyError::Disk(
                    DiskError::Write { .. } | DiskError::Read { .. } | DiskError::Lock { .. }
                )
        )
    }
}

fn list(changes: &[String]) -> String {
    changes.iter().map(|change| format!("  {change}")).collect::<Vec<_>>().join("\n")
}

/// The first few, so that a fault in every cell does not fill the screen.
fn failures(failed: &[Failure]) -> String {
    const SHOWN: usize = 5;
    let mut text = String::new();
    for failure in failed.iter().take(SHOWN) {
        text.push_str(&format!("\n  cell {}: {}", failure.cell, failure.what));
    }
    if failed.len() > SHOWN {
        text.push_str(&format!("\n  and {} more", failed.len() - SHOWN));
    }
    text
}
