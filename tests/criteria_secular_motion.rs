//! Secular modes with the star's oblateness and relativity against planets that are followed.

use std::f64::consts::TAU;

use abide::coords::{Elements, star_centred};
use abide::criteria::{Oblateness, SecularPlanet, SecularSystem, StarTerms};
use abide::integrate::{Advance, Block, Scheme, StarTerms as Pull, State, Tangent, advance};
use abide::lanes::WIDTH;
use abide::num::{Complex, Search, decompose};
use abide::observe::Moment;
use abide::system::Frame;
use abide::units::LIGHT;

const SUN: f64 = 0.000_295_912_208_285_591_1;
const RADIUS_AU: f64 = 0.0047;
const J2: f64 = 5e-5;
/// What the linear theory may be off, relative to the fastest mode of its kind. It is of the first order in the masses, and the
/// second order goes with mass/distance² from the nearest resonance of the first order, 0.3 of 2:1, with a factor of the order of ten: 3e-3. What e² = 1e-4 adds is less.
const LIMIT: f64 = 0.01;
/// Of each planet over the star's, in the heavier kind of system.
const MASS: f64 = 3e-5;
/// Periods of 1 to 2.6: neither 2:1 nor 3:1 is near.
const AXES_AU: [f64; 2] = [0.012, 0.022_691];
const STEPS_PER_ORBIT: f64 = 12.0;
/// A sample every 671.08 inner orbits, 2.75 million in all: five turns of the slowest mode of the heavier kind, 2.6 of the lighter one.
const LOOK_STEPS: usize = 8053;
const LOOKS: usize = 4096;

/// One system: its masses over [`MASS`], J₂, and whether relativity acts.
#[derive(Clone, Copy, Debug)]
struct Kind {
    weight: f64,
    j2: f64,
    relativity: bool,
}

/// The lighter kind has half of all that makes its modes turn, so that these must turn half as fast.
const KINDS: [Kind; 6] = [
    Kind { weight: 1.0, j2: 0.0, relativity: false },
    Kind { weight: 1.0, j2: J2, relativity: false },
    Kind { weight: 1.0, j2: 0.0, relativity: true },
    Kind { weight: 1.0, j2: J2, relativity: true },
    Kind { weight: 0.5, j2: 0.0, relativity: false },
    Kind { weight: 0.5, j2: 0.5 * J2, relativity: false },
];

fn orbits() -> [Elements; 2] {
    let orbit = |axis: f64, e: f64, angle: f64| Elements {
        semi_major_axis_au: axis,
        eccentricity: e,
        inclination: 0.8 * e,
        ascending_node: 1.0 + angle,
        argument_of_pericentre: 2.0 * angle,
        mean_anomaly: 3.0 * angle,
    };
    [orbit(AXES_AU[0], 0.01, 0.7), orbit(AXES_AU[1], 0.008, 2.9)]
}

/// Frequencies of the theory, rad/day, in order of size: of pericentres, of nodes.
fn theory(kind: Kind, terms: StarTerms) -> [Vec<f64>; 2] {
    let planets = orbits().map(|orbit| SecularPlanet::of(SUN, kind.weight * MASS * SUN, &orbit));
    let modes = SecularSystem::new(SUN, &planets, terms).unwrap().modes();
    [modes.pericentres, modes.nodes].map(|modes| sorted(modes.iter().map(|m| m.frequency_rad_day).collect()))
}

fn sorted(mut values: Vec<f64>) -> Vec<f64> {
    values.sort_by(f64::total_cmp);
    values
}

