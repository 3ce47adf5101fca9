//! `abide inspect`: what a system file says, how it is read, and what can be told without integrating; with `--readings`
//! what becomes of it under every reading that the file leaves open.

mod angles;
mod binary;
mod caveat;
mod convention;
mod criteria_text;
mod criteria_view;
mod readings;
mod second;
pub(super) mod table;
mod text;
mod view;

use std::io::Write;
use std::process::ExitCode;

use crate::cli::CliError;
use crate::cli::args::InspectArgs;
use crate::cli::unfit;
use crate::input;
use view::View;

pub fn run(args: InspectArgs) -> Result<ExitCode, CliError> {
    let file = input::read_system(&args.system).map_err(CliError::input)?;
    let configuration = unfit::startable(&file)?;
    if args.readings {
        return readings::run(&args, &file.system, &configuration);
    }
    let view = View::new(&file.system, &configuration);
    let output = if args.json { json(&view)? } else { text::page(&view) };
    std::io::stdout().write_all(output.as_bytes()).map_err(CliError::working)?;
    Ok(ExitCode::SUCCESS)
}

fn json(view: &impl serde::Serialize) -> Result<String, CliError> {
    let mut text = serde_json::to_string_pretty(view).map_err(CliError::working)?;
    text.push('\n');
    Ok(text)
}
