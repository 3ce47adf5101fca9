//! Fundamental frequencies from a series of elements, and their drift as a sign of chaos.

use super::ElementSeries;
use super::combination::{Fundamental, Kind};
use crate::num::{Complex, FourierError, Line, Search, Spectrum, decompose, strongest_line, turn_near};
use std::f64::consts::TAU;

/// Power of the window for a mean motion: its neighbours in the spectrum are far.
const MOTION_WINDOW: u32 = 3;
/// A drift below this is rounding of the elements.
const FINEST_DRIFT: f64 = f64::EPSILON;
/// Lines looked at to tell the modes of slow variables apart.
const MODE_LINES: usize = 12;
pub(super) const MODE_SEARCH: Search = Search { most: MODE_LINES, window_power: 1 };

/// The mean motion of one planet over the two halves of a span.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct MotionDrift {
    pub first_rad_day: f64,
    pub second_rad_day: f64,
}

impl MotionDrift {
    /// log₁₀ |1 − n₂/n₁|; not below log₁₀ of the machine epsilon.
    pub fn log10(&self) -> f64 {
        (1.0 - self.second_rad_day / self.first_rad_day).abs().max(FINEST_DRIFT).log10()
    }
}

/// The drift of every planet.
#[derive(Clone, Debug, PartialEq)]
pub struct FrequencyDrift {
    pub of_planets: Vec<MotionDrift>,
    /// The planet with the largest drift.
    pub worst: usize,
}

impl FrequencyDrift {
    /// Errors: no planets give `TooFew`.
    pub fn of(of_planets: Vec<MotionDrift>) -> Result<FrequencyDrift, FourierError> {
        let worst = (0..of_planets.len())
            .max_by(|one, other| of_planets[*one].log10().total_cmp(&of_planets[*other].log10()))
            .ok_or(FourierError::TooFew { found: 0 })?;
        Ok(FrequencyDrift { of_planets, worst })
    }

    /// log₁₀ |1 − n₂/n₁| of the worst planet.
    pub fn worst_log10(&self) -> f64 {
        self.of_planets[self.worst].log10()
    }
}

/// Drift of the mean motions between the two halves of a series.
///
/// n is the strongest line of a exp(iλ). Regular motion has the same n in both halves, up to the error of the analysis
/// (falls as T⁻⁴ and faster); chaotic motion wanders. See [`motion_drift`] for samples further apart than half an orbit.
/// Errors: [`FourierError`]; the halves need [`crate::num::FEWEST_SAMPLES`] rows each. No planets give `TooFew`.
/// Source: Laskar (1990, 1993); as an indicator for planetary systems Correia et al. (2005).
pub fn frequency_drift(series: &ElementSeries<'_>) -> Result<FrequencyDrift, FourierError> {
    let osculating: Vec<f64> = (0..series.planets()).map(|planet| series.osculating_motion(planet)).collect();
    frequency_drift_near(series, &osculating)
}

/// [`frequency_drift`] with mean motions that are known better than from osculating elements, rad/day per planet.
pub fn frequency_drift_near(
    series: &ElementSeries<'_>,
    near: &[f64],
) -> Result<FrequencyDrift, FourierError> {
    let of_planets = (0..series.planets())
        .zip(near)
        .map(|(planet, near)| {
            let signal = series.motion_signal(planet);
            motion_drift_near(&signal, series.mass_parameter(planet), series.step_day(), *near)
        })
        .collect::<Result<Vec<_>, FourierError>>()?;
    FrequencyDrift::of(of_planets)
}

/// Mean motion of every planet over the whole series, taken next to `near` (rad/day) where samples fold it.
///
/// Errors: [`FourierError`].
pub fn mean_motions(series: &ElementSeries<'_>, near: &[f64]) -> Result<Vec<f64>, FourierError> {
    let each = (0..series.planets()).zip(near).map(|(planet, near)| {
        let line = strongest_line(&series.motion_signal(planet), series.step_day(), MOTION_WINDOW)?;
        Ok(series.unfolded(line, *near))
    });
    each.collect()
}

