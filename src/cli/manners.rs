//! How long work ends early and how results are printed, alike in every command.

use std::io::{ErrorKind, Write};
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

use crate::cli::CliError;

/// Exit code: interrupted and resumable.
pub const INTERRUPTED: u8 = 130;

/// Set by the first Ctrl-C or termination signal; a second one ends the process at once.
pub fn stop_on_signal() -> Result<Arc<AtomicBool>, CliError> {
    let stop = Arc::new(AtomicBool::new(false));
    let seen = Arc::clone(&stop);
    let handler = move || {
        if seen.swap(true, Ordering::SeqCst) {
            std::process::exit(i32::from(INTERRUPTED));
        }
    };
    ctrlc::set_handler(handler).map_err(CliError::working)?;
    Ok(stop)
}

/// To standard output; a reader that has seen enough and left is no failure.
pub fn print(text: &str) -> Result<(), CliError> {
    print_bytes(text.as_bytes())
}

/// [`print()`] for what is text already in bytes.
pub fn print_bytes(bytes: &[u8]) -> Result<(), CliError> {
    match std::io::stdout().write_all(bytes) {
        Err(error) if error.kind() != ErrorKind::BrokenPipe => Err(CliError::working(error)),
        _ => Ok(()),
    }
}
