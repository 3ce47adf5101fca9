//! System files: what is read, and what is refused where.

use abide::input::{Fault, InputError, parse_system};
use abide::system::{Frame, Key, Pericentre, System, Transit};
use abide::units::{DEGREE, GM_EARTH, GM_SUN};

const GOOD: &str = r#"title = "Lanthorn"
epoch = "2460310.5 JD"
[star]
mass = "0.87 ± 0.03 Msun"
radius = "0.82 Rsun"
age = "4.1 ± 1.2 Gyr"
[convention]
elements = "jacobi"
pericentre = "star"
transit = "-90 deg"
[physics]
relativity = false
[[planet]]
name = "b"
period = "11.862 +/- 0.004 d"
minimum_mass = "6.1 ± 0.9 Mearth"
eccentricity = 0.05
argument_of_pericentre = "75 ± 60 deg"
transit_time = "2460312.417 ± 0.002 JD"
inclination = "89.4 ± 0.3 deg"
[[planet]]
name = "c-2_x"
semi_major_axis = "0.2 au"
rv_semi_amplitude = "2.3 ± 0.2 m/s"
sqrt_e_cos_w = "0.12 +0.03 -0.02"
sqrt_e_sin_w = "-0.1"
mean_longitude = "1 rad"
"#;

fn read(text: &str) -> System {
    parse_system("demo.toml", text).unwrap_or_else(|error| panic!("{error}")).system
}

fn refused(text: &str) -> InputError {
    parse_system("demo.toml", text).expect_err("this text is wrong")
}

/// `GOOD` with one thing changed.
fn changed(from: &str, to: &str) -> String {
    assert_eq!(GOOD.matches(from).count(), 1, "{from} is there once");
    GOOD.replace(from, to)
}

/// Refused with this fault at this line and column; the message holds all these words.
#[track_caller]
fn check(text: &str, fault: Fault, line: usize, column: usize, words: &[&str]) {
    let error = refused(text);
    let message = error.to_string();
    assert_eq!(error.fault, fault, "{message}");
    assert!(message.starts_with(&format!("demo.toml:{line}:{column}: ")), "{message}");
    assert!(message.contains('^'), "{message}");
    for label in ["found:", "to do:"] {
        assert!(message.contains(label), "{label} is missing: {message}");
    }
    for word in words {
        assert!(message.contains(word), "{word} is missing: {message}");
    }
}

#[test]
fn every_number_arrives_in_inner_units() {
    let system = read(GOOD);
    assert_eq!(system.title, "Lanthorn");
    assert_eq!(system.epoch_jd, Some(2_460_310.5));
    assert_eq!(system.convention.elements, Frame::Jacobi);
    assert_eq!(system.convention.pericentre, Pericentre::Star);
    assert_eq!(system.convention.transit, Transit::Minus90);
    let mass = system.star.stated.get(Key::Mass).expect("stated");
    assert_eq!((mass.value, mass.plus, mass.unit), (0.87 * GM_SUN, Some(0.03 * GM_SUN), "Msun"));
    let b = &system.planets[0].stated;
    assert_eq!(b.value(Key::MinimumMass), Some(6.1 * GM_EARTH));
    assert_eq!(b.value(Key::Eccentricity), Some(0.05));
    assert_eq!(b.value(Key::ArgumentOfPericentre), Some(75.0 * DEGREE));
    assert_eq!(b.get(Key::TransitTime).map(|m| (m.value, m.plus)), Some((2_460_312.417, Some(0.002))));
    assert_eq!(b.get(Key::AscendingNode), None);
    let c = &system.planets[1].stated;
    let component = c.get(Key::SqrtECosW).expect("stated");
    assert_eq!((component.plus, component.minus, component.unit), (Some(0.03), Some(0.02), ""));
    // 1 m/s is 86400 / 149597870700 au/day.
    let speed = c.value(Key::RvSemiAmplitude).expect("stated");
    assert!((speed / (2.3 * 86_400.0 / 149_597_870_700.0) - 1.0).abs() < 1e-15);
    assert!((c.eccentricity() - (0.12 * 0.12 + 0.1 * 0.1)).abs() < 1e-16);
}