/// Drift of one planet's mean motion from a exp(iλ) at even times; `mass_parameter` is G (star + planet), au³ day⁻².
///
/// When samples are further apart than half an orbit, n is known up to whole turns per sample. In the first half it is
/// taken next to the mean of the osculating √(μ/a³); in the second next to what is found in the first, moved by the
/// change of that mean, so that a drift of more than half a turn per sample is not folded back.
/// Errors: as [`frequency_drift`].
pub fn motion_drift(
    signal: &[Complex],
    mass_parameter: f64,
    step_day: f64,
) -> Result<MotionDrift, FourierError> {
    let near = osculating(&signal[..signal.len() / 2], mass_parameter);
    motion_drift_near(signal, mass_parameter, step_day, near)
}

/// Mean of the osculating √(μ/a³), rad/day.
fn osculating(signal: &[Complex], mass_parameter: f64) -> f64 {
    let motions = signal.iter().map(|z| (mass_parameter / z.norm().powi(3)).sqrt());
    motions.sum::<f64>() / signal.len() as f64
}

/// [`motion_drift`] with a mean motion that is known better than from osculating elements, rad/day.
fn motion_drift_near(
    signal: &[Complex],
    mass_parameter: f64,
    step_day: f64,
    near: f64,
) -> Result<MotionDrift, FourierError> {
    // Both halves have as many rows; an odd one in the middle is left out.
    let half = signal.len() / 2;
    let (early, late) = (&signal[..half], &signal[signal.len() - half..]);
    let fold = TAU / step_day;
    let first = turn_near(strongest_line(early, step_day, MOTION_WINDOW)?, near, fold);
    let moved = first + (osculating(late, mass_parameter) - osculating(early, mass_parameter));
    let second = turn_near(strongest_line(late, step_day, MOTION_WINDOW)?, moved, fold);
    Ok(MotionDrift { first_rad_day: first, second_rad_day: second })
}

/// Fundamental frequencies of a series: n of every planet, then a g for every planet, each the strongest line of
/// a e exp(iϖ)-like signals that no other planet has taken.
///
/// n from a exp(iλ); g from e exp(iϖ): planets choose in the order of the strength of their lines, so a planet whose
/// eccentricity is forced by another takes its next line. In a resonance the n and g are not independent: see
/// [`super::Fundamental`]; use [`fundamental_nodes`] for the s. Errors: [`FourierError`].
/// Source: Laskar (1990).
pub fn fundamentals(
    series: &ElementSeries<'_>,
    names: &[String],
    search: Search,
) -> Result<Vec<Fundamental>, FourierError> {
    let mut all: Vec<Fundamental> = Vec::new();
    for (planet, name) in names.iter().enumerate().take(series.planets()) {
        let line = strongest_line(&series.motion_signal(planet), series.step_day(), MOTION_WINDOW)?;
        let frequency = series.unfolded(line, series.osculating_motion(planet));
        all.push(Fundamental {
            name: format!("n_{name}"),
            kind: Kind::Motion,
            rad_day: frequency,
            own_of: None,
        });
    }
    let spectra = (0..series.planets())
        .map(|planet| decompose(&series.pericentre_signal(planet), series.step_day(), search))
        .collect::<Result<Vec<_>, _>>()?;
    let motions: Vec<f64> = all.iter().map(|f| f.rad_day).collect();
    let massless = vec![false; series.planets()];
    let choice =
        Choice { motions: &motions, span_day: series.span_day(), massless: &massless, librations: &[] };
    all.extend(numbered(choice.modes(&spectra, series.planets()), &massless, "g", Kind::Pericentre));
    Ok(all)
}

/// Frequencies s of the nodes, each planet's own line of sin(i/2) exp(iΩ); the fixed line of the plane itself is no mode
/// and is left out, so there is one mode fewer than planets. Elements should refer to the invariable plane.
/// Errors: [`FourierError`].
pub fn fundamental_nodes(
    series: &ElementSeries<'_>,
    search: Search,
) -> Result<Vec<Fundamental>, FourierError> {
    let resolution = std::f64::consts::TAU / series.span_day();
    let spectra = (0..series.planets())
        .map(|planet| {
            let mut spectrum = decompose(&series.node_signal(planet), series.step_day(), search)?;
            spectrum.lines.retain(|line| line.frequency.abs() > 0.5 * resolution);
            Ok(spectrum)
        })
        .collect::<Result<Vec<_>, FourierError>>()?;
    let most = series.planets().saturating_sub(1);
    let motions: Vec<f64> = (0..series.planets()).map(|planet| series.osculating_motion(planet)).collect();
    let massless = vec![false; series.planets()];
    let choice =
        Choice { motions: &motions, span_day: series.span_day(), massless: &massless, librations: &[] };
    Ok(numbered(choice.modes(&spectra, most), &massless, "s", Kind::Node))
}

