//! Study files: what is read, and what is refused where.

mod input_support;

use abide::input::{
    Fault, FileKind, axis_from_uncertainty, check_axes, parse_span, parse_step, parse_time, read_study,
    read_system, sniff,
};
use abide::system::{
    BodyRef, Compensation, CoordinateChoice, Encounter, Key, Measure, Quantity, SCHEMES, Spacing, Span, Step,
    Target,
};
use abide::units::{DEGREE, YEAR_DAY};

use input_support::{STUDY, SYSTEM, changed, check, study, system};

#[test]
fn every_key_is_read() {
    let study = study(STUDY);
    assert_eq!(study.title.as_deref(), Some("A map"));
    assert_eq!(study.system_path, std::path::Path::new("runs/sys.toml"));
    assert_eq!(study.span, Span::Orbits(1e5));
    assert_eq!(study.measure, [Measure::Megno, Measure::Extent]);
    let x = &study.axes[0];
    assert_eq!(x.target, Target { body: BodyRef::Planet(0), key: Key::Period });
    assert_eq!((x.from, x.to, x.unit, x.scale, x.cells), (9.0, 11.0, "d", 1.0, 200));
    assert_eq!((x.spacing, &x.quantity), (Spacing::Log, &Quantity::Value));
    let y = &study.axes[1];
    assert_eq!((y.from, y.to, y.unit, y.cells, y.spacing), (0.0, 0.3, "", 150, Spacing::Linear));
    assert_eq!(study.limits.escape_au, Some(100.0));
    assert_eq!(study.limits.encounter, Encounter::Stop { hill: 2.5 });
    assert_eq!(study.engine.scheme, "(2,2)");
    assert_eq!(study.engine.step, Step::PerOrbit(30.0));
    assert_eq!(study.engine.energy_error, 1e-7);
}

#[test]
fn defaults() {
    let study = study("system = \"s.toml\"\nspan = \"300 yr\"\n[[axis]]\nvary = \"b.eccentricity\"\n");
    assert_eq!(study.span, Span::Days(300.0 * YEAR_DAY));
    assert_eq!(study.measure, [Measure::Megno, Measure::Lyapunov, Measure::Extent]);
    assert_eq!(study.axes[0].cells, 100);
    assert_eq!((study.axes[0].from, study.limits.escape_au), (0.0, None));
    assert!((study.axes[0].to - 0.14).abs() < 1e-15);
    assert_eq!(study.limits.encounter, Encounter::Stop { hill: 1.0 });
    assert_eq!((study.engine.scheme.as_str(), study.engine.step), ("auto", Step::Auto));
    assert_eq!(study.engine.energy_error, 1e-6);
}

/// The first axis varies `path`, with other ends.
fn vary(path: &str, from: &str, to: &str) -> String {
    changed("\"b.period\"", path).replace("\"9 d\"", from).replace("\"264 h\"", to)
}

#[test]
fn ratios_factors_and_all() {
    let ratio = study(&vary("\"b.period / c.period\"", "0.5", "0.75"));
    let axis = &ratio.axes[0];
    let under = Target { body: BodyRef::Planet(1), key: Key::Period };
    assert_eq!(axis.quantity, Quantity::RatioTo(under));
    assert_eq!((axis.path.as_str(), axis.unit, axis.scale), ("b.period / c.period", "", 1.0));
    let mut moved = system();
    axis.apply(0.5, &mut moved, &system()).expect("inside");
    assert_eq!(moved.planets[0].stated.value(Key::Period), Some(7.5));
    assert_eq!(moved.planets[1], system().planets[1]);

    let factor = study(&vary("\"all.mass\"\nas = \"factor\"", "0.5", "2"));
    let axis = &factor.axes[0];
    assert_eq!((&axis.quantity, &axis.target.body), (&Quantity::Factor, &BodyRef::All));
    let mut moved = system();
    axis.apply(2.0, &mut moved, &system()).expect("inside");
    for (after, before) in moved.planets.iter().zip(&system().planets) {
        let mass = before.stated.value(Key::Mass).expect("stated");
        assert_eq!(after.stated.value(Key::Mass), Some(2.0 * mass));
    }

    let all = study(&vary("\"all.inclination\"", "\"60 deg\"", "\"90 deg\""));
    assert_eq!((all.axes[0].unit, all.axes[0].scale), ("deg", DEGREE));
    let mut moved = system();
    all.axes[0].apply(60.0, &mut moved, &system()).expect("inside");
    assert!(moved.planets.iter().all(|p| p.stated.value(Key::Inclination) == Some(60.0 * DEGREE)));
}