#[test]
fn defaults() {
    let text = "[star]\nmass = \"1 Msun\"\n[[planet]]\nname = \"b\"\nperiod = \"3 d\"\nmass = \"1 Mearth\"\nmean_anomaly = \"0 deg\"\n";
    let system = read(text);
    assert_eq!(system.title, "demo");
    assert_eq!(system.epoch_jd, None);
    assert_eq!(system.convention, Default::default());
    assert_eq!(system.planets[0].stated.eccentricity(), 0.0);
}

#[test]
fn unknown_key_suggests_the_nearest() {
    let text = changed("eccentricity = 0.05", "excentricity = 0.05");
    check(&text, Fault::UnknownKey, 17, 1, &["planet b", "excentricity", "did you mean \"eccentricity\"?"]);
    let text = changed("radius = \"0.82 Rsun\"", "period = \"3 d\"");
    check(&text, Fault::UnknownKey, 5, 1, &["star", "mass, radius, age"]);
    check(&format!("colour = 3\n{GOOD}"), Fault::UnknownKey, 1, 1, &["title, epoch, star"]);
    check(&changed("transit = ", "transits = "), Fault::UnknownKey, 10, 1, &["did you mean \"transit\"?"]);
}

#[test]
fn units() {
    let text = changed("\"0.2 au\"", "0.2");
    check(&text, Fault::MissingUnit, 23, 19, &["planet c-2_x, semi_major_axis", "\"0.2 au\""]);
    let text = changed("\"0.2 au\"", "\"0.2\"");
    check(&text, Fault::MissingUnit, 23, 20, &["m, km, au, Rsun, Rjup, Rearth"]);
    let text = changed("\"0.2 au\"", "\"0.2 AU\"");
    check(&text, Fault::UnknownUnit, 23, 24, &["\"AU\"", "did you mean \"au\"?"]);
    let text = changed("\"0.2 au\"", "\"0.2 d\"");
    check(&text, Fault::WrongUnit, 23, 24, &["\"d\", a unit of time", "a length in one of"]);
    let text = changed("± 0.002 JD", "± 0.002 d");
    check(&text, Fault::WrongUnit, 19, 37, &["a date in one of: JD"]);
    check(&changed("= 0.05", "= \"0.05 deg\""), Fault::WrongUnit, 17, 22, &["leave the unit out"]);
}

#[test]
fn ranges() {
    check(&changed("= 0.05", "= 1.0"), Fault::OutOfRange, 17, 16, &["0 <= eccentricity < 1", "percentage"]);
    check(&changed("= 0.05", "= -0.05"), Fault::OutOfRange, 17, 16, &["-0.05"]);
    check(
        &changed("\"6.1 ±", "\"-6.1 ±"),
        Fault::OutOfRange,
        16,
        17,
        &["-6.1 Mearth", "a mass of 0 or more"],
    );
    check(&changed("\"0.87 ±", "\"0 ±"), Fault::OutOfRange, 4, 9, &["star, mass", "a mass above 0"]);
    check(&changed("\"11.862 +", "\"-11.862 +"), Fault::OutOfRange, 15, 11, &["a period above 0"]);
    check(&changed("\"89.4 ±", "\"189.4 ±"), Fault::OutOfRange, 20, 16, &["180 deg"]);
    check(&changed("\"-0.1\"", "\"-1.1\""), Fault::OutOfRange, 26, 17, &["component"]);
    check(&changed("\"-0.1\"", "\"-0.999\""), Fault::OutOfRange, 25, 1, &["eccentricity 1.01"]);
    check(&changed("\"89.4 ±", "\"180 ±"), Fault::OutOfRange, 16, 1, &["minimum_mass", "infinite mass"]);
    check(&changed("2460312.417", "12312.417"), Fault::OutOfRange, 19, 1, &["full Julian date"]);
}

