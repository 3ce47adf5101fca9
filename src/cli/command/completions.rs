//! `abide completions`: what a shell needs to complete command lines.

use std::process::ExitCode;

use clap::CommandFactory;

use crate::cli::CliError;
use crate::cli::args::{Args, CompletionsArgs};
use crate::cli::manners::print_bytes;

pub fn run(args: CompletionsArgs) -> Result<ExitCode, CliError> {
    let mut script = Vec::new();
    clap_complete::generate(args.shell, &mut Args::command(), "abide", &mut script);
    print_bytes(&script)?;
    Ok(ExitCode::SUCCESS)
}
