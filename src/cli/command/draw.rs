use std::process::ExitCode;

use crate::cli::CliError;
use crate::cli::args::DrawArgs;

pub fn run(args: DrawArgs) -> Result<ExitCode, CliError> {
    let _ = args;
    Ok(ExitCode::SUCCESS)
}
