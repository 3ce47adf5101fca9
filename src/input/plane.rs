//! What must hold between the axes of one study.

use super::error::Fault;
use super::source::Complaint;
use crate::system::{Axis, CompanionPlace, Frame, Group, Key, Pair, Physics, Quantity, System};

/// Whether axes hinder each other, and whether every corner of the map can be had: the index of the axis to point
/// at, and why.
pub(crate) fn check_together(axes: &[Axis], system: &System) -> Result<(), (usize, Complaint)> {
    if let [first, second] = axes {
        check_pair(first, second)?;
    }
    for corner in 0..1_usize << axes.len() {
        let place = |index: usize| if corner >> index & 1 == 0 { axes[index].from } else { axes[index].to };
        let Some(fault) = corner_fault(axes, place, system) else { continue };
        let places: Vec<String> = (axes.iter().enumerate())
            .map(|(index, axis)| {
                format!("{} = {} {}", axis.path, place(index), axis.unit).trim_end().to_string()
            })
            .collect();
        let found = format!("at the corner {}: {fault}", places.join(", "));
        let complaint = Complaint::new(Fault::OutOfRange, found)
            .allowed("bound orbits and finite masses on the whole map")
            .advice("narrow an axis");
        return Err((axes.len() - 1, complaint));
    }
    Ok(())
}

fn check_pair(first: &Axis, second: &Axis) -> Result<(), (usize, Complaint)> {
    if first.target.body.overlaps(&second.target.body) && same_question(first.target.key, second.target.key) {
        let found = format!("\"{}\" and \"{}\"", first.path, second.path);
        let complaint = Complaint::new(Fault::Conflict, found).allowed("axes that move different things");
        return Err((1, complaint.advice("the second axis would undo the first; vary another key")));
    }
    if let Quantity::RatioTo(other) = &first.quantity
        && other.body.overlaps(&second.target.body)
        && other.key.group() == second.target.key.group()
    {
        let found = format!("the second axis moves what \"{}\" divides by", first.path);
        let complaint =
            Complaint::new(Fault::Conflict, found).allowed("axes that are applied in the order of the file");
        return Err((0, complaint.advice("put this [[axis]] after the other one")));
    }
    Ok(())
}

/// What is wrong with one corner of the map.
fn corner_fault(axes: &[Axis], place: impl Fn(usize) -> f64, system: &System) -> Option<String> {
    let mut corner = system.clone();
    for (index, axis) in axes.iter().enumerate() {
        if let Err(error) = axis.apply(place(index), &mut corner, system) {
            return Some(error.to_string());
        }
    }
    if let Some(fault) = companion_fault(&corner) {
        return Some(fault);
    }
    corner
        .orbiting()
        .find_map(|planet| planet.stated.check_together().err())
        .map(|unsound| unsound.to_string())
}

/// What the system file may not say about planets that circle a pair of stars (see [`super::companion`]).
fn companion_fault(corner: &System) -> Option<String> {
    let circumbinary = corner.companion_place().is_some_and(CompanionPlace::has_circumbinary);
    if circumbinary && corner.convention.elements != Frame::Jacobi {
        return Some(
            "a planet is outside the companion's orbit, which needs elements = \"jacobi\"".to_string(),
        );
    }
    let terms = corner.physics != Physics::default();
    (circumbinary && terms)
        .then(|| "a planet is outside the companion's orbit, where [physics] has no meaning".to_string())
}

/// Whether one of the keys undoes the other.
fn same_question(first: Key, second: Key) -> bool {
    match (Pair::of(first), Pair::of(second)) {
        (Some(one), Some(other)) => one != other || first == second,
        (Some(_), None) => matches!(second.group(), Group::Shape | Group::Pericentre),
        (None, Some(_)) => matches!(first.group(), Group::Shape | Group::Pericentre),
        (None, None) => first.group() == second.group(),
    }
}