#[test]
fn places_of_an_axis() {
    let study = study(STUDY);
    let x = &study.axes[0];
    assert_eq!((x.at(0), x.at(199)), (9.0, 11.0));
    let step = x.at(100) / x.at(99);
    assert!((step - (11.0_f64 / 9.0).powf(1.0 / 199.0)).abs() < 1e-13);
    let y = &study.axes[1];
    assert!((y.at(1) - 0.3 / 149.0).abs() < 1e-16);
}

#[test]
fn wrong_paths() {
    let vary = |path: &str| changed("vary = \"b.period\"", &format!("vary = \"{path}\""));
    check(&vary("d.period"), Fault::UnknownBody, 6, 9, &["\"d\"", "b, c, star, all"]);
    check(&vary("b.periode"), Fault::UnknownKey, 6, 9, &["did you mean \"period\"?"]);
    check(&vary("star.period"), Fault::BadPath, 6, 9, &["\"period\" of \"star\"", "mass, radius, age"]);
    check(&vary("b.age"), Fault::BadPath, 6, 9, &["\"age\" of \"b\""]);
    check(&vary("star.age"), Fault::BadPath, 6, 9, &["no influence"]);
    check(&vary("period"), Fault::BadPath, 6, 9, &["body.key"]);
    check(&vary(""), Fault::BadPath, 6, 8, &["body.key"]);
    check(&vary("b.period / x.period"), Fault::UnknownBody, 6, 20, &["\"x\""]);
    check(&vary("b.period / c.mass"), Fault::BadPath, 6, 9, &["a time over a mass"]);
    check(&vary("b.period / b.period"), Fault::BadPath, 6, 9, &["a key over itself"]);
    check(&vary("b.period / all.period"), Fault::BadPath, 6, 20, &["one body"]);
    check(&vary("b.semi_major_axis / c.semi_major_axis"), Fault::BadPath, 6, 29, &["not stated"]);
}

