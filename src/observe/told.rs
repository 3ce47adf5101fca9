//! How an angle moves, told from samples over the whole span and from dense windows at its ends together.

use super::libration::{AngleMotion, LEAVING, Libration, WhyNot, slope, told_motion};
use crate::num::{Complex, FourierError, wrap_half_turn, wrap_turn};
use std::f64::consts::{PI, TAU};

/// Largest expected change between samples of the whole span for which these are followed by themselves.
const FOLLOWED: f64 = 0.6 * PI;
/// Smallest part of the circle that must stay free for an angle to be confined: 20 deg.
const FREE: f64 = 20.0 * PI / 180.0;
/// Fewest samples over the whole span that can show an angle confined: circulation at random phases leaves a
/// twentieth of the circle free among 256 of them once in 400 000 times.
const FEWEST_CONFINED: usize = 256;

/// The arc that holds an angle at every sample.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Arc {
    /// Middle, rad in [0, 2π).
    pub middle: f64,
    pub half_width: f64,
}

/// Which samples told the motion.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ToldFrom {
    /// Samples over the whole span.
    Whole,
    /// Dense windows at its start and end; samples of the whole span say that the angle is confined, or that it is not.
    Windows,
}

/// How an angle moves over the span.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ToldAngle {
    pub motion: AngleMotion,
    pub from: ToldFrom,
    /// The arc that holds the angle at all samples of the whole span; none when they are all around the circle or few.
    pub arc: Option<Arc>,
    /// Fourier fits that it took to tell.
    pub fits: usize,
}

impl ToldAngle {
    /// Librates, with centre and amplitude; or stays within an arc with a period that the samples do not tell.
    pub fn stays(&self) -> bool {
        let unresolved = matches!(self.motion, AngleMotion::CannotTell(WhyNot::SparseSamples));
        matches!(self.motion, AngleMotion::Librates(_)) || (unresolved && self.arc.is_some())
    }

    pub fn libration(&self) -> Option<Libration> {
        match self.motion {
            AngleMotion::Librates(libration) => Some(libration),
            _ => None,
        }
    }
}

/// Values of one angle, rad, any turn.
#[derive(Clone, Copy, Debug)]
pub struct AngleSamples<'a> {
    pub values: &'a [f64],
    pub step_day: f64,
}

