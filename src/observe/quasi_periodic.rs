//! The quasi-periodic decomposition of a motion: every line with the name of its combination.

use super::ElementSeries;
use super::combination::{Combination, Fundamental, Kind, Rule};
use super::frequency::{Choice, LibrationOf, MODE_SEARCH, mean_motions, numbered};
use super::namer::Namer;
use crate::num::{Complex, FourierError, Line, Search, Spectrum, decompose, decompose_real, turn_near};
use std::f64::consts::TAU;

/// How near a line must be to a combination, in resolution elements 2π/T.
const TOLERANCE: f64 = 0.05;
/// Largest Σ|k| of what an angle inherits from the motions of planets and pericentres: a line named by no such
/// combination is its libration.
const INHERITED: u32 = 8;

/// A line of a signal with its name.
#[derive(Clone, Debug, PartialEq)]
pub struct NamedLine {
    /// Of a real signal A cos(νt + φ): frequency ν ≥ 0 and amplitude A exp(iφ).
    pub line: Line,
    /// None when no simple combination is near, or the line is not resolved.
    pub name: Option<Combination>,
}

/// Lines of a exp(iλ), e exp(iϖ) and sin(i/2) exp(iΩ) of every planet.
#[derive(Clone, Debug)]
pub struct Spectra {
    pub motions: Vec<Spectrum>,
    pub pericentres: Vec<Spectrum>,
    /// Empty for planets in one plane.
    pub nodes: Vec<Spectrum>,
    step_day: f64,
    span_day: f64,
    motions_rad_day: Vec<f64>,
    massless: Vec<bool>,
}

/// Inclinations that are no more than rounding, rad.
const FLAT: f64 = 1e-7;

impl Spectra {
    /// Decomposes all signals of a series; the mean motions are taken next to `near` (rad/day), as samples may fold them.
    ///
    /// Nodes are looked at only where an inclination passes 1e-7 rad. Errors: [`FourierError`]. Source: Laskar (1990).
    pub fn of(series: &ElementSeries<'_>, near: &[f64]) -> Result<Spectra, FourierError> {
        Spectra::step_by_step(series, near, &vec![false; series.planets()], || Ok(()))
    }

    /// [`Spectra::of`], of bodies some of which are `massless`; `before` is called before every signal and may end it.
    pub fn step_by_step<E: From<FourierError>>(
        series: &ElementSeries<'_>,
        near: &[f64],
        massless: &[bool],
        mut before: impl FnMut() -> Result<(), E>,
    ) -> Result<Spectra, E> {
        let mut all = |signal: &dyn Fn(usize) -> Vec<Complex>| -> Result<Vec<Spectrum>, E> {
            let each = (0..series.planets()).map(|planet| {
                before()?;
                Ok(decompose(&signal(planet), series.step_day(), MODE_SEARCH)?)
            });
            each.collect()
        };
        Ok(Spectra {
            motions: all(&|k| series.motion_signal(k))?,
            pericentres: all(&|k| series.pericentre_signal(k))?,
            nodes: if Spectra::have_nodes(series) { all(&|k| series.node_signal(k))? } else { Vec::new() },
            step_day: series.step_day(),
            span_day: series.span_day(),
            motions_rad_day: mean_motions(series, near)?,
            massless: massless.to_vec(),
        })
    }

    /// Signals of a series that [`Spectra::of`] decomposes.
    pub fn signals(series: &ElementSeries<'_>) -> usize {
        series.planets() * if Spectra::have_nodes(series) { 3 } else { 2 }
    }

    fn have_nodes(series: &ElementSeries<'_>) -> bool {
        series.rows().iter().flatten().any(|orbit| orbit.inclination.sin() > FLAT)
    }

    /// n of every planet, then the g and s that planets have of their own, numbered as the planets.
    ///
    /// A planet whose strongest line of e exp(iϖ) belongs to another takes its next one; nodes lack the fixed line of the plane.
    /// What a massless body has is its own, and no other body takes it or lacks it.
    ///
    /// `librations` (rad/day, and whose) are those whose side lines are no modes.
    pub fn fundamentals(&self, names: &[String], librations: &[LibrationOf]) -> Vec<Fundamental> {
        let motions = self.motions_rad_day.iter().zip(names).enumerate();
        let motions = motions.map(|(body, (rad_day, name))| self.motion(body, format!("n_{name}"), *rad_day));
        let resolution = TAU / self.span_day;
        let mut nodes = self.nodes.clone();
        nodes.iter_mut().for_each(|node| node.lines.retain(|line| line.frequency.abs() > 0.5 * resolution));
        let massless = &self.massless;
        let choice = Choice { motions: &self.motions_rad_day, span_day: self.span_day, massless, librations };
        let pulling = massless.iter().filter(|massless| !**massless).count();
        let pericentres = choice.modes(&self.pericentres, pulling);
        let nodes = choice.modes(&nodes, pulling.saturating_sub(1));
        motions
            .chain(numbered(pericentres, massless, "g", Kind::Pericentre))
            .chain(numbered(nodes, massless, "s", Kind::Node))
            .collect()
    }