#[test]
fn wrong_axes() {
    check(&changed("cells = 200", "cells = 0"), Fault::EmptyAxis, 9, 9, &["0", "give 1 or more"]);
    check(&changed("cells = 200", "cells = -3"), Fault::OutOfRange, 9, 9, &["-3", "give 1 or more"]);
    check(&changed("cells = 200", "cells = 20.5"), Fault::WrongType, 9, 9, &["a whole number"]);
    check(&changed("cells = 200", "cells = 1"), Fault::EmptyAxis, 9, 9, &["1 cell for two different ends"]);
    check(&changed("\"264 h\"", "\"9 d\""), Fault::EmptyAxis, 9, 9, &["200 cells from 9"]);
    check(&changed("\"9 d\"", "\"-9 d\""), Fault::BadAxis, 7, 9, &["log axis"]);
    check(&changed("\"9 d\"", "\"0 d\""), Fault::BadAxis, 7, 9, &["above 0"]);
    let linear = changed("\"9 d\"", "\"0 d\"").replace("\"log\"", "\"linear\"");
    check(&linear, Fault::OutOfRange, 7, 9, &["a period above 0"]);
    check(&changed("to = 0.3", "to = 1.0"), Fault::OutOfRange, 14, 6, &["0 <= eccentricity < 1"]);
    check(&changed("to = 0.3", "to = nan"), Fault::NotFinite, 14, 6, &["nan"]);
    check(&changed("\"9 d\"", "9"), Fault::MissingUnit, 7, 8, &["s, min, h, d"]);
    check(&changed("\"264 h\"", "\"264 deg\""), Fault::WrongUnit, 8, 11, &["\"deg\", a unit of angle"]);
    check(&changed("\"9 d\"", "\"9 ± 1 d\""), Fault::Malformed, 7, 8, &["an uncertainty"]);
    check(&changed("to = 0.3\n", ""), Fault::MissingKey, 13, 8, &["no to"]);
    check(&changed("\"log\"", "\"logarithm\""), Fault::UnknownWord, 10, 11, &["\"linear\", \"log\""]);
    let none = STUDY.split("[[axis]]").next().expect("a head");
    check(none, Fault::MissingKey, 1, 1, &["no axis"]);
    let three = format!("{STUDY}[[axis]]\nvary = \"c.period\"\n");
    check(&three, Fault::BadAxis, 25, 8, &["one or two"]);
    let factor = changed("vary = \"b.period\"", "vary = \"b.inclination\"\nas = \"factor\"");
    check(&factor, Fault::BadAxis, 6, 9, &["not stated"]);
}

#[test]
fn axes_that_hinder_each_other() {
    let second = |path: &str, from: &str, to: &str| {
        changed("b.eccentricity", path).replace("from = 0.0", from).replace("to = 0.3", to)
    };
    let twice = second("b.semi_major_axis", "from = \"1 au\"", "to = \"2 au\"");
    check(&twice, Fault::Conflict, 12, 8, &["\"b.period\" and \"b.semi_major_axis\""]);
    let ratio = vary("\"b.period / c.period\"", "0.5", "0.75")
        .replace("b.eccentricity", "c.period")
        .replace("from = 0.0", "from = \"14 d\"")
        .replace("to = 0.3", "to = \"16 d\"");
    check(&ratio, Fault::Conflict, 6, 8, &["put this [[axis]] after the other one"]);
    // hypot(0.9, 0.6) = 1.0817
    let unbound = second("c.e_cos_w", "from = 0.0", "to = 0.9");
    check(&unbound, Fault::OutOfRange, 12, 8, &["corner", "c.e_cos_w = 0.9", "eccentricity 1.08"]);
    check(&changed("b.eccentricity", "c.sqrt_e_cos_w"), Fault::Conflict, 13, 8, &["stated pair", "e_cos_w"]);
}

#[test]
fn top_limits_and_engine() {
    check(&changed("title", "tittle"), Fault::UnknownKey, 1, 1, &["did you mean \"title\"?"]);
    check(&changed("span = \"1e5 orbits\"\n", ""), Fault::MissingKey, 1, 1, &["no span"]);
    check(&changed("system = \"sys.toml\"\n", ""), Fault::MissingKey, 1, 1, &["no system"]);
    check(&changed("1e5 orbits", "1e5 orbts"), Fault::UnknownUnit, 3, 13, &["orbits, s, min", "\"orbits\"?"]);
    check(&changed("1e5 orbits", "-1 orbits"), Fault::OutOfRange, 3, 9, &["above 0"]);
    check(&changed("\"megno\", ", "\"megna\", "), Fault::UnknownWord, 4, 12, &["did you mean \"megno\"?"]);
    check(&changed("\"extent\"]", "\"megno\"]"), Fault::Twice, 4, 21, &["twice"]);
    check(&changed("[\"megno\", \"extent\"]", "[]"), Fault::Count, 4, 11, &["at least one"]);
    check(&changed("\"100 au\"", "\"100 d\""), Fault::WrongUnit, 17, 15, &["a length"]);
    check(&changed("\"100 au\"", "\"0 au\""), Fault::OutOfRange, 17, 11, &["above 0"]);
    check(&changed("\"2.5 hill\"", "\"2.5\""), Fault::MissingUnit, 18, 14, &["1 hill"]);
    check(&changed("\"2.5 hill\"", "\"2.5 au\""), Fault::WrongUnit, 18, 18, &["1 hill"]);
    check(&changed("\"(2,2)\"", "\"(2,3)\""), Fault::UnknownWord, 20, 10, &["\"auto\", \"(2,2)\""]);
    check(&changed("30 per orbit", "30 per year"), Fault::Malformed, 22, 12, &["per orbit"]);
    check(&changed("30 per orbit", "0 per orbit"), Fault::OutOfRange, 22, 9, &["above 0"]);
    check(&changed("1e-7", "0"), Fault::OutOfRange, 23, 16, &["0 < energy_error < 1"]);
    check(SYSTEM, Fault::SystemFile, 1, 1, &["a system file", "--vary"]);
}

