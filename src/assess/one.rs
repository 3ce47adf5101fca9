//! One configuration followed with its series.

use super::batch::one_block;
use super::cell::{Cell, Next};
use super::{Assessment, Plan};
use crate::coords::{Configuration, Elements};
use crate::integrate::Block;
use crate::observe::Moment;

/// The motion at one time.
#[derive(Clone, Debug, PartialEq)]
pub struct Row {
    pub time_day: f64,
    /// Astrocentric osculating elements per planet.
    pub elements: Vec<Elements>,
    /// |E − E₀|/|E₀| at this time.
    pub energy_error: f64,
    /// Y and its time average; absent before the second sample or when not measured.
    pub megno: Option<f64>,
    pub mean_megno: Option<f64>,
    /// ln(|δ|/|δ₀|)/t, per day.
    pub lyapunov_per_day: Option<f64>,
}

/// Follows one configuration and keeps at most `rows` rows, evenly spaced.
///
/// `progress` is told the share done (it falls back when the cell is done again with a smaller step) and answers
/// whether to go on; at `false` the answer is `None`. The assessment has the bits of [`super::assess`] under the
/// same plan.
pub fn follow(
    configuration: &Configuration,
    plan: &Plan,
    rows: usize,
    mut progress: impl FnMut(f64) -> bool,
) -> Option<(Assessment, Vec<Row>)> {
    let mut cell = match Cell::new(configuration, plan) {
        Ok(cell) => cell,
        Err(assessment) => return Some((*assessment, Vec::new())),
    };
    let mut block = Block::in_coordinates(plan.coordinates, 1, configuration.planets.len());
    cell.enter(&mut block, 0, plan);
    let mut table = Table::new(&cell, rows);
    loop {
        let before = block.clone();
        let corrected = one_block(&mut block, plan);
        let next = cell.look(plan, &before, &mut block, &corrected, 0);
        match next {
            Next::Again => {
                cell.enter(&mut block, 0, plan);
                table = Table::new(&cell, rows);
            }
            Next::GoOn => table.see(&cell, plan, &block, &corrected),
            Next::End(assessment) => {
                if assessment.loss.is_none() {
                    table.see(&cell, plan, &block, &corrected);
                }
                return Some((*assessment, table.rows));
            }
        }
        if !progress(cell.share_done()) {
            return None;
        }
    }
}

/// Rows evenly spaced over the blocks.
struct Table {
    stride: u64,
    rows: Vec<Row>,
}

impl Table {
    fn new(cell: &Cell, rows: usize) -> Table {
        Table { stride: cell.blocks().div_ceil(rows.max(1) as u64), rows: Vec::new() }
    }

    fn see(&mut self, cell: &Cell, plan: &Plan, block: &Block, corrected: &Block) {
        if !cell.blocks_done().is_multiple_of(self.stride) && cell.blocks_done() != cell.blocks() {
            return;
        }
        let state = corrected.state(0);
        let time_day = cell.time_day(plan);
        let growth = block.growth(0);
        let measured = plan.megno && growth.samples > 1;
        self.rows.push(Row {
            time_day,
            elements: Moment { time_day, state: &state }.astrocentric(),
            energy_error: cell.last_energy_error(),
            megno: measured.then_some(growth.y),
            mean_megno: measured.then_some(growth.mean_y),
            lyapunov_per_day: measured.then_some(growth.log / time_day),
        });
    }
}
