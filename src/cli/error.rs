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
        text.push_str(": ");
        text.push_str(&inner.to_string());
        cause = inner.source();
    }
    text
}
