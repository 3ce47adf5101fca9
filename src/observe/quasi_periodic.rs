//! The quasi-periodic decomposition of a motion: every line with the name of its combination.

use super::ElementSeries;
use super::combination::{Combination, Fundamental, Kind, Namer, Rule};
use super::frequency::fundamentals;
use crate::num::{Complex, FourierError, Line, Search, decompose};
use std::f64::consts::TAU;

/// How near a line must be to a combination, in resolution elements 2π/T.
const TOLERANCE: f64 = 0.05;

/// A line of a signal with its name.
#[derive(Clone, Debug, PartialEq)]
pub struct NamedLine {
    pub line: Line,
    /// None when no simple combination is near, or the line is not resolved.
    pub name: Option<Combination>,
}

/// Lines of a exp(iλ) and e exp(iϖ) of every planet.
#[derive(Clone, Debug, PartialEq)]
pub struct QuasiPeriodic {
    /// Independent: in a resonance one g has given way to the libration.
    pub fundamentals: Vec<Fundamental>,
    /// The g that gave way, with the relation that ties it, in terms of the fundamentals with it at the end.
    pub tied: Option<(Fundamental, Combination)>,
    /// Per planet: a exp(iλ), au.
    pub motions: Vec<Vec<NamedLine>>,
    /// Per planet: e exp(iϖ).
    pub pericentres: Vec<Vec<NamedLine>>,
}

/// Decomposition of all planets' a exp(iλ) and e exp(iϖ) into named lines.
///
/// Fundamentals as [`fundamentals`]. When they are tied (Σ k n + Σ k g = 0 to 1/20 of a resolution element, as in a
/// mean-motion resonance) and the frequency of a libration (rad/day) is given, the tied g with coefficient ±1 is left out
/// and "l" comes in its place. Lines within 1/20 of a resolution element of a combination are given its name.
/// `names` are those of the planets. Errors: [`FourierError`]. Source: Laskar (1990); as a table of a resonant pair Correia
/// et al. (2009).
pub fn quasi_periodic(
    series: &ElementSeries<'_>,
    names: &[String],
    libration_rad_day: Option<f64>,
    search: Search,
) -> Result<QuasiPeriodic, FourierError> {
    let tolerance = TOLERANCE * TAU / series.span_day();
    let mut all = fundamentals(series, names, search)?;
    let tied = libration_rad_day.and_then(|rad_day| give_way(&mut all, rad_day, tolerance));
    // Samples may fold the fastest lines.
    let fold = TAU / series.step_day();
    let namer = Namer::new(&all, Rule::PLANE, fold);
    let table = |signal: Vec<Complex>| -> Result<Vec<NamedLine>, FourierError> {
        let spectrum = decompose(&signal, series.step_day(), search)?;
        let name = |line: &Line| line.resolved.then(|| namer.name(line.frequency, tolerance)).flatten();
        let named = |line: Line| NamedLine { name: name(&line), line };
        Ok(spectrum.lines.into_iter().map(named).collect())
    };
    let planets = 0..series.planets();
    let motions = planets.clone().map(|k| table(series.motion_signal(k))).collect::<Result<_, _>>()?;
    let pericentres = planets.map(|k| table(series.pericentre_signal(k))).collect::<Result<_, _>>()?;
    Ok(QuasiPeriodic { fundamentals: all, tied, motions, pericentres })
}

/// Replaces the g of a relation among the fundamentals by the libration; what it was, and the relation.
fn give_way(
    all: &mut Vec<Fundamental>,
    libration_rad_day: f64,
    tolerance: f64,
) -> Option<(Fundamental, Combination)> {
    let mut relation = Namer::new(all, Rule::ANGLE, 0.0).relation(tolerance)?;
    let moving = all.iter().zip(&relation.coefficients).any(|(f, k)| f.kind == Kind::Motion && *k != 0);
    let at = all
        .iter()
        .zip(&relation.coefficients)
        .position(|(f, k)| f.kind == Kind::Pericentre && k.abs() == 1)
        .filter(|_| moving)?;
    let gone = all.remove(at);
    let coefficient = relation.coefficients.remove(at);
    // The libration is no part of the relation; the g stands at the end.
    relation.coefficients.extend([0, coefficient]);
    all.push(Fundamental { name: "l".into(), kind: Kind::Libration, rad_day: libration_rad_day });
    Some((gone, relation))
}
