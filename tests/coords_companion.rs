//! A second star: what circles what, and states against sums done by hand.

mod common_system;

use abide::coords::{BodyKind, Configuration, CoordsError, check_start, configure};
use abide::criteria;
use abide::system::{CompanionPlace, Frame, Key, Oblateness, Pericentre, System, Transit};
use abide::units::GM_SUN;
use common_system::{planet, system};
use proptest::prelude::*;

const STAR: f64 = 0.87 * GM_SUN;

fn pair(frame: Frame, companion: &[(Key, f64)], planets: &[&[(Key, f64)]]) -> System {
    let mut system = system(frame, Pericentre::Planet, Transit::Plus90);
    let named = |(index, keys): (usize, &&[(Key, f64)])| planet(["b", "c"][index], keys);
    system.planets = planets.iter().enumerate().map(named).collect();
    system.companion = Some(planet("B", companion));
    system
}

/// Flat circles of these sizes (au) with these masses (of the star) and phases.
fn circle(mass: f64, axis_au: f64, phase: f64) -> Vec<(Key, f64)> {
    let flat = [(Key::Inclination, 0.0), (Key::MeanAnomaly, phase)];
    [(Key::MassRatio, mass), (Key::SemiMajorAxis, axis_au)].into_iter().chain(flat).collect()
}

fn norm(vector: [f64; 3]) -> f64 {
    vector.iter().map(|x| x * x).sum::<f64>().sqrt()
}

/// A massless planet on a circle about the centre of mass of a pair of any mass ratio: position and speed about
/// that centre from the star-centred state by the definition of a centre of mass.
#[test]
fn a_planet_circles_the_centre_of_mass_of_the_pair() {
    for ratio in [1e-12, 1e-3, 0.3, 1.0, 8.0] {
        let system = pair(Frame::Jacobi, &circle(ratio, 0.2, 0.4), &[&circle(0.0, 1.0, 2.0)]);
        let found = configure(&system).unwrap();
        let share = ratio / (1.0 + ratio);
        let about = |of: fn(&Configuration, usize) -> [f64; 3]| {
            let (own, second) = (of(&found, 0), of(&found, 1));
            [0, 1, 2].map(|k| own[k] - share * second[k])
        };
        let distance = norm(about(|c, i| c.planets[i].position_au));
        let speed = norm(about(|c, i| c.planets[i].velocity_au_day));
        assert!((distance - 1.0).abs() < 1e-14, "{ratio}: {distance}");
        assert!((speed / (STAR * (1.0 + ratio)).sqrt() - 1.0).abs() < 1e-14, "{ratio}: {speed}");
        let second = &found.planets[1];
        assert!((norm(second.position_au) - 0.2).abs() < 1e-15);
        assert!((norm(second.velocity_au_day) / (STAR * (1.0 + ratio) / 0.2).sqrt() - 1.0).abs() < 1e-14);
        assert_eq!((second.kind, found.planets[0].kind), (BodyKind::Companion, BodyKind::Planet));
        assert_eq!(found.companion_place(), Some(CompanionPlace::Inside));
        assert!((found.central_gm(0) / (STAR * (1.0 + ratio)) - 1.0).abs() < 1e-15);
        assert!(check_start(&found).is_ok());
        let orbit = found.orbits()[0];
        assert!(
            (orbit.elements.semi_major_axis_au - 1.0).abs() < 1e-13 && orbit.elements.eccentricity < 1e-13
        );
    }
}

/// The star's velocity semi-amplitude by definition: on a circle its speed about the centre of mass, m₂ v/(m₁ + m₂).
#[test]
fn a_velocity_semi_amplitude_weighs_a_companion_too() {
    for ratio in [0.01, 0.7, 5.0] {
        let relative = (STAR * (1.0 + ratio) / 20.0).sqrt();
        let keys = [
            (Key::RvSemiAmplitude, ratio / (1.0 + ratio) * relative),
            (Key::SemiMajorAxis, 20.0),
            (Key::MeanAnomaly, 1.0),
        ];
        let found = configure(&pair(Frame::Astrocentric, &keys, &[&circle(0.0, 1.0, 0.0)])).unwrap();
        assert!((found.planets[1].gm / (ratio * STAR) - 1.0).abs() < 1e-12, "{ratio}");
        assert_eq!(found.companion_place(), Some(CompanionPlace::Outside));
        assert_eq!((found.own_frame(), found.central_gm(0)), (Frame::Astrocentric, STAR));
    }
}

