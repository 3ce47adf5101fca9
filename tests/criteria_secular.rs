//! Secular modes and the angular momentum deficit against other ways to the same numbers.

use abide::coords::{Configuration, Elements, StarOblateness, StatedState, Terms, star_centred};
use abide::criteria::{
    Oblateness, SecularPlanet, SecularSystem, StarTerms, amd_budget, exact_hill_balance, invariable_elements,
};
use abide::system::Frame;
use abide::units::{DEGREE, YEAR_DAY};
use nalgebra::Complex;

const SUN: f64 = 0.000_295_912_208_285_591_1;

fn three() -> Vec<SecularPlanet> {
    let planet = |gm: f64, axis: f64, e: f64, angle: f64| SecularPlanet {
        gm: gm * SUN,
        semi_major_axis_au: axis,
        mean_motion_rad_day: (SUN * (1.0 + gm) / axis.powi(3)).sqrt(),
        eccentricity: e,
        longitude_of_pericentre: angle,
        inclination: 0.3 * e,
        ascending_node: 2.0 * angle,
    };
    vec![planet(3e-5, 0.1, 0.05, 0.3), planet(2e-4, 0.21, 0.1, 2.0), planet(1e-3, 0.6, 0.02, 4.0)]
}

/// The slow twin: Runge–Kutta steps on dz/dt = i A z over the slowest period.
#[test]
fn modes_solve_their_equations() {
    let star = StarTerms { relativity: true, oblateness: Some(Oblateness { j2: 1e-6, radius_au: 0.005 }) };
    let system = SecularSystem::new(SUN, &three(), star).unwrap();
    let modes = system.modes();
    let mut z: Vec<Complex<f64>> =
        three().iter().map(|p| Complex::from_polar(p.eccentricity, p.longitude_of_pericentre)).collect();
    let slowest = modes.pericentres.iter().map(|m| m.frequency_rad_day).fold(f64::MAX, f64::min);
    let steps = 40_000;
    let step = std::f64::consts::TAU / slowest / f64::from(steps);
    let rate = |z: &[Complex<f64>]| -> Vec<Complex<f64>> {
        (0..3).map(|j| (0..3).map(|k| Complex::i() * system.pericentres[(j, k)] * z[k]).sum()).collect()
    };
    let moved = |z: &[Complex<f64>], d: &[Complex<f64>], h: f64| -> Vec<Complex<f64>> {
        z.iter().zip(d).map(|(z, d)| z + d * h).collect()
    };
    for _ in 0..steps {
        let first = rate(&z);
        let second = rate(&moved(&z, &first, 0.5 * step));
        let third = rate(&moved(&z, &second, 0.5 * step));
        let fourth = rate(&moved(&z, &third, step));
        for k in 0..3 {
            z[k] += (first[k] + 2.0 * second[k] + 2.0 * third[k] + fourth[k]) * (step / 6.0);
        }
    }
    for (k, z) in z.iter().enumerate() {
        let found = modes.eccentricity_vector(k, f64::from(steps) * step);
        assert!((found - z).norm() < 1e-8, "{k}: {found} {z}");
        let start = modes.eccentricity_vector(k, 0.0);
        let given = three()[k];
        assert!((start.norm() - given.eccentricity).abs() < 1e-14);
        assert!(z.norm() <= modes.largest_eccentricity(k) * (1.0 + 1e-9));
    }
    let shares: f64 = modes.amd_of_planets.iter().map(|(e, i)| e + i).sum();
    assert!((shares - 1.0).abs() < 1e-14);
    for kind in [&modes.pericentres, &modes.nodes] {
        assert!((kind.iter().map(|m| m.amd_share).sum::<f64>() - 1.0).abs() < 1e-14);
        for mode in kind {
            assert!((mode.participation.iter().sum::<f64>() - 1.0).abs() < 1e-14);
        }
    }
}

/// A single planet round an oblate star: pericentre forward and node back by (3/2) n J₂ (R/a)², by hand.
#[test]
fn oblateness_alone() {
    let planet = SecularPlanet { eccentricity: 0.1, inclination: 0.1, ..three()[0] };
    let star = StarTerms { relativity: false, oblateness: Some(Oblateness { j2: 2e-3, radius_au: 0.01 }) };
    let modes = SecularSystem::new(SUN, &[planet], star).unwrap().modes();
    let expected = 1.5 * planet.mean_motion_rad_day * 2e-3 * 0.01;
    assert!((modes.pericentres[0].frequency_rad_day / expected - 1.0).abs() < 1e-12);
    assert!((modes.nodes[0].frequency_rad_day / expected + 1.0).abs() < 1e-12);
}

#[test]
fn outside_its_domain_it_refuses() {
    let with = |change: fn(&mut SecularPlanet)| {
        let mut planets = three();
        change(&mut planets[1]);
        SecularSystem::new(SUN, &planets, StarTerms::default())
    };
    assert!(with(|_| ()).is_ok());
    assert!(with(|p| p.eccentricity = 0.31).is_err());
    assert!(with(|p| p.eccentricity = f64::NAN).is_err());
    assert!(with(|p| p.inclination = 0.4).is_err());
    assert!(with(|p| p.gm = 0.0).is_err());
    assert!(with(|p| p.semi_major_axis_au = 0.1).is_err());
    assert!(SecularSystem::new(SUN, &[], StarTerms::default()).is_err());
}

