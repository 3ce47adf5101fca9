//! One finished cell.

use super::refine::Fill;
use crate::assess::Assessment;
use crate::verdict::{LostHow, Verdict};

/// A finished cell of a study, as the journal keeps it.
#[derive(Clone, Debug, PartialEq)]
pub struct Record {
    /// Index of the cell; the first axis runs fastest.
    pub cell: u64,
    /// The value on each axis, in the axis's unit.
    pub values: Vec<f64>,
    /// Of a filled cell only the verdict is known; nothing else was computed.
    pub assessment: Assessment,
    /// Absent when the cell was integrated.
    pub filled: Option<Filled>,
}

/// How a cell came to its verdict without being integrated.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Filled {
    /// Distance in cells, along the axes, of the cells whose agreement it is.
    pub stride: u8,
    /// How all of them were lost.
    pub how: Option<LostHow>,
}

impl Record {
    pub fn integrated(cell: u64, values: Vec<f64>, assessment: Assessment) -> Record {
        Record { cell, values, assessment, filled: None }
    }

    pub fn filled(cell: u64, values: Vec<f64>, verdict: Verdict, filled: Filled) -> Record {
        Record { cell, values, assessment: Assessment::unseen(verdict, None), filled: Some(filled) }
    }

    /// The record of a filled cell; absent where the cells around gave no verdict.
    pub(super) fn of_fill(fill: &Fill, values: Vec<f64>) -> Option<Record> {
        let (verdict, how) = fill.view.found()?;
        Some(Record::filled(fill.cell, values, verdict, Filled { stride: fill.stride, how }))
    }

    /// How the cell was lost: as computed, else as all around it.
    pub fn lost_how(&self) -> Option<LostHow> {
        self.assessment.loss.map(|loss| loss.how).or(self.filled.and_then(|filled| filled.how))
    }
}