/// How an angle moves, from its samples over the whole span and in dense windows (none where there are none).
///
/// Samples far apart fold fast motion into slow: those of the whole span are followed by themselves only while the
/// change between two of them, as the windows show it (or `rate_rad_day`, a mean rate of circulation expected from the
/// mean motions, where there are no windows), stays below 0.6 π, and a libration only while the angle does not swing
/// to and fro between two samples. Else the windows tell circulation, and they tell libration if the
/// angle is confined besides: all samples of the whole span leave 20 deg of the circle free, and do not drift over the span
/// by more than half of the main amplitude. One that librates in the windows and is not confined alternates. Errors: [`FourierError`].
pub fn told_angle(
    whole: AngleSamples<'_>,
    windows: &[AngleSamples<'_>],
    rate_rad_day: f64,
) -> Result<ToldAngle, FourierError> {
    let arc = arc(whole.values);
    let fastest = windows.iter().map(|window| change(window, whole.step_day)).fold(None, larger);
    let fastest = fastest.unwrap_or((rate_rad_day * whole.step_day).abs());
    let mut fits = 0;
    if fastest < FOLLOWED {
        let (motion, fitted) = told_motion(whole.values, whole.step_day)?;
        fits += usize::from(fitted);
        let folded = windows.iter().any(|window| swings_between(window, &whole));
        let sparse = matches!(motion, AngleMotion::CannotTell(WhyNot::SparseSamples));
        let doubtful = sparse || (folded && matches!(motion, AngleMotion::Librates(_)));
        if !doubtful {
            return Ok(ToldAngle { motion, from: ToldFrom::Whole, arc, fits });
        }
    }
    if windows.is_empty() {
        let motion = AngleMotion::CannotTell(WhyNot::SparseSamples);
        return Ok(ToldAngle { motion, from: ToldFrom::Whole, arc, fits });
    }
    let seen = windows
        .iter()
        .map(|window| told_motion(window.values, window.step_day))
        .collect::<Result<Vec<_>, _>>()?;
    fits += seen.iter().filter(|(_, fitted)| *fitted).count();
    let seen: Vec<AngleMotion> = seen.into_iter().map(|(motion, _)| motion).collect();
    Ok(ToldAngle { motion: joined(&seen, arc, whole.values), from: ToldFrom::Windows, arc, fits })
}

fn larger(most: Option<f64>, next: f64) -> Option<f64> {
    Some(most.map_or(next, |most| most.max(next)))
}

/// What windows and confinement say together.
fn joined(seen: &[AngleMotion], arc: Option<Arc>, whole: &[f64]) -> AngleMotion {
    let circulates = |motion: &AngleMotion| matches!(motion, AngleMotion::Circulates { .. });
    if seen.iter().all(circulates) {
        let rates: Vec<f64> = seen
            .iter()
            .filter_map(|motion| match motion {
                AngleMotion::Circulates { rate_rad_day } => Some(*rate_rad_day),
                _ => None,
            })
            .collect();
        return AngleMotion::Circulates { rate_rad_day: rates.iter().sum::<f64>() / rates.len() as f64 };
    }
    let turns = |motion: &AngleMotion| match motion {
        AngleMotion::Circulates { .. } => Some(1.0),
        AngleMotion::Alternates { turns } => Some(*turns),
        _ => None,
    };
    if let Some(turns) = seen.iter().filter_map(turns).reduce(f64::max) {
        return AngleMotion::Alternates { turns };
    }
    let first = seen.iter().find_map(|motion| match motion {
        AngleMotion::Librates(libration) => Some(*libration),
        _ => None,
    });
    match (first, arc) {
        (Some(libration), Some(arc)) => {
            let drift = drift_within(arc, whole);
            if drift.abs() > LEAVING * libration.main_amplitude {
                return AngleMotion::CannotTell(WhyNot::Drifting { half_range: arc.half_width, drift });
            }
            AngleMotion::Librates(Libration { centre: arc.middle, amplitude: arc.half_width, ..libration })
        }
        // In the windows it librates, over the span it is everywhere.
        (Some(_), None) => AngleMotion::Alternates { turns: 1.0 },
        (None, _) => AngleMotion::CannotTell(WhyNot::SparseSamples),
    }
}

/// How far an angle that stays within an arc moves over the span (straight line through its samples), rad: a window is too
/// short to show slow circulation under a fast swing, and the span may not hold a turn of it.
fn drift_within(arc: Arc, whole: &[f64]) -> f64 {
    let about: Vec<f64> = whole.iter().map(|value| wrap_half_turn(value - arc.middle)).collect();
    slope(&about) * (about.len().max(1) - 1) as f64
}

/// Whether a window shows an angle to swing to and fro between two samples of the whole span: over some shorter time it
/// changes (root mean square) by more than 1.3 times its swing, as from less than 4.5 samples to a period.
fn swings_between(window: &AngleSamples<'_>, whole: &AngleSamples<'_>) -> bool {
    let swing = whole.values.iter().map(|value| Complex::from_polar(1.0, *value)).sum::<Complex>();
    let square: f64 = whole.values.iter().map(|v| wrap_half_turn(v - swing.arg()).powi(2)).sum();
    let swing = (square / whole.values.len() as f64).sqrt();
    let longest = window.values.len() / 2;
    let lag = ((whole.step_day / window.step_day) as usize).min(longest);
    // In proportion where the window is too short to show the whole of it.
    let beyond = (whole.step_day / (window.step_day * longest.max(1) as f64)).max(1.0);
    let lags = (1..=LAGS).map(|part| (lag * part / LAGS).max(1));
    lags.into_iter().any(|lag| {
        let pairs = window.values.iter().zip(&window.values[lag.min(longest)..]);
        let (sum, count) =
            pairs.fold((0.0, 0.0), |(sum, count), (a, b)| (sum + wrap_half_turn(b - a).powi(2), count + 1.0));
        (sum / f64::max(count, 1.0)).sqrt() * beyond > BETWEEN * swing
    })
}

const BETWEEN: f64 = 1.3;
/// Parts of the time between two samples that are looked at.
const LAGS: usize = 16;

/// Largest change of an angle over a lag, as a window shows it; in proportion where the lag is longer than the window.
fn change(window: &AngleSamples<'_>, lag_day: f64) -> f64 {
    let mut angle = Vec::with_capacity(window.values.len());
    let mut last = 0.0;
    for (index, value) in window.values.iter().enumerate() {
        last = if index == 0 { *value } else { last + wrap_half_turn(value - last) };
        angle.push(last);
    }
    let longest = angle.len().saturating_sub(1);
    if longest == 0 {
        return 0.0;
    }
    let wanted = lag_day / window.step_day;
    let lag = (wanted.round() as usize).clamp(1, longest);
    let most = angle.iter().zip(&angle[lag..]).map(|(a, b)| (b - a).abs()).fold(0.0, f64::max);
    most * (wanted / lag as f64).max(1.0)
}

/// The shortest arc that holds all values; none when less than [`FREE`] of the circle stays free, or values are few.
fn arc(values: &[f64]) -> Option<Arc> {
    if values.len() < FEWEST_CONFINED || values.iter().any(|value| !value.is_finite()) {
        return None;
    }
    let mut sorted: Vec<f64> = values.iter().map(|value| wrap_turn(*value)).collect();
    sorted.sort_by(f64::total_cmp);
    let around = sorted[0] + TAU;
    let next = sorted.iter().copied().skip(1).chain([around]);
    let gaps = sorted.iter().zip(next).map(|(from, to)| (to - from, to));
    let (free, to) = gaps.max_by(|one, other| one.0.total_cmp(&other.0))?;
    let half_width = 0.5 * (TAU - free);
    (free >= FREE).then(|| Arc { middle: wrap_turn(to + half_width), half_width })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn values(count: usize, step: f64, angle: impl Fn(f64) -> f64) -> Vec<f64> {
        (0..count).map(|k| wrap_turn(angle(k as f64 * step))).collect()
    }

    /// Whole span: 2000 samples 100 apart; windows of 1000 samples 0.5 apart at both ends.
    fn told(angle: impl Fn(f64) -> f64) -> ToldAngle {
        let whole = values(2000, 100.0, &angle);
        let first = values(1000, 0.5, &angle);
        let last = values(1000, 0.5, |t| angle(t + 199_400.0));
        let window = |values| AngleSamples { values, step_day: 0.5 };
        let whole = AngleSamples { values: &whole, step_day: 100.0 };
        told_angle(whole, &[window(&first), window(&last)], 0.0).unwrap()
    }

    #[test]
    fn slow_motion_is_told_from_the_whole_span() {
        let found = told(|t| 1.0 + 0.8 * (t / 900.0).sin());
        let libration = found.libration().unwrap();
        assert_eq!(found.from, ToldFrom::Whole);
        assert!((libration.main_period_day / (TAU * 900.0) - 1.0).abs() < 1e-6, "{found:?}");
        let found = told(|t| t / 2000.0);
        assert!(matches!(found.motion, AngleMotion::Circulates { .. }) && found.arc.is_none(), "{found:?}");
    }

    /// Sampled each 100, a turn in 100.01 looks like a turn in a million and stays within an arc; the windows know better.
    #[test]
    fn folded_circulation_is_seen_through() {
        let found = told(|t| TAU * t / 100.01);
        let AngleMotion::Circulates { rate_rad_day } = found.motion else { panic!("{found:?}") };
        assert!((rate_rad_day * 100.01 / TAU - 1.0).abs() < 1e-3 && found.from == ToldFrom::Windows);
    }

    /// A libration that is fast against the samples of the whole span: period from the windows, width from all.
    #[test]
    fn fast_libration_is_told_from_both() {
        let found = told(|t| 6.2 + (0.9 + 0.3 * (t / 20_000.0).sin()) * (t / 12.3).sin());
        let libration = found.libration().unwrap();
        assert_eq!(found.from, ToldFrom::Windows);
        assert!((libration.main_period_day / (TAU * 12.3) - 1.0).abs() < 1e-3, "{found:?}");
        assert!((libration.amplitude - 1.2).abs() < 0.02, "{found:?}");
        assert!(wrap_half_turn(libration.centre - 6.2).abs() < 0.02, "{found:?}");
    }

    /// It librates in both windows and turns between them.
    #[test]
    fn what_leaves_between_the_windows_alternates() {
        let found = told(|t| {
            let away = if (50_000.0..150_000.0).contains(&t) { t * 0.3 } else { 0.0 };
            away + 0.9 * (t / 12.3).sin()
        });
        assert!(matches!(found.motion, AngleMotion::Alternates { .. }), "{found:?}");
    }

    /// A pericentre that circulates slowly, less than a turn in the span, with a fast forced swing on top: both windows see the
    /// swing only, and all samples stay within an arc.
    #[test]
    fn slow_circulation_under_a_fast_swing_is_not_libration() {
        for drift in [0.4, 0.8, -1.5, 3.0] {
            let found = told(|t| 1.0 + drift * t / 200_000.0 + 0.5 * (TAU * t / 77.0).sin());
            assert!(found.libration().is_none(), "{drift}: {found:?}");
        }
        let found = told(|t| 1.0 + 0.5 * (TAU * t / 77.0).sin());
        assert!(found.libration().is_some(), "{found:?}");
    }

    /// Too slow for the windows and too fast for the whole span: the arc is all that is known.
    #[test]
    fn what_is_only_confined() {
        let found = told(|t| 2.0 + 1.5 * (t / 60.0).sin());
        assert!(found.libration().is_none() && found.stays(), "{found:?}");
        let arc = found.arc.unwrap();
        assert!((arc.middle - 2.0).abs() < 0.01 && (arc.half_width - 1.5).abs() < 0.01, "{found:?}");
    }

    /// A narrow libration folded by the samples of the whole span looks slow; the windows hold less than two of its periods.
    #[test]
    fn a_folded_libration_has_no_period() {
        let found = told(|t| 1.0 + 0.4 * (TAU * t / 137.0).sin());
        assert!(found.stays(), "{found:?}");
        if let Some(libration) = found.libration() {
            assert!((libration.main_period_day / 137.0 - 1.0).abs() < 0.02, "{found:?}");
        }
        let slow = told(|t| 1.0 + 0.4 * (TAU * t / 700.0).sin());
        assert_eq!(slow.from, ToldFrom::Whole, "{slow:?}");
        assert!((slow.libration().unwrap().main_period_day / 700.0 - 1.0).abs() < 1e-6, "{slow:?}");
    }

    #[test]
    fn without_windows_the_mean_motions_warn() {
        let whole = values(2000, 100.0, |t| TAU * t / 100.01);
        let whole = AngleSamples { values: &whole, step_day: 100.0 };
        let found = told_angle(whole, &[], TAU / 100.01).unwrap();
        assert_eq!(found.motion, AngleMotion::CannotTell(WhyNot::SparseSamples));
    }

    #[test]
    fn an_arc_across_zero() {
        let found = arc(&values(400, 1.0, |t| 0.1 + 0.7 * (t / 7.0).sin())).unwrap();
        assert!((found.middle - 0.1).abs() < 1e-3 && (found.half_width - 0.7).abs() < 1e-3, "{found:?}");
        assert_eq!(arc(&values(400, 1.0, |t| t)), None);
        assert_eq!(arc(&[1.0; 10]), None);
    }
}
