//! The step at which a cell ended.

use super::{Cell, Loss};
use crate::assess::plan::Plan;
use crate::integrate::{Advance, Block, advance, from_map};
use crate::observe::Moment;
use crate::verdict::LostHow;

/// The energy of a cell that ends in its first block is measured so many steps before the end: out of reach of the
/// corrector's kicks (three steps), which would feel the meeting itself. It must then be as far from the start, where
/// there is no error yet.
const BEFORE_END: usize = 5;

impl Cell {
    /// Repeats the block from `before`, alone, to find the first step after which the cell has ended, and how.
    pub(super) fn find_loss(&mut self, plan: &Plan, before: &Block, lane: usize) -> Loss {
        let mut first = self.alone(plan);
        before.copy_lane(lane, &mut first, 0);
        let (steps, at_end) = self.end_step(plan, &first);
        // Nothing was seen yet, but a verdict needs its energy error.
        self.unmeasured = self.blocks_done == 0 && steps < 2 * BEFORE_END;
        if self.blocks_done == 0 && !self.unmeasured {
            let steps = steps - BEFORE_END;
            let mut last = onward(plan, &first, steps);
            from_map(&mut last, plan.splitting());
            let (state, time_day) = (last.state(0), steps as f64 * self.step_day);
            self.conserved.see(&Moment { time_day, state: &state }, &self.terms);
            let state = self.shown(state);
            self.extent.see(&Moment { time_day, state: &state }.shapes(plan.frame));
        }
        self.part_steps = steps as u64;
        let time_day = self.time_day(plan) + steps as f64 * self.step_day;
        self.note_approach(&at_end, 0);
        for pair in &self.limits.pairs {
            let nearest = at_end.nearest_pair_au(pair.i, pair.j, 0);
            if nearest < pair.end_au {
                let (planet, other) = self.lighter_first(pair);
                return Loss { time_day, planet, other: Some(other), how: pair.how_on_crossing() };
            }
        }
        for planet in 0..self.start.gm.len() {
            let (near, far) = at_end.star_distances_au(planet, 0);
            if near < self.limits.star_radius_au {
                return Loss { time_day, planet, other: None, how: LostHow::Star };
            }
            if far > self.limits.escape_au {
                return Loss { time_day, planet, other: None, how: LostHow::Escape };
            }
        }
        // Only what is not a number is left, and that comes from a passage through the star's centre.
        self.conserved.worst_energy = f64::INFINITY;
        Loss { time_day, planet: 0, other: None, how: LostHow::Star }
    }

    /// First step of a block from `first` after which the cell has ended, and the block there.
    ///
    /// A shorter run of the same steps has the same bits, so the end could be found by halving alone; but each trial would
    /// repeat the block from its start. Halving that goes on from where the cell still lives costs one block in
    /// all and misses the bits only where a run is taken up again, so what it finds is tried first.
    fn end_step(&self, plan: &Plan, first: &Block) -> (usize, Block) {
        let ends = |block: &Block| self.must_leave(block, 0);
        let likely = first_where(plan.block_steps, first, |from, steps| onward(plan, from, steps), ends);
        let (mut alive, mut ended) = (0, plan.block_steps);
        let mut at_end = None;
        let mut trials = [likely, likely - 1].into_iter();
        while ended - alive > 1 {
            let trial = trials.find(|t| (alive + 1..ended).contains(t)).unwrap_or((alive + ended) / 2);
            let there = onward(plan, first, trial);
            if ends(&there) {
                (ended, at_end) = (trial, Some(there));
            } else {
                alive = trial;
            }
        }
        (ended, at_end.unwrap_or_else(|| onward(plan, first, ended)))
    }
}

/// The block `steps` steps later.
fn onward(plan: &Plan, from: &Block, steps: usize) -> Block {
    let mut alone = from.clone();
    advance(Advance { block: &mut alone, scheme: plan.splitting(), steps, tangent: plan.megno });
    alone
}

/// First of `steps` steps after which a block `ends`, as far as runs that are taken up again tell: halves the block, going on
/// from where it still lives, so that all runs together are one block long.
fn first_where(
    steps: usize,
    first: &Block,
    onward: impl Fn(&Block, usize) -> Block,
    ends: impl Fn(&Block) -> bool,
) -> usize {
    let mut living = first.clone();
    let (mut alive, mut ended) = (0, steps);
    while ended - alive > 1 {
        let half = (ended - alive) / 2;
        let next = onward(&living, half);
        if ends(&next) {
            ended = alive + half;
        } else {
            (living, alive) = (next, alive + half);
        }
    }
    ended
}
