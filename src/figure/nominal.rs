//! Where the stated configuration lies on the axes of a study.

use std::f64::consts::TAU;

use super::grid;
use crate::coords::{Configuration, configure};
use crate::system::{Axis, BodyRef, Frame, Key, Measured, Pericentre, Quantity, Study, System};
use crate::units::Dimension;

/// The stated value on an axis with its error bars, in the axis's unit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Nominal {
    pub value: f64,
    pub plus: Option<f64>,
    pub minus: Option<f64>,
}

/// The stated value on an axis.
///
/// What is not stated is derived from the configuration; error bars are carried over for period ↔ semi-major axis (2/3
/// or 3/2 of the relative error) and for ratios (relative errors in quadrature). Absent when nothing follows.
pub fn nominal(axis: &Axis, system: &System) -> Option<Nominal> {
    let found = stated(&axis.target.body, axis.target.key, system)?;
    match &axis.quantity {
        Quantity::Value => {
            let scale = |v: f64| v / axis.scale;
            let mut value = scale(found.value);
            if axis.target.key.dimension() == Dimension::Angle {
                value = turned_into(axis, value, scale(TAU));
            }
            Some(Nominal { value, plus: found.plus.map(scale), minus: found.minus.map(scale) })
        }
        Quantity::Factor => {
            let share = |v: f64| v / found.value.abs();
            Some(Nominal { value: 1.0, plus: found.plus.map(share), minus: found.minus.map(share) })
        }
        Quantity::RatioTo(other) => {
            let below = stated(&other.body, other.key, system)?;
            let value = found.value / below.value;
            let bar = |mine: Option<f64>, theirs: Option<f64>| {
                if mine.is_none() && theirs.is_none() {
                    return None;
                }
                let (a, b) = (mine.unwrap_or(0.0) / found.value, theirs.unwrap_or(0.0) / below.value);
                Some(value.abs() * a.hypot(b))
            };
            let plus = bar(found.plus, below.minus);
            Some(Nominal { value, plus, minus: bar(found.minus, below.plus) })
        }
    }
}

/// The cell that holds the stated values; absent when they lie outside the axes.
pub fn nominal_cell(study: &Study, system: &System) -> Option<u64> {
    let mut cell = 0;
    let mut stride = 1;
    for axis in &study.axes {
        cell += stride * grid::cell_of(axis, nominal(axis, system)?.value)? as u64;
        stride *= axis.cells as u64;
    }
    Some(cell)
}

/// The same angle in the turn that the axis shows.
fn turned_into(axis: &Axis, value: f64, turn: f64) -> f64 {
    let low = axis.from.min(axis.to);
    let inside = (value - low).rem_euclid(turn) + low;
    if inside <= axis.from.max(axis.to) { inside } else { value }
}

/// A key of a body in inner units: as stated, else derived.
pub(crate) fn stated(body: &BodyRef, key: Key, system: &System) -> Option<Measured> {
    match body {
        BodyRef::Star => system.star.stated.get(key),
        one @ (BodyRef::Planet(_) | BodyRef::Companion) => {
            let index = system.orbiting_place(one)?;
            system.orbiting().nth(index)?.stated.get(key).or_else(|| derived(index, key, system))
        }
        BodyRef::All => {
            let first = stated(&BodyRef::Planet(0), key, system)?;
            let same = (1..system.planets.len())
                .all(|i| stated(&BodyRef::Planet(i), key, system).is_some_and(|m| m.value == first.value));
            same.then_some(first)
        }
    }
}

fn derived(planet: usize, key: Key, system: &System) -> Option<Measured> {
    let words = &system.orbiting().nth(planet)?.stated;
    match (key, words.get(Key::Period), words.get(Key::SemiMajorAxis)) {
        (Key::SemiMajorAxis, Some(period), _) => {
            let value = (mass_parameter(system, planet)? * (period.value / TAU).powi(2)).cbrt();
            return Some(carried(period, value, 2.0 / 3.0));
        }
        (Key::Period, _, Some(size)) => {
            let value = TAU * (size.value.powi(3) / mass_parameter(system, planet)?).sqrt();
            return Some(carried(size, value, 1.5));
        }
        _ => {}
    }
    let configuration = configure(system).ok()?;
    let found = configuration.planets.get(planet)?;
    let elements = &found.elements;
    let pericentre = elements.argument_of_pericentre
        + if system.convention.pericentre == Pericentre::Star { TAU / 2.0 } else { 0.0 };
    let eccentricity = elements.eccentricity;
    let value = match key {
        Key::Mass => found.gm,
        Key::MassRatio => found.gm / configuration.star_gm,
        Key::Radius => found.radius_au,
        Key::Eccentricity => eccentricity,
        Key::ECosW => eccentricity * pericentre.cos(),
        Key::ESinW => eccentricity * pericentre.sin(),
        Key::SqrtECosW => eccentricity.sqrt() * pericentre.cos(),
        Key::SqrtESinW => eccentricity.sqrt() * pericentre.sin(),
        Key::ArgumentOfPericentre => pericentre,
        Key::LongitudeOfPericentre => pericentre + elements.ascending_node,
        Key::MeanAnomaly => elements.mean_anomaly,
        Key::MeanLongitude => elements.mean_anomaly + pericentre + elements.ascending_node,
        Key::Inclination => elements.inclination,
        Key::AscendingNode => elements.ascending_node,
        _ => return None,
    };
    value.is_finite().then(|| Measured::exact(value, ""))
}

fn carried(from: Measured, value: f64, power: f64) -> Measured {
    let bar = |b: f64| power * value * b / from.value;
    Measured { value, plus: from.plus.map(bar), minus: from.minus.map(bar), unit: "" }
}

/// G × mass that rules a planet's stated orbit, au³ day⁻²; the star alone when the planets' masses do not follow.
pub(crate) fn mass_parameter(system: &System, planet: usize) -> Option<f64> {
    let Ok(configuration) = configure(system) else { return system.star.stated.value(Key::Mass) };
    let own = configuration.planets.get(planet)?;
    let planets: f64 = match system.convention.elements {
        Frame::Astrocentric => own.gm,
        Frame::Barycentric => configuration.planets.iter().map(|p| p.gm).sum(),
        Frame::Jacobi => inner_gm(&configuration, own.elements.semi_major_axis_au),
    };
    Some(configuration.star_gm + planets)
}

/// Of all planets up to this size of orbit, itself included.
fn inner_gm(configuration: &Configuration, semi_major_axis_au: f64) -> f64 {
    let inner = configuration.planets.iter().filter(|p| p.elements.semi_major_axis_au <= semi_major_axis_au);
    inner.map(|p| p.gm).sum()
}
