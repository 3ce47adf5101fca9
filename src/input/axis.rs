//! An axis as wished in words → a checked [`Axis`].

use std::ops::Range;

use super::error::Fault;
use super::nearest::did_you_mean;
use super::quantity::Written;
use super::source::Complaint;
use crate::system::{Axis, BodyRef, Key, Measured, PathError, Quantity, Spacing, System, Target, VaryError};
use crate::units::{Dimension, Unit};

/// How many standard deviations to either side an axis without `from` and `to` reaches.
const SIGMAS: f64 = 3.0;

/// What was asked for.
#[derive(Clone, Debug)]
pub(crate) struct AxisWish {
    pub path: String,
    pub factor: bool,
    pub from: Option<Written>,
    pub to: Option<Written>,
    pub cells: usize,
    pub spacing: Spacing,
}

/// Which part of an axis a complaint is about; ranges are bytes of that part's text.
#[derive(Clone, Debug)]
pub(crate) enum Part {
    Path(Range<usize>),
    From(Range<usize>),
    To(Range<usize>),
    Cells,
    Spacing,
    As,
}

type AxisFail = (Part, Complaint);

/// Lays an axis out over a system.
pub(crate) fn lay_out(wish: &AxisWish, system: &System) -> Result<Axis, AxisFail> {
    let (target, quantity) = read_path(wish, system)?;
    let draft = Axis {
        path: wish.path.trim().to_string(),
        target,
        quantity,
        from: 0.0,
        to: 0.0,
        unit: "",
        scale: 1.0,
        cells: wish.cells,
        spacing: wish.spacing,
    };
    let axis = match (&wish.from, &wish.to) {
        (Some(from), Some(to)) => from_words(draft, from, to)?,
        (None, None) => from_uncertainty(draft, wish, system)?,
        (Some(_), None) | (None, Some(_)) => {
            let (part, absent) =
                if wish.from.is_some() { (Part::From(0..0), "to") } else { (Part::To(0..0), "from") };
            let complaint = Complaint::new(Fault::MissingKey, format!("no {absent}"));
            let complaint = complaint.allowed("both from and to, or neither (±3σ of the stated uncertainty)");
            return Err((part, complaint.advice(format!("add {absent}, or take the other one out"))));
        }
    };
    check_cells(&axis)?;
    check_ends(&axis, wish, system)?;
    Ok(axis)
}

fn whole(path: &str) -> Part {
    Part::Path(0..path.len())
}

/// The target, and what the axis counts.
fn read_path(wish: &AxisWish, system: &System) -> Result<(Target, Quantity), AxisFail> {
    let path = wish.path.as_str();
    let (first, second) = match path.split_once('/') {
        None => (path, None),
        Some((first, second)) => (first, Some((second, first.len() + 1))),
    };
    let target = read_target(first, 0, system)?;
    if target.key == Key::Age {
        let complaint =
            Complaint::new(Fault::BadPath, "the age of the star").allowed("a key that moves a body");
        return Err((
            whole(path),
            complaint.advice("vary another key; the age has no influence on the orbits"),
        ));
    }
    let Some((second, offset)) = second else {
        if !wish.factor {
            return Ok((target, Quantity::Value));
        }
        check_factor(&target, path, system)?;
        return Ok((target, Quantity::Factor));
    };
    if wish.factor {
        let complaint =
            Complaint::new(Fault::BadAxis, "as = \"factor\" with a ratio").allowed("one of the two");
        return Err((
            Part::As,
            complaint.advice("take as = \"factor\" out; a ratio is a plain number already"),
        ));
    }
    let other = read_target(second, offset, system)?;
    check_ratio(&target, &other, path, offset, system)?;
    Ok((target, Quantity::RatioTo(other)))
}

fn read_target(text: &str, offset: usize, system: &System) -> Result<Target, AxisFail> {
    let lead = text.len() - text.trim_start().len();
    let range = offset + lead..offset + text.trim_end().len().max(lead);
    system.target(text).map_err(|error| (Part::Path(range), path_complaint(&error, system)))
}

fn path_complaint(error: &PathError, system: &System) -> Complaint {
    let example = system.planets.first().map_or("b", |planet| planet.name.as_str());
    match error {
        PathError::Form { path } => Complaint::new(Fault::BadPath, format!("\"{path}\""))
            .allowed("body.key, all.key, or body.key / body.key")
            .advice(format!("write, as an example, \"{example}.period\"")),
        PathError::NoBody { found, known } => Complaint::new(Fault::UnknownBody, format!("\"{found}\""))
            .allowed(known.join(", "))
            .advice(did_you_mean(
                found,
                known.iter().map(String::as_str),
                "use the name of a body in the system file",
            )),
        PathError::NoKey { found, allowed } => Complaint::new(Fault::UnknownKey, format!("\"{found}\""))
            .allowed(allowed.join(", "))
            .advice(did_you_mean(found, allowed.iter().copied(), "use one of the allowed keys")),
        PathError::NotOfBody { body, key, allowed } => {
            Complaint::new(Fault::BadPath, format!("\"{}\" of \"{body}\"", key.word()))
                .allowed(allowed.join(", "))
                .advice("use a key that this body may state")
        }
    }
}

