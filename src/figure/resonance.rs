//! Mean-motion resonances of a varied planet with its neighbours.

use std::f64::consts::TAU;

use super::nominal::{mass_parameter, stated};
use crate::system::{Axis, BodyRef, Group, Key, Quantity, Study, System};

/// The longer period is to the shorter as `p` to `q`, between the varied planet and `other`.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Resonance {
    pub p: u32,
    pub q: u32,
    /// Index of the other planet.
    pub other: usize,
}

impl Resonance {
    pub fn order(self) -> u32 {
        self.p - self.q
    }
}

/// Largest p of a resonance that is shown.
const LARGEST_P: u32 = 9;

/// Resonances inside the range of an axis (by index) of a study with their places in the axis's unit, lowest
/// order first.
///
/// Empty unless the axis moves the period or the semi-major axis of one planet. Neighbours are the next planets by
/// stated period (for a ratio: the planet it is a ratio to), and not those that the study moves as well.
/// Orders up to 2; up to 4 when that gives fewer than three; up to 8 when that gives none.
pub fn resonances(study: &Study, axis: usize, system: &System) -> Vec<(f64, Resonance)> {
    let Some(axis) = study.axes.get(axis) else { return Vec::new() };
    let BodyRef::Planet(planet) = axis.target.body else { return Vec::new() };
    if axis.target.key.group() != Group::Size {
        return Vec::new();
    }
    let ratio = matches!(axis.quantity, Quantity::RatioTo(_));
    let moved = |other: usize| {
        study.axes.iter().any(|a| {
            a.target.key.group() == Group::Size
                && (a.target.body == BodyRef::Planet(other) || a.target.body == BodyRef::All)
        })
    };
    let others: Vec<usize> = match &axis.quantity {
        Quantity::RatioTo(below) => match below.body {
            BodyRef::Planet(other) => vec![other],
            _ => Vec::new(),
        },
        _ => neighbours(system, planet),
    };
    let inside = |at: f64| (axis.from.min(axis.to)..=axis.from.max(axis.to)).contains(&at);
    let mut found = Vec::new();
    for (enough, orders) in [(3, 0..=2), (1, 3..=4), (1, 5..=8)] {
        for other in others.iter().copied().filter(|o| ratio || !moved(*o)) {
            for (p, q) in fractions(orders.clone()) {
                for periods in if p == q { vec![1.0] } else { vec![ratio_of(p, q), ratio_of(q, p)] } {
                    let at = place(axis, system, (planet, other), periods);
                    if let Some(at) = at.filter(|at| inside(*at)) {
                        found.push((at, Resonance { p, q, other }));
                    }
                }
            }
        }
        if found.len() >= enough {
            break;
        }
    }
    found.sort_by_key(|(_, r)| (r.order(), r.p, r.other));
    found
}

fn ratio_of(above: u32, below: u32) -> f64 {
    f64::from(above) / f64::from(below)
}

/// p:q without a common divisor, of these orders.
fn fractions(orders: std::ops::RangeInclusive<u32>) -> Vec<(u32, u32)> {
    let mut found = Vec::new();
    for order in orders {
        for q in 1..=LARGEST_P.saturating_sub(order) {
            let single = if order == 0 { q == 1 } else { divisor(order, q) == 1 };
            if single {
                found.push((q + order, q));
            }
        }
    }
    found
}

fn divisor(a: u32, b: u32) -> u32 {
    if b == 0 { a } else { divisor(b, a % b) }
}

fn period(system: &System, planet: usize) -> Option<f64> {
    stated(&BodyRef::Planet(planet), Key::Period, system).map(|m| m.value)
}

/// The next planets inside and outside by stated period.
fn neighbours(system: &System, planet: usize) -> Vec<usize> {
    let Some(own) = period(system, planet) else { return Vec::new() };
    let others = || (0..system.planets.len()).filter(|i| *i != planet);
    let with = |i: usize| period(system, i).map(|p| (p, i));
    let by_period = |a: &(f64, usize), b: &(f64, usize)| a.0.total_cmp(&b.0);
    let inner = others().filter_map(with).filter(|(p, _)| *p <= own).max_by(by_period);
    let outer = others().filter_map(with).filter(|(p, _)| *p > own).min_by(by_period);
    inner.into_iter().chain(outer).map(|(_, i)| i).collect()
}

/// Where on the axis the period of the varied planet is `ratio` times that of the other.
fn place(axis: &Axis, system: &System, (planet, other): (usize, usize), ratio: f64) -> Option<f64> {
    let size = |period: f64, of: usize| -> Option<f64> {
        if axis.target.key == Key::Period {
            return Some(period);
        }
        Some((mass_parameter(system, of)? * (period / TAU).powi(2)).cbrt())
    };
    let other_period = period(system, other)?;
    let own = size(ratio * other_period, planet)?;
    Some(match &axis.quantity {
        Quantity::Value => own / axis.scale,
        Quantity::Factor => own / stated(&axis.target.body, axis.target.key, system)?.value,
        Quantity::RatioTo(_) => own / size(other_period, other)?,
    })
}
