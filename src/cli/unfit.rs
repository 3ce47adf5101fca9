//! A system that reads well but cannot be set up or started, told at the place in its file.

use crate::cli::CliError;
use crate::coords::{self, Configuration, CoordsError};
use crate::input::{Fault, SystemFile, Texts};

/// The configuration that a file states, proven able to start.
///
/// Errors: exit code 2, with the place of the body in the file.
pub fn startable(file: &SystemFile) -> Result<Configuration, CliError> {
    let configuration = coords::configure(&file.system).map_err(|error| unfit(file, &error))?;
    coords::check_start(&configuration).map_err(|error| unfit(file, &error))?;
    Ok(configuration)
}

/// What is wrong with the bodies of a file as wrong input.
pub fn unfit(file: &SystemFile, error: &CoordsError) -> CliError {
    let words = error.to_string();
    let (found, advice) = words.split_once("; ").unwrap_or((&words, ""));
    let allowed = error.allowed().to_string();
    let texts = Texts { about: String::new(), found: found.to_string(), allowed, advice: advice.to_string() };
    CliError::input(file.at_body(error.body(), Fault::Unstartable, texts))
}
