use std::process::ExitCode;

use crate::cli::CliError;
use crate::cli::args::InspectArgs;

pub fn run(args: InspectArgs) -> Result<ExitCode, CliError> {
    let _ = args;
    Ok(ExitCode::SUCCESS)
}
