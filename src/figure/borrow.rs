//! Colours for cells that have no number of their own: that of a cell near by.

use super::FigureError;
use super::colour::Region;
use super::column::Column;
use super::model::Paint;
use crate::survey::Record;
use crate::system::Study;

/// How far a filled cell looks for an integrated one of its verdict, cells: twice the coarsest lattice.
const FARTHEST: usize = 2 * crate::survey::COARSEST;

/// One paint per cell of the study.
///
/// A filled cell has a verdict and no number; it is painted as the nearest integrated cell of that verdict (a number
/// interpolated from its neighbours would look computed; flat blocks show how coarse the knowledge is). A cell
/// that is not finished is painted as the nearest finished one within `reach` cells, else left white.
pub(crate) fn paint(
    study: &Study,
    records: &[Record],
    column: Column,
    reach: usize,
) -> Result<Vec<Paint>, FigureError> {
    let total: usize = study.axes.iter().map(|a| a.cells).product();
    let mut by_cell: Vec<Option<&Record>> = vec![None; total];
    for record in records {
        let outside = FigureError::CellOutside { cell: record.cell, cells: total as u64 };
        let index = usize::try_from(record.cell).ok().filter(|i| *i < total).ok_or(outside)?;
        by_cell[index] = Some(record);
    }
    let grid = Cells { columns: study.axes[0].cells, by_cell };
    let of = |record: &Record, index: usize| grid.paint_of(record, index, column);
    let one = |index: usize| match grid.by_cell[index] {
        Some(record) => of(record, index),
        None => grid
            .nearest(index, reach, |_| true)
            .map_or(Paint::Flat(Region::Missing), |(at, record)| of(record, at)),
    };
    Ok((0..total).map(one).collect())
}

struct Cells<'a> {
    columns: usize,
    by_cell: Vec<Option<&'a Record>>,
}

impl<'a> Cells<'a> {
    fn paint_of(&self, record: &Record, index: usize, column: Column) -> Paint {
        if record.filled.is_none() {
            return column.paint(&record.assessment);
        }
        let outcome = |r: &Record| (r.assessment.verdict, r.lost_how());
        let alike = |other: &Record| other.filled.is_none() && outcome(other) == outcome(record);
        let (verdict, how) = outcome(record);
        self.nearest(index, FARTHEST, alike)
            .map_or(Paint::Flat(Region::of(verdict, how)), |(_, lender)| column.paint(&lender.assessment))
    }

    /// The nearest cell that suits, by the larger of the distances along the axes; of several the nearer in a straight
    /// line, then the first.
    fn nearest(
        &self,
        index: usize,
        reach: usize,
        suits: impl Fn(&Record) -> bool,
    ) -> Option<(usize, &'a Record)> {
        let rows = self.by_cell.len() / self.columns.max(1);
        let (x, y) = (index % self.columns, index / self.columns);
        (1..=reach).find_map(|far| {
            let mut best: Option<(usize, usize)> = None;
            for row in y.saturating_sub(far)..=(y + far).min(rows - 1) {
                let whole = row.abs_diff(y) == far;
                let step = if whole { 1 } else { 2 * far };
                for column in (0..=2 * far).step_by(step) {
                    let Some(column) = (x + column).checked_sub(far).filter(|c| *c < self.columns) else {
                        continue;
                    };
                    let at = row * self.columns + column;
                    let distance = column.abs_diff(x).pow(2) + row.abs_diff(y).pow(2);
                    if self.by_cell[at].is_some_and(&suits) && best.is_none_or(|(d, _)| distance < d) {
                        best = Some((distance, at));
                    }
                }
            }
            best.and_then(|(_, at)| Some((at, self.by_cell[at]?)))
        })
    }
}
