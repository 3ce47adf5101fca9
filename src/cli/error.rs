//! What goes wrong at the top: the causes below with the exit code they mean.

use std::error::Error;
use std::process::ExitCode;

/// An error with its exit code: 2 wrong input or usage, 1 failed while working.
#[derive(Debug, thiserror::Error)]
pub enum CliError {
    #[error("{0}")]
    Input(String),
    #[error("{0}")]
    Working(String),
}

impl CliError {
    /// Wrong input or usage (exit code 2), printed with its chain of causes.
    pub fn input(error: impl Error) -> CliError {
        CliError::Input(chain(&error))
    }

    /// Failed while working (exit code 1).
    pub fn working(error: impl Error) -> CliError {
        CliError::Working(chain(&error))
    }

    pub fn exit_code(&self) -> ExitCode {
        match self {
            CliError::Input(_) => ExitCode::from(2),
            CliError::Working(_) => ExitCode::from(1),
        }
    }

    /// The text for standard error, ending in a newline.
    pub fn chain(&self) -> String {
        format!("error: {self}\n")
    }
}

fn chain(error: &dyn Error) -> String {
    let mut text = error.to_string();
    let mut cause = error.source();
    while let Some(inner) = cause {
        let words = inner.to_string();
        // Many errors hold the words of their cause already, where they read best.
        if !text.contains(&words) {
            text.push_str(": ");
            text.push_str(&words);
        }
        cause = inner.source();
    }
    text
}

#[cfg(test)]
mod tests {
    use std::io;

    use super::*;
    use crate::disk::DiskError;

    #[derive(Debug, thiserror::Error)]
    #[error("the map cannot be drawn")]
    struct Outer(#[source] DiskError);

    #[test]
    fn a_cause_is_said_once() {
        let refused = || io::Error::from_raw_os_error(13);
        let disk = DiskError::Write { path: "out/map.png".into(), source: refused() };
        let told = CliError::working(Outer(disk)).chain();
        assert_eq!(
            told,
            format!("error: the map cannot be drawn: out/map.png cannot be written: {}\n", refused())
        );
    }
}
