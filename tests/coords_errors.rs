//! What a description may not be, and what the message says about it.

mod common_system;

use abide::coords::{CoordsError, check_start, configure};
use abide::system::{Frame, Key, Pericentre, System, Transit};
use common_system::{planet, system};

fn with(planets: &[(&str, &[(Key, f64)])]) -> System {
    let mut system = system(Frame::Astrocentric, Pericentre::Planet, Transit::Plus90);
    system.planets = planets.iter().map(|(name, keys)| planet(name, keys)).collect();
    system
}

/// The message of a description that must be refused.
fn refusal(keys: &[(Key, f64)]) -> String {
    configure(&with(&[("b", keys)])).unwrap_err().to_string()
}

#[test]
fn each_message_names_the_planet_what_was_found_and_what_to_do() {
    type Case<'a> = (&'a [(Key, f64)], &'a str, &'a str);
    let cases: [Case; 10] = [
        (&[(Key::Period, 9.0)], "states no mass", "minimum_mass"),
        (&[(Key::Mass, 1e-9)], "no size", "semi_major_axis"),
        (&[(Key::Mass, -1e-9), (Key::Period, 9.0)], "-1e-9", "zero or positive"),
        (&[(Key::Mass, 1e-9), (Key::Period, -9.0)], "-9e0", "must be positive"),
        (&[(Key::Mass, f64::NAN), (Key::Period, 9.0)], "mass is NaN", "finite"),
        (&[(Key::Mass, 1e-9), (Key::Period, 9.0), (Key::Eccentricity, 12.0)], "12", "divide by 100"),
        (&[(Key::Mass, 1e-9), (Key::Period, 9.0), (Key::ECosW, 0.1)], "e_cos_w without e_sin_w", "both"),
        (&[(Key::MinimumMass, 1e-9), (Key::Period, 9.0), (Key::Inclination, 0.0)], "minimum_mass", "face-on"),
        (
            &[(Key::RvSemiAmplitude, 1e-6), (Key::Period, 9.0), (Key::Inclination, std::f64::consts::PI)],
            "180 deg",
            "state mass",
        ),
        (
            &[(Key::Mass, 1e-9), (Key::SqrtECosW, 0.8), (Key::SqrtESinW, 0.8), (Key::Period, 9.0)],
            "1.28",
            "0 <= e < 1",
        ),
    ];
    for (keys, found, advice) in cases {
        let message = refusal(keys);
        assert!(message.contains("planet b"), "{message}");
        assert!(message.contains(found) && message.contains(advice), "{message}");
    }
}

#[test]
fn a_date_needs_an_epoch() {
    let mut system =
        with(&[("b", &[(Key::Mass, 1e-9), (Key::Period, 9.0), (Key::TransitTime, 2_460_000.0)])]);
    system.epoch_jd = None;
    let message = configure(&system).unwrap_err().to_string();
    assert!(message.contains("transit_time") && message.contains("epoch"), "{message}");
}

#[test]
fn the_star_needs_a_positive_mass() {
    let mut system = with(&[]);
    system.star.stated.remove(Key::Mass);
    assert_eq!(configure(&system), Err(CoordsError::StarMassMissing));
    system.star = planet("star", &[(Key::Mass, 0.0)]);
    assert_eq!(configure(&system), Err(CoordsError::StarMass { found: 0.0 }));
}

#[test]
fn bodies_that_touch_are_found_apart_from_configuring() {
    let keys = [(Key::Mass, 1e-9), (Key::Period, 9.0), (Key::MeanAnomaly, 1.0)];
    let together = configure(&with(&[("b", &keys), ("c", &keys)])).unwrap();
    let message = check_start(&together).unwrap_err().to_string();
    assert!(message.contains("planets b and c are at one place"), "{message}");
    let grazing = [(Key::Mass, 1e-9), (Key::Period, 9.0), (Key::Eccentricity, 0.97)];
    let message = check_start(&configure(&with(&[("d", &grazing)])).unwrap()).unwrap_err().to_string();
    assert!(message.contains("planet d is inside the star"), "{message}");
    let apart = [(Key::Mass, 1e-9), (Key::Period, 9.0), (Key::MeanAnomaly, 2.0)];
    assert_eq!(check_start(&configure(&with(&[("b", &keys), ("c", &apart)])).unwrap()), Ok(()));
}

/// Heavy companions, up to the star's own mass, where mass and size lean on each other hardest.
#[test]
fn masses_from_semi_amplitude_are_solved_for_any_ratio() {
    let star_gm = 0.87 * abide::units::GM_SUN;
    for frame in [Frame::Astrocentric, Frame::Jacobi, Frame::Barycentric] {
        for ratio in [1e-12, 1e-3, 0.1, 1.0, 10.0] {
            let gm = ratio * star_gm;
            let mu = star_gm + gm;
            let mean_motion = std::f64::consts::TAU / 100.0;
            // Straight from the definition, for a circle seen edge-on.
            let stated = gm / mu * (mu * mean_motion).cbrt();
            let keys = [(Key::RvSemiAmplitude, stated), (Key::Period, 100.0)];
            let mut system = with(&[("b", &keys)]);
            system.convention.elements = frame;
            let found = configure(&system).unwrap().planets[0].gm;
            // The root of m = c μ^{2/3} is 3μ/(3μ − 2m) < 3 times as sensitive as its right side.
            assert!((found / gm - 1.0).abs() < 24.0 * f64::EPSILON, "{frame:?} {ratio}: {}", found / gm);
        }
    }
}
