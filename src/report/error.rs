//! What can go wrong when a table is written.

/// Why a table could not be written.
#[derive(Debug, thiserror::Error)]
pub enum ReportError {
    #[error("row {row} has {found} entries, but the table has {columns} columns")]
    Ragged { row: usize, found: usize, columns: usize },
    #[error("row {row}, column {column}: {found} in a column of {declared}")]
    Datatype { row: usize, column: String, found: &'static str, declared: &'static str },
    #[error("two columns are named {name}")]
    Twice { name: String },
    #[error("the rows could not be written as CSV")]
    Csv(#[from] csv::Error),
    #[error("the text could not be written as JSON")]
    Json(#[from] serde_json::Error),
}
