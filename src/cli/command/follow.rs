use std::process::ExitCode;

use crate::cli::CliError;
use crate::cli::args::FollowArgs;

pub fn run(args: FollowArgs) -> Result<ExitCode, CliError> {
    let _ = args;
    Ok(ExitCode::SUCCESS)
}
