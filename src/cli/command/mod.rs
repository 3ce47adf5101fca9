//! One file per command; each is a screen of named steps.

mod completions;
mod draw;
mod follow;
mod inspect;
mod survey;

use std::process::ExitCode;

use crate::cli::args::{Args, Command};
use crate::cli::error::CliError;

/// Runs the command that was typed.
pub fn run(args: Args) -> Result<ExitCode, CliError> {
    match args.command {
        Command::Inspect(args) => inspect::run(args),
        Command::Follow(args) => follow::run(args),
        Command::Survey(args) => survey::run(args),
        Command::Draw(args) => draw::run(args),
        Command::Completions(args) => completions::run(args),
    }
}
