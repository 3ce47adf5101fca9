//! System files with a second star, terms beside Newton's, and studies that move them.

use abide::input::{Fault, StudyFile, axis_from_uncertainty, parse_study, parse_system, read_study};
use abide::system::{BodyRef, CompanionPlace, Key, Oblateness, PathError, System};
use abide::units::{AU_M, DEGREE, GM_SUN, SUN_RADIUS_M};

const GOOD: &str = r#"epoch = "2460310.5 JD"
[star]
mass = "1 Msun"
[convention]
elements = "astrocentric"
[physics]
relativity = true
oblateness = { j2 = 2e-7, radius = "1 Rsun", inclination = "82 deg", ascending_node = "10 deg" }
[[planet]]
name = "b"
period = "365 d"
mass = "1 Mearth"
mean_anomaly = "0 deg"
satellite_mass_ratio = 0.0123
satellite_semi_major_axis = "384399 km"
[[planet]]
name = "dust"
period = "700 d"
mass = "0 Mearth"
mean_anomaly = "0 deg"
[companion]
name = "B"
mass = "0.5 ± 0.1 Msun"
radius = "0.5 Rsun"
semi_major_axis = "20 ± 1 au"
eccentricity = 0.3
transit_time = "2460000 JD"
"#;

const STUDY: &str = r#"system = "s.toml"
span = "1e3 orbits"
[[axis]]
vary = "companion.eccentricity"
from = 0.0
to = 0.5
cells = 3
[[axis]]
vary = "all.inclination"
from = "60 deg"
to = "90 deg"
cells = 2
"#;

fn read(text: &str) -> System {
    parse_system("demo.toml", text).unwrap_or_else(|error| panic!("{error}")).system
}

fn changed(from: &str, to: &str) -> String {
    assert_eq!(GOOD.matches(from).count(), 1, "{from} is there once");
    GOOD.replace(from, to)
}

/// Refused with this fault at this line and column; the message holds all these words.
#[track_caller]
fn check(text: &str, fault: Fault, line: usize, column: usize, words: &[&str]) {
    let error = parse_system("demo.toml", text).expect_err("this text is wrong");
    let message = error.to_string();
    assert_eq!(error.fault, fault, "{message}");
    assert!(message.starts_with(&format!("demo.toml:{line}:{column}: ")), "{message}");
    assert!(message.contains("found:") && message.contains("to do:"), "{message}");
    for word in words {
        assert!(message.contains(word), "{word} is missing: {message}");
    }
}

fn study(vary: &str, from: &str, to: &str) -> Result<StudyFile, abide::input::InputError> {
    let text = format!(
        "system = \"s.toml\"\nspan = \"9 yr\"\n[[axis]]\nvary = \"{vary}\"\nfrom = {from}\nto = {to}\n"
    );
    parse_study("map.toml", &text, parse_system("s.toml", GOOD).expect("good"))
}

#[test]
fn every_key_arrives() {
    let system = read(GOOD);
    let companion = system.companion.as_ref().expect("stated");
    assert_eq!(companion.name, "B");
    assert_eq!(companion.stated.value(Key::Mass), Some(0.5 * GM_SUN));
    assert_eq!(companion.stated.value(Key::SemiMajorAxis), Some(20.0));
    assert_eq!(system.companion_place(), Some(CompanionPlace::Outside));
    assert!(system.physics.relativity);
    let Oblateness { j2, radius_au, inclination, ascending_node } =
        system.physics.oblateness.expect("stated");
    assert_eq!((j2, inclination, ascending_node), (2e-7, 82.0 * DEGREE, 10.0 * DEGREE));
    assert!((radius_au.expect("stated") / (SUN_RADIUS_M / AU_M) - 1.0).abs() < 1e-15);
    let moon = system.planets[0].stated.value(Key::SatelliteSemiMajorAxis).expect("stated");
    assert!((moon - 384_399e3 / AU_M).abs() < 1e-17);
    assert_eq!(system.planets[1].stated.value(Key::Mass), Some(0.0));
    let names: Vec<&str> = system.orbiting().map(|body| body.name.as_str()).collect();
    assert_eq!(names, ["b", "dust", "B"]);
    assert_eq!((system.orbiting_index("companion"), system.orbiting_index("B")), (Some(2), Some(2)));
}

