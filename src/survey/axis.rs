//! Cell index → values on the axes → the system of that cell. The first axis runs fastest.

use crate::coords::{Configuration, configure};
use crate::system::{Axis, Study, System, VaryError};

/// How many cells a study has.
pub fn cell_count(study: &Study) -> u64 {
    study.axes.iter().fold(1u64, |cells, axis| cells.saturating_mul(axis.cells as u64))
}

/// The index on each axis.
pub fn cell_indices(study: &Study, cell: u64) -> Vec<usize> {
    let mut rest = cell;
    let mut split = |axis: &Axis| {
        let cells = axis.cells.max(1) as u64;
        let index = rest % cells;
        rest /= cells;
        index as usize
    };
    study.axes.iter().map(&mut split).collect()
}

/// The value on each axis, in the axis's unit: from `from` to `to` inclusive.
pub fn cell_values(study: &Study, cell: u64) -> Vec<f64> {
    study.axes.iter().zip(cell_indices(study, cell)).map(|(axis, index)| axis.at(index)).collect()
}

/// The stated system with the values of a cell in place, in the order of the axes; everything else stays as stated.
///
/// A factor counts from the number in the file, a ratio from the other body's number in this cell.
/// Errors: a value that the key may not have. The room `input` has tried the ends and corners already, so
/// between them this happens to a cell only where a key's range is not convex.
pub fn cell_system(system: &System, study: &Study, cell: u64) -> Result<System, VaryError> {
    system_at(system, study, &cell_values(study, cell))
}

/// As [`cell_system`], at any place of the axes: one value per axis, in the axis's unit.
fn system_at(system: &System, study: &Study, values: &[f64]) -> Result<System, VaryError> {
    let mut moved = system.clone();
    for (axis, value) in study.axes.iter().zip(values) {
        axis.apply(*value, &mut moved, system)?;
    }
    Ok(moved)
}

/// The configuration at any place of the axes, made as that of a cell is; absent where there is none.
///
/// At the values of a cell it is the cell's own configuration. Whether bodies touch at the start is not asked.
pub fn configuration_at(system: &System, study: &Study, values: &[f64]) -> Option<Configuration> {
    configure(&system_at(system, study, values).ok()?).ok()
}
