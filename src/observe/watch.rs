//! What is watched of a cell at the ends of its blocks: mean longitudes for the drift of the mean motions, and one angle.
//! Memory is bounded however long the span.

use super::even_rows::EvenRows;
use super::frequency::{MotionDrift, motion_drift};
use super::libration::{AngleMotion, FEW_STEPS, LARGEST_STEP, WhyNot, unwrapped_motion};
use super::resonance::ResonantAngle;
use crate::coords::Elements;
use crate::num::{Complex, Kept, KeptReader, wrap_half_turn};

/// Rows that a watch keeps at most; between half of it and this when there were more.
pub const MOST_ROWS: usize = 2048;

/// a exp(iλ) of every planet at even times.
#[derive(Clone, Debug, PartialEq)]
pub struct MotionWatch {
    /// G (star + planet) per planet, au³ day⁻².
    mass_parameters: Vec<f64>,
    call_day: f64,
    rows: EvenRows,
}

impl MotionWatch {
    /// `call_day` is the time between two calls of [`MotionWatch::see`].
    pub fn new(mass_parameters: &[f64], call_day: f64) -> MotionWatch {
        let rows = EvenRows::new(2 * mass_parameters.len(), MOST_ROWS);
        MotionWatch { mass_parameters: mass_parameters.to_vec(), call_day, rows }
    }

    pub fn see(&mut self, orbits: &[Elements]) {
        let pair = |orbit: &Elements| {
            let (sin, cos) = orbit.mean_longitude().sin_cos();
            // An orbit that is not bound has no mean motion; the whole drift is then not told.
            let axis = if orbit.eccentricity < 1.0 { orbit.semi_major_axis_au } else { f64::NAN };
            [axis * cos, axis * sin]
        };
        self.rows.see(orbits.iter().flat_map(pair));
    }

    /// The drift of every planet; none when there are too few rows, or a planet was unbound in one.
    pub fn drift(&self) -> Option<Vec<MotionDrift>> {
        let step_day = self.call_day * self.rows.stride();
        let each = self.mass_parameters.iter().enumerate().map(|(planet, mass_parameter)| {
            let number = |row: &[f64]| Complex::new(row[2 * planet], row[2 * planet + 1]);
            let signal: Vec<Complex> = self.rows.rows().map(number).collect();
            motion_drift(&signal, *mass_parameter, step_day).ok()
        });
        each.collect()
    }

    pub fn keep(&self, kept: &mut Kept) {
        kept.float(self.call_day);
        self.rows.keep(kept);
    }

    pub fn restore(&mut self, kept: &mut KeptReader<'_>) -> Option<()> {
        self.call_day = kept.float()?;
        self.rows.restore(kept)
    }
}

/// One angle followed from call to call without jumps of a turn.
///
/// Σ j λ + Σ k ϖ may turn more than once between two calls. So each step is taken next to what the osculating mean motions
/// make it, Δt Σ j (n + n′)/2, and only what is left is a matter of turns: short-period terms of n are far too small to
/// make that half a turn, and a libration is followed as long as it has more than about four calls in a period.
#[derive(Clone, Debug, PartialEq)]
pub struct AngleWatch {
    angle: ResonantAngle,
    mass_parameters: Vec<f64>,
    call_day: f64,
    /// Unwrapped value and Σ j n (rad/day) at the last call.
    last: Option<[f64; 2]>,
    /// Smallest and largest value.
    ends: [f64; 2],
    /// Steps that left more than [`LARGEST_STEP`].
    large: u64,
    rows: EvenRows,
}

impl AngleWatch {
    pub fn new(angle: ResonantAngle, mass_parameters: &[f64], call_day: f64) -> AngleWatch {
        AngleWatch {
            angle,
            mass_parameters: mass_parameters.to_vec(),
            call_day,
            last: None,
            ends: [f64::INFINITY, f64::NEG_INFINITY],
            large: 0,
            rows: EvenRows::new(1, MOST_ROWS),
        }
    }

    pub fn see(&mut self, orbits: &[Elements]) {
        let value = self.angle.value(orbits);
        let motion = |orbit: &Elements, parameter: f64| (parameter / orbit.semi_major_axis_au.powi(3)).sqrt();
        let terms = self.angle.longitudes().iter().zip(orbits.iter().zip(&self.mass_parameters));
        let turning = terms.filter(|(j, _)| **j != 0);
        let rate: f64 =
            turning.map(|(j, (orbit, parameter))| f64::from(*j) * motion(orbit, *parameter)).sum();
        let now = match self.last {
            None => value,
            Some([before, rate_before]) => {
                let expected = before + 0.5 * (rate + rate_before) * self.call_day;
                let left = wrap_half_turn(value - expected);
                self.large += u64::from(left.abs() > LARGEST_STEP);
                expected + left
            }
        };
        self.last = Some([now, rate]);
        self.ends = [self.ends[0].min(now), self.ends[1].max(now)];
        self.rows.see(std::iter::once(now));
    }

    /// How the angle moved; none when there are too few rows, or a planet was unbound at one of them.
    ///
    /// Told as [`super::angle_motion`] tells it, from the whole span.
    pub fn motion(&self) -> Option<AngleMotion> {
        if self.large as f64 > FEW_STEPS * self.rows.calls() as f64 {
            return Some(AngleMotion::CannotTell(WhyNot::SparseSamples));
        }
        let values: Vec<f64> = self.rows.rows().map(|row| row[0]).collect();
        let finite = values.last().is_some_and(|value| value.is_finite());
        let step_day = self.call_day * self.rows.stride();
        finite.then(|| unwrapped_motion(&values, self.ends, step_day).ok()).flatten()
    }

