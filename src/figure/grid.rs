//! The cells of a study on the axes of a panel.

use super::colour::ScaleKind;
use super::label::Label;
use super::model::Axis;
use super::names;
use crate::system::{self, Spacing, System};

/// The panel's axis for a study's axis: from the outer edge of the first cell to that of the last.
pub(crate) fn panel_axis(axis: &system::Axis, system: &System) -> Axis {
    let kind = match axis.spacing {
        Spacing::Linear => ScaleKind::Linear,
        Spacing::Log => ScaleKind::Log,
    };
    let (from, to) = edges(axis);
    let label = names::axis_label(axis, system);
    Axis { short: short(axis, &label), label, from, to, kind }
}

/// What is left of a label when space is short: what follows the last comma, the symbol.
fn short(axis: &system::Axis, label: &Label) -> Label {
    if matches!(axis.quantity, system::Quantity::Factor) { label.clone() } else { names::symbol_part(label) }
}

/// Outer edges of the first and the last cell; the given values are cell centres.
fn edges(axis: &system::Axis) -> (f64, f64) {
    let (from, to) = (axis.from, axis.to);
    if axis.cells < 2 || from == to {
        let half = if from == 0.0 { 0.5 } else { 0.05 * from.abs() };
        return (from - half, from + half);
    }
    let parts = (axis.cells - 1) as f64;
    match axis.spacing {
        Spacing::Linear => {
            let half = 0.5 * (to - from) / parts;
            (from - half, to + half)
        }
        Spacing::Log => {
            let half = ((to / from).ln() * 0.5 / parts).exp();
            (from / half, to * half)
        }
    }
}

/// The value at the centre of a cell of an axis, from the edges.
pub(crate) fn centre(axis: &Axis, cells: usize, index: usize) -> f64 {
    axis.scale().value((index as f64 + 0.5) / cells as f64)
}

/// Index of the cell that holds a value; absent outside.
pub(crate) fn cell_of(axis: &system::Axis, value: f64) -> Option<usize> {
    let (from, to) = edges(axis);
    let kind = match axis.spacing {
        Spacing::Linear => ScaleKind::Linear,
        Spacing::Log => ScaleKind::Log,
    };
    let place = super::Scale { from, to, kind }.place(value)?;
    (0.0..=1.0)
        .contains(&place)
        .then(|| ((place * axis.cells as f64) as usize).min(axis.cells.saturating_sub(1)))
}