#[test]
fn no_number() {
    for bad in ["nan", "+nan", "inf", "-inf"] {
        let words = [bad, "planet b, eccentricity"];
        check(&changed("= 0.05", &format!("= {bad}")), Fault::NotFinite, 17, 16, &words);
    }
    check(&changed("\"0.2 au\"", "\"NaN au\""), Fault::NotFinite, 23, 20, &["NaN"]);
    check(&changed("\"0.2 au\"", "\"1e999 au\""), Fault::NotFinite, 23, 20, &["1e999"]);
    check(&changed("\"0.2 au\"", "\"two au\""), Fault::Malformed, 23, 20, &["\"two\""]);
    check(&changed("\"0.2 au\"", "\"\""), Fault::Malformed, 23, 20, &["nothing"]);
    check(&changed("\"0.2 au\"", "\"0.2 ± au\""), Fault::Malformed, 23, 26, &["the uncertainty"]);
    check(&changed("\"0.2 au\"", "\"0.2 ± 0 au\""), Fault::Uncertainty, 23, 24, &["above 0"]);
    check(&changed("\"0.2 au\"", "\"0.2 +0.1 au\""), Fault::Malformed, 23, 24, &["no second one with -"]);
    check(&changed("\"0.2 au\"", "\"0.2 au ± 1\""), Fault::Malformed, 23, 24, &["in this order"]);
    check(&changed("\"0.2 au\"", "true"), Fault::WrongType, 23, 19, &["true or false"]);
    check(&changed("\"0.2 au\"", "1979-05-27"), Fault::WrongType, 23, 19, &["a calendar date"]);
}

#[test]
fn names() {
    check(&changed("\"c-2_x\"", "\"b\""), Fault::DuplicateName, 22, 8, &["a second planet \"b\""]);
    for bad in ["", "c.d", "c d", "star", "all", "é", "c/d"] {
        check(&changed("\"c-2_x\"", &format!("\"{bad}\"")), Fault::BadName, 22, 8, &["letters, digits"]);
    }
    check(&changed("name = \"c-2_x\"\n", ""), Fault::MissingKey, 21, 1, &["name"]);
}

#[test]
fn alternatives_and_pairs() {
    let text = changed("semi_major_axis = ", "period = \"20 d\"\nsemi_major_axis = ");
    check(
        &text,
        Fault::Conflict,
        24,
        1,
        &["both period and semi_major_axis", "one of period, semi_major_axis"],
    );
    let text = changed("rv_semi_amplitude", "mass = \"1 Mjup\"\nrv_semi_amplitude");
    check(&text, Fault::Conflict, 25, 1, &["both mass and rv_semi_amplitude"]);
    let text = changed("sqrt_e_cos_w", "eccentricity = 0.1\nsqrt_e_cos_w");
    check(&text, Fault::Conflict, 26, 1, &["both eccentricity and sqrt_e_cos_w"]);
    let text = changed("sqrt_e_sin_w", "longitude_of_pericentre = \"3 deg\"\nsqrt_e_sin_w");
    check(&text, Fault::Conflict, 26, 1, &["both sqrt_e_cos_w and longitude_of_pericentre"]);
    check(&changed("sqrt_e_sin_w", "e_sin_w"), Fault::Conflict, 26, 1, &["both sqrt_e_cos_w and e_sin_w"]);
    check(&changed("sqrt_e_sin_w = \"-0.1\"\n", ""), Fault::MissingPartner, 25, 1, &["add sqrt_e_sin_w"]);
    let text = changed("mean_longitude", "mean_anomaly = \"0 deg\"\nmean_longitude");
    check(&text, Fault::Conflict, 28, 1, &["both mean_anomaly and mean_longitude"]);
    let text =
        changed("argument_of_pericentre", "longitude_of_pericentre = \"1 deg\"\nargument_of_pericentre");
    check(&text, Fault::Conflict, 19, 1, &["both longitude_of_pericentre and argument_of_pericentre"]);
}