    pub fn keep(&self, kept: &mut Kept) {
        kept.count(u64::from(self.last.is_some()));
        kept.floats(&self.last.unwrap_or([0.0; 2]));
        kept.floats(&self.ends);
        kept.count(self.large);
        kept.float(self.call_day);
        self.rows.keep(kept);
    }

    pub fn restore(&mut self, kept: &mut KeptReader<'_>) -> Option<()> {
        let begun = kept.count()? != 0;
        self.last = Some([kept.float()?, kept.float()?]).filter(|_| begun);
        self.ends = [kept.float()?, kept.float()?];
        self.large = kept.count()?;
        self.call_day = kept.float()?;
        self.rows.restore(kept)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::f64::consts::TAU;

    fn orbit(motion: f64, longitude: f64) -> Elements {
        Elements {
            semi_major_axis_au: motion.powf(-2.0 / 3.0),
            eccentricity: 0.05,
            inclination: 0.0,
            ascending_node: 0.0,
            argument_of_pericentre: 0.0,
            mean_anomaly: longitude,
        }
    }

    /// Two planets near 3:2 with φ = 3λ' − 2λ − ϖ given by `phi` and its rate; μ = 1 for both.
    fn watched(calls: usize, call_day: f64, phi: impl Fn(f64) -> (f64, f64)) -> Option<AngleMotion> {
        let angle = ResonantAngle::new(vec![-2, 3], vec![-1, 0]).unwrap();
        let mut watch = AngleWatch::new(angle, &[1.0, 1.0], call_day);
        for call in 1..=calls {
            let t = call as f64 * call_day;
            let (value, rate) = phi(t);
            let inner = TAU * t;
            let outer = (value + 2.0 * inner) / 3.0;
            watch.see(&[orbit(TAU, inner), orbit((rate + 2.0 * TAU) / 3.0, outer)]);
        }
        watch.motion()
    }

    #[test]
    fn fast_circulation_between_sparse_samples_is_seen() {
        // Up to 1.5 turns per call: unwrapping without the mean motions would see anything.
        for rate in [0.05, -0.31, 0.9] {
            let motion = watched(600, 10.0, |t| (rate * t, rate));
            let Some(AngleMotion::Circulates { rate_rad_day }) = motion else { panic!("{rate} {motion:?}") };
            assert!((rate_rad_day / rate - 1.0).abs() < 1e-6, "{rate_rad_day}");
        }
    }

    #[test]
    fn a_libration_with_few_samples_in_a_period_is_seen() {
        let (size, speed) = (1.2, TAU / 29.0);
        for call_day in [4.6, 0.5] {
            let swing = |t: f64| (0.4 + size * (speed * t).sin(), size * speed * (speed * t).cos());
            let motion = watched(5000, call_day, swing);
            let Some(AngleMotion::Librates(found)) = motion else { panic!("{motion:?}") };
            assert!((found.amplitude - size).abs() < 0.01 && (found.centre - 0.4).abs() < 0.01, "{found:?}");
        }
    }

    #[test]
    fn a_drift_of_more_than_half_a_turn_per_sample_is_not_folded_back() {
        // n falls by 0.004 in the middle; a turn per call of 400 days is 0.0157, of 2000 days 0.0031.
        for call_day in [400.0, 2000.0] {
            let mut watch = MotionWatch::new(&[1.0], call_day);
            let mut longitude = 0.0f64;
            for call in 0..1000 {
                let motion = if call < 500 { 1.0 } else { 0.996 };
                longitude += motion * call_day;
                watch.see(&[orbit(motion, longitude)]);
            }
            let drift = watch.drift().unwrap()[0];
            assert!((drift.first_rad_day - 1.0).abs() < 1e-9, "{drift:?}");
            assert!((drift.second_rad_day - 0.996).abs() < 1e-9, "{drift:?}");
        }
    }

    #[test]
    fn what_was_put_down_goes_on_to_the_same_answer() {
        let angle = ResonantAngle::new(vec![-2, 3], vec![-1, 0]).unwrap();
        let fresh = || (MotionWatch::new(&[1.0, 1.0], 7.0), AngleWatch::new(angle.clone(), &[1.0, 1.0], 7.0));
        let see = |watch: &mut (MotionWatch, AngleWatch), call: usize| {
            let t = 7.0 * call as f64;
            let orbits = [orbit(TAU, TAU * t), orbit(4.19, 4.19 * t)];
            watch.0.see(&orbits);
            watch.1.see(&orbits);
        };
        let mut whole = fresh();
        (0..3000).for_each(|call| see(&mut whole, call));
        let mut first = fresh();
        (0..2500).for_each(|call| see(&mut first, call));
        let mut kept = Kept::default();
        first.0.keep(&mut kept);
        first.1.keep(&mut kept);
        let mut second = fresh();
        let mut reader = kept.reader();
        second.0.restore(&mut reader).unwrap();
        second.1.restore(&mut reader).unwrap();
        assert!(reader.is_empty());
        (2500..3000).for_each(|call| see(&mut second, call));
        assert_eq!(second, whole);
        assert_eq!(MotionWatch::new(&[1.0], 1.0).drift(), None);
    }
}