/// Every body the factor acts on states the key, and not as 0.
fn check_factor(target: &Target, path: &str, system: &System) -> Result<(), AxisFail> {
    if target.key.dimension() == Dimension::Date {
        let complaint = Complaint::new(Fault::BadAxis, "a factor on a date").allowed("from and to as dates");
        return Err((Part::As, complaint.advice("take as = \"factor\" out")));
    }
    for body in system.bodies(&target.body) {
        let found = match body.stated.value(target.key) {
            None => format!("{} of {} is not stated", target.key.word(), body.name),
            Some(0.0) => format!("{} of {} is 0", target.key.word(), body.name),
            Some(_) => continue,
        };
        let complaint =
            Complaint::new(Fault::BadAxis, found).allowed("a stated number for the factor to act on");
        let advice = "vary the key that the system file states, or leave as = \"factor\" out";
        return Err((whole(path), complaint.advice(advice)));
    }
    Ok(())
}

fn check_ratio(
    target: &Target,
    other: &Target,
    path: &str,
    offset: usize,
    system: &System,
) -> Result<(), AxisFail> {
    let refuse = |part, found: String, allowed: &str, advice: &str| {
        Err((part, Complaint::new(Fault::BadPath, found).allowed(allowed).advice(advice)))
    };
    let blanks = path[offset..].len() - path[offset..].trim_start().len();
    let second = Part::Path(offset + blanks..path.len());
    let (dimension, under) = (target.key.dimension(), other.key.dimension());
    if dimension != under || dimension == Dimension::Date {
        let found = format!("{} over {}", dimension.words(), under.words());
        return refuse(
            whole(path),
            found,
            "two keys of one kind, not dates",
            "divide like by like, as periods",
        );
    }
    if other.body == BodyRef::All {
        return refuse(second, "\"all\" under the line".into(), "one body", "name one planet or the star");
    }
    if target.body.overlaps(&other.body) && target.key.group() == other.key.group() {
        let found = "a key over itself".to_string();
        return refuse(whole(path), found, "keys of different bodies", "name another body under the line");
    }
    let bodies = system.bodies(&other.body);
    let stated = bodies.first().and_then(|body| body.stated.value(other.key));
    if stated.is_none_or(|value| value == 0.0) {
        let found = format!("{}.{} is 0 or not stated", system.body_word(&other.body), other.key.word());
        return refuse(
            second,
            found,
            "a stated number other than 0",
            "use the key that the system file states",
        );
    }
    Ok(())
}

/// Ends as written; `to` is converted to the unit of `from`.
fn from_words(mut axis: Axis, from: &Written, to: &Written) -> Result<Axis, AxisFail> {
    let dimension = match axis.quantity {
        Quantity::Value => axis.target.key.dimension(),
        Quantity::Factor | Quantity::RatioTo(_) => Dimension::Number,
    };
    let first = from.unit_of(dimension).map_err(|(range, complaint)| (Part::From(range), complaint))?;
    let second = to.unit_of(dimension).map_err(|(range, complaint)| (Part::To(range), complaint))?;
    axis.from = from.value;
    axis.to = to.value;
    if let (Some(first), Some(second)) = (first, second) {
        axis.unit = first.word;
        axis.scale = first.inner;
        if first != second {
            axis.to = to.value * second.inner / first.inner;
        }
    }
    Ok(axis)
}

