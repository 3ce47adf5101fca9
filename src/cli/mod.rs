//! The command line: words → wishes → rooms below → files and talk.

pub mod args;
mod command;
mod error;

pub use command::run;
pub use error::CliError;
