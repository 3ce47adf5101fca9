//! A cell on its way seen from outside, put down to the last bit, and taken up again.

use super::{Approach, Cell};
use crate::assess::physics::as_stated;
use crate::integrate::State;
use crate::num::{Kept, KeptReader};
use crate::observe::ConservedWatch;

impl Cell {
    /// Puts down all that does not follow from configuration and plan.
    pub fn keep(&self, kept: &mut Kept) {
        kept.float(self.step_day);
        kept.count(u64::from(self.adaptive));
        kept.count(self.passages);
        kept.float(self.passage_error);
        for count in [self.blocks, self.blocks_done, u64::from(self.redone)] {
            kept.count(count);
        }
        self.conserved.keep(kept);
        self.extent.keep(kept);
        self.growth.keep(kept);
        self.long.keep(kept);
        let approach = self.approach.map_or([f64::NAN; 2], |a| [a.au, a.hill]);
        let (i, j) = self.approach.map_or((0, 0), |a| a.pair);
        kept.count(u64::from(self.mean_megno.is_some()));
        kept.float(self.mean_megno.unwrap_or(f64::NAN));
        kept.count(u64::from(self.approach.is_some()));
        kept.floats(&approach);
        kept.count(i as u64);
        kept.count(j as u64);
    }

    /// Takes up what was put down of a cell of the same configuration and plan.
    pub fn restore(&mut self, kept: &mut KeptReader<'_>) -> Option<()> {
        self.step_day = kept.float()?;
        if kept.count()? != 0 {
            self.adaptive = true;
            self.conserved = ConservedWatch::new(&self.stated, &self.terms);
        }
        self.passages = kept.count()?;
        self.passage_error = kept.float()?;
        self.blocks = kept.count()?;
        self.blocks_done = kept.count()?;
        self.redone = u32::try_from(kept.count()?).ok()?;
        self.conserved.restore(kept)?;
        self.extent.restore(kept)?;
        self.growth.restore(kept)?;
        self.long.restore(kept)?;
        let measured = kept.count()? != 0;
        self.mean_megno = Some(kept.float()?).filter(|_| measured);
        let met = kept.count()? != 0;
        let approach =
            Approach { au: kept.float()?, hill: kept.float()?, pair: (kept.size()?, kept.size()?) };
        self.approach = Some(approach).filter(|_| met);
        Some(())
    }

    pub fn share_done(&self) -> f64 {
        self.blocks_done as f64 / self.blocks as f64
    }

    /// Relative errors of energy and angular momentum at the last look; of the energy the largest so far where the adaptive
    /// engine's own account is all there is.
    pub fn last_errors(&self) -> (f64, f64) {
        let own = self.adaptive && self.terms.relativity != 0.0;
        let energy = if own { self.passage_error } else { self.conserved.last_energy };
        (energy, self.conserved.last_momentum)
    }

    pub fn worst_energy_error(&self) -> f64 {
        self.energy_error_seen()
    }

    pub fn mean_megno(&self) -> Option<f64> {
        self.mean_megno
    }

    /// The start as stated.
    pub fn stated(&self) -> &State {
        &self.stated
    }

    /// A state that the cell has reached, for elements to be told of: with relativity a symplectic scheme moves with
    /// velocities of its own (`rate_matched`), which are taken back.
    pub fn shown(&self, state: State) -> State {
        if self.adaptive || self.terms.relativity == 0.0 { state } else { as_stated(&state) }
    }

    pub fn step_day(&self) -> f64 {
        self.step_day
    }

    pub fn redone(&self) -> u32 {
        self.redone
    }

    /// Whether the adaptive engine does everything.
    pub fn is_adaptive(&self) -> bool {
        self.adaptive
    }

    /// Blocks that the adaptive engine did.
    pub fn passages(&self) -> u64 {
        self.passages
    }

    pub fn blocks(&self) -> u64 {
        self.blocks
    }

    pub fn blocks_done(&self) -> u64 {
        self.blocks_done
    }
}
