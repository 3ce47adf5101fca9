//! What is watched over the whole span of a cell, where the plan asks for it: mean motions and an angle.

use crate::assess::AngleFound;
use crate::assess::plan::Plan;
use crate::coords::{Configuration, Elements};
use crate::num::{Kept, KeptReader};
use crate::observe::{AngleWatch, MotionWatch};

#[derive(Clone, Debug)]
pub(super) struct LongWatch {
    mass_parameters: Vec<f64>,
    motion: Option<MotionWatch>,
    angle: Option<AngleWatch>,
}

impl LongWatch {
    pub fn new(configuration: &Configuration) -> LongWatch {
        let orbits = configuration.orbits();
        let mass_parameters = orbits.iter().map(|orbit| orbit.mass_parameter).collect();
        LongWatch { mass_parameters, motion: None, angle: None }
    }

    /// Begins, with blocks of so many days.
    pub fn begin(&mut self, plan: &Plan, block_day: f64) {
        let parameters = &self.mass_parameters;
        self.motion = plan.frequency_drift.then(|| MotionWatch::new(parameters, block_day));
        self.angle = plan.angle.clone().map(|angle| AngleWatch::new(angle, parameters, block_day));
    }

    /// Whether anything is watched.
    pub fn is_on(&self) -> bool {
        self.motion.is_some() || self.angle.is_some()
    }

    pub fn see(&mut self, orbits: &[Elements]) {
        if let Some(motion) = &mut self.motion {
            motion.see(orbits);
        }
        if let Some(angle) = &mut self.angle {
            angle.see(orbits);
        }
    }

    /// log₁₀ of the relative change of each mean motion; empty when not measured.
    pub fn drift(&self) -> Vec<f64> {
        let drift = self.motion.as_ref().and_then(MotionWatch::drift).unwrap_or_default();
        drift.iter().map(|drift| drift.log10()).collect()
    }

    pub fn angle(&self) -> Option<AngleFound> {
        self.angle.as_ref().and_then(AngleWatch::motion).map(AngleFound::of)
    }

    pub fn keep(&self, kept: &mut Kept) {
        if let Some(motion) = &self.motion {
            motion.keep(kept);
        }
        if let Some(angle) = &self.angle {
            angle.keep(kept);
        }
    }

    /// Takes up what was put down under the same plan.
    pub fn restore(&mut self, kept: &mut KeptReader<'_>) -> Option<()> {
        if let Some(motion) = &mut self.motion {
            motion.restore(kept)?;
        }
        if let Some(angle) = &mut self.angle {
            angle.restore(kept)?;
        }
        Some(())
    }
}