/// ±3σ of what is stated, cut at the key's range; an angle reaches half a turn to either side at most.
fn from_uncertainty(mut axis: Axis, wish: &AxisWish, system: &System) -> Result<Axis, AxisFail> {
    let measured = stated_for_box(&axis, wish, system)?;
    let (Some(plus), Some(minus)) = (measured.plus, measured.minus) else {
        let word = axis.target.key.word();
        let found = format!("{word} of {} without uncertainty", system.body_word(&axis.target.body));
        return Err((whole(&wish.path), no_uncertainty(found)));
    };
    let allowed = axis.target.key.allowed(axis.target.body.holder());
    let half_turn =
        if axis.target.key.dimension() == Dimension::Angle { std::f64::consts::PI } else { f64::INFINITY };
    let low = allowed.clip(measured.value - (SIGMAS * minus).min(half_turn), measured.value);
    let high = allowed.clip(measured.value + (SIGMAS * plus).min(half_turn), measured.value);
    let per_place = match &axis.quantity {
        Quantity::Value => {
            axis.unit = measured.unit;
            axis.scale = Unit::from_word(measured.unit).map_or(1.0, |unit| unit.inner);
            axis.scale
        }
        Quantity::Factor => measured.value,
        Quantity::RatioTo(other) => system
            .bodies(&other.body)
            .first()
            .and_then(|body| body.stated.value(other.key))
            .unwrap_or(f64::NAN),
    };
    axis.from = low / per_place;
    axis.to = high / per_place;
    Ok(axis)
}

fn no_uncertainty(found: String) -> Complaint {
    Complaint::new(Fault::NoUncertainty, found)
        .allowed("a stated value ± uncertainty, or from and to")
        .advice("give from and to of the axis in a study file, or state the uncertainty in the system file")
}

fn stated_for_box(axis: &Axis, wish: &AxisWish, system: &System) -> Result<Measured, AxisFail> {
    let key = axis.target.key;
    if axis.target.body == BodyRef::All {
        let complaint = no_uncertainty("\"all\", whose planets have different uncertainties".to_string());
        return Err((whole(&wish.path), complaint));
    }
    let bodies = system.bodies(&axis.target.body);
    let stated = bodies.first().map(|body| &body.stated);
    stated.and_then(|stated| stated.get(key)).ok_or_else(|| {
        let instead: Vec<&str> = stated
            .map(|stated| {
                stated.iter().filter(|(k, _)| k.group() == key.group()).map(|(k, _)| k.word()).collect()
            })
            .unwrap_or_default();
        let body = system.body_word(&axis.target.body);
        let mut found = format!("{} is not stated for {body}", key.word());
        if !instead.is_empty() {
            found = format!("{found} (stated: {})", instead.join(", "));
        }
        (whole(&wish.path), no_uncertainty(found))
    })
}

fn check_cells(axis: &Axis) -> Result<(), AxisFail> {
    let empty = |found: String, advice: &str| {
        let complaint = Complaint::new(Fault::EmptyAxis, found);
        Err((
            Part::Cells,
            complaint
                .allowed("two different ends and 2 cells or more, or one place and 1 cell")
                .advice(advice),
        ))
    };
    match axis.cells {
        0 => empty("0 cells".to_string(), "give a number of cells, as cells = 100"),
        1 if axis.from != axis.to => {
            empty("1 cell for two different ends".to_string(), "give more cells, or the same from and to")
        }
        cells if cells > 1 && axis.from == axis.to => empty(
            format!("{cells} cells from {} to the same", axis.from),
            "give different from and to, or cells = 1",
        ),
        _ => Ok(()),
    }
}

/// Both ends can be reached, on a log axis too.
fn check_ends(axis: &Axis, wish: &AxisWish, system: &System) -> Result<(), AxisFail> {
    let value_at = |written: &Option<Written>| written.as_ref().map_or(0..0, |w| w.value_at.clone());
    let given = wish.from.is_some();
    let ends = [(axis.from, Part::From(value_at(&wish.from))), (axis.to, Part::To(value_at(&wish.to)))];
    for (place, part) in ends {
        let part = if given { part } else { whole(&wish.path) };
        if axis.spacing == Spacing::Log && place <= 0.0 {
            let found = format!("{place} on a log axis");
            let complaint = Complaint::new(Fault::BadAxis, found).allowed("from and to above 0");
            let part = if given { part } else { Part::Spacing };
            return Err((part, complaint.advice("start above 0, or write spacing = \"linear\"")));
        }
        let mut moved = system.clone();
        axis.apply(place, &mut moved, system).map_err(|error| (part, vary_complaint(&error, wish)))?;
    }
    Ok(())
}

fn vary_complaint(error: &VaryError, wish: &AxisWish) -> Complaint {
    match error {
        VaryError::OutOfRange { value, allowed, .. } => Complaint::new(Fault::OutOfRange, value.clone())
            .about(wish.path.trim())
            .allowed(*allowed)
            .advice("let the axis end inside the range"),
        VaryError::Set(error) => Complaint::new(Fault::Conflict, error.to_string())
            .allowed("the pair that is stated, or eccentricity and argument_of_pericentre")
            .advice("vary a component of the stated pair"),
        VaryError::NotStated { .. } => Complaint::new(Fault::BadAxis, error.to_string())
            .allowed("a stated number")
            .advice("state it in the system file"),
    }
}