/// Floor 2 may not ask the integrator, so the words are data there; here both lists meet.
#[test]
fn every_scheme_and_nothing_else_may_be_named() {
    let schemes: Vec<&str> = abide::integrate::Scheme::all().iter().map(|scheme| scheme.name).collect();
    assert_eq!(schemes, SCHEMES);
    for scheme in ["auto"].into_iter().chain(SCHEMES) {
        assert_eq!(study(&changed("(2,2)", scheme)).engine.scheme, scheme);
    }
    check(&changed("(2,2)", "(10, 6, 4)"), Fault::UnknownWord, 20, 10, &["did you mean \"(10,6,4)\"?"]);
}

#[test]
fn coordinates_and_encounters() {
    let words = [
        ("auto", CoordinateChoice::Auto),
        ("heliocentric", CoordinateChoice::Heliocentric),
        ("jacobi", CoordinateChoice::Jacobi),
    ];
    for (word, choice) in words {
        assert_eq!(study(&changed("heliocentric", word)).engine.coordinates, choice);
    }
    assert_eq!(
        study(&changed("coordinates = \"heliocentric\"\n", "")).engine.coordinates,
        CoordinateChoice::Auto
    );
    check(&changed("heliocentric", "barycentric"), Fault::UnknownWord, 21, 15, &["\"jacobi\""]);
    assert_eq!(study(&changed("2.5 hill", "resolve")).limits.encounter, Encounter::Resolve);
    assert_eq!(study(&changed("2.5 hill", "off")).limits.encounter, Encounter::Off);
    check(&changed("2.5 hill", "resolved"), Fault::Malformed, 18, 14, &["\"resolve\""]);
}

#[test]
fn compensated_sums() {
    assert_eq!(study(STUDY).engine.compensated, Compensation::Auto);
    let with = |word: &str| format!("{STUDY}compensated = {word}\n");
    let words = [("auto", Compensation::Auto), ("on", Compensation::On), ("off", Compensation::Off)];
    for (word, choice) in words {
        assert_eq!(study(&with(&format!("\"{word}\""))).engine.compensated, choice);
    }
    check(&with("\"onn\""), Fault::UnknownWord, 24, 15, &["\"off\"", "did you mean \"on\"?"]);
    check(&with("true"), Fault::WrongType, 24, 15, &["\"on\""]);
}

#[test]
fn later_work_is_refused_as_such() {
    let not_yet = |text: String, line, column| check(&text, Fault::NotYet, line, column, &["this version"]);
    not_yet(format!("{STUDY}seed = 3\n"), 24, 1);
    not_yet(format!("{STUDY}[samples]\nfile = \"p.csv\"\n"), 24, 2);
}

