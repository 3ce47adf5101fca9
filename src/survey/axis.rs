//! Cell index → values on the axes → the system of that cell.
//!
//! The first axis runs fastest. Values and factors are set first, in the order of the study; ratios follow,
//! each after the axis that moves the body it refers to.

use std::f64::consts::TAU;

use super::SurveyError;
use crate::coords::{self, Configuration};
use crate::system::{Axis, BodyRef, Frame, Key, Measured, Quantity, Study, System, Target};
use crate::units::Dimension;

/// How many cells a study has.
pub fn cell_count(study: &Study) -> u64 {
    study.axes.iter().fold(1u64, |cells, axis| cells.saturating_mul(axis.cells as u64))
}

/// The index on each axis.
pub fn cell_indices(study: &Study, cell: u64) -> Vec<usize> {
    let mut rest = cell;
    let split = |axis: &Axis| {
        let cells = axis.cells.max(1) as u64;
        let index = rest % cells;
        rest /= cells;
        index as usize
    };
    study.axes.iter().map(split).collect()
}

/// The value on each axis, in the axis's unit.
pub fn cell_values(study: &Study, cell: u64) -> Vec<f64> {
    study.axes.iter().zip(cell_indices(study, cell)).map(|(axis, index)| axis.at(index)).collect()
}

/// The order in which the axes of a study are set.
///
/// Errors: two axes for one statement, a ratio of a body to itself, ratios that wait for each other.
pub fn order_of_axes(study: &Study) -> Result<Vec<usize>, SurveyError> {
    refuse_same_target(&study.axes)?;
    let is_ratio = |i: &usize| matches!(study.axes[*i].quantity, Quantity::RatioTo(_));
    let (mut waiting, mut order): (Vec<usize>, Vec<usize>) = (0..study.axes.len()).partition(is_ratio);
    for &index in &waiting {
        refuse_ratio_to_itself(&study.axes[index])?;
    }
    while !waiting.is_empty() {
        let free = waiting.iter().position(|&index| {
            waiting.iter().all(|&other| other == index || !moves_reference(&study.axes[other], &study.axes[index]))
        });
        match free {
            Some(place) => order.push(waiting.remove(place)),
            None => {
                return Err(SurveyError::Circular {
                    first: study.axes[waiting[0]].path.clone(),
                    second: study.axes[waiting[waiting.len() - 1]].path.clone(),
                });
            }
        }
    }
    Ok(order)
}

/// The stated system with the values of a cell in place; everything else stays as stated.
///
/// `order` is from [`order_of_axes`]. A factor counts from the stated value, a ratio from the other body's value
/// in this cell. When that body states another key of the kind, they count from the value that follows (a
/// period from a semi-major axis and the masses).
/// Errors: a value to count from that does not follow, or a value that the key may not have.
pub fn cell_system(system: &System, study: &Study, order: &[usize], cell: u64) -> Result<System, SurveyError> {
    let indices = cell_indices(study, cell);
    let mut moved = system.clone();
    for &place in order {
        let axis = &study.axes[place];
        move_along(axis, axis.at(indices[place]), &mut moved, system)?;
    }
    Ok(moved)
}

fn move_along(axis: &Axis, value: f64, moved: &mut System, stated: &System) -> Result<(), SurveyError> {
    let failed = |source| SurveyError::Vary { path: axis.path.clone(), source };
    match &axis.quantity {
        Quantity::Value => axis.apply(value, moved, stated).map_err(failed),
        Quantity::Factor => {
            let own = with_key_stated(stated, &axis.target, axis)?;
            axis.apply(value, moved, &own).map_err(failed)
        }
        Quantity::RatioTo(other) => {
            // The other body states the key only in this copy: what the file states about it must stay.
            let mut copy = with_key_stated(moved, other, axis)?;
            axis.apply(value, &mut copy, stated).map_err(failed)?;
            match axis.target.body {
                BodyRef::Star => moved.star = copy.star,
                BodyRef::Planet(index) => moved.planets[index] = copy.planets.swap_remove(index),
                BodyRef::All => moved.planets = copy.planets,
            }
            Ok(())
        }
    }
}

/// The system with `target` stated as itself, where a body states another key of the kind.
fn with_key_stated(system: &System, target: &Target, axis: &Axis) -> Result<System, SurveyError> {
    let bodies: Vec<BodyRef> = match &target.body {
        BodyRef::All => (0..system.planets.len()).map(BodyRef::Planet).collect(),
        one => vec![one.clone()],
    };
    let mut converted = system.clone();
    for body in bodies {
        let own = Target { body, key: target.key };
        let states_it = system.bodies(&own.body).iter().all(|b| b.stated.get(own.key).is_some());
        if !states_it {
            let measured = follows(system, &own, axis)?;
            converted
                .set(&own, measured)
                .map_err(|source| SurveyError::Vary { path: axis.path.clone(), source: source.into() })?;
        }
    }
    Ok(converted)
}