pub(super) fn numbered(
    modes: Vec<Option<f64>>,
    massless: &[bool],
    letter: &str,
    kind: Kind,
) -> Vec<Fundamental> {
    let mode = |(planet, (mode, massless)): (usize, (Option<f64>, &bool))| {
        let (name, own_of) = (format!("{letter}{}", planet + 1), massless.then_some(planet));
        mode.map(|rad_day| Fundamental { name, kind, rad_day, own_of })
    };
    modes.into_iter().zip(massless).enumerate().filter_map(mode).collect()
}

/// Smallest share of a signal that a mode of its own has.
const LEAST_SHARE: f64 = 0.005;
/// Largest frequency of a slow variable, against the planet's own mean motion.
const SLOW: f64 = 0.1;

/// A libration, rad/day, and the massless body that has it (none: bodies that pull).
pub(super) type LibrationOf = (f64, Option<usize>);

/// What decides which lines are modes.
pub(super) struct Choice<'a> {
    /// rad/day per planet.
    pub motions: &'a [f64],
    pub span_day: f64,
    pub massless: &'a [bool],
    pub librations: &'a [LibrationOf],
}

impl Choice<'_> {
    /// One line per planet, none taken twice and at most `most` of the planets that pull: the largest share of its planet's
    /// signal chooses first. Then each massless body takes one that is of none of those: what another massless body has does not
    /// matter to it.
    ///
    /// Lines nearer than a resolution element are one mode.
    ///
    /// Lines faster than a tenth of the planet's mean motion are short-period terms and no modes, and so are lines of less than
    /// 0.5 % of the signal, and those that are another mode shifted by a libration.
    pub fn modes(&self, spectra: &[Spectrum], most: usize) -> Vec<Option<f64>> {
        let mut offers: Vec<(f64, usize, f64)> = spectra
            .iter()
            .zip(self.motions)
            .enumerate()
            .flat_map(|(planet, (spectrum, motion))| {
                let whole = spectrum.signal_rms;
                let slow = move |line: &&Line| {
                    let share = line.amplitude.norm() / whole;
                    line.resolved && share >= LEAST_SHARE && line.frequency.abs() < SLOW * motion
                };
                let lines = spectrum.lines.iter().take(MODE_LINES).filter(slow);
                lines.map(move |line| (line.amplitude.norm() / whole, planet, line.frequency))
            })
            .collect();
        offers.sort_by(|one, other| other.0.total_cmp(&one.0));
        let mut shared: Vec<f64> = Vec::new();
        let mut taken: Vec<Option<f64>> = vec![None; spectra.len()];
        for (_, planet, frequency) in offers.iter().filter(|(_, planet, _)| !self.massless[*planet]) {
            if taken[*planet].is_none() && shared.len() < most && self.is_free(*frequency, &shared, None) {
                taken[*planet] = Some(*frequency);
                shared.push(*frequency);
            }
        }
        for (_, planet, frequency) in offers.iter().filter(|(_, planet, _)| self.massless[*planet]) {
            if taken[*planet].is_none() && self.is_free(*frequency, &shared, Some(*planet)) {
                taken[*planet] = Some(*frequency);
            }
        }
        taken
    }

    /// Neither one of the modes that are taken nor one of them shifted by a libration that the body can see.
    fn is_free(&self, frequency: f64, taken: &[f64], massless: Option<usize>) -> bool {
        let resolution = TAU / self.span_day;
        let seen = self.librations.iter().filter(|(_, whose)| whose.is_none() || *whose == massless);
        let sides: Vec<f64> = seen.flat_map(|(l, _)| [-2.0 * l, -l, *l, 2.0 * l]).chain([0.0]).collect();
        let apart = |other: &f64| sides.iter().all(|side| (other + side - frequency).abs() > resolution);
        taken.iter().all(apart)
    }
}
