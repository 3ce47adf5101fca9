//! Does an angle librate? Told from the whole span of the unwrapped angle.

use crate::num::{FEWEST_SAMPLES, FourierError, Search, decompose_real, wrap_half_turn, wrap_turn};
use std::f64::consts::{PI, TAU};

/// Fewest libration periods that the span must hold.
const FEWEST_PERIODS: f64 = 2.0;
/// A drift over the span, against the amplitude of the swing, beyond which the angle may be leaving.
pub(super) const LEAVING: f64 = 0.5;
/// A step between samples larger than this may be a turn in the other direction.
pub(super) const LARGEST_STEP: f64 = 0.8 * PI;
/// Share of such steps beyond which the angle cannot be followed from sample to sample.
pub(super) const FEW_STEPS: f64 = 0.002;

/// How an angle moves over the span.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum AngleMotion {
    /// It swings about a centre and never turns once.
    Librates(Libration),
    /// It turns, always or on the whole in one direction: mean rate, rad/day.
    Circulates { rate_rad_day: f64 },
    /// It has turned in both directions: it changes between libration and circulation.
    Alternates { turns: f64 },
    /// The span or the sampling does not tell.
    CannotTell(WhyNot),
}

/// A libration over the span.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Libration {
    /// Mean of the angle with Hann's weights, rad in [0, 2π).
    pub centre: f64,
    /// Largest departure from it, rad.
    pub amplitude: f64,
    /// Amplitude (rad) and period (day) of the strongest term.
    pub main_amplitude: f64,
    pub main_period_day: f64,
}

/// Why an angle's motion is not told.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum WhyNot {
    /// The angle stays within a turn, but the span holds fewer than two of its periods: it may be slow circulation.
    ShortSpan { range: f64 },
    /// Fast terms swing while the mean drifts towards a turn: half-range and drift over the span, rad.
    Drifting { half_range: f64, drift: f64 },
    /// Samples too far apart to follow the angle.
    SparseSamples,
}

/// The angle followed from sample to sample, without jumps of a turn; none when steps are too large to tell.
fn unwrapped(angles: &[f64]) -> Option<Vec<f64>> {
    let mut all = Vec::with_capacity(angles.len());
    let mut large = 0usize;
    for angle in angles {
        let before = all.last().copied().unwrap_or(*angle);
        let step = wrap_half_turn(angle - before);
        large += usize::from(step.abs() > LARGEST_STEP);
        all.push(before + step);
    }
    (large as f64 <= FEW_STEPS * angles.len() as f64).then_some(all)
}

/// How an angle moves, from its values (rad, any turn) at even times.
///
/// The angle is unwrapped. A range of a turn or more with a net motion of at least one turn is circulation; with a net motion
/// of less than half the range it alternates, between them the span does not tell. A range below a turn is libration only if the angle goes through its mean there and back in at
/// least two whole periods of its strongest term and through its mean in each third of the span, and its mean does not
/// drift by more than half of that term's amplitude over the span (straight line through the angle less that term); else
/// the span does not tell.
/// Errors: [`FourierError`] for too few samples or values that are not finite.
pub fn angle_motion(angles: &[f64], step_day: f64) -> Result<AngleMotion, FourierError> {
    Ok(told_motion(angles, step_day)?.0)
}

/// [`angle_motion`], and whether a Fourier fit was needed to tell it: the unwrapped angle alone tells most.
pub(super) fn told_motion(angles: &[f64], step_day: f64) -> Result<(AngleMotion, bool), FourierError> {
    if let Some(index) = angles.iter().position(|angle| !angle.is_finite()) {
        return Err(FourierError::NotFinite { index });
    }
    let Some(angle) = unwrapped(angles) else {
        return Ok((AngleMotion::CannotTell(WhyNot::SparseSamples), false));
    };
    let least = angle.iter().copied().fold(f64::MAX, f64::min);
    let most = angle.iter().copied().fold(f64::MIN, f64::max);
    motion_and_fit(&angle, [least, most], step_day)
}

/// [`angle_motion`] of an angle that has been unwrapped already; `ends` are its smallest and largest value, also between
/// these times.
pub(super) fn unwrapped_motion(
    angle: &[f64],
    ends: [f64; 2],
    step_day: f64,
) -> Result<AngleMotion, FourierError> {
    Ok(motion_and_fit(angle, ends, step_day)?.0)
}