#[test]
fn the_place_is_the_same_before_and_after_the_masses() {
    let cases = [
        (0.2, [1.0, 1.6], CompanionPlace::Inside),
        (1.3, [0.2, 9.0], CompanionPlace::Between),
        (30.0, [1.0, 1.6], CompanionPlace::Outside),
    ];
    for (axis_au, planets, place) in cases {
        let planets = planets.map(|axis_au| circle(1e-4, axis_au, axis_au));
        let system = pair(Frame::Jacobi, &circle(0.8, axis_au, 0.0), &[&planets[0], &planets[1]]);
        assert_eq!(system.companion_place(), Some(place));
        let found = configure(&system).unwrap();
        assert_eq!(found.companion_place(), Some(place));
        assert_eq!(found.companion_index(), Some(2));
        assert_eq!(found.planet_indices().collect::<Vec<_>>(), [0, 1]);
        // The companion is no neighbour, and none is counted across its orbit.
        let pairs = criteria::neighbours(&found);
        assert_eq!(pairs.len(), usize::from(place != CompanionPlace::Between));
        assert!(criteria::two_planet_balance(&found).is_none());
        let hill = |one, other| criteria::encounter_radius_au(&found, &found.orbits(), [one, other]);
        assert!(hill(0, 2).is_none() && hill(2, 1).is_none() && hill(0, 1).unwrap() > 0.0);
        if let [pair] = pairs.as_slice() {
            let central = if place == CompanionPlace::Inside { 1.8 } else { 1.0 };
            let hill = (2e-4f64 / (3.0 * central)).cbrt() * 1.3;
            assert!((pair.mutual_hill_radius_au / hill - 1.0).abs() < 1e-3, "{place:?}");
        }
    }
}

/// A planet between, by its stated axis: its period is known only once the companion's mass is.
#[test]
fn a_heavy_companion_makes_axes_fast() {
    // Around the star alone 0.5 au is 284 d · …; around 11 star masses √11 less, still outside 0.2 au.
    let period_day = std::f64::consts::TAU * (0.2f64.powi(3) / (11.0 * STAR)).sqrt();
    let companion = [(Key::MassRatio, 10.0), (Key::Period, 1.1 * period_day), (Key::MeanAnomaly, 0.0)];
    let found = configure(&pair(Frame::Jacobi, &companion, &[&circle(0.0, 0.5, 1.0)])).unwrap();
    assert_eq!(found.companion_place(), Some(CompanionPlace::Inside));
    assert!((found.planets[0].elements.semi_major_axis_au - 0.5).abs() < 1e-15);
    let own_day = found.periods_day()[0].unwrap();
    let by_hand = std::f64::consts::TAU * (0.125 / (11.0 * STAR)).sqrt();
    assert!((own_day / by_hand - 1.0).abs() < 1e-14);
}

#[test]
fn frames_without_meaning_are_refused_and_messages_name_the_companion() {
    let inside = circle(0.5, 0.2, 0.0);
    let refuse = |frame, companion: &[(Key, f64)]| {
        configure(&pair(frame, companion, &[&circle(0.0, 1.0, 0.0)])).unwrap_err()
    };
    assert_eq!(refuse(Frame::Astrocentric, &inside), CoordsError::CirclesPair { planet: "b".to_string() });
    assert_eq!(refuse(Frame::Barycentric, &circle(0.5, 30.0, 0.0)), CoordsError::BarycentricCompanion);
    let message = refuse(Frame::Jacobi, &[(Key::Mass, 1e-4)]).to_string();
    assert!(message.starts_with("the companion states no size"), "{message}");
    let touching =
        configure(&pair(Frame::Jacobi, &circle(0.5, 0.003, 0.0), &[&circle(0.0, 1.0, 0.0)])).unwrap();
    let message = check_start(&touching).unwrap_err().to_string();
    assert!(message.starts_with("the companion is inside the star"), "{message}");
    let half = [(Key::SatelliteMassRatio, 0.1)];
    let keys: Vec<(Key, f64)> = circle(1e-6, 1.0, 0.0).into_iter().chain(half).collect();
    let error = configure(&pair(Frame::Jacobi, &inside, &[&keys])).unwrap_err().to_string();
    assert!(error.contains("planet b states satellite_mass_ratio without"), "{error}");
}