#[test]
fn what_is_left_out() {
    let system = read(&changed("name = \"B\"\n", ""));
    assert_eq!(system.companion.as_ref().map(|body| body.name.as_str()), Some("companion"));
    let text = changed(", inclination = \"82 deg\", ascending_node = \"10 deg\"", "");
    let star = read(&text).physics.oblateness.expect("stated");
    assert_eq!((star.inclination, star.ascending_node), (90.0 * DEGREE, 0.0));
    let text =
        changed("radius = \"1 Rsun\", ", "").replace("\"1 Msun\"\n", "\"1 Msun\"\nradius = \"1 Rsun\"\n");
    assert_eq!(read(&text).physics.oblateness.expect("stated").radius_au, None);
}

#[test]
fn paths_lead_to_the_companion_by_word_and_by_name() {
    let system = read(GOOD);
    for path in ["companion.period", "B.period"] {
        assert_eq!(system.target(path).expect("there").body, BodyRef::Companion);
    }
    assert!(matches!(system.target("companion.satellite_mass_ratio"), Err(PathError::NotOfBody { .. })));
    let axis = axis_from_uncertainty("companion.semi_major_axis", &system, 5).expect("stated");
    assert_eq!((axis.from, axis.to, axis.unit), (17.0, 23.0, "au"));
    let study =
        parse_study("map.toml", STUDY, parse_system("s.toml", GOOD).expect("good")).expect("good").study;
    let mut moved = system.clone();
    for (axis, place) in study.axes.iter().zip([0.5, 60.0]) {
        axis.apply(place, &mut moved, &system).expect("can be had");
    }
    let companion = moved.companion.as_ref().expect("still there");
    assert_eq!(companion.stated.value(Key::Eccentricity), Some(0.5));
    // all. means the planets.
    assert_eq!(companion.stated.value(Key::Inclination), None);
    assert!(moved.planets.iter().all(|planet| planet.stated.value(Key::Inclination) == Some(60.0 * DEGREE)));
}

#[test]
fn the_companion_is_checked_like_a_planet() {
    check(&changed("\"0.5 ± 0.1 Msun\"", "\"-1 Msun\""), Fault::OutOfRange, 23, 9, &["companion, mass"]);
    check(&changed("eccentricity = 0.3", "eccentricity = 1.3"), Fault::OutOfRange, 26, 16, &["bound orbit"]);
    check(&changed("eccentricity = 0.3", "e_cos_w = 0.3"), Fault::MissingPartner, 26, 1, &["e_sin_w"]);
    check(&changed("eccentricity = 0.3", "age = \"1 Gyr\""), Fault::UnknownKey, 26, 1, &["companion"]);
    check(&changed("semi_major_axis = \"20 ± 1 au\"\n", ""), Fault::MissingKey, 22, 8, &["no size"]);
    let text = changed("name = \"B\"\n", "").replace("transit_time = \"2460000 JD\"\n", "");
    check(&text, Fault::MissingKey, 21, 1, &["companion", "no phase"]);
    check(&changed("name = \"B\"", "name = \"b\""), Fault::DuplicateName, 22, 8, &["its own name"]);
    check(&changed("name = \"B\"", "name = \"all\""), Fault::BadName, 22, 8, &["short name"]);
    check(&changed("name = \"dust\"", "name = \"companion\""), Fault::BadName, 17, 8, &["\"companion\""]);
    check(&changed("[companion]", "[[companion]]"), Fault::WrongType, 21, 3, &["one [companion] table"]);
    check("companion = 3\n[star]\nmass = \"1 Msun\"\n", Fault::MissingKey, 1, 1, &["no planet"]);
    check(&changed("epoch = \"2460310.5 JD\"\n", ""), Fault::DateWithoutEpoch, 26, 1, &["companion"]);
}