#[test]
fn needed_keys() {
    check(&changed("semi_major_axis = \"0.2 au\"\n", ""), Fault::MissingKey, 22, 8, &["size", "period"]);
    check(&changed("rv_semi_amplitude = \"2.3 ± 0.2 m/s\"\n", ""), Fault::MissingKey, 22, 8, &["no mass"]);
    check(
        &changed("mean_longitude = \"1 rad\"\n", ""),
        Fault::MissingKey,
        22,
        8,
        &["no phase", "transit_time"],
    );
    check(&changed("mass = \"0.87 ± 0.03 Msun\"\n", ""), Fault::MissingKey, 3, 2, &["no mass of the star"]);
    check("title = \"x\"\n", Fault::MissingKey, 1, 1, &["star"]);
    check("[star]\nmass = \"1 Msun\"\n", Fault::MissingKey, 1, 1, &["no planet"]);
    check("planet = []\n[star]\nmass = \"1 Msun\"\n", Fault::MissingKey, 1, 10, &["no planet"]);
    let text = changed("epoch = \"2460310.5 JD\"\n", "");
    check(&text, Fault::DateWithoutEpoch, 18, 1, &["transit_time without epoch", "2460310.5 JD"]);
}

#[test]
fn words_and_types() {
    check(&changed("\"jacobi\"", "\"jacobian\""), Fault::UnknownWord, 8, 12, &["did you mean \"jacobi\"?"]);
    check(&changed("\"-90 deg\"", "-90"), Fault::WrongType, 10, 11, &["\"+90 deg\", \"-90 deg\""]);
    check("star = 3\n", Fault::WrongType, 1, 8, &["[star]"]);
    check("planet = 3\n[star]\nmass = \"1 Msun\"\n", Fault::WrongType, 1, 10, &["[[planet]]"]);
    check("planet = [3]\n[star]\nmass = \"1 Msun\"\n", Fault::WrongType, 1, 11, &["[[planet]]"]);
    check("[star]\nmass = \"1 Msun\n", Fault::Syntax, 2, 15, &["TOML"]);
    check(&changed("eccentricity = 0.05", "period = \"1 d\""), Fault::Syntax, 17, 1, &["duplicate"]);
    check("system = \"a.toml\"\n[[axis]]\n", Fault::StudyFile, 1, 1, &["a study file", "`abide survey`"]);
}

#[test]
fn later_work_is_refused_as_such() {
    let text = format!("draws = 100\n{GOOD}");
    check(&text, Fault::NotYet, 1, 1, &["this version does not have this", "draws"]);
}

#[test]
fn files() {
    let folder = tempfile::tempdir().expect("a folder");
    let absent = folder.path().join("absent.toml");
    let message = abide::input::read_system(&absent).expect_err("absent").to_string();
    assert!(
        message.contains("absent.toml: the file cannot be read") && message.contains("to do:"),
        "{message}"
    );
    let latin = folder.path().join("latin.toml");
    std::fs::write(&latin, b"title = \"a\"\nepoch = \"2460310.5 \xb1 1 JD\"\n").expect("written");
    let error = abide::input::read_system(&latin).expect_err("not UTF-8");
    assert_eq!(error.fault, Fault::NotText);
    assert!(error.to_string().contains("latin.toml:2:20: ") && error.to_string().contains("0xb1"), "{error}");
}

#[test]
fn a_whole_message() {
    let error = refused(&changed("= 0.05", "= \"1.2 ± 0.1\""));
    let expected = "demo.toml:17:17: planet b, eccentricity: the number is out of range
  17 | eccentricity = \"1.2 ± 0.1\"
     |                 ^^^
  found:   1.2
  allowed: 0 <= eccentricity < 1 (a bound orbit)
  to do:   if it is a percentage, divide by 100; unbound orbits cannot be stated";
    assert_eq!(error.to_string(), expected);
}
