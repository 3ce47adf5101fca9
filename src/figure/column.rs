//! The columns that a map can show, under the names they have in the table of cells.

use super::FigureError;
use super::colour::{Region, Scale, ScaleKind};
use super::label::Label;
use super::model::Paint;
use super::names;
use crate::assess::{AngleFound, Assessment};
use crate::survey::Record;
use crate::system::System;
use crate::units::{DEGREE, YEAR_DAY};
use crate::verdict::Verdict;

/// A column that a map can show.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Column {
    Megno,
    LyapunovTime,
    Verdict,
    EndTime,
    EnergyError,
    SmallestApproach,
    SmallestApproachHill,
    /// Of the planet with this index.
    EMax(usize),
    EMin(usize),
    ARange(usize),
    IMax(usize),
    ERange(usize),
    /// Of the planet with the largest.
    FrequencyDrift,
    FrequencyDriftOf(usize),
    AngleAmplitude,
    AngleCentre,
}

impl Column {
    /// The name in the table of cells.
    pub fn name(self, system: &System) -> String {
        let of = |planet: usize, part: &str| {
            let name = system.orbiting_name(planet).unwrap_or("?");
            format!("{name}.{part}")
        };
        match self {
            Column::Megno => "megno".to_owned(),
            Column::LyapunovTime => "lyapunov_time".to_owned(),
            Column::Verdict => "verdict".to_owned(),
            Column::EndTime => "end_time".to_owned(),
            Column::EnergyError => "energy_error".to_owned(),
            Column::SmallestApproach => "smallest_approach".to_owned(),
            Column::SmallestApproachHill => "smallest_approach_hill".to_owned(),
            Column::EMax(planet) => of(planet, "e_max"),
            Column::EMin(planet) => of(planet, "e_min"),
            Column::ARange(planet) => of(planet, "a_range"),
            Column::IMax(planet) => of(planet, "i_max"),
            Column::ERange(planet) => of(planet, "e_range"),
            Column::FrequencyDrift => "frequency_drift".to_owned(),
            Column::FrequencyDriftOf(planet) => of(planet, "frequency_drift"),
            Column::AngleAmplitude => "angle.amplitude".to_owned(),
            Column::AngleCentre => "angle.centre".to_owned(),
        }
    }

    /// The column with this name among those the records have.
    pub fn find(name: &str, system: &System, records: &[Record]) -> Result<Column, FigureError> {
        let known = columns(system, records);
        known.iter().copied().find(|c| c.name(system) == name).ok_or_else(|| FigureError::UnknownColumn {
            found: name.to_owned(),
            known: known.iter().map(|c| c.name(system)).collect(),
        })
    }

    /// The number of a finished cell, in the unit of the label; `verdict` has none.
    pub fn value(self, cell: &Assessment) -> Option<f64> {
        let extent = |planet: usize| cell.extent.get(planet);
        let libration = |which: usize| Some(cell.angle?.libration()?[which] / DEGREE);
        match self {
            Column::Megno => cell.megno,
            Column::LyapunovTime => {
                cell.lyapunov.filter(|l| l.per_day > 0.0).map(|l| 1.0 / (l.per_day * YEAR_DAY))
            }
            Column::Verdict => None,
            Column::EndTime => Some(cell.end_time_day / YEAR_DAY),
            Column::EnergyError => cell.energy_error,
            Column::SmallestApproach => cell.smallest_approach.map(|a| a.au),
            Column::SmallestApproachHill => cell.smallest_approach.map(|a| a.hill),
            Column::EMax(planet) => extent(planet).map(|x| x.eccentricity.max),
            Column::EMin(planet) => extent(planet).map(|x| x.eccentricity.min),
            Column::ARange(planet) => extent(planet)
                .map(|x| x.semi_major_axis_au)
                .map(|range| (range.max - range.min) / (0.5 * (range.max + range.min))),
            Column::IMax(planet) => extent(planet).map(|x| x.inclination.max / DEGREE),
            Column::ERange(planet) => extent(planet).map(|x| x.eccentricity.max - x.eccentricity.min),
            Column::FrequencyDrift => cell.worst_drift(),
            Column::FrequencyDriftOf(planet) => cell.frequency_drift.get(planet).copied(),
            Column::AngleAmplitude => libration(1),
            Column::AngleCentre => libration(0),
        }
        .filter(|v| v.is_finite())
    }

