//! How axes and columns are called in a figure.

use super::label::Label;
use crate::system::{Axis, BodyRef, Key, Quantity, System, Target};

/// Words and symbol of a key.
fn words(key: Key) -> (&'static str, &'static str) {
    match key {
        Key::Mass => ("mass", "m"),
        Key::MinimumMass => ("minimum mass", "m sin i"),
        Key::MassRatio => ("mass ratio to the star", "q"),
        Key::RvSemiAmplitude => ("radial-velocity semi-amplitude", "K"),
        Key::Radius => ("radius", "R"),
        Key::Age => ("age", "t"),
        Key::Period => ("period", "P"),
        Key::SemiMajorAxis => ("semi-major axis", "a"),
        Key::Eccentricity => ("eccentricity", "e"),
        Key::ECosW => ("vector component", "e cos ω"),
        Key::ESinW => ("vector component", "e sin ω"),
        Key::SqrtECosW => ("vector component", "√e cos ω"),
        Key::SqrtESinW => ("vector component", "√e sin ω"),
        Key::ArgumentOfPericentre => ("argument of pericentre", "ω"),
        Key::LongitudeOfPericentre => ("longitude of pericentre", "ϖ"),
        Key::MeanAnomaly => ("mean anomaly", "M"),
        Key::MeanLongitude => ("mean longitude", "λ"),
        Key::TrueAnomaly => ("true anomaly", "ν"),
        Key::PericentreTime => ("pericentre time", "T"),
        Key::TransitTime => ("transit time", "T"),
        Key::Inclination => ("inclination", "i"),
        Key::AscendingNode => ("ascending node", "Ω"),
        Key::SatelliteMassRatio => ("mass ratio of the satellite", "q"),
        Key::SatelliteSemiMajorAxis => ("semi-major axis of the satellite", "a"),
    }
}

/// A symbol: letters italic, functions upright.
fn symbol(text: &str) -> Label {
    let mut label = Label::default();
    for (index, word) in text.split(' ').enumerate() {
        if index > 0 {
            label = label.then("\u{2009}");
        }
        label = match (word, word.strip_prefix('√')) {
            ("sin" | "cos", _) => label.then(word),
            (_, Some(letter)) => label.then("√").italic(letter),
            _ => label.italic(word),
        };
    }
    label
}

fn with_index(key: Key, body: &str) -> Label {
    let label = symbol(words(key).1);
    if body.is_empty() { label } else { label.down(body) }
}

/// A unit as figures write it.
pub(crate) fn unit(word: &str) -> Label {
    match word {
        "deg" => Label::plain("deg"),
        "Msun" => Label::italic(Label::default(), "M").down("☉"),
        "Mjup" => Label::italic(Label::default(), "M").down("Jup"),
        "Mearth" => Label::italic(Label::default(), "M").down("⊕"),
        "Rsun" => Label::italic(Label::default(), "R").down("☉"),
        "Rjup" => Label::italic(Label::default(), "R").down("Jup"),
        "Rearth" => Label::italic(Label::default(), "R").down("⊕"),
        "m/s" => Label::plain("m s").up("\u{2212}1"),
        "km/s" => Label::plain("km s").up("\u{2212}1"),
        other => Label::plain(other),
    }
}

/// A label with its unit in brackets.
pub(crate) fn with_unit(label: Label, word: &str) -> Label {
    if word.is_empty() { label } else { label.then(" [").join(unit(word)).then("]") }
}

fn body_words(body: &BodyRef, system: &System) -> (String, String) {
    match body {
        BodyRef::Star => (" of the star".to_owned(), "⋆".to_owned()),
        BodyRef::All => (" of all planets".to_owned(), String::new()),
        one @ (BodyRef::Planet(_) | BodyRef::Companion) => {
            let name = system.body_word(one).to_owned();
            (format!(" of {name}"), name)
        }
    }
}

/// The label of a study's axis, e.g. `period of c, P_c [d]` or `period ratio, P_c / P_b`.
pub(crate) fn axis_label(axis: &Axis, system: &System) -> Label {
    let key = axis.target.key;
    let (of, index) = body_words(&axis.target.body, system);
    let name = words(key).0;
    match &axis.quantity {
        Quantity::Value => {
            let label = Label::plain(format!("{name}{of}, ")).join(with_index(key, &index));
            with_unit(label, axis.unit)
        }
        Quantity::Factor => Label::plain(format!("factor on the {name}{of}")),
        Quantity::RatioTo(Target { body, key: other }) => {
            let (_, below) = body_words(body, system);
            let ratio = with_index(key, &index).then(" / ").join(with_index(*other, &below));
            Label::plain(format!("{name} ratio, ")).join(ratio)
        }
    }
}

/// The pieces after the last comma: symbol and unit without the words.
pub(crate) fn symbol_part(label: &Label) -> Label {
    match label.0.iter().rposition(|p| p.text.ends_with(", ")) {
        Some(index) => Label(label.0[index + 1..].to_vec()),
        None => label.clone(),
    }
}
