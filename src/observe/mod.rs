//! Observers: they see moments of the motion and never change it.

mod combination;
mod conserved;
mod even_rows;
mod extent;
mod frequency;
mod growth;
mod libration;
mod namer;
mod quasi_periodic;
mod resonance;
mod series;
mod told;
mod watch;

pub use combination::{Combination, Fundamental, Kind, Rule};
pub use conserved::ConservedWatch;
pub use extent::{Extent, ExtentWatch, Range};
pub use frequency::{
    FrequencyDrift, MotionDrift, frequency_drift, frequency_drift_near, fundamental_nodes, fundamentals,
    mean_motions, motion_drift,
};
pub use growth::{GrowthRecord, Lyapunov};
pub use libration::{AngleMotion, Libration, WhyNot, angle_motion};
pub use namer::Namer;
pub use quasi_periodic::{
    NamedLine, QuasiPeriodic, Spectra, angle_lines, libration_frequency, named_angle, named_angle_by,
};
pub use resonance::{AngleReport, Candidate, NotInvariant, ResonantAngle, resonant_motion};
pub use series::{ElementSeries, SeriesError};
pub use told::{AngleSamples, Arc, ToldAngle, ToldFrom, told_angle};
pub use watch::{AngleWatch, MOST_ROWS, MotionWatch};

use crate::coords::{Elements, Shape, elements_in};
use crate::integrate::State;
use crate::system::Frame;

/// A state of the motion at a time since the epoch.
#[derive(Clone, Copy, Debug)]
pub struct Moment<'a> {
    pub time_day: f64,
    /// True state (not the map's own variables).
    pub state: &'a State,
}

impl Moment<'_> {
    /// Osculating elements of every body in a frame.
    pub fn elements(&self, frame: Frame) -> Vec<Elements> {
        let (state, vel) = (self.state, self.velocities());
        if frame != Frame::Astrocentric {
            return elements_in(frame, state.star_gm, &state.gm, &state.pos, &vel);
        }
        let each = state.gm.iter().zip(&state.pos).zip(&vel);
        each.map(|((gm, pos), vel)| Elements::from_state(state.star_gm + gm, *pos, *vel)).collect()
    }

    /// Size, form and tilt of every osculating orbit: those of [`Moment::elements`].
    pub fn shapes(&self, frame: Frame) -> Vec<Shape> {
        if frame != Frame::Astrocentric {
            return self.elements(frame).iter().map(Elements::shape).collect();
        }
        let (state, vel) = (self.state, self.velocities());
        let each = state.gm.iter().zip(&state.pos).zip(&vel);
        each.map(|((gm, pos), vel)| Shape::from_state(state.star_gm + gm, *pos, *vel)).collect()
    }

    /// Relative to the star.
    fn velocities(&self) -> Vec<[f64; 3]> {
        let state = self.state;
        let mut star = [0.0; 3];
        for (gm, vel) in state.gm.iter().zip(&state.vel) {
            for k in 0..3 {
                star[k] -= gm * vel[k] / state.star_gm;
            }
        }
        let relative = |vel: &[f64; 3]| [0, 1, 2].map(|k| vel[k] - star[k]);
        state.vel.iter().map(relative).collect()
    }
}
