//! Fills lanes with cells; a finished lane is refilled with the next cell.

use super::cell::{Cell, Next};
use super::{Assessment, Plan};
use crate::coords::Configuration;
use crate::integrate::{Advance, Block, advance, from_map};
use crate::lanes::{Level, WIDTH};

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
    let (mut before, mut corrected) = (block.clone(), block.clone());
    let mut waiting = Some(first);
    let mut seats: Vec<Seat> = (0..width).map(|_| None).collect();
    loop {
        for lane in 0..seats.len() {
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
        let busy = seats.iter().flatten().count();
        if busy == 0 {
            return work;
        }
        if busy.next_multiple_of(WIDTH) < block.width() {
            // No cells are left to fill the lanes: those on their way move together.
            (block, seats) = moved_together(&block, seats, plan);
            (before, corrected) = (block.clone(), block.clone());
        }
        work.offered += block.width() as u64;
        work.used += busy as u64;
        before.copy_from(&block);
        run_block(&mut block, plan);
        corrected.copy_from(&block);
        from_map(&mut corrected, plan.splitting());
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

/// The cells in as few groups of lanes as hold them.
fn moved_together(block: &Block, seats: Vec<Seat>, plan: &Plan) -> (Block, Vec<Seat>) {
    let busy = seats.iter().flatten().count();
    let mut fewer = plan.block(busy.next_multiple_of(WIDTH), block.planets());
    let mut kept: Vec<Seat> = Vec::with_capacity(fewer.width());
    for (lane, seat) in seats.into_iter().enumerate().filter(|(_, seat)| seat.is_some()) {
        block.copy_lane(lane, &mut fewer, kept.len());
        kept.push(seat);
    }
    kept.resize_with(fewer.width(), || None);
    (fewer, kept)
}

/// Advances every lane by one block of steps; gives the true states at its end.
pub(super) fn one_block(block: &mut Block, plan: &Plan) -> Block {
    run_block(block, plan);
    as_true(block, plan)
}

fn run_block(block: &mut Block, plan: &Plan) {
    let scheme = plan.splitting();
    advance(Advance { block, scheme, steps: plan.block_steps, tangent: plan.megno });
}

/// The true states of a block in the map's variables.
pub(super) fn as_true(block: &Block, plan: &Plan) -> Block {
    let mut corrected = block.clone();
    from_map(&mut corrected, plan.splitting());
    corrected
}