    fn motion(&self, body: usize, name: String, rad_day: f64) -> Fundamental {
        Fundamental { name, kind: Kind::Motion, rad_day, own_of: self.own_of(&[body]) }
    }

    /// The massless one of some bodies, which has what they have together.
    pub fn own_of(&self, bodies: &[usize]) -> Option<usize> {
        bodies.iter().copied().find(|body| self.massless[*body])
    }

    /// The libration of a resonance between bodies, from the side lines n ± l that it gives to a exp(iλ): the strongest of
    /// them, against n, that is a line of the resonant angle too and no combination of mean motions; rad/day.
    pub fn libration(&self, bodies: &[usize], angle: &[Line]) -> Option<f64> {
        let motions = self.motions_rad_day.iter().enumerate();
        let motions: Vec<Fundamental> =
            motions.map(|(body, rad_day)| self.motion(body, format!("n{body}"), *rad_day)).collect();
        let (fold, tolerance) = (self.fold_rad_day(), TOLERANCE * TAU / self.span_day);
        let synodic = Namer::seen_by(self.own_of(bodies), &motions, Rule::ANGLE, fold);
        let mut sides: Vec<(f64, f64)> = Vec::new();
        for spectrum in bodies.iter().map(|body| &self.motions[*body]) {
            let Some(main) = spectrum.lines.first() else { continue };
            let side = |line: &Line| {
                let gap = turn_near(line.frequency - main.frequency, 0.0, fold).abs();
                (line.amplitude.norm() / main.amplitude.norm(), gap)
            };
            sides.extend(spectrum.lines[1..].iter().filter(|line| line.resolved).map(side));
        }
        sides.sort_by(|one, other| other.0.total_cmp(&one.0));
        let own = |gap: f64| synodic.name(gap, tolerance).is_none_or(|name| name.size() > INHERITED);
        let near = |gap: f64| {
            let lines = angle.iter().map(|line| turn_near(line.frequency, 0.0, fold).abs());
            lines.min_by(|a, b| (a - gap).abs().total_cmp(&(b - gap).abs()))
        };
        let both = sides.into_iter().filter(|(_, gap)| own(*gap));
        both.filter_map(|(_, gap)| near(gap).filter(|line| (line - gap).abs() < 2.0 * tolerance)).next()
    }

    /// Samples per whole turn of the fastest frequency that is not folded: 2π over the time between samples, rad/day.
    pub fn fold_rad_day(&self) -> f64 {
        TAU / self.step_day
    }

    /// Every line of every signal with its name; the frequency of a named line is moved by whole turns per sample to its
    /// combination.
    pub fn named(&self, fundamentals: &[Fundamental]) -> QuasiPeriodic {
        let fold = self.fold_rad_day();
        let both = |massless: Option<usize>| {
            [Rule::PLANE, Rule::NODE].map(|rule| Namer::seen_by(massless, fundamentals, rule, fold))
        };
        let shared = both(None);
        let mut found = QuasiPeriodic { motions: Vec::new(), pericentres: Vec::new(), nodes: Vec::new() };
        for body in 0..self.motions.len() {
            let own = self.own_of(&[body]).map(|body| both(Some(body)));
            let [plane, node] = own.as_ref().unwrap_or(&shared);
            let named = |spectrum: &Spectrum, namer: &Namer| -> Vec<NamedLine> {
                spectrum.lines.iter().map(|line| self.line(*line, namer, fundamentals)).collect()
            };
            found.motions.push(named(&self.motions[body], plane));
            found.pericentres.push(named(&self.pericentres[body], plane));
            found.nodes.extend(self.nodes.get(body).map(|spectrum| named(spectrum, node)));
        }
        found
    }

    fn line(&self, line: Line, namer: &Namer, fundamentals: &[Fundamental]) -> NamedLine {
        named(line, namer, fundamentals, TOLERANCE * TAU / self.span_day, self.fold_rad_day())
    }

    /// The relation that a resonance lays on the fundamentals, as 2n_b − 3n_c + g1 = 0 in a 3:2 resonance.
    pub fn relation(&self, fundamentals: &[Fundamental]) -> Option<Combination> {
        self.relation_of(None, fundamentals)
    }

