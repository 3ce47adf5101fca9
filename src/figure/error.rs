//! What can go wrong before anything is drawn.

/// Why a figure could not be made.
#[derive(Debug, thiserror::Error)]
pub enum FigureError {
    #[error("there is no column {found:?} with numbers to draw; this run has: {}", known.join(", "))]
    UnknownColumn { found: String, known: Vec<String> },
    #[error("a map has one or two axes, but the study has {found}")]
    Axes { found: usize },
    #[error("cell {cell} is not in the study, which has {cells} cells")]
    CellOutside { cell: u64, cells: u64 },
    #[error(
        "{found} criteria are too many for one map; {most} curves can be told apart, so draw the others on a map of their own"
    )]
    Criteria { found: usize, most: usize },
    #[error("the series has no row to draw")]
    EmptySeries,
}
