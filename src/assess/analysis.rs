//! What the samples of a configuration say: fundamental frequencies and their drift, lines with their names, and which
//! resonant angles librate.

mod angles;
mod motions;
mod watch;

use std::f64::consts::TAU;

use super::samples::{Samples, Track};
use crate::coords::Configuration;
use crate::num::{FourierError, Line, wrap_turn};
use crate::observe::{
    Candidate, Combination, ElementSeries, FrequencyDrift, Fundamental, Kind, NamedLine, Namer,
    QuasiPeriodic, ResonantAngle, Rule, SeriesError, Spectra, ToldAngle, ToldFrom, libration_frequency,
    named_angle_by,
};
use angles::{angles, calmest};
use motions::{Motions, known_up_to};
use watch::Watch;
pub use watch::{AnalysisProgress, AnalysisWork};

/// Why samples were not analysed.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
pub enum NotAnalysed {
    #[error("{found} samples before the end or the first unbound orbit; {needed} are needed")]
    Few { found: usize, needed: usize },
    #[error("stopped before the end")]
    Stopped,
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
    /// What resonances lay on the fundamentals.
    pub relations: Vec<Combination>,
    pub lines: QuasiPeriodic,
    pub angles: Vec<AngleAnalysed>,
    pub work: AnalysisWork,
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
/// combinations of neighbours, apsides of every pair. Massless bodies feel only those that pull: each is looked at with
/// these alone, so the work grows in proportion to their number.
///
/// `go_on` is told how far it is before every signal and every angle, and answers whether to go on. Errors: [`NotAnalysed`].
pub fn analyse(
    samples: &Samples,
    configuration: &Configuration,
    go_on: &mut dyn FnMut(AnalysisProgress) -> bool,
) -> Analysed {
    let whole = samples.whole();
    let needed = 2 * ElementSeries::FEWEST_ROWS;
    if whole.rows.len() < needed {
        return Err(NotAnalysed::Few { found: whole.rows.len(), needed });
    }
    let parameters: Vec<f64> = configuration.orbits().iter().map(|orbit| orbit.mass_parameter).collect();
    let windows = samples.windows();
    let (whole_times, window_times) = (times(&whole), windows.iter().map(times).collect::<Vec<_>>());
    let series = ElementSeries::new(&whole_times, &whole.rows, &parameters)?;
    let dense = windows
        .iter()
        .zip(&window_times)
        .map(|(track, times)| ElementSeries::new(times, &track.rows, &parameters))
        .collect::<Result<Vec<_>, _>>()?;
    let sampling = Sampling {
        count: whole.rows.len(),
        step_day: series.step_day(),
        span_day: series.span_day(),
        windows: windows.len(),
        window_count: windows.first().map_or(0, |track| track.rows.len()),
        window_step_day: windows.first().map_or(0.0, |track| track.step_day),
    };
    told(sampling, &series, &dense, configuration, &mut Watch::new(go_on))
}

fn told(
    sampling: Sampling,
    series: &ElementSeries<'_>,
    dense: &[ElementSeries<'_>],
    configuration: &Configuration,
    watch: &mut Watch<'_>,
) -> Analysed {
    let names: Vec<String> = configuration.planets.iter().map(|planet| planet.name.clone()).collect();
    let massless: Vec<bool> = configuration.planets.iter().map(|planet| planet.gm == 0.0).collect();
    watch.expect_signals(Spectra::signals(series));
    let motions = Motions::of(series, dense)?;
    let spectra = Spectra::step_by_step(series, &motions.near, &massless, || watch.signal())?;
    let known_up_to_rad_day = known_up_to(series, dense, &spectra, watch)?;
    let mut angles = angles(series, dense, &motions.near, &massless, watch)?;
    let seen = Seen { series, dense, spectra: &spectra };
    let calmest = calmest(&angles);
    let side_line = |(bodies, found): &(Vec<usize>, AngleAnalysed)| {
        Some((seen.side_line(bodies, found)?, spectra.own_of(bodies)))
    };
    let side_lines: Vec<(f64, Option<usize>)> = calmest.iter().filter_map(side_line).collect();
    let mut fundamentals = spectra.fundamentals(&names, &side_lines);
    if motions.from == DriftFrom::Windows {
        let n = fundamentals.iter_mut().zip(&motions.near);
        n.for_each(|(fundamental, near)| fundamental.rad_day = *near);
    }
    seen.add_librations(&mut fundamentals, &calmest);
    seen.name(&mut angles, &fundamentals);
    Ok(Analysis {
        sampling,
        known_up_to_rad_day,
        relations: seen.relations(&fundamentals, &calmest),
        lines: spectra.named(&fundamentals),
        drift: motions.drift,
        drift_from: motions.from,
        fundamentals,
        angles,
        work: watch.work,
    })
}

fn times(track: &Track) -> Vec<f64> {
    (0..track.rows.len()).map(|k| track.begin_day + track.step_day * k as f64).collect()
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
        let mut frequencies: Vec<(f64, Option<usize>)> = Vec::new();
        for (bodies, found) in calmest {
            let own_of = self.spectra.own_of(bodies);
            let (span_day, fold) = self.basis(found);
            let lines: Vec<Line> = found.lines.iter().map(|named| named.line).collect();
            let known = |new: f64| {
                let mut alike = frequencies.iter().filter(|(_, whose)| whose.is_none() || *whose == own_of);
                alike.any(|(old, _)| (old - new).abs() < TAU / span_day)
            };
            let new = self.side_line(bodies, found).or_else(|| {
                let seen: Vec<Fundamental> =
                    fundamentals.iter().filter(|f| f.is_seen_by(own_of)).cloned().collect();
                libration_frequency(&lines, &seen, span_day, fold)
            });
            if let Some(new) = new.filter(|new| !known(*new)) {
                frequencies.push((new, own_of));
            }
        }
        let many = frequencies.len() > 1;
        let frequencies = frequencies.into_iter().enumerate();
        fundamentals.extend(frequencies.map(|(index, (rad_day, own_of))| Fundamental {
            name: if many { format!("l{}", index + 1) } else { "l".to_owned() },
            kind: Kind::Libration,
            rad_day,
            own_of,
        }));
    }

    /// Names the lines of the angles: body by body, so that few tables of combinations are made, and one at a time.
    fn name(&self, angles: &mut [AngleAnalysed], fundamentals: &[Fundamental]) {
        let of = |found: &AngleAnalysed| {
            let (span_day, fold) = self.basis(found);
            (self.spectra.own_of(&found.candidate.bodies()), span_day, fold)
        };
        let mut waiting: Vec<usize> = (0..angles.len()).filter(|k| !angles[*k].lines.is_empty()).collect();
        while let Some(first) = waiting.first() {
            let group = of(&angles[*first]);
            let (own_of, span_day, fold) = group;
            let namer = Namer::seen_by(own_of, fundamentals, Rule::ANGLE, fold);
            waiting.retain(|k| {
                let found = &mut angles[*k];
                if of(found) != group {
                    return true;
                }
                let lines = std::mem::take(&mut found.lines).into_iter().map(|named| named.line).collect();
                found.lines = named_angle_by(&namer, lines, fundamentals, span_day);
                false
            });
        }
    }

    /// What the resonances lay on the fundamentals: of the bodies that pull, and of every massless one, where something is locked.
    fn relations(
        &self,
        fundamentals: &[Fundamental],
        calmest: &[(Vec<usize>, AngleAnalysed)],
    ) -> Vec<Combination> {
        let locked = calmest.iter().filter(|(_, found)| matches!(found.candidate, Candidate::Pair { .. }));
        let mut whose: Vec<Option<usize>> = locked.map(|(bodies, _)| self.spectra.own_of(bodies)).collect();
        whose.sort_unstable();
        whose.dedup();
        let mut all: Vec<Combination> = Vec::new();
        for relation in whose.into_iter().filter_map(|one| self.spectra.relation_of(one, fundamentals)) {
            if all.iter().all(|known| known.coefficients != relation.coefficients) {
                all.push(relation);
            }
        }
        all
    }
}

/// Values of an angle over the whole span, rad in [0, 2π), with their times in days.
pub fn angle_series(samples: &Samples, angle: &ResonantAngle) -> Vec<(f64, f64)> {
    let whole = samples.whole();
    let values = angle.values(&whole.rows);
    times(&whole).into_iter().zip(values.into_iter().map(wrap_turn)).collect()
}
