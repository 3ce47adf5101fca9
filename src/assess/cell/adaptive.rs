//! Blocks of steps done by the adaptive engine: inside encounters, and for what the symplectic scheme cannot hold.

use std::ops::ControlFlow;

use super::{Cell, Loss, Next, Pair, length};
use crate::assess::plan::Plan;
use crate::integrate::radau::{Engine, Event, EventKind, RadauError, Stop, TOLERANCE, Watch};
use crate::integrate::{Block, SAMPLE_EVERY, from_map, to_map};
use crate::verdict::LostHow;

/// How often a cell that misses the energy target is done again with a smaller step.
const MOST_REDONE: u32 = 2;
/// The smaller step aims at this share of the target.
const AIM: f64 = 0.25;
/// No step is shortened by more than this at once.
const MOST_SHORTER: f64 = 0.125;

/// A block done, or the end met in it (time since the start of the block).
enum Passed {
    Through,
    Ended(f64, End),
}

#[derive(Clone, Copy)]
struct End {
    planet: usize,
    other: Option<usize>,
    how: LostHow,
}

impl Cell {
    /// Does again the block that `after` holds in `lane`, from `before`, with the adaptive engine; the lane then holds
    /// the end of the block in the map's variables, as if it had got there itself.
    pub(super) fn pass(&mut self, plan: &Plan, before: &Block, after: &mut Block, lane: usize) -> Next {
        let mut alone = self.alone(plan);
        before.copy_lane(lane, &mut alone, 0);
        from_map(&mut alone, plan.splitting());
        let passed = self.run(plan, &mut alone);
        match passed {
            Ok(Passed::Through) => {
                alone.forget_pairs(0);
                let corrected = alone.clone();
                to_map(&mut alone, plan.splitting());
                alone.copy_lane(0, after, lane);
                self.note_block(plan, after, &corrected, 0, lane)
            }
            Ok(Passed::Ended(day, end)) => {
                let time_day = self.time_day(plan) + day;
                self.part_steps = (day / self.step_day).ceil() as u64;
                let loss = Loss { time_day, planet: end.planet, other: end.other, how: end.how };
                Next::End(Box::new(self.assessment(plan, Some(loss))))
            }
            Err(_) => {
                // The engine could not go on (a passage too sharp for its smallest step): nothing can be trusted.
                self.conserved.worst_energy = f64::INFINITY;
                self.passage_error = f64::INFINITY;
                self.part_steps = 1;
                Next::End(Box::new(self.assessment(plan, None)))
            }
        }
    }

    /// What to do about an energy error above the target: smaller steps twice, then the adaptive engine, then give up.
    pub(super) fn again(&mut self, error: f64, plan: &Plan) -> Next {
        if self.adaptive {
            return Next::End(Box::new(self.assessment(plan, None)));
        }
        if self.redone == MOST_REDONE {
            self.redone += 1;
            return self.all_adaptive(plan);
        }
        self.redone += 1;
        self.set_step(
            self.step_day * shorter(error / plan.energy_error, plan.splitting().least_order()),
            plan,
        );
        Next::Again
    }

    /// From the start again, every block with the adaptive engine.
    pub(super) fn all_adaptive(&mut self, plan: &Plan) -> Next {
        self.adaptive = true;
        self.set_step(self.step_day, plan);
        Next::Again
    }

    /// Advances the true state in lane 0 of `alone` by one block, with the samples of the kernel.
    fn run(&mut self, plan: &Plan, alone: &mut Block) -> Result<Passed, RadauError> {
        let tangents: Vec<_> = if plan.megno { vec![alone.tangent(0)] } else { Vec::new() };
        let forces = if self.adaptive { &self.forces } else { &self.passage_forces };
        let mut engine = Engine::from_state(&alone.state(0), &tangents, forces, TOLERANCE)?;
        let watch = self.watch();
        self.note_gaps(&engine);
        let step = self.step_day;
        let mut scratch = alone.clone();
        for sample in 0..=plan.block_steps / SAMPLE_EVERY {
            // The kernel samples half a step into every fourth step; the last round goes to the end of the block.
            let last = sample * SAMPLE_EVERY == plan.block_steps;
            let day =
                step * if last { plan.block_steps as f64 } else { (sample * SAMPLE_EVERY) as f64 + 0.5 };
            let stop = engine.advance(day, &watch, |event| {
                if self.ends(event) { ControlFlow::Break(()) } else { ControlFlow::Continue(()) }
            })?;
            if let Stop::At(event) = stop {
                self.note_energy(&engine);
                self.note_gaps(&engine);
                return Ok(Passed::Ended(event.day, self.end_at(&event)));
            }
            if plan.megno && !last {
                let tangent = engine.tangent(0).unwrap_or_else(|| alone.tangent(0));
                scratch.replace(0, &engine.state(), &tangent);
                scratch.sample();
            }
        }
        self.note_energy(&engine);
        self.note_gaps(&engine);
        let tangent = engine.tangent(0).unwrap_or_else(|| alone.tangent(0));
        scratch.replace(0, &engine.state(), &tangent);
        *alone = scratch;
        Ok(Passed::Through)
    }