#[test]
fn frames_and_terms_without_meaning_are_refused() {
    let inside = |frame: &str| changed("20 ± 1 au", "0.2 ± 0.01 au").replace("\"astrocentric\"", frame);
    check(&inside("\"astrocentric\""), Fault::Meaning, 5, 12, &["circle the pair", "elements = \"jacobi\""]);
    check(&inside("\"barycentric\""), Fault::Meaning, 5, 12, &["barycentric elements with a companion"]);
    let unstated = inside("\"jacobi\"").replace("elements = \"jacobi\"\n", "");
    check(&unstated, Fault::Meaning, 20, 2, &["circle the pair", "[convention]"]);
    let far = changed("\"astrocentric\"", "\"barycentric\"");
    check(&far, Fault::Meaning, 5, 12, &["relative to the star"]);
    check(&inside("\"jacobi\""), Fault::Meaning, 7, 1, &["relativity of one star", "take it out"]);
    let newton = inside("\"jacobi\"").replace("relativity = true", "relativity = false");
    check(&newton, Fault::Meaning, 8, 1, &["oblateness of one star"]);
    let pointlike =
        newton.lines().filter(|line| !line.starts_with("oblateness")).collect::<Vec<_>>().join("\n");
    assert_eq!(read(&pointlike).companion_place(), Some(CompanionPlace::Inside));
    // An axis may not lead where the file could not be.
    let error = study("companion.semi_major_axis", "\"0.3 au\"", "\"30 au\"").expect_err("inside at 0.3 au");
    assert!(error.to_string().contains("map.toml:4:8: ") && error.to_string().contains("jacobi"), "{error}");
}

#[test]
fn physics_is_checked() {
    check(&changed("relativity = true", "relativity = 1"), Fault::WrongType, 7, 14, &["true or false"]);
    check(&changed("j2 = 2e-7, ", ""), Fault::MissingKey, 8, 1, &["no j2"]);
    check(&changed("j2 = 2e-7", "j2 = 2.0"), Fault::OutOfRange, 8, 21, &["-1 < j2 < 1"]);
    check(&changed("j2 = 2e-7", "j2 = nan"), Fault::NotFinite, 8, 21, &["physics, oblateness, j2"]);
    check(&changed("radius = \"1 Rsun\"", "radius = \"1 d\""), Fault::WrongUnit, 8, 39, &["a length"]);
    check(&changed("radius = \"1 Rsun\"", "radius = \"0 Rsun\""), Fault::OutOfRange, 8, 36, &["above 0"]);
    check(&changed("radius = \"1 Rsun\", ", ""), Fault::MissingKey, 8, 1, &["no radius"]);
    check(&changed("\"82 deg\"", "\"190 deg\""), Fault::OutOfRange, 8, 60, &["180 deg"]);
    check(&changed("j2 = 2e-7", "J2 = 2e-7"), Fault::UnknownKey, 8, 16, &["did you mean \"j2\"?"]);
    check(&changed("0.0123", "1.5"), Fault::OutOfRange, 14, 24, &["satellite"]);
    let text = changed("satellite_mass_ratio = 0.0123\n", "");
    check(&text, Fault::MissingPartner, 14, 1, &["add satellite_mass_ratio"]);
    let error = study("dust.satellite_mass_ratio", "0.0", "0.1").expect_err("half a satellite");
    assert!(error.to_string().contains("satellite_semi_major_axis"), "{error}");
}

#[test]
fn the_demos_are_read() {
    for (name, place) in [("castella", CompanionPlace::Outside), ("gemello", CompanionPlace::Inside)] {
        let file = read_study(format!("systems/{name}-map.toml")).unwrap_or_else(|error| panic!("{error}"));
        assert_eq!(file.system.system.companion_place(), Some(place));
        let found = abide::coords::configure(&file.system.system).expect("a configuration");
        assert_eq!(found.companion_place(), Some(place));
        abide::coords::check_start(&found).expect("apart");
    }
}
