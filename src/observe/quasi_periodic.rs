//! The quasi-periodic decomposition of a motion: every line with the name of its combination.

use super::ElementSeries;
use super::combination::{Combination, Fundamental, Kind, Namer, Rule};
use super::frequency::{MODE_SEARCH, mean_motions, modes, numbered};
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
}

/// Inclinations that are no more than rounding, rad.
const FLAT: f64 = 1e-7;

impl Spectra {
    /// Decomposes all signals of a series; the mean motions are taken next to `near` (rad/day), as samples may fold them.
    ///
    /// Nodes are looked at only where an inclination passes 1e-7 rad. Errors: [`FourierError`]. Source: Laskar (1990).
    pub fn of(series: &ElementSeries<'_>, near: &[f64]) -> Result<Spectra, FourierError> {
        let planets = 0..series.planets();
        let all = |signal: &dyn Fn(usize) -> Vec<Complex>| -> Result<Vec<Spectrum>, FourierError> {
            planets.clone().map(|k| decompose(&signal(k), series.step_day(), MODE_SEARCH)).collect()
        };
        let inclined = series.rows().iter().flatten().any(|orbit| orbit.inclination.sin() > FLAT);
        Ok(Spectra {
            motions: all(&|k| series.motion_signal(k))?,
            pericentres: all(&|k| series.pericentre_signal(k))?,
            nodes: if inclined { all(&|k| series.node_signal(k))? } else { Vec::new() },
            step_day: series.step_day(),
            span_day: series.span_day(),
            motions_rad_day: mean_motions(series, near)?,
        })
    }

    /// n of every planet, then the g and s that planets have of their own, numbered as the planets.
    ///
    /// A planet whose strongest line of e exp(iϖ) belongs to another takes its next one; nodes lack the fixed line of the plane.
    ///
    /// `librations` (rad/day) are those whose side lines are no modes.
    pub fn fundamentals(&self, names: &[String], librations: &[f64]) -> Vec<Fundamental> {
        let motions = self.motions_rad_day.iter().zip(names).map(|(rad_day, name)| Fundamental {
            name: format!("n_{name}"),
            kind: Kind::Motion,
            rad_day: *rad_day,
        });
        let count = self.motions.len();
        let resolution = TAU / self.span_day;
        let mut nodes = self.nodes.clone();
        nodes.iter_mut().for_each(|node| node.lines.retain(|line| line.frequency.abs() > 0.5 * resolution));
        let pericentres = modes(&self.pericentres, &self.motions_rad_day, self.span_day, count, librations);
        let nodes = modes(&nodes, &self.motions_rad_day, self.span_day, count.saturating_sub(1), librations);
        motions
            .chain(numbered(pericentres, "g", Kind::Pericentre))
            .chain(numbered(nodes, "s", Kind::Node))
            .collect()
    }

    /// The libration of a resonance between bodies, from the side lines n ± l that it gives to a exp(iλ): the strongest of
    /// them, against n, that is a line of the resonant angle too and no combination of mean motions; rad/day.
    pub fn libration(&self, bodies: &[usize], angle: &[Line]) -> Option<f64> {
        let motion = |(index, rad_day): (usize, &f64)| Fundamental {
            name: format!("n{index}"),
            kind: Kind::Motion,
            rad_day: *rad_day,
        };
        let motions: Vec<Fundamental> = self.motions_rad_day.iter().enumerate().map(motion).collect();
        let (fold, tolerance) = (self.fold_rad_day(), TOLERANCE * TAU / self.span_day);
        let synodic = Namer::new(&motions, Rule::ANGLE, fold);
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
        let plane = Namer::new(fundamentals, Rule::PLANE, self.fold_rad_day());
        let node = Namer::new(fundamentals, Rule::NODE, self.fold_rad_day());
        let tables = |spectra: &[Spectrum], namer: &Namer| -> Vec<Vec<NamedLine>> {
            let line = |line: &Line| self.line(*line, namer, fundamentals);
            spectra.iter().map(|spectrum| spectrum.lines.iter().map(line).collect()).collect()
        };
        QuasiPeriodic {
            motions: tables(&self.motions, &plane),
            pericentres: tables(&self.pericentres, &plane),
            nodes: tables(&self.nodes, &node),
        }
    }

    fn line(&self, line: Line, namer: &Namer, fundamentals: &[Fundamental]) -> NamedLine {
        named(line, namer, fundamentals, TOLERANCE * TAU / self.span_day, self.fold_rad_day())
    }

    /// The relation that a resonance lays on the fundamentals, as 2n_b − 3n_c + g1 = 0 in a 3:2 resonance.
    pub fn relation(&self, fundamentals: &[Fundamental]) -> Option<Combination> {
        let free: Vec<Fundamental> = unlibrated(fundamentals);
        let found = Namer::new(&free, Rule::ANGLE, 0.0).relation(TOLERANCE * TAU / self.span_day)?;
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
    let namer = Namer::new(fundamentals, Rule::ANGLE, fold);
    let tolerance = TOLERANCE * TAU / span_day;
    let name = |line: Line| {
        let mirrored = Line { frequency: -line.frequency, amplitude: line.amplitude.conj(), ..line };
        let (plain, mirrored) = (
            named(line, &namer, fundamentals, tolerance, fold),
            named(mirrored, &namer, fundamentals, tolerance, fold),
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
