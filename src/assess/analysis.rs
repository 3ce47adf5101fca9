//! What the samples of a configuration say: fundamental frequencies and their drift, lines with their names, and which
//! resonant angles librate.

use std::f64::consts::{PI, TAU};

use super::samples::{Samples, Track};
use crate::coords::{Configuration, Elements};
use crate::criteria::{near_chains, resonances_to_order};
use crate::num::{FourierError, Line, Search, wrap_turn};
use crate::observe::{
    AngleSamples, Candidate, Combination, ElementSeries, FrequencyDrift, Fundamental, Kind, MotionDrift,
    NamedLine, QuasiPeriodic, ResonantAngle, SeriesError, Spectra, ToldAngle, ToldFrom, angle_lines,
    frequency_drift_near, libration_frequency, mean_motions, named_angle, told_angle,
};

/// Highest order p − q of a pair that is looked at, and how many resonances of a pair.
const HIGHEST_ORDER: u32 = 8;
const MOST_OF_PAIR: usize = 3;
/// Lines of an angle.
const ANGLE_LINES: Search = Search { most: 10, window_power: 1 };
/// Parts of a whole turn per sample by which two windows may differ, so that the turns between are told.
const TURNS_TOLD: f64 = 0.25;
/// How well a window tells a frequency, in its resolution elements.
const WINDOW_ERROR: f64 = 0.1;

/// Why samples were not analysed.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
pub enum NotAnalysed {
    #[error("{found} samples before the end or the first unbound orbit; {needed} are needed")]
    Few { found: usize, needed: usize },
    #[error(transparent)]
    Series(#[from] SeriesError),
    #[error(transparent)]
    Fourier(#[from] FourierError),
}

/// What was analysed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Sampling {
    pub count: usize,
    pub step_day: f64,
    pub span_day: f64,
    /// How many dense windows, and samples and times between them in each.
    pub windows: usize,
    pub window_count: usize,
    pub window_step_day: f64,
}

/// Between what the mean motions were compared.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum DriftFrom {
    /// The two halves of the span.
    Halves,
    /// The windows at its start and end: motions drift by more than the samples of the whole span can tell.
    Windows,
}

/// One angle and how it moves.
#[derive(Clone, Debug, PartialEq)]
pub struct AngleAnalysed {
    pub candidate: Candidate,
    pub angle: ResonantAngle,
    pub told: ToldAngle,
    /// Of the angles that librate; empty for others.
    pub lines: Vec<NamedLine>,
}

/// All that the samples say.
#[derive(Clone, Debug)]
pub struct Analysis {
    pub sampling: Sampling,
    pub drift: FrequencyDrift,
    pub drift_from: DriftFrom,
    /// n of every body, g and s of their own, then one l per libration.
    pub fundamentals: Vec<Fundamental>,
    /// Frequencies of slow variables are known only up to multiples of this, rad/day; none where they are known outright.
    pub known_up_to_rad_day: Option<f64>,
    /// What a resonance lays on the fundamentals.
    pub relation: Option<Combination>,
    pub lines: QuasiPeriodic,
    pub angles: Vec<AngleAnalysed>,
}

/// The outcome of [`analyse`].
pub type Analysed = Result<Analysis, NotAnalysed>;

impl Analysis {
    /// Angles that librate or stay within an arc, those of pairs first.
    pub fn staying(&self) -> impl Iterator<Item = &AngleAnalysed> {
        self.angles.iter().filter(|found| found.told.stays())
    }
}