fn motion_and_fit(angle: &[f64], ends: [f64; 2], step_day: f64) -> Result<(AngleMotion, bool), FourierError> {
    let range = ends[1] - ends[0];
    if range < TAU {
        let mean = centre(angle);
        let swing: Vec<f64> = angle.iter().map(|angle| angle - mean).collect();
        // What does not come back to its mean in each third of the span is not told, whatever its terms are.
        let third = |third: usize| &swing[third * swing.len() / 3..(third + 1) * swing.len() / 3];
        if swing.len() >= FEWEST_SAMPLES && !(0..3).all(|part| crosses(third(part))) {
            return Ok((AngleMotion::CannotTell(WhyNot::ShortSpan { range }), false));
        }
        return Ok((within_a_turn(&swing, mean, ends, step_day)?, true));
    }
    let net = angle.last().zip(angle.first()).map_or(0.0, |(last, first)| last - first);
    let span_day = step_day * (angle.len() - 1) as f64;
    // Libration with circulation between: the way to and fro is longer than the way gained.
    let motion = if net.abs() < 0.5 * range {
        AngleMotion::Alternates { turns: range / TAU }
    } else if net.abs() >= TAU {
        AngleMotion::Circulates { rate_rad_day: net / span_day }
    } else {
        // One way, and not yet around: fast terms alone make the range a turn.
        AngleMotion::CannotTell(WhyNot::ShortSpan { range })
    };
    Ok((motion, false))
}

/// Of an angle that comes back to its mean: `swing` is what is left without that mean.
fn within_a_turn(
    swing: &[f64],
    mean: f64,
    ends: [f64; 2],
    step_day: f64,
) -> Result<AngleMotion, FourierError> {
    let range = ends[1] - ends[0];
    let span_day = step_day * (swing.len() - 1) as f64;
    let amplitude = (ends[1] - mean).max(mean - ends[0]);
    let waves = decompose_real(swing, step_day, Search { most: 4, window_power: 1 })?;
    // Noise, or an angle that stands still: nothing shows that it would come back.
    let Some(main) = waves.first() else {
        return Ok(AngleMotion::CannotTell(WhyNot::ShortSpan { range }));
    };
    if main.frequency * span_day < FEWEST_PERIODS * TAU {
        return Ok(AngleMotion::CannotTell(WhyNot::ShortSpan { range }));
    }
    let rest: Vec<f64> = swing
        .iter()
        .enumerate()
        .map(|(k, x)| x - main.amplitude * (main.frequency * step_day * k as f64 + main.phase).cos())
        .collect();
    let drift = slope(&rest) * (rest.len() - 1) as f64;
    if drift.abs() > LEAVING * main.amplitude {
        return Ok(AngleMotion::CannotTell(WhyNot::Drifting { half_range: 0.5 * range, drift }));
    }
    Ok(AngleMotion::Librates(Libration {
        centre: wrap_turn(mean),
        amplitude,
        main_amplitude: main.amplitude,
        main_period_day: TAU / main.frequency,
    }))
}

/// Whether values go from one side of zero to the other.
fn crosses(values: &[f64]) -> bool {
    values.iter().any(|value| *value > 0.0) && values.iter().any(|value| *value < 0.0)
}

/// Mean with Hann's weights, so that a last piece of a period does not pull it aside.
fn centre(angle: &[f64]) -> f64 {
    let count = angle.len() as f64;
    let weights = (0..angle.len()).map(|k| 1.0 - (TAU * (k as f64 + 0.5) / count).cos());
    angle.iter().zip(weights).map(|(angle, weight)| angle * weight).sum::<f64>() / count
}

