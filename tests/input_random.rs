//! Random input: quantities survive text → value → text, and damaged files get one message with its place.

use abide::coords::{check_start, configure};
use abide::input::{parse_quantity, parse_study, parse_system};
use abide::units::{Dimension, Unit};
use proptest::prelude::*;

const SYSTEM: &str = include_str!("../systems/lanthorn.toml");
const STUDY: &str = include_str!("../systems/lanthorn-map.toml");
/// Studies of systems with a second star, outside the planets and inside them.
const PAIRS: [(&str, &str); 2] = [
    (include_str!("../systems/castella.toml"), include_str!("../systems/castella-map.toml")),
    (include_str!("../systems/gemello.toml"), include_str!("../systems/gemello-map.toml")),
];

/// A message with `name:line:column: `, a headline, and what to do.
fn is_told(message: &str, name: &str) -> bool {
    let Some(rest) = message.strip_prefix(name).and_then(|rest| rest.strip_prefix(':')) else { return false };
    let mut parts = rest.splitn(3, ':');
    let number = |part: Option<&str>| part.and_then(|p| p.parse::<usize>().ok()).is_some_and(|n| n > 0);
    number(parts.next()) && number(parts.next()) && message.contains("to do:") && message.contains("found:")
}

/// The texts are read, or refused with a place.
fn read_both(system: &str, study: &str) -> Result<(), TestCaseError> {
    match parse_system("s.toml", system) {
        Err(error) => prop_assert!(is_told(&error.to_string(), "s.toml"), "{error}"),
        Ok(file) => {
            if let Err(error) = parse_study("m.toml", study, file) {
                prop_assert!(is_told(&error.to_string(), "m.toml"), "{error}");
            }
        }
    }
    Ok(())
}

/// `text` with one character replaced, taken out or put in.
fn damaged(text: &str, at: usize, how: usize, with: char) -> String {
    let mut characters: Vec<char> = text.chars().collect();
    let at = at % characters.len();
    match how % 3 {
        0 => characters[at] = with,
        1 => drop(characters.remove(at)),
        _ => characters.insert(at, with),
    }
    characters.into_iter().collect()
}

/// Every line that is not a comment.
fn lines(text: &str) -> Vec<&str> {
    text.lines().filter(|line| !line.trim().is_empty() && !line.starts_with('#')).collect()
}

fn unit() -> impl Strategy<Value = Unit> {
    prop::sample::select(Unit::ALL.to_vec())
}

fn read(text: &str, dimension: Dimension) -> Result<abide::system::Measured, TestCaseError> {
    parse_quantity(text, dimension).map_err(|error| TestCaseError::fail(error.to_string()))
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(1000))]

    #[test]
    fn quantities_survive(value in -1e12..1e12_f64, power in -20..20_i32, plus in 1e-9..1e9_f64,
                          minus in 1e-9..1e9_f64, form in 0..4_usize, unit in unit()) {
        let value = value * 10f64.powi(power);
        let text = match form {
            0 => format!("{value} {}", unit.word),
            1 => format!("{value:e} ± {plus:e} {}", unit.word),
            2 => format!(" {value}+/-{plus} {} ", unit.word),
            _ => format!("{value:e} +{plus} -{minus:e} {}", unit.word),
        };
        let measured = read(&text, unit.dimension)?;
        prop_assert_eq!(measured.value, value * unit.inner);
        prop_assert_eq!(measured.unit, unit.word);
        prop_assert_eq!(measured.plus, (form > 0).then_some(plus * unit.inner));
        let down = if form == 3 { minus } else { plus };
        prop_assert_eq!(measured.minus, (form > 0).then_some(down * unit.inner));
        // Written again in its unit and read again, it is the same to round-off.
        let again = read(&format!("{:e} {}", measured.value / unit.inner, unit.word), unit.dimension)?;
        prop_assert!((again.value - measured.value).abs() <= 4.0 * f64::EPSILON * measured.value.abs());
    }

    #[test]
    fn any_text_is_read_or_refused(text in "\\PC{0,24}") {
        for dimension in [Dimension::Time, Dimension::Number, Dimension::Date] {
            if let Err(error) = parse_quantity(&text, dimension) {
                prop_assert!(is_told(&error.to_string(), "quantity"), "{}", error);
            }
        }
    }

    #[test]
    fn almost_quantities_are_read_or_refused(text in "[-+±0-9.eE /a-zA-Z−]{0,16}") {
        match parse_quantity(&text, Dimension::Number) {
            Err(error) => prop_assert!(is_told(&error.to_string(), "quantity"), "{}", error),
            Ok(measured) => prop_assert!(measured.value.is_finite() && text.contains(|c: char| c.is_ascii_digit())),
        }
    }

    #[test]
    fn one_character_of_damage(at in 0..100_000_usize, how in 0..3_usize, with in any::<char>()) {
        read_both(&damaged(SYSTEM, at, how, with), STUDY)?;
        read_both(SYSTEM, &damaged(STUDY, at, how, with))?;
    }

    #[test]
    fn damaged_keys_are_refused(line in 0..1000_usize, at in 0..12_usize, how in 0..3_usize, with in "[a-z_]") {
        let with = with.chars().next().unwrap_or('x');
        for (text, is_system) in [(SYSTEM, true), (STUDY, false)] {
            let keys: Vec<&str> = lines(text).into_iter().filter(|l| l.contains(" = ")).collect();
            let old = keys[line % keys.len()];
            let key = old.split(" = ").next().unwrap_or_default();
            let new_key = damaged(key, at, how, with);
            prop_assume!(new_key != key);
            let text = text.replacen(old, &(new_key + &old[key.len()..]), 1);
            let good = parse_system("s.toml", SYSTEM).expect("the demo is good");
            let error = if is_system {
                parse_system("s.toml", &text).err()
            } else {
                parse_study("s.toml", &text, good).err()
            };
            let Some(error) = error else { return Err(TestCaseError::fail(format!("accepted: {text}"))) };
            prop_assert!(is_told(&error.to_string(), "s.toml"), "{}", error);
        }
    }

    /// What is read can be configured or is refused; nothing panics on the way.
    #[test]
    fn damaged_pairs_of_stars(which in 0..2_usize, at in 0..100_000_usize, how in 0..3_usize, with in any::<char>()) {
        let (system, study) = PAIRS[which];
        let damaged_system = damaged(system, at, how, with);
        read_both(&damaged_system, study)?;
        read_both(system, &damaged(study, at, how, with))?;
        if let Ok(file) = parse_system("s.toml", &damaged_system)
            && let Ok(configuration) = configure(&file.system)
        {
            for body in &configuration.planets {
                prop_assert!(body.gm.is_finite() && body.position_au.iter().all(|x| x.is_finite()), "{:?}", body);
            }
            let _ = check_start(&configuration);
        }
    }

    #[test]
    fn shuffled_lines(from in 0..1000_usize, to in 0..1000_usize) {
        for (text, is_system) in [(SYSTEM, true), (STUDY, false)] {
            let mut lines = lines(text);
            let from = from % lines.len();
            let line = lines.remove(from);
            lines.insert(to % (lines.len() + 1), line);
            let text = lines.join("\n");
            if is_system { read_both(&text, STUDY)? } else { read_both(SYSTEM, &text)? }
        }
    }
}