/// Analyses what was sampled of a configuration, up to the first unbound orbit.
///
/// Mean motions over the whole span are moved by whole turns per sample next to those of the dense windows (or next to the
/// osculating ones where there are none). Candidates: of every pair the three nearest p:q up to order 8, three-body
/// combinations of neighbours, apsides of every pair. Errors: [`NotAnalysed`].
pub fn analyse(samples: &Samples, configuration: &Configuration) -> Analysed {
    let whole = samples.whole();
    let needed = 2 * ElementSeries::FEWEST_ROWS;
    if whole.rows.len() < needed {
        return Err(NotAnalysed::Few { found: whole.rows.len(), needed });
    }
    let parameters: Vec<f64> = configuration.orbits().iter().map(|orbit| orbit.mass_parameter).collect();
    let names: Vec<String> = configuration.planets.iter().map(|planet| planet.name.clone()).collect();
    let windows = samples.windows();
    let (whole_times, window_times) = (times(&whole), windows.iter().map(times).collect::<Vec<_>>());
    let series = ElementSeries::new(&whole_times, &whole.rows, &parameters)?;
    let dense = windows
        .iter()
        .zip(&window_times)
        .map(|(track, times)| ElementSeries::new(times, &track.rows, &parameters))
        .collect::<Result<Vec<_>, _>>()?;
    let motions = Motions::of(&series, &dense)?;
    let spectra = Spectra::of(&series, &motions.near)?;
    let mut angles = angles(&series, &dense, &motions.near)?;
    let seen = Seen { series: &series, dense: &dense, spectra: &spectra };
    let calmest = calmest(&angles);
    let side_lines: Vec<f64> =
        calmest.iter().filter_map(|(bodies, found)| seen.side_line(bodies, found)).collect();
    let mut fundamentals = spectra.fundamentals(&names, &side_lines);
    if motions.from == DriftFrom::Windows {
        let n = fundamentals.iter_mut().zip(&motions.near);
        n.for_each(|(fundamental, near)| fundamental.rad_day = *near);
    }
    seen.add_librations(&mut fundamentals, &calmest);
    let locked = calmest.iter().any(|(_, found)| matches!(found.candidate, Candidate::Pair { .. }));
    for found in &mut angles {
        let lines = std::mem::take(&mut found.lines).into_iter().map(|named| named.line).collect();
        let (span_day, fold) = seen.basis(found);
        found.lines = named_angle(lines, &fundamentals, span_day, fold);
    }
    Ok(Analysis {
        sampling: Sampling {
            count: whole.rows.len(),
            step_day: series.step_day(),
            span_day: series.span_day(),
            windows: windows.len(),
            window_count: windows.first().map_or(0, |track| track.rows.len()),
            window_step_day: windows.first().map_or(0.0, |track| track.step_day),
        },
        known_up_to_rad_day: known_up_to(&series, &dense, &spectra)?,
        relation: if locked { spectra.relation(&fundamentals) } else { None },
        lines: spectra.named(&fundamentals),
        drift: motions.drift,
        drift_from: motions.from,
        fundamentals,
        angles,
    })
}

fn times(track: &Track) -> Vec<f64> {
    (0..track.rows.len()).map(|k| track.begin_day + track.step_day * k as f64).collect()
}

/// Mean motions and how they drift.
struct Motions {
    /// Told without folding, rad/day.
    near: Vec<f64>,
    drift: FrequencyDrift,
    from: DriftFrom,
}

impl Motions {
    fn of(series: &ElementSeries<'_>, dense: &[ElementSeries<'_>]) -> Result<Motions, FourierError> {
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
fn known_up_to(
    series: &ElementSeries<'_>,
    dense: &[ElementSeries<'_>],
    spectra: &Spectra,
) -> Result<Option<f64>, FourierError> {
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
        let limit = fastest(&Spectra::of(window, &osculating)?) + WINDOW_ERROR * TAU / window.span_day();
        if limit > 0.5 * fold {
            return Ok(Some(fold));
        }
    }
    Ok(None)
}

/// Candidates from the mean motions, by period from the inside out.
fn candidates(motions: &[f64]) -> Vec<Candidate> {
    let mut order: Vec<usize> = (0..motions.len()).collect();
    order.sort_by(|one, other| motions[*other].total_cmp(&motions[*one]));
    let pairs: Vec<(usize, usize)> = order
        .iter()
        .enumerate()
        .flat_map(|(at, inner)| order[at + 1..].iter().map(move |outer| (*inner, *outer)))
        .collect();
    let mut found = Vec::new();
    for (inner, outer) in &pairs {
        let near = resonances_to_order(motions[*inner] / motions[*outer], HIGHEST_ORDER);
        let pair = |p, q| Candidate::Pair { inner: *inner, outer: *outer, p, q };
        found.extend(near.iter().take(MOST_OF_PAIR).map(|near| pair(near.p, near.q)));
    }
    for planets in order.windows(3) {
        let planets = [planets[0], planets[1], planets[2]];
        let near = near_chains(planets.map(|k| TAU / motions[k]));
        let chain = |coefficients| Candidate::Chain { planets, coefficients };
        found.extend(near.iter().map(|near| chain(near.coefficients)));
    }
    found.extend(pairs.into_iter().map(|(one, other)| Candidate::Apsides { one, other }));
    found
}

/// Every angle of every candidate, with the lines (not yet named) of those that librate.
fn angles(
    series: &ElementSeries<'_>,
    dense: &[ElementSeries<'_>],
    motions: &[f64],
) -> Result<Vec<AngleAnalysed>, FourierError> {
    let mut all = Vec::new();
    for candidate in candidates(motions) {
        for angle in candidate.angles(series.planets()) {
            let values = |rows: &[Vec<Elements>]| rows.iter().map(|row| angle.value(row)).collect::<Vec<_>>();
            let whole = values(series.rows());
            let windows: Vec<Vec<f64>> = dense.iter().map(|window| values(window.rows())).collect();
            let samples = |values, step_day| AngleSamples { values, step_day };
            let in_windows: Vec<AngleSamples<'_>> = windows
                .iter()
                .zip(dense)
                .map(|(values, w)| samples(values.as_slice(), w.step_day()))
                .collect();
            let told = told_angle(samples(&whole, series.step_day()), &in_windows, angle.rate(motions))?;
            let (values, step_day) = match (told.from, in_windows.first()) {
                (ToldFrom::Windows, Some(first)) => (first.values, first.step_day),
                _ => (whole.as_slice(), series.step_day()),
            };
            let lines = match told.libration() {
                Some(libration) => angle_lines(values, libration.centre, step_day, ANGLE_LINES)?,
                None => Vec::new(),
            };
            let plain = |line: Line| NamedLine { line, name: None };
            all.push(AngleAnalysed { candidate, angle, told, lines: lines.into_iter().map(plain).collect() });
        }
    }
    Ok(all)
}

/// Of the bodies of every pair and chain that librates: the angle with the smallest swing.
fn calmest(angles: &[AngleAnalysed]) -> Vec<(Vec<usize>, AngleAnalysed)> {
    let swing = |found: &AngleAnalysed| found.told.libration().map_or(f64::INFINITY, |l| l.amplitude);
    let mut all: Vec<(Vec<usize>, AngleAnalysed)> = Vec::new();
    for found in angles.iter().filter(|found| found.told.libration().is_some()) {
        let bodies = match found.candidate {
            Candidate::Pair { inner, outer, .. } => vec![inner, outer],
            Candidate::Chain { planets, .. } => planets.to_vec(),
            Candidate::Apsides { .. } => continue,
        };
        match all.iter_mut().find(|(known, _)| *known == bodies) {
            Some((_, known)) if swing(found) < swing(known) => *known = found.clone(),
            Some(_) => {}
            None => all.push((bodies, found.clone())),
        }
    }
    all
}

/// All that was seen of the motion.
struct Seen<'a> {
    series: &'a ElementSeries<'a>,
    dense: &'a [ElementSeries<'a>],
    spectra: &'a Spectra,
}