/// Mean elements of J2000 in the ecliptic: a, e, i, mean longitude, longitude of perihelion, node (deg), from memory of
/// the common table of approximate elements (Standish, JPL); inverse masses as in tests/truth/published-criteria.csv.
const EIGHT: [(&str, f64, [f64; 6]); 8] = [
    ("Mercury", 6023600.0, [0.38709927, 0.20563593, 7.00497902, 252.25032350, 77.45779628, 48.33076593]),
    ("Venus", 408523.71, [0.72333566, 0.00677672, 3.39467605, 181.97909950, 131.60246718, 76.67984255]),
    ("Earth", 328900.56, [1.00000261, 0.01671123, -0.00001531, 100.46457166, 102.93768193, 0.0]),
    ("Mars", 3098708.0, [1.52371034, 0.09339410, 1.84969142, -4.55343205, -23.94362959, 49.55953891]),
    ("Jupiter", 1047.3486, [5.20288700, 0.04838624, 1.30439695, 34.39644051, 14.72847983, 100.47390909]),
    ("Saturn", 3497.898, [9.53667594, 0.05386179, 2.48599187, 49.95424423, 92.59887831, 113.66242448]),
    ("Uranus", 22902.98, [19.18916464, 0.04725744, 0.77263783, 313.23810451, 170.95427630, 74.01692503]),
    ("Neptune", 19412.24, [30.06992276, 0.00859048, 1.77004347, -55.12002969, 44.96476227, 131.78422574]),
];

fn eight() -> Configuration {
    let gm: Vec<f64> = EIGHT.iter().map(|(_, inverse, _)| SUN / inverse).collect();
    let orbits: Vec<Elements> = EIGHT
        .iter()
        .map(|(_, _, [a, e, i, longitude, pericentre, node])| Elements {
            semi_major_axis_au: *a,
            eccentricity: *e,
            inclination: i * DEGREE,
            ascending_node: node * DEGREE,
            argument_of_pericentre: (pericentre - node) * DEGREE,
            mean_anomaly: (longitude - pericentre) * DEGREE,
        })
        .collect();
    let (pos, vel) = star_centred(Frame::Astrocentric, SUN, &gm, &orbits);
    let bodies = (0..8).map(|k| StatedState {
        name: EIGHT[k].0.into(),
        gm: gm[k],
        radius_au: 0.0,
        position_au: pos[k],
        velocity_au_day: vel[k],
    });
    Configuration::from_states(SUN, 0.00465, bodies.collect())
}

/// AMD of the planets to the digits printed in tests/truth/published-criteria.csv (computed independently), and the
/// inclination of the invariable plane, 1.5783° there (orbital angular momentum of mean elements).
#[test]
fn angular_momentum_deficit_of_the_planets() {
    let text = include_str!("truth/published-criteria.csv");
    let value = |name: &str| -> f64 {
        let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_reader(text.as_bytes());
        let row = reader.records().map(|r| r.unwrap()).find(|r| r[0].starts_with(name)).unwrap();
        row[1].parse().unwrap()
    };
    let budget = amd_budget(&eight()).unwrap();
    // au^5/day^3 → Msun au²/yr.
    let unit = YEAR_DAY / SUN;
    for (k, (name, _, _)) in EIGHT.iter().enumerate() {
        let (found, expected) = (budget.of_planets[k] * unit, value(&format!("AMD {name}")));
        println!("{name} {found:e} {expected:e}");
        assert!((found / expected - 1.0).abs() < 3e-4, "{name}: {found:e} for {expected:e}");
    }
    assert!((budget.total() * unit / value("AMD total") - 1.0).abs() < 1e-4);
    // Laskar & Petit (2017): the giant planets are AMD-stable against collision, the whole system is not.
    assert!(!budget.collision_stable());
    assert!(budget.pairs[4..].iter().all(|(_, _, pair)| pair.collision_stable()));
}