#[test]
fn boxes_of_three_sigma() {
    let system = system();
    let axis = axis_from_uncertainty("b.period", &system, 50).expect("stated");
    assert!((axis.from - 9.7).abs() < 1e-14 && (axis.to - 10.3).abs() < 1e-14);
    assert_eq!((axis.unit, axis.cells), ("d", 50));
    let axis = axis_from_uncertainty("b.mass", &system, 50).expect("stated");
    assert_eq!((axis.from, axis.unit), (0.0, "Mearth")); // 5 − 3 × 2 is cut at 0
    assert!((axis.to - 8.0).abs() < 1e-14);
    let axis = axis_from_uncertainty("b.argument_of_pericentre", &system, 50).expect("stated");
    assert!((axis.from + 105.0).abs() < 1e-12 && (axis.to - 255.0).abs() < 1e-12); // 75 ± 180
    for (path, fault, word) in [
        ("c.period", Fault::NoUncertainty, "period of c without uncertainty"),
        ("c.eccentricity", Fault::NoUncertainty, "stated: e_cos_w, e_sin_w"),
        ("all.period", Fault::NoUncertainty, "different uncertainties"),
        ("e.period", Fault::UnknownBody, "b, c, star, all"),
    ] {
        let error = axis_from_uncertainty(path, &system, 50).expect_err(path);
        assert_eq!(error.fault, fault, "{error}");
        assert!(error.to_string().contains(word), "{error}");
    }
    assert_eq!(axis_from_uncertainty("b.period", &system, 0).expect_err("empty").fault, Fault::EmptyAxis);
    let period = axis_from_uncertainty("b.period", &system, 5).expect("stated");
    let error = check_axes(&[period.clone(), period], &system).expect_err("twice the same");
    assert_eq!(error.fault, Fault::Conflict);
}

#[test]
fn words_of_the_command_line() {
    assert_eq!(parse_span("1e5 orbits").expect("good"), Span::Orbits(1e5));
    assert_eq!(parse_span(" 2 Myr ").expect("good"), Span::Days(2e6 * YEAR_DAY));
    assert_eq!(parse_time("36 h").expect("good"), 1.5);
    assert_eq!(parse_step("0.5 d").expect("good"), Step::Days(0.5));
    assert_eq!(parse_step("auto").expect("good"), Step::Auto);
    for bad in ["", "orbits", "5", "0 d", "5 au", "5 d d", "1e400 d", "5 ± 1 d"] {
        let message = parse_span(bad).expect_err(bad).to_string();
        assert!(message.starts_with("span:1:") && message.contains("to do:"), "{message}");
    }
}

#[test]
fn files_on_disk() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("map.toml");
    std::fs::write(&path, STUDY).expect("written");
    let error = read_study(&path).expect_err("no system file yet");
    assert_eq!(error.fault, Fault::NoFile);
    let message = error.to_string();
    assert!(message.contains("map.toml:2:10: ") && message.contains("sys.toml"), "{message}");
    let system_path = folder.path().join("sys.toml");
    std::fs::write(&system_path, SYSTEM).expect("written");
    let file = read_study(&path).expect("good");
    assert_eq!(file.system.path, system_path);
    assert_eq!(file.text, STUDY);
    assert_eq!(sniff(&path).expect("a study"), FileKind::Study);
    assert_eq!(sniff(&system_path).expect("a system"), FileKind::System);
    let neither = folder.path().join("neither.toml");
    std::fs::write(&neither, "a = 1\n").expect("written");
    assert_eq!(sniff(&neither).expect_err("neither").fault, Fault::MissingKey);
}

/// The demos of the repository are good.
#[test]
fn demos() {
    let mut count = 0;
    for entry in std::fs::read_dir("systems").expect("the folder of the demos") {
        let path = entry.expect("an entry").path();
        match sniff(&path).unwrap_or_else(|error| panic!("{error}")) {
            FileKind::System => drop(read_system(&path).unwrap_or_else(|error| panic!("{error}"))),
            FileKind::Study => drop(read_study(&path).unwrap_or_else(|error| panic!("{error}"))),
        }
        count += 1;
    }
    assert!(count >= 4);
}
