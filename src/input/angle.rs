//! The angle that a study watches, as "3 c.mean_longitude - 2 b.mean_longitude - b.longitude_of_pericentre".

use std::ops::Range;

use super::error::{Fault, InputError};
use super::nearest::{did_you_mean, nearest};
use super::quantity::Fail;
use super::raw::Entry;
use super::source::{Complaint, Source};
use crate::system::{AngleTerms, Key, System};

const FORMS: &str = "whole numbers times mean_longitude and longitude_of_pericentre of single bodies, summing to 0, as \
     \"3 c.mean_longitude - 2 b.mean_longitude - b.longitude_of_pericentre\"";
const KEYS: [Key; 2] = [Key::MeanLongitude, Key::LongitudeOfPericentre];
const SIGNS: [(char, i32); 3] = [('+', 1), ('-', -1), ('\u{2212}', -1)];
/// Larger coefficients belong to no resonance that is told from its neighbours.
const LARGEST: i32 = 1000;

/// Reads and checks the angle of a study.
pub(super) fn read(source: &Source, entry: &Entry, system: &System) -> Result<AngleTerms, InputError> {
    let text = entry.text(source, "", FORMS)?;
    terms(text, system).map_err(|fail| entry.fail(source, "", fail))
}

/// What has been read of the term that is being read.
#[derive(Default)]
struct Pending {
    sign: Option<i32>,
    count: Option<i32>,
}

fn terms(text: &str, system: &System) -> Result<AngleTerms, Fail> {
    let bodies = system.orbiting().count();
    let mut read =
        AngleTerms { text: text.to_string(), longitudes: vec![0; bodies], pericentres: vec![0; bodies] };
    let (mut pending, mut first) = (Pending::default(), true);
    for (at, word) in words(text) {
        if let Some((_, sign)) = SIGNS.iter().find(|(letter, _)| word == letter.to_string()) {
            if pending.sign.replace(*sign).is_some() || pending.count.is_some() {
                return Err(malformed(at, word, "a sign where a term is needed"));
            }
        } else if pending.sign.is_none() && !first && pending.count.is_none() {
            return Err(malformed(at, word, "write + or - before it"));
        } else if word.bytes().all(|byte| byte.is_ascii_digit()) {
            let count = word.parse().ok().filter(|count| (1..=LARGEST).contains(count));
            let allowed = format!("a whole number from 1 to {LARGEST}");
            let refuse = || {
                let complaint = Complaint::new(Fault::OutOfRange, word).allowed(allowed);
                (at.clone(), complaint.advice("check the coefficient; leave out a term that is not there"))
            };
            if pending.count.replace(count.ok_or_else(refuse)?).is_some() {
                return Err(malformed(at, word, "write one number before each angle"));
            }
        } else if word.parse::<f64>().is_ok() {
            return Err(malformed(at, word, "coefficients are whole numbers; multiply all of them"));
        } else {
            let (index, key) = place(word, &at, system)?;
            let coefficient = pending.sign.unwrap_or(1) * pending.count.unwrap_or(1);
            let list = if key == KEYS[0] { &mut read.longitudes } else { &mut read.pericentres };
            list[index] += coefficient;
            pending = Pending::default();
        }
        first = false;
    }
    if first || pending.sign.is_some() || pending.count.is_some() {
        let end = text.len().saturating_sub(1)..text.len();
        return Err(malformed(end, text.trim(), "finish the last term, or take it out"));
    }
    check_sum(read)
}

fn malformed(at: Range<usize>, found: &str, advice: &str) -> Fail {
    (at, Complaint::new(Fault::BadAngle, format!("\"{found}\"")).allowed(FORMS).advice(advice))
}

/// d'Alembert's rule: an angle that turns with the system says nothing of the orbits.
fn check_sum(read: AngleTerms) -> Result<AngleTerms, Fail> {
    let all = || read.longitudes.iter().chain(&read.pericentres);
    let sum: i32 = all().sum();
    let whole = 0..read.text.len();
    if sum != 0 {
        let complaint = Complaint::new(Fault::BadAngle, format!("coefficients that sum to {sum}"))
            .allowed("a sum of 0 (d'Alembert's rule: the angle must not change when the system is turned)");
        let sign = if sum > 0 { "-" } else { "+" };
        let count = if sum.abs() == 1 { String::new() } else { format!("{} ", sum.abs()) };
        let advice = format!(
            "check the coefficients, or add a pericentre, as \" {sign} {count}b.longitude_of_pericentre\""
        );
        return Err((whole, complaint.advice(advice)));
    }
    if all().all(|coefficient| *coefficient == 0) {
        let complaint = Complaint::new(Fault::BadAngle, "terms that cancel").allowed(FORMS);
        return Err((whole, complaint.advice("check bodies and coefficients")));
    }
    Ok(read)
}

/// Body (by its place among all that circle) and key of a word such as `b.mean_longitude`.
fn place(word: &str, at: &Range<usize>, system: &System) -> Result<(usize, Key), Fail> {
    let names: Vec<&str> = system.orbiting().map(|body| body.name.as_str()).collect();
    let Some((body, key)) = word.split_once('.') else {
        return Err(malformed(at.clone(), word, "write body.key with blanks around signs and numbers"));
    };
    let Some(index) = system.orbiting_index(body) else {
        let complaint = Complaint::new(Fault::UnknownBody, format!("\"{body}\"")).allowed(names.join(", "));
        let advice =
            did_you_mean(body, names, "name one body that circles; numbers stand apart, as \"2 b.\u{2026}\"");
        return Err((at.start..at.start + body.len(), complaint.advice(advice)));
    };
    match KEYS.into_iter().find(|known| known.word() == key) {
        Some(key) => Ok((index, key)),
        None => {
            let allowed = KEYS.map(Key::word);
            let complaint =
                Complaint::new(Fault::UnknownKey, format!("\"{key}\"")).allowed(allowed.join(", "));
            let advice = match nearest(key, allowed) {
                Some(near) => format!("did you mean \"{near}\"?"),
                None => "only these two make an angle; \u{3d6} = ascending node + argument of pericentre"
                    .to_string(),
            };
            Err((at.start + body.len() + 1..at.end, complaint.advice(advice)))
        }
    }
}

/// Words between blanks with their places; a sign before a word is a word by itself.
fn words(text: &str) -> Vec<(Range<usize>, &str)> {
    let mut found = Vec::new();
    let mut at = 0;
    while let Some(start) = text[at..].find(|c: char| !c.is_whitespace()).map(|more| at + more) {
        let rest = &text[start..];
        let sign = rest.chars().next().filter(|c| SIGNS.iter().any(|(letter, _)| letter == c));
        let length = sign.map_or_else(
            || rest.find(|c: char| c.is_whitespace()).unwrap_or(rest.len()),
            |letter| letter.len_utf8(),
        );
        at = start + length;
        found.push((start..at, &text[start..at]));
    }
    found
}