fn refuse_same_target(axes: &[Axis]) -> Result<(), SurveyError> {
    for (place, second) in axes.iter().enumerate() {
        for first in &axes[..place] {
            let (a, b) = (&first.target, &second.target);
            let kin = a.key == b.key || (a.key.group() == b.key.group() && !is_component_pair(a.key, b.key));
            if kin && a.body.overlaps(&b.body) {
                return Err(SurveyError::SameTarget {
                    first: first.path.clone(),
                    second: second.path.clone(),
                    key: b.key.word(),
                });
            }
        }
    }
    Ok(())
}

/// The two components of one vector are set together.
fn is_component_pair(a: Key, b: Key) -> bool {
    matches!(
        (a, b),
        (Key::ECosW, Key::ESinW)
            | (Key::ESinW, Key::ECosW)
            | (Key::SqrtECosW, Key::SqrtESinW)
            | (Key::SqrtESinW, Key::SqrtECosW)
    )
}

fn refuse_ratio_to_itself(axis: &Axis) -> Result<(), SurveyError> {
    match &axis.quantity {
        Quantity::RatioTo(other) if other.body == BodyRef::All || axis.target.body.overlaps(&other.body) => {
            Err(SurveyError::RatioToItself { path: axis.path.clone() })
        }
        _ => Ok(()),
    }
}

fn moves_reference(mover: &Axis, ratio: &Axis) -> bool {
    matches!(&ratio.quantity, Quantity::RatioTo(other) if mover.target.body.overlaps(&other.body))
}

/// The number of a key that a body does not state, from its configuration.
///
/// Errors: keys that do not follow from a configuration alone, systems that are none.
fn follows(system: &System, target: &Target, axis: &Axis) -> Result<Measured, SurveyError> {
    let body = system.body_word(&target.body).to_string();
    let key = target.key.word();
    let not_stated =
        || SurveyError::NotStated { path: axis.path.clone(), body: body.clone(), key: target.key.word() };
    let BodyRef::Planet(planet) = target.body else { return Err(not_stated()) };
    if !FOLLOW.contains(&target.key) {
        return Err(not_stated());
    }
    let configuration = coords::configure(system).map_err(|source| SurveyError::Underivable {
        path: axis.path.clone(),
        body: body.clone(),
        key,
        source,
    })?;
    let value = derived(&configuration, planet, target.key).ok_or_else(not_stated)?;
    let unit = match target.key.dimension() {
        Dimension::Time => "d",
        Dimension::Length => "au",
        Dimension::Mass => "Mearth",
        Dimension::Angle => "deg",
        _ => "",
    };
    Ok(Measured::exact(value, unit))
}

/// Keys that every configuration has, whichever key of the kind is stated.
const FOLLOW: [Key; 6] =
    [Key::Period, Key::SemiMajorAxis, Key::Mass, Key::MassRatio, Key::Eccentricity, Key::Inclination];

/// The value of a key in a configuration, inner units.
fn derived(configuration: &Configuration, planet: usize, key: Key) -> Option<f64> {
    let body = &configuration.planets[planet];
    match key {
        Key::Mass => Some(body.gm),
        Key::MassRatio => Some(body.gm / configuration.star_gm),
        Key::SemiMajorAxis => Some(body.elements.semi_major_axis_au),
        Key::Eccentricity => Some(body.elements.eccentricity),
        Key::Inclination => Some(body.elements.inclination),
        Key::Period => Some(period_day(configuration, planet)),
        _ => None,
    }
}

/// Kepler's third law, 2π √(a³/μ), with the mass parameter μ of the frame of the stated elements.
fn period_day(configuration: &Configuration, planet: usize) -> f64 {
    let axis_au = configuration.planets[planet].elements.semi_major_axis_au;
    let size = |index: usize| configuration.planets[index].elements.semi_major_axis_au;
    let counted = |other: usize| match configuration.frame {
        Frame::Astrocentric => other == planet,
        Frame::Jacobi => other == planet || size(other) < size(planet),
        Frame::Barycentric => true,
    };
    let planets = (0..configuration.planets.len()).filter(|i| counted(*i)).map(|i| configuration.planets[i].gm);
    let gm = configuration.star_gm + planets.sum::<f64>();
    TAU * (axis_au * axis_au * axis_au / gm).sqrt()
}