/// The Moon: averaged over 6000 years of DE406 its strength is 5.6494891e-8 au² (measured for the reference
/// integrations; mean tidal acceleration over mean 1/r⁴), 5 % less than that of a circle of 384399 km in the plane of
/// the Earth's orbit, because the real orbit is tilted and disturbed. 1/81.30056 is the mass ratio of DE406.
#[test]
fn the_strength_of_the_moon() {
    let mut system = pair(Frame::Jacobi, &circle(0.5, 30.0, 0.0), &[]);
    system.companion = None;
    let keys = [
        (Key::SatelliteMassRatio, 1.0 / 81.300_56),
        (Key::SatelliteSemiMajorAxis, 384_399e3 / 149_597_870_700.0),
    ];
    let keys: Vec<(Key, f64)> = circle(3e-6, 1.0, 0.0).into_iter().chain(keys).collect();
    system.planets = vec![planet("b", &keys)];
    let strength = configure(&system).unwrap().planets[0].satellite_k_au2.unwrap();
    assert!((5.649_489_1e-8 / strength - 0.95).abs() < 1e-3, "{strength}");
}

#[test]
fn terms_of_the_star_arrive() {
    let mut system = pair(Frame::Jacobi, &circle(0.5, 30.0, 0.0), &[&circle(0.0, 1.0, 0.0)]);
    assert_eq!(configure(&system).unwrap().terms, Default::default());
    system.star.stated.insert(Key::Radius, abide::system::Measured::exact(0.005, "au"));
    let star = Oblateness { j2: 1e-6, radius_au: None, inclination: 0.3, ascending_node: 0.0 };
    system.physics.oblateness = Some(star);
    system.physics.relativity = true;
    let terms = configure(&system).unwrap().terms;
    let oblateness = terms.oblateness.unwrap();
    assert!(terms.relativity);
    assert_eq!((oblateness.j2, oblateness.radius_au), (1e-6, 0.005));
    assert_eq!(oblateness.pole, [0.0, -0.3f64.sin(), 0.3f64.cos()]);
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(2000))]

    /// Jacobi elements found from a state alone, the order of the orbits included, are the stated ones.
    #[test]
    fn orbits_of_hierarchies_come_back_from_states(
        ratio in -3.0..1.0f64, shape in 0.0..0.6f64, wide in 3.0..12.0f64, phases in prop::array::uniform4(0.0..std::f64::consts::TAU),
        outside in any::<bool>(),
    ) {
        let mut second = circle(10f64.powf(ratio), 1.0, phases[0]);
        second.extend([(Key::Eccentricity, shape), (Key::ArgumentOfPericentre, phases[1])]);
        // At least three times the pair's apocentre, or within a ninth of its pericentre.
        let axis_au = if outside { wide * (1.0 + shape) } else { (1.0 - shape) / (3.0 * wide) };
        let mut own = circle(1e-4, axis_au, phases[2]);
        own.extend([(Key::Eccentricity, 0.2), (Key::ArgumentOfPericentre, phases[3])]);
        let found = configure(&pair(Frame::Jacobi, &second, &[&own])).unwrap();
        prop_assert_eq!(found.circles_pair(0), outside);
        for (elements, body) in found.elements_in(Frame::Jacobi).iter().zip(&found.planets) {
            let stated = &body.elements;
            prop_assert!((elements.semi_major_axis_au / stated.semi_major_axis_au - 1.0).abs() < 1e-10, "{:?}", elements);
            prop_assert!((elements.eccentricity - stated.eccentricity).abs() < 1e-10, "{:?}", elements);
        }
    }
}
