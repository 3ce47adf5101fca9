//! What can go wrong between statements and states.

/// Why a description is not a configuration.
#[derive(Debug, thiserror::Error)]
pub enum CoordsError {
    #[error("planets {first} and {second} are at one place")]
    Coincident { first: String, second: String },
}