/// Inclinations to it are the known ones; sizes and shapes are untouched by the turn.
#[test]
fn the_invariable_plane_of_the_planets() {
    let system = eight();
    let turned = invariable_elements(&system);
    let mean: f64 = turned.iter().map(|orbit| orbit.inclination / DEGREE).fold(0.0, f64::max);
    // Mercury's inclination to the invariable plane is about 6.3° (Murray & Dermott, from memory).
    assert!((6.2..6.5).contains(&mean), "{mean}");
    // i of Jupiter to it: 0.32-0.33°.
    assert!((turned[4].inclination / DEGREE - 0.325).abs() < 0.01, "{}", turned[4].inclination / DEGREE);
    // Inclination and node of the plane in the ecliptic, computed independently from the same elements: the Earth's orbit
    // lies in the ecliptic, and the node is read off the total angular momentum.
    let text = include_str!("truth/published-criteria.csv");
    let row = text.lines().find(|line| line.starts_with("invariable plane")).unwrap();
    let (inclination, node) = row.split(',').nth(1).unwrap().split_once(" / ").unwrap();
    let tilt = turned[2].inclination / DEGREE;
    assert!((tilt - inclination.parse::<f64>().unwrap()).abs() < 2e-4, "{tilt} for {inclination}");
    let momentum: nalgebra::Vector3<f64> = (system.planets.iter())
        .map(|p| {
            p.gm * nalgebra::Vector3::from(p.position_au).cross(&nalgebra::Vector3::from(p.velocity_au_day))
        })
        .sum();
    let found = momentum.x.atan2(-momentum.y) / DEGREE;
    assert!((found - node.parse::<f64>().unwrap()).abs() < 1e-2, "{found} for {node}");
    for (orbit, planet) in turned.iter().zip(&system.planets) {
        assert!((orbit.semi_major_axis_au / planet.elements.semi_major_axis_au - 1.0).abs() < 1e-13);
        assert!((orbit.eccentricity - planet.elements.eccentricity).abs() < 1e-13);
    }
    let giants: Vec<StatedState> = [4, 5]
        .map(|k| StatedState {
            name: system.planets[k].name.clone(),
            gm: system.planets[k].gm,
            radius_au: 0.0,
            position_au: system.planets[k].position_au,
            velocity_au_day: system.planets[k].velocity_au_day,
        })
        .into();
    // Jupiter and Saturn alone are Hill stable (Gladman 1993 and older).
    assert!(exact_hill_balance(&Configuration::from_states(SUN, 0.0, giants)).unwrap().stable());
}

/// The terms of the star come from the configuration: none, or Mercury's published 42.98 arcsec per century (Nobili & Will
/// 1986 and tests/truth/precession-check.csv), to lowest order in e.
#[test]
fn relativity_is_in_where_the_configuration_has_it() {
    let mut system = eight();
    let without = SecularSystem::of_stated(&system).unwrap();
    assert_eq!(without, SecularSystem::of(&system, false).unwrap());
    system.terms = Terms { relativity: true, oblateness: None };
    let with = SecularSystem::of_stated(&system).unwrap();
    let added = with.pericentres[(0, 0)] - without.pericentres[(0, 0)];
    let arcsec_century = added * 36_525.0 / DEGREE * 3600.0;
    let e = EIGHT[0].2[1];
    assert!((arcsec_century / (42.98 * (1.0 - e * e)) - 1.0).abs() < 1e-3, "{arcsec_century}");
    assert_eq!(with.nodes, without.nodes);
}

/// A planet 10° above the equator of a tilted star: its node goes round the star's pole, whatever the axes.
#[test]
fn with_oblateness_the_equator_is_the_plane() {
    let (tilt, node) = (70.0 * DEGREE, 25.0 * DEGREE);
    let pole = [tilt.sin() * node.sin(), -tilt.sin() * node.cos(), tilt.cos()];
    let orbit = Elements {
        semi_major_axis_au: 0.1,
        eccentricity: 0.05,
        inclination: tilt + 10.0 * DEGREE,
        ascending_node: node,
        argument_of_pericentre: 1.0,
        mean_anomaly: 2.0,
    };
    let gm = 1e-5 * SUN;
    let (pos, vel) = star_centred(Frame::Astrocentric, SUN, &[gm], &[orbit]);
    let body =
        StatedState { name: "b".into(), gm, radius_au: 0.0, position_au: pos[0], velocity_au_day: vel[0] };
    let mut system = Configuration::from_states(SUN, 0.005, vec![body]);
    let oblateness = StarOblateness { j2: 1e-4, radius_au: 0.006, pole };
    system.terms = Terms { relativity: false, oblateness: Some(oblateness) };
    let modes = SecularSystem::of_stated(&system).unwrap().modes();
    let motion = (SUN * (1.0 + 1e-5) / 1e-3f64).sqrt();
    let expected = 1.5 * motion * 1e-4 * 0.06f64.powi(2);
    assert!((modes.nodes[0].frequency_rad_day / -expected - 1.0).abs() < 1e-9);
    assert!((modes.nodes[0].amplitude[0] - 2.0 * (5.0 * DEGREE).sin()).abs() < 1e-9);
    assert!((modes.pericentres[0].frequency_rad_day / expected - 1.0).abs() < 1e-9);
    // ½ (e² + ζ²) of Λ.
    let share = 0.5 * (0.05f64.powi(2) + (2.0 * (5.0 * DEGREE).sin()).powi(2));
    assert!((modes.amd_relative / share - 1.0).abs() < 1e-9, "{}", modes.amd_relative);
    // Farther from the equator the linear theory says nothing.
    system.terms.oblateness = Some(StarOblateness { pole: [0.0, 0.0, 1.0], ..oblateness });
    assert!(SecularSystem::of_stated(&system).is_err());
}
