//! Sentences that more than one output needs.

use crate::assess::{ADAPTIVE, Plan, StepWhy};
use crate::survey::Record;
use crate::system::{Axis, BodyRef, Convention, Frame, Key, Pericentre, Span, Study, System, Transit};
use crate::units::YEAR_DAY;

/// A number for reading: three significant digits, exponents where plain digits would be long.
pub(crate) fn short(value: f64) -> String {
    if value == 0.0 {
        return "0".to_owned();
    }
    let size = value.abs();
    if !(1e-3..1e4).contains(&size) {
        let text = format!("{value:.2e}");
        return match text.split_once('e') {
            Some((digits, power)) if digits.contains('.') => {
                format!("{}e{power}", digits.trim_end_matches('0').trim_end_matches('.'))
            }
            _ => text,
        };
    }
    let decimals = (2 - size.log10().floor() as i32).clamp(0, 8) as usize;
    let text = format!("{value:.decimals$}");
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').to_owned() } else { text }
}

/// The same as it is printed: 4.63×10⁻¹⁰ for 4.63e-10.
pub(crate) fn printed(value: f64) -> String {
    let text = short(value);
    let Some((digits, power)) = text.split_once('e') else { return text };
    let raised = |letter: char| match letter {
        '-' => '⁻',
        '1' => '¹',
        '2' => '²',
        '3' => '³',
        '0' | '4'..='9' => char::from_u32(letter as u32 - '0' as u32 + '⁰' as u32).unwrap_or(letter),
        other => other,
    };
    let power: String = power.chars().map(raised).collect();
    if digits == "1" { format!("10{power}") } else { format!("{digits}×10{power}") }
}

/// A time in the unit that reads best.
pub(crate) fn time_words(day: f64) -> String {
    let year = day / YEAR_DAY;
    match year {
        y if y >= 1e9 => format!("{} Gyr", short(y / 1e9)),
        y if y >= 1e6 => format!("{} Myr", short(y / 1e6)),
        y if y >= 1e4 => format!("{} kyr", short(y / 1e3)),
        y if y >= 1.0 => format!("{} yr", short(y)),
        _ => format!("{} d", short(day)),
    }
}

pub(crate) fn span_words(study: &Study, plan: &Plan, number: fn(f64) -> String) -> String {
    match study.span {
        Span::Orbits(count) => {
            format!("{} inner orbits ({})", number(count), time_words(plan.span_day))
        }
        Span::Days(_) => time_words(plan.span_day),
    }
}

/// What must be known about cells that were ended for their chaos; nothing where none could be.
pub(crate) fn early_end_words(plan: &Plan) -> Option<&'static str> {
    plan.stop_when_chaotic.then_some("ended once certain; a later loss is not seen")
}

/// The steps that were really taken, and why.
pub(crate) fn step_words(plan: &Plan, records: &[Record]) -> String {
    let integrated = records.iter().filter(|r| r.filled.is_none());
    let steps = integrated.map(|r| r.assessment.step_day).filter(|s| s.is_finite());
    let (low, high) = steps.fold((f64::INFINITY, 0.0f64), |(l, h), s| (l.min(s), h.max(s)));
    let size = if low.is_infinite() {
        plan.step_day.map_or_else(|| "each cell's own".to_owned(), |s| format!("{} d", short(s)))
    } else if short(low) == short(high) {
        format!("{} d", short(low))
    } else {
        format!("{} to {} d", short(low), short(high))
    };
    let why = match plan.step_why {
        StepWhy::Pericentre { steps_per_passage, .. } => {
            format!("1/{} of the shortest pericentre passage", short(steps_per_passage))
        }
        StepWhy::Asked { .. } => "as the study asks".to_owned(),
    };
    format!("{size} ({why})")
}

/// The scheme by name, with what belongs to it.
pub(crate) fn scheme_words(scheme: &str) -> String {
    // The leapfrog alone is run with a corrector; the others reach their order without one.
    if scheme == "(2,2)" { format!("{scheme} with corrector") } else { scheme.to_owned() }
}

/// How many cells ended with a smaller step, and how many in the adaptive engine.
pub(crate) fn second_attempts(records: &[Record]) -> (u64, u64) {
    let adaptive = |r: &&Record| r.assessment.scheme == ADAPTIVE;
    let smaller = |r: &&Record| r.assessment.redone > 0 && r.assessment.scheme != ADAPTIVE;
    (records.iter().filter(smaller).count() as u64, records.iter().filter(adaptive).count() as u64)
}

