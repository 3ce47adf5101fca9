//! How well energy and angular momentum are kept.

use std::borrow::Cow;

use super::Moment;
use crate::integrate::{StarTerms, State, angular_momentum, energy};
use crate::num::{Kept, KeptReader};

/// Largest relative errors seen, against the start.
///
/// |E − E₀|/|E₀| and |L − L₀|/|L₀|. What is not a number counts as infinitely wrong.
#[derive(Clone, Debug, PartialEq)]
pub struct ConservedWatch {
    energy: f64,
    momentum: [f64; 3],
    pub worst_energy: f64,
    pub worst_momentum: f64,
    /// At the last moment seen.
    pub last_energy: f64,
    pub last_momentum: f64,
}

impl ConservedWatch {
    pub fn new(start: &State, terms: &StarTerms) -> ConservedWatch {
        let start = weighty(start);
        ConservedWatch {
            energy: energy(&start) + terms.energy(&start),
            momentum: angular_momentum(&start),
            worst_energy: 0.0,
            worst_momentum: 0.0,
            last_energy: 0.0,
            last_momentum: 0.0,
        }
    }

    /// Puts down what was seen; what holds at the start follows from the start.
    pub fn keep(&self, kept: &mut Kept) {
        kept.floats(&[self.worst_energy, self.worst_momentum, self.last_energy, self.last_momentum]);
    }

    pub fn restore(&mut self, kept: &mut KeptReader<'_>) -> Option<()> {
        self.worst_energy = kept.float()?;
        self.worst_momentum = kept.float()?;
        self.last_energy = kept.float()?;
        self.last_momentum = kept.float()?;
        Some(())
    }

    pub fn see(&mut self, moment: &Moment<'_>, terms: &StarTerms) {
        let state = weighty(moment.state);
        let relative = ((energy(&state) + terms.energy(&state) - self.energy) / self.energy).abs();
        self.last_energy = finite_or_worst(relative);
        self.worst_energy = self.worst_energy.max(self.last_energy);
        let now = angular_momentum(&state);
        let gap = length([0, 1, 2].map(|k| now[k] - self.momentum[k]));
        self.last_momentum = finite_or_worst(gap / length(self.momentum));
        self.worst_momentum = self.worst_momentum.max(self.last_momentum);
    }
}

/// A state with a mass to weigh: when no planet has any, each gets the same, far too small to be felt.
fn weighty(state: &State) -> Cow<'_, State> {
    if state.gm.iter().any(|gm| *gm != 0.0) {
        return Cow::Borrowed(state);
    }
    let mut weighty = state.clone();
    weighty.gm.fill(1e-25 * state.star_gm);
    Cow::Owned(weighty)
}

fn finite_or_worst(error: f64) -> f64 {
    if error.is_finite() { error } else { f64::INFINITY }
}

fn length(v: [f64; 3]) -> f64 {
    v.iter().map(|x| x * x).sum::<f64>().sqrt()
}
