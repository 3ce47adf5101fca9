//! Varying one key leaves every other statement as stated.

use abide::input::parse_system;
use abide::system::{Key, Measured, Pair, SetError, Stated};

/// A planet with these statements (values in inner units).
fn stated(keys: &[(Key, f64)]) -> Stated {
    let mut stated = Stated::default();
    for (key, value) in keys {
        stated.insert(*key, Measured::exact(*value, ""));
    }
    stated
}

fn set(stated: &mut Stated, key: Key, value: f64) {
    stated.set(key, Measured::exact(value, "")).expect("can be set");
}

#[test]
fn a_key_replaces_its_group_only() {
    let before = stated(&[
        (Key::Period, 12.0),
        (Key::MinimumMass, 1e-9),
        (Key::Eccentricity, 0.1),
        (Key::LongitudeOfPericentre, 2.0),
        (Key::TransitTime, 2_460_312.0),
        (Key::AscendingNode, 0.5),
    ]);
    for (key, replaced) in [
        (Key::SemiMajorAxis, Key::Period),
        (Key::RvSemiAmplitude, Key::MinimumMass),
        (Key::MeanAnomaly, Key::TransitTime),
        (Key::ArgumentOfPericentre, Key::LongitudeOfPericentre),
        (Key::Eccentricity, Key::Eccentricity),
    ] {
        let mut after = before.clone();
        set(&mut after, key, 0.25);
        let mut expected = before.clone();
        expected.remove(replaced);
        expected.insert(key, Measured::exact(0.25, ""));
        assert_eq!(after, expected, "{key:?}");
    }
}

#[test]
fn eccentricity_of_a_pair_keeps_the_argument() {
    for (cosine, sine) in [(Key::ECosW, Key::ESinW), (Key::SqrtECosW, Key::SqrtESinW)] {
        let mut body = stated(&[(cosine, -0.3), (sine, 0.3), (Key::Period, 12.0)]);
        set(&mut body, Key::Eccentricity, 0.2);
        let argument = body.value(Key::ArgumentOfPericentre).expect("the kept argument");
        assert!((argument - 135f64.to_radians()).abs() < 1e-15);
        assert_eq!(body.iter().count(), 3);
    }
}

#[test]
fn argument_of_a_pair_keeps_the_eccentricity() {
    let mut plain = stated(&[(Key::ECosW, 0.3), (Key::ESinW, 0.4)]);
    set(&mut plain, Key::ArgumentOfPericentre, 1.0);
    assert_eq!(plain, stated(&[(Key::Eccentricity, 0.5), (Key::ArgumentOfPericentre, 1.0)]));
    let mut root = stated(&[(Key::SqrtECosW, 0.3), (Key::SqrtESinW, 0.4)]);
    set(&mut root, Key::LongitudeOfPericentre, 1.0);
    assert!((root.value(Key::Eccentricity).expect("kept") - 0.25).abs() < 1e-16);
    assert_eq!(root.value(Key::LongitudeOfPericentre), Some(1.0));
}

#[test]
fn a_component_turns_eccentricity_and_argument_into_the_pair() {
    let argument = 30f64.to_radians();
    let mut body = stated(&[(Key::Eccentricity, 0.25), (Key::ArgumentOfPericentre, argument)]);
    set(&mut body, Key::SqrtECosW, 0.1);
    assert_eq!(body.value(Key::SqrtECosW), Some(0.1));
    assert!((body.value(Key::SqrtESinW).expect("the other") - 0.25).abs() < 1e-15); // √0.25 sin 30°
    assert_eq!(body.iter().count(), 2);

    // A longitude gives its argument by taking the node off.
    let mut body = stated(&[
        (Key::Eccentricity, 0.2),
        (Key::LongitudeOfPericentre, argument + 0.7),
        (Key::AscendingNode, 0.7),
    ]);
    set(&mut body, Key::ECosW, 0.05);
    assert!((body.value(Key::ESinW).expect("the other") - 0.1).abs() < 1e-15);
    assert_eq!(body.value(Key::AscendingNode), Some(0.7));
    assert_eq!(body.value(Key::LongitudeOfPericentre), None);
}

#[test]
fn a_stated_pair_moves_one_component() {
    let mut body = stated(&[(Key::ECosW, 0.3), (Key::ESinW, 0.4)]);
    set(&mut body, Key::ESinW, -0.1);
    assert_eq!(body, stated(&[(Key::ECosW, 0.3), (Key::ESinW, -0.1)]));
}

#[test]
fn mixed_pairs_are_refused() {
    let mut body = stated(&[(Key::ECosW, 0.3), (Key::ESinW, 0.4)]);
    let before = body.clone();
    let answer = body.set(Key::SqrtECosW, Measured::exact(0.1, ""));
    assert_eq!(answer, Err(SetError::MixedPair { asked: Key::SqrtECosW, stated: Pair::Plain }));
    assert_eq!(body, before);
}

#[test]
fn a_stars_argument_stays_the_stars() {
    let text = "[star]\nmass = \"1 Msun\"\n[convention]\npericentre = \"star\"\n[[planet]]\nname = \"b\"\n\
                period = \"3 d\"\nmass = \"1 Mjup\"\ne_cos_w = 0.0\ne_sin_w = 0.2\nmean_anomaly = \"0 deg\"\n";
    let mut system = parse_system("x.toml", text).expect("good").system;
    let target = system.target("b.eccentricity").expect("a path");
    system.set(&target, Measured::exact(0.1, "")).expect("can be set");
    let argument = system.planets[0].stated.value(Key::ArgumentOfPericentre).expect("kept");
    assert!((argument - 90f64.to_radians()).abs() < 1e-15);
}
