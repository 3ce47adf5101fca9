//! Parse, run, print the chain of causes, set the exit code.

use std::process::ExitCode;

use clap::Parser;

fn main() -> ExitCode {
    let args = abide::cli::args::Args::parse();
    match abide::cli::run(args) {
        Ok(code) => code,
        Err(error) => {
            eprint!("{}", error.chain());
            error.exit_code()
        }
    }
}