    /// What ends the configuration, and every closest approach.
    fn watch(&self) -> Watch {
        let apart = self.limits.pairs.iter().filter(|pair| pair.ends_apart());
        Watch {
            approach_au: f64::INFINITY,
            radii_au: self.limits.radii_au.clone(),
            escape_au: Some(self.limits.escape_au),
            apart: None,
            near: apart.map(|pair| (pair.i + 1, pair.j + 1, pair.end_au)).collect(),
        }
    }

    fn pair_of(&self, event: &Event) -> Option<Pair> {
        let of = |pair: &&Pair| (pair.i + 1, pair.j + 1) == (event.first, event.second);
        self.limits.pairs.iter().find(of).copied()
    }

    /// Whether the configuration ends here. The distance of two planets is kept, located to rounding.
    fn ends(&mut self, event: &Event) -> bool {
        let pair = self.pair_of(event);
        if let Some(pair) = pair {
            self.note_distances(|one| if one.is(&pair) { event.distance_au } else { f64::INFINITY });
        }
        match event.kind {
            // Only rounding, where a block begins, can let a pair in unseen.
            EventKind::Approach => pair.is_some_and(|pair| event.distance_au < pair.end_au),
            _ => true,
        }
    }

    fn end_at(&self, event: &Event) -> End {
        let second = event.second - 1;
        let lost = |how| End { planet: second, other: None, how };
        match (event.kind, self.pair_of(event)) {
            (EventKind::Escape, _) => lost(LostHow::Escape),
            (_, Some(pair)) => {
                let (planet, other) = self.lighter_first(&pair);
                End { planet, other: Some(other), how: pair.how_on_crossing() }
            }
            _ => lost(LostHow::Star),
        }
    }

    /// A distance may be smallest where the engine begins or stops.
    fn note_gaps(&mut self, engine: &Engine) {
        let pos = engine.state().pos;
        self.note_distances(|pair| {
            let (a, b) = (&pos[pair.i], &pos[pair.j]);
            length(&[a[0] - b[0], a[1] - b[1], a[2] - b[2]])
        });
    }

    /// The error over the block itself counts too; with relativity in full no potential's energy tells of it.
    fn note_energy(&mut self, engine: &Engine) {
        if let Some(error) = engine.energy_error() {
            let error = if error.is_finite() { error.abs() } else { f64::INFINITY };
            self.passages += 1;
            self.passage_error = self.passage_error.max(error);
        }
    }
}

/// Factor for the step when the error is `excess` > 1 times the target: error ∝ stepⁿ with n the scheme's least order,
/// since the terms of higher order fall faster still. n is taken down to a power of two, so that the root is made of
/// square roots, which have the same bits on every machine.
fn shorter(excess: f64, order: i32) -> f64 {
    let mut factor = AIM / excess;
    for _ in 0..order.ilog2() {
        factor = factor.sqrt();
    }
    factor.max(MOST_SHORTER)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::integrate::Scheme;

    #[test]
    fn a_step_shrinks_by_the_root_of_the_schemes_least_order() {
        // Four times the target, a quarter of it aimed at: the error must fall sixteenfold.
        for (name, factor) in [("(2,2)", 0.25), ("(8,2)", 0.25), ("(8,4)", 0.5), ("(10,6,4)", 0.5)] {
            let found = shorter(4.0, Scheme::named(name).unwrap().least_order());
            assert!((found - factor).abs() < 1e-15, "{name}: {found}");
        }
        assert_eq!(shorter(f64::INFINITY, 4), MOST_SHORTER);
    }
}