    /// What a finished cell shows: flat tones for what is lost, undecided or untrusted, else the number.
    ///
    /// `end_time` and `energy_error` mean something for those cells too, so they show their number.
    pub(crate) fn paint(self, cell: &Assessment) -> Paint {
        let region = Region::of(cell.verdict, cell.loss.map(|l| l.how));
        let bounded = matches!(cell.verdict, Verdict::Regular | Verdict::Chaotic)
            || self.needs_no_verdict() && cell.verdict == Verdict::Undecided && cell.steps > 0;
        let always = matches!(self, Column::EndTime | Column::EnergyError);
        if self == Column::Verdict || !(bounded || always) {
            return Paint::Flat(region);
        }
        match self.value(cell) {
            Some(value) => Paint::Value(value),
            // A regular cell has no Lyapunov time, which is an answer and not a gap.
            None if self == Column::LyapunovTime && cell.verdict == Verdict::Regular => Paint::Flat(region),
            // Nor has an angle that circulates an amplitude.
            None if self.is_of_angle() && cell.angle.is_some_and(|a| a != AngleFound::CannotTell) => {
                Paint::Flat(Region::NoLibration)
            }
            None if !bounded => Paint::Flat(region),
            None => Paint::Flat(Region::NoValue),
        }
    }

    fn is_of_angle(self) -> bool {
        matches!(self, Column::AngleAmplitude | Column::AngleCentre)
    }

    /// Told of every cell that lived through the span, also of one whose MEGNO does not decide.
    fn needs_no_verdict(self) -> bool {
        self.is_of_angle() || matches!(self, Column::FrequencyDrift | Column::FrequencyDriftOf(_))
    }

    pub(crate) fn label(self, system: &System) -> Label {
        let name = |planet: usize| system.orbiting_name(planet).unwrap_or("?").to_owned();
        match self {
            Column::Megno => Label::plain("MEGNO ⟨").italic("Y").then("⟩"),
            Column::LyapunovTime => names::with_unit(Label::plain("Lyapunov time"), "yr"),
            Column::Verdict => Label::plain("verdict"),
            Column::EndTime => names::with_unit(Label::plain("time survived"), "yr"),
            Column::EnergyError => Label::plain("relative energy error"),
            Column::SmallestApproach => names::with_unit(Label::plain("closest approach"), "au"),
            Column::SmallestApproachHill => Label::plain("closest approach [mutual Hill radii]"),
            Column::EMax(planet) => Label::plain("largest ").italic("e").down(name(planet)),
            Column::EMin(planet) => Label::plain("smallest ").italic("e").down(name(planet)),
            Column::ARange(planet) => {
                Label::plain("range of ").italic("a").down(name(planet)).then(", relative")
            }
            Column::IMax(planet) => {
                names::with_unit(Label::plain("largest ").italic("i").down(name(planet)), "deg")
            }
            Column::ERange(planet) => Label::plain("range of ").italic("e").down(name(planet)),
            Column::FrequencyDrift => relative_change(Label::plain("frequency drift, ")),
            Column::FrequencyDriftOf(planet) => {
                relative_change(Label::plain("frequency drift of ").then(name(planet)).then(", "))
            }
            Column::AngleAmplitude => names::with_unit(Label::plain("libration amplitude"), "deg"),
            Column::AngleCentre => names::with_unit(Label::plain("libration centre"), "deg"),
        }
    }

    /// What is left of the label where it is too long.
    pub(crate) fn short(self, system: &System) -> Label {
        match self {
            Column::SmallestApproachHill => Label::plain("approach [").italic("R").down("H").then("]"),
            Column::EnergyError => Label::plain("energy error"),
            Column::FrequencyDrift | Column::FrequencyDriftOf(_) => relative_change(Label::default()),
            other => other.label(system),
        }
    }

