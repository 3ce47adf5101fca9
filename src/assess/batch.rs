//! Fills lanes with cells; a finished lane is refilled with the next cell.

use super::cell::{Cell, Next};
use super::{Assessment, Plan};
use crate::coords::Configuration;
use crate::integrate::{Advance, Block, advance, from_map};
use crate::lanes::Level;

/// Assesses one configuration. Same bits as [`run_batch`] gives it.
pub fn assess(configuration: &Configuration, plan: &Plan) -> Assessment {
    let mut feed = Some((0u64, configuration.clone()));
    let mut answer = None;
    run_lanes(
        Some(1),
        plan,
        || feed.take(),
        |_, assessment| {
            answer = Some(assessment);
            true
        },
    );
    answer.expect("a configuration that was fed is answered")
}

/// What a batch did, in lanes: a lane-block is one lane through one block of steps.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct BatchWork {
    /// Lane-blocks that the processor went through.
    pub offered: u64,
    /// Those of them that had a cell.
    pub used: u64,
    /// Cells put into a lane for the first time.
    pub entered: u64,
    /// Times a cell was started again with a smaller step.
    pub again: u64,
}

/// Draws cells from `next` until it gives none, answers each through `done` in the order they finish.
///
/// All configurations have the same number of planets. `done` returns whether to go on; at `false` the cells
/// in flight are dropped.
pub fn run_batch(
    plan: &Plan,
    next: impl FnMut() -> Option<(u64, Configuration)>,
    done: impl FnMut(u64, Assessment) -> bool,
) -> BatchWork {
    run_lanes(None, plan, next, done)
}

/// A cell and its number, in its lane.
type Seat = Option<(u64, Cell)>;

fn run_lanes(
    width: Option<usize>,
    plan: &Plan,
    mut next: impl FnMut() -> Option<(u64, Configuration)>,
    mut done: impl FnMut(u64, Assessment) -> bool,
) -> BatchWork {
    let mut work = BatchWork::default();
    let Some(first) = next() else { return work };
    let level = Level::chosen();
    let width = width.unwrap_or(level.width() * level.groups(first.1.planets.len()));
    let mut block = plan.block(width, first.1.planets.len());
    let mut waiting = Some(first);
    let mut seats: Vec<Seat> = (0..width).map(|_| None).collect();
    loop {
        for lane in 0..width {
            while seats[lane].is_none() {
                let Some((number, configuration)) = waiting.take().or_else(&mut next) else { break };
                assert_eq!(configuration.planets.len(), block.planets(), "one batch, one number of planets");
                match Cell::new(&configuration, plan) {
                    Ok(cell) => {
                        cell.enter(&mut block, lane, plan);
                        seats[lane] = Some((number, cell));
                        work.entered += 1;
                    }
                    Err(assessment) => {
                        if !done(number, *assessment) {
                            return work;
                        }
                    }
                }
            }
        }
        if seats.iter().all(Option::is_none) {
            return work;
        }
        work.offered += width as u64;
        work.used += seats.iter().flatten().count() as u64;
        let before = block.clone();
        let corrected = one_block(&mut block, plan);
        for (lane, seat) in seats.iter_mut().enumerate() {
            let Some((number, cell)) = seat else { continue };
            match cell.look(plan, &before, &mut block, &corrected, lane) {
                Next::GoOn => {}
                Next::Again => {
                    cell.enter(&mut block, lane, plan);
                    work.again += 1;
                }
                Next::End(assessment) => {
                    let number = *number;
                    block.retire(lane);
                    *seat = None;
                    if !done(number, *assessment) {
                        return work;
                    }
                }
            }
        }
    }
}

/// Advances every lane by one block of steps; gives the true states at its end.
pub(super) fn one_block(block: &mut Block, plan: &Plan) -> Block {
    let scheme = plan.splitting();
    advance(Advance { block, scheme, steps: plan.block_steps, tangent: plan.megno });
    as_true(block, plan)
}

/// The true states of a block in the map's variables.
pub(super) fn as_true(block: &Block, plan: &Plan) -> Block {
    let mut corrected = block.clone();
    from_map(&mut corrected, plan.splitting());
    corrected
}
