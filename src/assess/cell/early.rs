//! The early end of a cell whose chaos is certain, where a study asks for it.

use super::Cell;
use crate::assess::plan::Plan;
use crate::integrate::Growth;
use crate::verdict::is_surely_chaotic;

/// A cell is not ended for its chaos before the slope of its growth has an error.
const FEWEST_BLOCKS: u64 = 8;

impl Cell {
    /// Whether nothing that follows could make the cell regular, and the study wants it to end then.
    pub(super) fn ends_for_chaos(&self, plan: &Plan, growth: &Growth) -> bool {
        plan.stop_when_chaotic
            && self.blocks_done >= FEWEST_BLOCKS
            && is_surely_chaotic(self.share_done(), growth.mean_y, growth.y)
    }
}