/// A key as a sentence calls it.
fn key_words(key: Key) -> String {
    match key {
        Key::RvSemiAmplitude => "radial-velocity semi-amplitude".to_owned(),
        Key::MassRatio => "mass ratio to the star".to_owned(),
        Key::SemiMajorAxis => "semi-major axis".to_owned(),
        Key::ECosW => "e cos ω".to_owned(),
        Key::ESinW => "e sin ω".to_owned(),
        Key::SqrtECosW => "√e cos ω".to_owned(),
        Key::SqrtESinW => "√e sin ω".to_owned(),
        Key::SatelliteMassRatio => "mass ratio of the satellite".to_owned(),
        Key::SatelliteSemiMajorAxis => "semi-major axis of the satellite".to_owned(),
        plain => plain.word().replace('_', " "),
    }
}

/// The system with every axis at the end that `place` picks.
fn moved_to(place: fn(&Axis) -> f64, study: &Study, system: &System) -> System {
    let mut moved = system.clone();
    for axis in &study.axes {
        // An axis that cannot be applied was refused when the study was read.
        let _ = axis.apply(place(axis), &mut moved, system);
    }
    moved
}

/// The statements of one body that no axis moves or replaces: the same at both ends of the axes.
fn kept_keys(one: &BodyRef, study: &Study, ends: &[System; 2]) -> Vec<String> {
    let stated = |end: &System| end.bodies(one).first().map(|body| body.stated.clone()).unwrap_or_default();
    let (first, last) = (stated(&ends[0]), stated(&ends[1]));
    let varied = |key| study.axes.iter().any(|a| a.target.key == key && a.target.body.overlaps(one));
    // Statements turned into others and back may differ in the last digits.
    let same = |a: f64, b: f64| (a - b).abs() <= 1e-9 * a.abs().max(b.abs());
    let kept = first.iter().filter(|(key, measured)| {
        !varied(*key) && last.value(*key).is_some_and(|other| same(measured.value, other))
    });
    kept.map(|(key, _)| key_words(key)).collect()
}

/// What the axes move and what they leave, body by body: the statements that are the same wherever the axes stand.
pub(crate) fn held_words(study: &Study, system: &System) -> String {
    let ends = [moved_to(|a| a.from, study, system), moved_to(|a| a.to, study, system)];
    let mut bodies = vec![(BodyRef::Star, "the star")];
    let planets = system.planets.iter().enumerate();
    bodies.extend(planets.map(|(index, planet)| (BodyRef::Planet(index), planet.name.as_str())));
    bodies.extend(system.companion.iter().map(|body| (BodyRef::Companion, body.name.as_str())));
    let (moved, others): (Vec<_>, Vec<_>) =
        bodies.into_iter().partition(|(one, _)| study.axes.iter().any(|a| a.target.body.overlaps(one)));
    // Bodies that keep the same statements share a part.
    let mut parts: Vec<(String, Vec<&str>)> = Vec::new();
    for (one, name) in &moved {
        let kept = kept_keys(one, study, &ends).join(", ");
        match parts.iter_mut().find(|(words, _)| *words == kept) {
            Some((_, names)) => names.push(name),
            None => parts.push((kept, vec![name])),
        }
    }
    parts.retain(|(kept, _)| !kept.is_empty());
    match others.as_slice() {
        [] => {}
        [(_, name)] => parts.push(("all".to_owned(), vec![name])),
        _ => parts.push(("all".to_owned(), vec!["the other bodies"])),
    }
    let axes: Vec<&str> = study.axes.iter().map(|a| a.path.as_str()).collect();
    let varied = format!("varied: {}", axes.join(", "));
    let held: Vec<String> =
        parts.iter().map(|(kept, names)| format!("{kept} of {}", names.join(" and "))).collect();
    if held.is_empty() { varied } else { format!("{varied}; held as stated: {}", held.join("; ")) }
}

pub(crate) fn convention_words(convention: Convention, epoch_jd: Option<f64>) -> String {
    let frame = match convention.elements {
        Frame::Astrocentric => "astrocentric",
        Frame::Jacobi => "Jacobi",
        Frame::Barycentric => "barycentric",
    };
    let pericentre = match convention.pericentre {
        Pericentre::Planet => "of the planet",
        Pericentre::Star => "of the star",
    };
    let transit = match convention.transit {
        Transit::Plus90 => "+90",
        Transit::Minus90 => "\u{2212}90",
    };
    let epoch = epoch_jd.map_or_else(String::new, |jd| format!(", epoch JD {jd} TDB"));
    format!("{frame} elements, argument of pericentre {pericentre}, in transit at ν + ω = {transit}°{epoch}")
}

/// "1 cell", "2 cells", "2 blocks of steps": how many of a thing, and what follows its name.
pub fn counted(number: u64, thing: &str, of: &str) -> String {
    let s = if number == 1 { "" } else { "s" };
    format!("{number} {thing}{s}{of}")
}