/// Slope of the straight line through values at 0, 1, 2 …
pub(super) fn slope(values: &[f64]) -> f64 {
    let middle = 0.5 * (values.len() as f64 - 1.0);
    let (mut up, mut across) = (0.0, 0.0);
    for (k, value) in values.iter().enumerate() {
        let place = k as f64 - middle;
        up += place * value;
        across += place * place;
    }
    if across > 0.0 { up / across } else { 0.0 }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn told(count: usize, angle: impl Fn(f64) -> f64) -> AngleMotion {
        let angles: Vec<f64> = (0..count).map(|k| wrap_turn(angle(k as f64))).collect();
        angle_motion(&angles, 1.0).unwrap()
    }

    #[test]
    fn a_libration_across_zero() {
        let AngleMotion::Librates(found) =
            told(2000, |t| 0.1 + 1.2 * (t / 30.0).sin() + 0.1 * (t / 3.0).cos())
        else {
            panic!("not seen");
        };
        assert!((found.centre - 0.1).abs() < 0.02, "{found:?}");
        assert!((found.main_amplitude - 1.2).abs() < 1e-6, "{found:?}");
        assert!((found.main_period_day / (TAU * 30.0) - 1.0).abs() < 1e-6, "{found:?}");
        assert!((found.amplitude - 1.3).abs() < 0.02, "{found:?}");
    }

    #[test]
    fn a_libration_of_nearly_a_turn() {
        let motion = told(4000, |t| PI + 3.1 * (t / 40.0).sin());
        assert!(matches!(motion, AngleMotion::Librates(l) if (l.centre - PI).abs() < 0.1), "{motion:?}");
    }

    #[test]
    fn circulation_fast_slow_and_uneven() {
        for rate in [0.5, 0.0104, -0.02] {
            let motion = told(1000, |t| rate * t + 0.8 * (rate * t).sin());
            let AngleMotion::Circulates { rate_rad_day } = motion else { panic!("{rate}: {motion:?}") };
            assert!((rate_rad_day / rate - 1.0).abs() < 0.2, "{rate_rad_day}");
        }
    }

    /// Slow circulation looks narrow when the span is short: it is never called libration.
    #[test]
    fn slow_circulation_is_not_libration() {
        for turns in [0.05, 0.2, 0.5, 0.9] {
            let rate = turns * TAU / 1000.0;
            for phase in 0..8 {
                // Sticky: slow near 0, fast elsewhere.
                let motion = told(1000, |t| rate * t + 0.9 * (rate * t + f64::from(phase)).sin());
                assert!(matches!(motion, AngleMotion::CannotTell(_)), "{turns} {phase}: {motion:?}");
                // With fast terms on top, as synodic ones are, and stronger ones, as of nearly circular orbits.
                for size in [0.1, 0.5] {
                    let motion = told(1000, |t| rate * t + size * (0.9 * t + f64::from(phase)).sin());
                    assert!(matches!(motion, AngleMotion::CannotTell(_)), "{turns} {phase}: {motion:?}");
                }
            }
        }
    }

    /// A libration of which the span holds 1.5 periods is not told; 2.5 are enough.
    #[test]
    fn the_span_must_hold_two_periods() {
        for phase in 0..8 {
            let at =
                |periods: f64| told(1000, |t| 1.0 + (TAU * periods * t / 1000.0 + f64::from(phase)).sin());
            assert!(matches!(at(0.7), AngleMotion::CannotTell(_)), "{phase} {:?}", at(0.7));
            assert!(matches!(at(1.5), AngleMotion::CannotTell(_)), "{phase} {:?}", at(1.5));
            assert!(matches!(at(2.5), AngleMotion::Librates(_)), "{phase} {:?}", at(2.5));
        }
    }

    /// A slow bend of less than two periods under fast terms, whatever line is the strongest of it.
    #[test]
    fn a_slow_bend_under_fast_terms_is_not_libration() {
        for phase in 0..8 {
            let motion = told(4000, |t| {
                let slow = 0.9 * (TAU * 0.6 * t / 4000.0 + f64::from(phase)).cos().powi(3);
                slow + 0.05 * (0.7 * t).sin()
            });
            assert!(matches!(motion, AngleMotion::CannotTell(_)), "{phase}: {motion:?}");
        }
    }

    /// Libration, then a turn and back: neither of the two.
    #[test]
    fn an_angle_that_does_both() {
        let motion = told(3000, |t| 4.0 * (t / 200.0).sin() + 1.0 * (t / 20.0).sin());
        assert!(matches!(motion, AngleMotion::Alternates { .. }), "{motion:?}");
    }

    #[test]
    fn sparse_samples_are_said_to_be_sparse() {
        let motion = told(1000, |t| 2.9 * t);
        assert_eq!(motion, AngleMotion::CannotTell(WhyNot::SparseSamples));
        assert!(angle_motion(&[0.0; 3], 1.0).is_err());
        assert!(angle_motion(&[f64::NAN; 30], 1.0).is_err());
        assert_eq!(told(100, |_| 1.0), AngleMotion::CannotTell(WhyNot::ShortSpan { range: 0.0 }));
    }
}
