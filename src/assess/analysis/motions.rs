//! Mean motions told without folding, their drift, and how far slow frequencies are known.

use std::f64::consts::{PI, TAU};

use super::{DriftFrom, NotAnalysed, Watch};
use crate::num::FourierError;
use crate::observe::{
    ElementSeries, FrequencyDrift, MotionDrift, Spectra, frequency_drift_near, mean_motions,
};

/// Parts of a whole turn per sample by which two windows may differ, so that the turns between are told.
const TURNS_TOLD: f64 = 0.25;
/// How well a window tells a frequency, in its resolution elements.
const WINDOW_ERROR: f64 = 0.1;

/// Mean motions and how they drift.
pub(super) struct Motions {
    /// Told without folding, rad/day.
    pub near: Vec<f64>,
    pub drift: FrequencyDrift,
    pub from: DriftFrom,
}

impl Motions {
    pub fn of(series: &ElementSeries<'_>, dense: &[ElementSeries<'_>]) -> Result<Motions, FourierError> {
        let osculating = |series: &ElementSeries<'_>| -> Vec<f64> {
            (0..series.planets()).map(|planet| series.osculating_motion(planet)).collect()
        };
        let in_windows = dense
            .iter()
            .map(|window| mean_motions(window, &osculating(window)))
            .collect::<Result<Vec<_>, _>>()?;
        let (Some(first), Some(last)) = (in_windows.first(), in_windows.last()) else {
            let near = osculating(series);
            let drift = frequency_drift_near(series, &near)?;
            return Ok(Motions { near, drift, from: DriftFrom::Halves });
        };
        let near: Vec<f64> = first.iter().zip(last).map(|(a, b)| 0.5 * (a + b)).collect();
        let fold = TAU / series.step_day();
        let drift = frequency_drift_near(series, &near)?;
        let apart = |a: f64, b: f64| (a - b).abs() > TURNS_TOLD * fold;
        let halves = drift.of_planets.iter().zip(&near);
        let told = first.iter().zip(last).all(|(a, b)| !apart(*a, *b))
            && halves.clone().all(|(d, n)| !apart(d.first_rad_day, *n) && !apart(d.second_rad_day, *n));
        if told {
            return Ok(Motions { near, drift, from: DriftFrom::Halves });
        }
        let each = first.iter().zip(last);
        let each = each.map(|(a, b)| MotionDrift { first_rad_day: *a, second_rad_day: *b });
        Ok(Motions { near, drift: FrequencyDrift::of(each.collect())?, from: DriftFrom::Windows })
    }
}

/// Whole turns per sample, where slow variables may be fast enough to be folded.
pub(super) fn known_up_to(
    series: &ElementSeries<'_>,
    dense: &[ElementSeries<'_>],
    spectra: &Spectra,
    watch: &mut Watch<'_>,
) -> Result<Option<f64>, NotAnalysed> {
    let fastest = |spectra: &Spectra| {
        let lines = spectra.pericentres.iter().chain(&spectra.nodes).filter_map(|s| s.lines.first());
        lines.map(|line| line.frequency.abs()).fold(0.0, f64::max)
    };
    let fold = TAU / series.step_day();
    let dense_enough = (0..series.planets()).all(|k| series.osculating_motion(k) * series.step_day() < PI);
    if dense_enough {
        return Ok(None);
    }
    if dense.is_empty() {
        return Ok((fastest(spectra) > 0.25 * fold).then_some(fold));
    }
    for window in dense {
        let osculating: Vec<f64> = (0..window.planets()).map(|k| window.osculating_motion(k)).collect();
        watch.expect_signals(Spectra::signals(window));
        let massless = vec![false; window.planets()];
        let spectra = Spectra::step_by_step(window, &osculating, &massless, || watch.signal())?;
        let limit = fastest(&spectra) + WINDOW_ERROR * TAU / window.span_day();
        if limit > 0.5 * fold {
            return Ok(Some(fold));
        }
    }
    Ok(None)
}
