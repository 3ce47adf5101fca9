//! Observers: they see moments of the motion and never change it.

mod combination;
mod conserved;
mod extent;
mod frequency;
mod growth;
mod libration;
mod quasi_periodic;
mod resonance;
mod series;

pub use combination::{Combination, Fundamental, Kind, Namer, Rule};
pub use conserved::ConservedWatch;
pub use extent::{Extent, ExtentWatch, Range};
pub use frequency::{FrequencyDrift, MotionDrift, frequency_drift, fundamental_nodes, fundamentals};
pub use growth::{GrowthRecord, Lyapunov};
pub use libration::{AngleMotion, Libration, WhyNot, angle_motion};
pub use quasi_periodic::{NamedLine, QuasiPeriodic, quasi_periodic};
pub use resonance::{AngleReport, Candidate, NotInvariant, ResonantAngle, resonant_motion};
pub use series::{ElementSeries, SeriesError};

use crate::coords::Elements;
use crate::integrate::State;

/// A state of the motion at a time since the epoch.
#[derive(Clone, Copy, Debug)]
pub struct Moment<'a> {
    pub time_day: f64,
    /// True state (not the map's own variables).
    pub state: &'a State,
}

impl Moment<'_> {
    /// Osculating astrocentric elements of every planet.
    pub fn astrocentric(&self) -> Vec<Elements> {
        let state = self.state;
        let mut star = [0.0; 3];
        for (gm, vel) in state.gm.iter().zip(&state.vel) {
            for k in 0..3 {
                star[k] -= gm * vel[k] / state.star_gm;
            }
        }
        let each = state.gm.iter().zip(&state.pos).zip(&state.vel);
        each.map(|((gm, pos), vel)| {
            let relative = [0, 1, 2].map(|k| vel[k] - star[k]);
            Elements::from_state(state.star_gm + gm, *pos, relative)
        })
        .collect()
    }
}
