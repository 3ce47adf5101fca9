//! One finished cell.

use crate::assess::Assessment;

/// A finished cell of a study, as the journal keeps it.
#[derive(Clone, Debug, PartialEq)]
pub struct Record {
    /// Index of the cell; the first axis runs fastest.
    pub cell: u64,
    /// The value on each axis, in the axis's unit.
    pub values: Vec<f64>,
    pub assessment: Assessment,
}
