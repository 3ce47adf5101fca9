//! An invented system and study, and checks of what is said of a wrong one.

#![allow(dead_code, reason = "each test file uses its own part")]

use abide::input::{Fault, InputError, StudyFile, parse_study, parse_system};
use abide::system::{Study, System};

pub const SYSTEM: &str = r#"epoch = "2460310.5 JD"
[star]
mass = "1 Msun"
[[planet]]
name = "b"
period = "10 ± 0.1 d"
mass = "5 +1 -2 Mearth"
eccentricity = "0.05 ± 0.03"
argument_of_pericentre = "75 ± 80 deg"
mean_anomaly = "0 deg"
[[planet]]
name = "c"
period = "15 d"
mass = "8 ± 4 Mearth"
e_cos_w = "0.1 ± 0.05"
e_sin_w = "0.6 ± 0.05"
mean_anomaly = "90 ± 5 deg"
"#;

pub const STUDY: &str = r#"title = "A map"
system = "sys.toml"
span = "1e5 orbits"
measure = ["megno", "extent"]
[[axis]]
vary = "b.period"
from = "9 d"
to = "264 h"
cells = 200
spacing = "log"
[[axis]]
vary = "b.eccentricity"
from = 0.0
to = 0.3
cells = 150
[limits]
escape = "100 au"
encounter = "2.5 hill"
[engine]
scheme = "(2,2)"
coordinates = "heliocentric"
step = "30 per orbit"
energy_error = 1e-7
"#;

pub fn read(text: &str) -> Result<StudyFile, InputError> {
    let system = parse_system("sys.toml", SYSTEM).unwrap_or_else(|error| panic!("{error}"));
    parse_study("runs/map.toml", text, system)
}

pub fn study(text: &str) -> Study {
    read(text).unwrap_or_else(|error| panic!("{error}")).study
}

pub fn system() -> System {
    parse_system("sys.toml", SYSTEM).expect("good").system
}

/// `STUDY` with one thing changed.
pub fn changed(from: &str, to: &str) -> String {
    assert_eq!(STUDY.matches(from).count(), 1, "{from} is there once");
    STUDY.replace(from, to)
}

/// Refused with this fault at this line and column; the message holds all these words.
#[track_caller]
pub fn check(text: &str, fault: Fault, line: usize, column: usize, words: &[&str]) {
    let error = read(text).expect_err("this text is wrong");
    let message = error.to_string();
    assert_eq!(error.fault, fault, "{message}");
    assert!(message.starts_with(&format!("runs/map.toml:{line}:{column}: ")), "{message}");
    assert!(message.contains("found:") && message.contains("to do:"), "{message}");
    for word in words {
        assert!(message.contains(word), "{word} is missing: {message}");
    }
}