    /// The scale for these values: dark is quiet and bright is wild for every column, so times run downwards.
    pub(crate) fn scale(self, values: &[f64], span_yr: f64) -> Scale {
        match self {
            Column::Megno => Scale { from: 2.0, to: 10.0, kind: ScaleKind::Log },
            Column::EndTime => {
                let least = values.iter().copied().filter(|v| *v > 0.0).fold(span_yr, f64::min);
                // Never more than six decades: the few cells lost at once would eat the scale.
                let low = 10f64.powf(least.log10().floor()).max(span_yr * 1e-6);
                let low = if low < 0.5 * span_yr { low } else { 0.1 * span_yr };
                Scale { from: span_yr, to: low, kind: ScaleKind::Log }
            }
            Column::LyapunovTime => turned(decades(values)),
            Column::SmallestApproach | Column::SmallestApproachHill => turned(covering(values)),
            Column::EnergyError => decades(values),
            _ => covering(values),
        }
    }
}

/// The words, then log₁₀ |Δn / n|.
fn relative_change(words: Label) -> Label {
    words.then("log").down("10").then(" |Δ").italic("n").then(" / ").italic("n").then("|")
}

fn turned(scale: Scale) -> Scale {
    Scale { from: scale.to, to: scale.from, kind: scale.kind }
}

/// A logarithmic scale over all positive values; its ends are 1, 2 or 5 times a power of ten.
fn decades(values: &[f64]) -> Scale {
    let positive = || values.iter().copied().filter(|v| *v > 0.0);
    let (low, high) = (positive().fold(f64::INFINITY, f64::min), positive().fold(0.0, f64::max));
    if low > high {
        return Scale { from: 0.1, to: 1.0, kind: ScaleKind::Log };
    }
    let (below, above) = (10f64.powi(low.log10().floor() as i32), 10f64.powi(high.log10().floor() as i32));
    let from = [5.0, 2.0].into_iter().map(|d| d * below).find(|v| *v <= low).unwrap_or(below);
    let to =
        [1.0, 2.0, 5.0, 10.0].into_iter().map(|d| d * above).find(|v| *v >= high).unwrap_or(10.0 * above);
    Scale { from, to: if to > from { to } else { 2.0 * from }, kind: ScaleKind::Log }
}

/// A scale with round ends over all values: logarithmic when they are positive and span more than a factor of 30.
pub(crate) fn covering(values: &[f64]) -> Scale {
    let low = values.iter().copied().fold(f64::INFINITY, f64::min);
    let high = values.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    if low > high {
        return Scale { from: 0.0, to: 1.0, kind: ScaleKind::Linear };
    }
    if low > 0.0 && high / low > 30.0 {
        return decades(values);
    }
    let width = if high > low { high - low } else { low.abs().max(1e-12) };
    let step = 10f64.powf((0.25 * width).log10().floor());
    let from = ((low / step) + 1e-9).floor() * step;
    let to = ((high / step) - 1e-9).ceil() * step;
    Scale { from, to: if to > from { to } else { from + step }, kind: ScaleKind::Linear }
}

/// The columns for which at least one record has a value, `verdict` always.
pub fn columns(system: &System, records: &[Record]) -> Vec<Column> {
    let mut all = vec![
        Column::Megno,
        Column::LyapunovTime,
        Column::EndTime,
        Column::EnergyError,
        Column::SmallestApproach,
        Column::SmallestApproachHill,
        Column::FrequencyDrift,
        Column::AngleAmplitude,
        Column::AngleCentre,
    ];
    for planet in 0..system.orbiting().count() {
        all.extend([
            Column::EMax(planet),
            Column::EMin(planet),
            Column::ARange(planet),
            Column::IMax(planet),
            Column::ERange(planet),
            Column::FrequencyDriftOf(planet),
        ]);
    }
    all.retain(|c| records.iter().any(|r| c.value(&r.assessment).is_some()));
    all.insert(0, Column::Verdict);
    all
}
