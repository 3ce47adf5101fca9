//! How well energy and angular momentum are kept.

use super::Moment;
use crate::integrate::{State, angular_momentum, energy};

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
}

impl ConservedWatch {
    pub fn new(start: &State) -> ConservedWatch {
        ConservedWatch {
            energy: energy(start),
            momentum: angular_momentum(start),
            worst_energy: 0.0,
            worst_momentum: 0.0,
            last_energy: 0.0,
        }
    }

    pub fn see(&mut self, moment: &Moment<'_>) {
        let relative = ((energy(moment.state) - self.energy) / self.energy).abs();
        self.last_energy = finite_or_worst(relative);
        self.worst_energy = self.worst_energy.max(self.last_energy);
        let now = angular_momentum(moment.state);
        let gap = length([0, 1, 2].map(|k| now[k] - self.momentum[k]));
        self.worst_momentum = self.worst_momentum.max(finite_or_worst(gap / length(self.momentum)));
    }
}

fn finite_or_worst(error: f64) -> f64 {
    if error.is_finite() { error } else { f64::INFINITY }
}

fn length(v: [f64; 3]) -> f64 {
    v.iter().map(|x| x * x).sum::<f64>().sqrt()
}
