//! Hands the cells that the rule of [`super::refine`] wants to the workers.

use super::refine::{Fill, Policy, Refine};
use super::view::View;
use super::{Bitmap, Record};

/// Cells that are priced and ordered at once.
///
/// The dearest go first, so that at the end of a level no long cell is left alone in its lanes; and cells of like
/// step and cost share a batch. The order has no influence on the answers.
const WINDOW: usize = 1024;

/// Where the work is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Stage {
    /// Distance of the cells of this level.
    pub stride: usize,
    /// Levels that follow this one.
    pub levels_left: u32,
    /// Cells of this level that wait for their answer.
    pub awaited: u64,
    /// Whether cells may be filled.
    pub filling: bool,
}

/// What is to be done, what waits, what is known.
#[derive(Debug)]
pub struct Schedule {
    rule: Refine,
    /// Answers of an earlier process, by cell.
    known: Vec<Option<View>>,
    /// To be drawn from the end.
    window: Vec<(f64, u64)>,
}

impl Schedule {
    pub fn new(shape: [usize; 2], policy: Policy, known: Vec<Option<View>>) -> Schedule {
        Schedule { rule: Refine::new(shape, policy), known, window: Vec::new() }
    }

    /// The next cell to be integrated; none while others must be answered first, and at the end.
    pub fn draw(&mut self, price: impl Fn(u64) -> f64) -> Option<u64> {
        loop {
            if let Some((_, cell)) = self.window.pop() {
                return Some(cell);
            }
            let wanted = self.rule.take(WINDOW);
            if wanted.is_empty() && !self.rule.advance() {
                return None;
            }
            for cell in wanted {
                match self.known.get(cell as usize).copied().flatten() {
                    Some(view) => self.rule.answer(cell, view),
                    None => self.window.push((price(cell), cell)),
                }
            }
            // Of equal price the lower number first.
            self.window.sort_by(|a, b| a.0.total_cmp(&b.0).then(b.1.cmp(&a.1)));
        }
    }

    pub fn answer(&mut self, cell: u64, view: View) {
        self.rule.answer(cell, view);
    }

    /// Whether every level is answered.
    pub fn is_complete(&self) -> bool {
        self.rule.is_complete()
    }

    pub fn stage(&self) -> Stage {
        let (stride, levels_left) = self.rule.level();
        Stage { stride, levels_left, awaited: self.rule.awaited(), filling: self.rule.is_filling() }
    }

    /// The records of the filled cells that are not in `settled`.
    pub fn filled<'a>(
        &'a self,
        settled: &'a Bitmap,
        values: impl Fn(u64) -> Vec<f64> + 'a,
    ) -> impl Iterator<Item = Record> + 'a {
        let new = self.rule.fills().filter(|fill: &Fill| !settled.has(fill.cell));
        new.filter_map(move |fill| Record::of_fill(&fill, values(fill.cell)))
    }
}