    /// [`Spectra::relation`] of what a massless body can see (none: the bodies that pull).
    pub fn relation_of(&self, massless: Option<usize>, fundamentals: &[Fundamental]) -> Option<Combination> {
        let free: Vec<Fundamental> = unlibrated(fundamentals);
        let namer = Namer::seen_by(massless, &free, Rule::ANGLE, 0.0);
        let found = namer.relation(TOLERANCE * TAU / self.span_day)?;
        let moving = free.iter().zip(&found.coefficients).any(|(f, k)| f.kind == Kind::Motion && *k != 0);
        let padded = |mut found: Combination| {
            found.coefficients.resize(fundamentals.len(), 0);
            found
        };
        moving.then(|| padded(found))
    }
}

/// Without the librations, which come last.
fn unlibrated(fundamentals: &[Fundamental]) -> Vec<Fundamental> {
    fundamentals.iter().filter(|f| f.kind != Kind::Libration).cloned().collect()
}

fn named(mut line: Line, namer: &Namer, all: &[Fundamental], tolerance: f64, fold: f64) -> NamedLine {
    let name = if line.resolved { namer.name(line.frequency, tolerance) } else { None };
    if let Some(name) = &name {
        let value: f64 = name.coefficients.iter().zip(all).map(|(k, f)| f64::from(*k) * f.rad_day).sum();
        line.frequency = turn_near(line.frequency, value, fold);
    }
    NamedLine { line, name }
}

/// The lines of all signals, per planet.
#[derive(Clone, Debug, PartialEq)]
pub struct QuasiPeriodic {
    /// a exp(iλ), au.
    pub motions: Vec<Vec<NamedLine>>,
    /// e exp(iϖ).
    pub pericentres: Vec<Vec<NamedLine>>,
    /// sin(i/2) exp(iΩ); empty for planets in one plane.
    pub nodes: Vec<Vec<NamedLine>>,
}

/// Terms A cos(νt + φ) of an angle that stays within a turn, without its mean.
///
/// `angles` in rad, any turn, at even times; the centre is taken off first. Errors: [`FourierError`].
pub fn angle_lines(
    angles: &[f64],
    centre: f64,
    step_day: f64,
    search: Search,
) -> Result<Vec<Line>, FourierError> {
    let swing: Vec<f64> = angles.iter().map(|angle| crate::num::wrap_half_turn(angle - centre)).collect();
    let waves = decompose_real(&swing, step_day, search)?;
    let resolution = TAU / (step_day * angles.len() as f64);
    let moving = waves.into_iter().filter(|wave| wave.frequency > 0.5 * resolution);
    Ok(moving
        .map(|wave| Line {
            frequency: wave.frequency,
            amplitude: Complex::from_polar(wave.amplitude, wave.phase),
            frequency_error: f64::NAN,
            amplitude_error: f64::NAN,
            resolved: true,
        })
        .collect())
}

/// The lines of an angle with their names; both signs of a frequency are tried, and the sign is that of the combination
/// which has the name.
pub fn named_angle(
    lines: Vec<Line>,
    fundamentals: &[Fundamental],
    span_day: f64,
    fold: f64,
) -> Vec<NamedLine> {
    named_angle_by(&Namer::new(fundamentals, Rule::ANGLE, fold), lines, fundamentals, span_day)
}

/// [`named_angle`] with a namer of [`Rule::ANGLE`] that is at hand.
pub fn named_angle_by(
    namer: &Namer,
    lines: Vec<Line>,
    fundamentals: &[Fundamental],
    span_day: f64,
) -> Vec<NamedLine> {
    let (tolerance, fold) = (TOLERANCE * TAU / span_day, namer.fold_rad_day());
    let name = |line: Line| {
        let mirrored = Line { frequency: -line.frequency, amplitude: line.amplitude.conj(), ..line };
        let (plain, mirrored) = (
            named(line, namer, fundamentals, tolerance, fold),
            named(mirrored, namer, fundamentals, tolerance, fold),
        );
        // Of the two the simpler combination; of one and the same, the positive frequency.
        match (&plain.name, &mirrored.name) {
            (Some(one), Some(other)) if other.size() < one.size() => mirrored,
            (Some(one), Some(other))
                if other.size() == one.size() && mirrored.line.frequency > plain.line.frequency =>
            {
                mirrored
            }
            (None, Some(_)) => mirrored,
            _ => plain,
        }
    };
    lines.into_iter().map(name).collect()
}

/// The frequency of the libration itself: that of the strongest line of an angle which is no simple combination (Σ|k| ≤ 8)
/// of the motions of planets, pericentres and nodes; rad/day.
pub fn libration_frequency(
    lines: &[Line],
    fundamentals: &[Fundamental],
    span_day: f64,
    fold: f64,
) -> Option<f64> {
    let named = named_angle(lines.to_vec(), &unlibrated(fundamentals), span_day, fold);
    let own = |line: &&NamedLine| line.name.as_ref().is_none_or(|name| name.size() > INHERITED);
    named.iter().find(own).map(|line| line.line.frequency.abs())
}
