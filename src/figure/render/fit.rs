//! Fitting text: lines broken at spaces, labels that keep out of each other's way.

use super::text;
use crate::figure::label::Label;

/// Breaks a sentence at spaces into lines no longer than `width`; a word that is too long stays whole, and a number
/// keeps its unit.
pub(super) fn lines(sentence: &str, size: f64, width: f64) -> Vec<String> {
    let mut found = Vec::new();
    let mut line = String::new();
    for word in words(sentence) {
        let longer = if line.is_empty() { word.clone() } else { format!("{line} {word}") };
        if !line.is_empty() && text::length(&Label::plain(longer.as_str()), size) > width {
            found.push(std::mem::replace(&mut line, word));
        } else {
            line = longer;
        }
    }
    if !line.is_empty() {
        found.push(line);
    }
    found
}

/// The words of a sentence; a short word after a number is its unit and stays with it.
fn words(sentence: &str) -> Vec<String> {
    let mut found: Vec<String> = Vec::new();
    for word in sentence.split_whitespace() {
        let letters = word.trim_matches(|c: char| c.is_ascii_punctuation() && c != '%');
        let unit = matches!(letters, "%" | "d" | "yr" | "kyr" | "Myr" | "Gyr" | "au" | "cells" | "TDB");
        match found.last_mut().filter(|last| unit && last.ends_with(|c: char| c.is_ascii_digit())) {
            Some(number) => {
                number.push(' ');
                number.push_str(word);
            }
            None => found.push(word.to_owned()),
        }
    }
    found
}

/// Indices of the labels that can stand, best first: each keeps `gap` from those kept before it and stays inside `range`.
///
/// `labels` are centres and lengths along one edge.
pub(super) fn keep_apart(labels: &[(f64, f64)], gap: f64, range: (f64, f64)) -> Vec<usize> {
    let mut kept: Vec<usize> = Vec::new();
    for (index, (centre, length)) in labels.iter().enumerate() {
        let (from, to) = (centre - 0.5 * length, centre + 0.5 * length);
        let free = kept.iter().all(|k| {
            let (other, other_length) = labels[*k];
            (centre - other).abs() >= 0.5 * (length + other_length) + gap
        });
        if free && from >= range.0 && to <= range.1 {
            kept.push(index);
        }
    }
    kept
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lines_are_never_longer_than_asked_and_lose_no_word() {
        let sentence = "held as stated: eccentricity, argument of pericentre and minimum mass of c; all of the other bodies";
        for width in [60.0, 90.0, 200.0] {
            let found = lines(sentence, 6.5, width);
            assert!(found.len() > 1);
            assert!(found.iter().all(|l| text::length(&Label::plain(l.as_str()), 6.5) <= width), "{found:?}");
            assert_eq!(found.join(" "), sentence);
        }
    }

    #[test]
    fn a_number_keeps_its_unit() {
        assert_eq!(
            words("step 0.42 d (95 % of 2 bodies)"),
            ["step", "0.42 d", "(95 %", "of", "2", "bodies)"]
        );
    }

    #[test]
    fn a_better_label_wins_its_place() {
        let kept = keep_apart(&[(50.0, 20.0), (60.0, 20.0), (75.0, 20.0), (2.0, 20.0)], 2.0, (0.0, 100.0));
        assert_eq!(kept, vec![0, 2]);
    }
}