/// e exp(iϖ) and 2 sin(i/2) exp(iΩ) of the inner planet of every kind at every look.
fn follow() -> Vec<[Vec<Complex>; 2]> {
    let step_day = TAU * (AXES_AU[0].powi(3) / SUN).sqrt() / STEPS_PER_ORBIT;
    let mut block = Block::new(WIDTH, 2);
    for (lane, kind) in KINDS.iter().enumerate() {
        let gm = [kind.weight * MASS * SUN; 2];
        let (pos, vel) = star_centred(Frame::Astrocentric, SUN, &gm, &orbits());
        let total = SUN + gm.iter().sum::<f64>();
        let star = [0, 1, 2].map(|k| -(gm[0] * vel[0][k] + gm[1] * vel[1][k]) / total);
        let vel: Vec<[f64; 3]> = vel.iter().map(|v| [0, 1, 2].map(|k| v[k] + star[k])).collect();
        let tangent = Tangent { pos: pos.clone(), vel: vel.clone() };
        block.start(lane, &State { star_gm: SUN, gm: gm.into(), pos, vel }, &tangent, step_day, 1.0);
        let relativity = if kind.relativity { 6.0 * (SUN / LIGHT).powi(2) } else { 0.0 };
        let oblateness = 1.5 * SUN * kind.j2 * RADIUS_AU.powi(2);
        let pole = [0.0, 0.0, 1.0];
        block.set_star_terms(lane, &Pull { relativity, oblateness, pole, satellites: vec![] });
    }
    let mut seen = vec![[Vec::new(), Vec::new()]; KINDS.len()];
    for look in 0..LOOKS {
        for (lane, [pericentre, node]) in seen.iter_mut().enumerate() {
            let state = block.state(lane);
            let moment = Moment { time_day: look as f64, state: &state };
            let orbit = moment.elements(Frame::Astrocentric)[0];
            pericentre.push(Complex::from_polar(orbit.eccentricity, orbit.longitude_of_pericentre()));
            node.push(Complex::from_polar(2.0 * (0.5 * orbit.inclination).sin(), orbit.ascending_node));
        }
        let steps = LOOK_STEPS;
        advance(Advance { block: &mut block, scheme: Scheme::leapfrog(), steps, tangent: false });
    }
    seen
}

/// The two strongest lines, rad/day.
fn strongest(signal: &[Complex]) -> Vec<f64> {
    let step_day = LOOK_STEPS as f64 * TAU * (AXES_AU[0].powi(3) / SUN).sqrt() / STEPS_PER_ORBIT;
    let lines = decompose(signal, step_day, Search { most: 6, window_power: 1 }).unwrap().lines;
    sorted(lines.iter().take(2).map(|line| line.frequency).collect())
}

/// Largest difference of frequencies found and expected over the largest expected of that kind.
fn off(found: &[Vec<f64>; 2], expected: &[Vec<f64>; 2]) -> f64 {
    let one = |k: usize| {
        let largest = expected[k].iter().map(|f| f.abs()).fold(0.0, f64::max);
        found[k].iter().zip(&expected[k]).map(move |(f, e)| (f - e).abs() / largest).fold(0.0, f64::max)
    };
    one(0).max(one(1))
}

/// With the star's terms they do, and without any of them, or with half of the masses, they do not. With all that turns them
/// halved the departure halves too, so that it is what the theory leaves out.
#[test]
fn followed_planets_turn_as_the_modes_do() {
    let found: Vec<[Vec<f64>; 2]> =
        follow().iter().map(|[pericentre, node]| [strongest(pericentre), strongest(node)]).collect();
    let mut departures = Vec::new();
    for (kind, found) in KINDS.iter().zip(&found) {
        let oblateness = (kind.j2 > 0.0).then_some(Oblateness { j2: kind.j2, radius_au: RADIUS_AU });
        let terms = StarTerms { relativity: kind.relativity, oblateness };
        let departure = off(found, &theory(*kind, terms));
        println!("{kind:?}: {departure:.2e}");
        assert!(departure < LIMIT, "{kind:?}: {departure:e}");
        departures.push(departure);
        let fewer = [StarTerms { relativity: false, ..terms }, StarTerms { oblateness: None, ..terms }];
        for fewer in fewer.into_iter().filter(|fewer| *fewer != terms) {
            let without = off(found, &theory(*kind, fewer));
            println!("   with {fewer:?} only: {without:.2e}");
            assert!(without > 10.0 * LIMIT, "{kind:?} with {fewer:?} only: {without:e}");
        }
        let lighter = Kind { weight: 0.5 * kind.weight, ..*kind };
        assert!(off(found, &theory(lighter, terms)) > 10.0 * LIMIT, "{kind:?}");
    }
    for (heavy, light) in [(0, 4), (1, 5)] {
        let ratio = departures[light] / departures[heavy];
        assert!((0.3..0.7).contains(&ratio), "{ratio}");
    }
}
