//! Sentences that more than one output needs.

use crate::assess::{Plan, StepWhy};
use crate::survey::Record;
use crate::system::{BodyRef, Convention, Frame, Pericentre, Span, Study, System, Transit};
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

/// What the axes move and what they leave: the statements of the moved bodies once every axis has been applied.
pub(crate) fn held_words(study: &Study, system: &System) -> String {
    let mut moved = system.clone();
    for axis in &study.axes {
        // An axis that cannot be applied was refused when the study was read.
        let _ = axis.apply(axis.from, &mut moved, system);
    }
    let mut bodies: Vec<&BodyRef> = study.axes.iter().map(|a| &a.target.body).collect();
    bodies.dedup();
    let mut parts = Vec::new();
    for body in bodies {
        let (name, stated) = match body {
            BodyRef::Star => ("the star", &moved.star.stated),
            BodyRef::Planet(index) => match moved.planets.get(*index) {
                Some(planet) => (planet.name.as_str(), &planet.stated),
                None => continue,
            },
            BodyRef::Companion => match &moved.companion {
                Some(companion) => (companion.name.as_str(), &companion.stated),
                None => continue,
            },
            BodyRef::All => match moved.planets.first() {
                Some(planet) => ("each planet", &planet.stated),
                None => continue,
            },
        };
        let varied = |key| study.axes.iter().any(|a| a.target.body == *body && a.target.key == key);
        let kept: Vec<&str> =
            stated.iter().filter(|(key, _)| !varied(*key)).map(|(key, _)| key.word()).collect();
        if !kept.is_empty() {
            parts.push(format!("{} of {name}", kept.join(", ").replace('_', " ")));
        }
    }
    parts.push("all of the other bodies".to_owned());
    let axes: Vec<&str> = study.axes.iter().map(|a| a.path.as_str()).collect();
    format!("varied: {}; held as stated: {}", axes.join(", "), parts.join("; "))
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
