//! The command line: words → wishes → rooms below → files and talk.

pub mod args;
mod command;
mod error;
mod manners;
mod outputs;
mod progress;
mod unfit;
mod vary;

pub use command::run;
pub use error::CliError;
