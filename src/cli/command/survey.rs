use std::process::ExitCode;

use crate::cli::CliError;
use crate::cli::args::SurveyArgs;

pub fn run(args: SurveyArgs) -> Result<ExitCode, CliError> {
    let _ = args;
    Ok(ExitCode::SUCCESS)
}