impl Seen<'_> {
    /// Span and fold of the samples that an angle's lines come from.
    fn basis(&self, found: &AngleAnalysed) -> (f64, f64) {
        let from = match found.told.from {
            ToldFrom::Windows => self.dense.first().unwrap_or(self.series),
            ToldFrom::Whole => self.series,
        };
        (from.span_day(), TAU / from.step_day())
    }

    /// The libration as side lines of the mean longitudes show it.
    fn side_line(&self, bodies: &[usize], found: &AngleAnalysed) -> Option<f64> {
        let lines: Vec<Line> = found.lines.iter().map(|named| named.line).collect();
        let whole = found.told.from == ToldFrom::Whole;
        if whole { self.spectra.libration(bodies, &lines) } else { None }
    }

    /// Adds the libration frequency of every pair or chain that librates: where no side line shows it, the strongest line of
    /// the angle that is no simple combination of the other fundamentals.
    fn add_librations(&self, fundamentals: &mut Vec<Fundamental>, calmest: &[(Vec<usize>, AngleAnalysed)]) {
        let mut frequencies: Vec<f64> = Vec::new();
        for (bodies, found) in calmest {
            let (span_day, fold) = self.basis(found);
            let lines: Vec<Line> = found.lines.iter().map(|named| named.line).collect();
            let known = |new: f64| frequencies.iter().any(|old| (old - new).abs() < TAU / span_day);
            let new = self.side_line(bodies, found);
            let new = new.or_else(|| libration_frequency(&lines, fundamentals, span_day, fold));
            if let Some(new) = new.filter(|new| !known(*new)) {
                frequencies.push(new);
            }
        }
        let many = frequencies.len() > 1;
        fundamentals.extend(frequencies.into_iter().enumerate().map(|(index, rad_day)| Fundamental {
            name: if many { format!("l{}", index + 1) } else { "l".to_owned() },
            kind: Kind::Libration,
            rad_day,
        }));
    }
}

/// Values of an angle over the whole span, rad in [0, 2π), with their times in days.
pub fn angle_series(samples: &Samples, angle: &ResonantAngle) -> Vec<(f64, f64)> {
    let whole = samples.whole();
    let times = times(&whole);
    times.into_iter().zip(&whole.rows).map(|(time, row)| (time, wrap_turn(angle.value(row)))).collect()
}
