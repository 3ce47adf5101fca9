//! The forces against independent formulas: slopes, potentials, conserved quantities, secular rates.

mod radau_support;

use abide::integrate::State;
use abide::integrate::forces::{Cast, Forces, StarTerm};
use abide::integrate::radau::{Engine, TOLERANCE, advance};
use proptest::prelude::*;
use radau_support::*;

/// All terms at once, strong enough to be seen beside Newton's.
fn everything() -> Forces {
    Forces::newton()
        .with(StarTerm::Relativity { light_au_day: 20.0 })
        .with(StarTerm::PrecessionPotential { light_au_day: 15.0 })
        .with(StarTerm::Oblateness { j2: 0.02, radius_au: 0.4, pole: [0.48, 0.6, 0.64] })
        .with_on(StarTerm::Satellite { k_au2: 0.01 }, 1)
}

fn evaluate(forces: &Forces, cast: &Cast, at: &[f64], vel: &[f64]) -> Vec<f64> {
    let mut out = vec![0.0; at.len()];
    forces.evaluate(cast, at, &vec![0.0; at.len()], vel, &mut out);
    out
}

fn numbers(spread: f64) -> impl Strategy<Value = Vec<f64>> {
    proptest::collection::vec(-spread..spread, 15)
}

/// Places far enough apart for a difference quotient.
fn places() -> impl Strategy<Value = Vec<f64>> {
    numbers(0.3).prop_map(|mut x| {
        for body in 0..5 {
            x[3 * body] += body as f64;
        }
        x
    })
}

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn variations_are_the_slopes_of_the_forces(
        at in places(), vel in numbers(1.0), dat in numbers(1.0), dvel in numbers(1.0),
    ) {
        // Two massless bodies among the massive ones.
        let cast = Cast::new(vec![1.0, 0.02, 0.0, 0.01, 0.0]);
        let forces = everything();
        let both = |x: &[f64], d: &[f64]| [x, d].concat();
        let found = evaluate(&forces, &cast, &both(&at, &dat), &both(&vel, &dvel));
        let moved = |x: &[f64], d: &[f64], h: f64| -> Vec<f64> {
            x.iter().zip(d).map(|(x, d)| x + h * d).collect()
        };
        let slope = |h: f64| -> Vec<f64> {
            let side = |h: f64| evaluate(&forces, &cast, &moved(&at, &dat, h), &moved(&vel, &dvel, h));
            side(h).iter().zip(side(-h)).map(|(a, b)| (a - b) / (2.0 * h)).collect()
        };
        // Two steps, so that the error of second order goes.
        let (wide, narrow) = (slope(2e-4), slope(1e-4));
        let size = found[15..].iter().fold(1.0f64, |most, x| most.max(x.abs()));
        for k in 0..15 {
            let expected = (4.0 * narrow[k] - wide[k]) / 3.0;
            prop_assert!((found[15 + k] - expected).abs() < 1e-9 * size, "{k}: {} {expected}", found[15 + k]);
        }
    }

    #[test]
    fn total_momentum_is_kept_and_massless_bodies_do_not_pull(at in places(), vel in numbers(1.0)) {
        let gm = vec![1.0, 0.02, 0.0, 0.01, 0.0];
        let found = evaluate(&everything(), &Cast::new(gm.clone()), &at, &vel);
        for k in 0..3 {
            let sum: f64 = (0..5).map(|body| gm[body] * found[3 * body + k]).sum();
            prop_assert!(sum.abs() < 1e-15, "{sum:e}");
        }
        let mut elsewhere = at.clone();
        elsewhere[6] += 0.5;
        let other = evaluate(&everything(), &Cast::new(gm), &elsewhere, &vel);
        for body in [0, 1, 3, 4] {
            prop_assert_eq!(&found[3 * body..3 * body + 3], &other[3 * body..3 * body + 3]);
        }
    }

    #[test]
    fn terms_with_a_potential_are_minus_its_gradient(at in places()) {
        let (c2, j2, radius, pole, k_au2) = (225.0, 0.02, 0.4, [0.48, 0.6, 0.64], 0.01);
        // Per unit mass, star of mass 1 at the origin: −3/(c²r²), J₂R²(3z²/r² − 1)/(2r³), −K/(3r³).
        let potential = |r: [f64; 3]| {
            let size = distance(&r, &[0.0; 3]);
            let z: f64 = (0..3).map(|k| pole[k] * r[k]).sum();
            -3.0 / (c2 * size * size)
                + j2 * radius * radius * (3.0 * z * z / (size * size) - 1.0) / (2.0 * size.powi(3))
                - k_au2 / (3.0 * size.powi(3))
        };
        let r = [at[3], at[4], at[5]];
        let forces = Forces::newton()
            .with(StarTerm::PrecessionPotential { light_au_day: 15.0 })
            .with(StarTerm::Oblateness { j2, radius_au: radius, pole })
            .with_on(StarTerm::Satellite { k_au2 }, 0);
        let all = [0.0, 0.0, 0.0, r[0], r[1], r[2]];
        let cast = Cast::new(vec![1.0, 0.0]);
        let (with, plain) = (evaluate(&forces, &cast, &all, &[0.0; 6]), evaluate(&Forces::newton(), &cast, &all, &[0.0; 6]));
        for k in 0..3 {
            let side = |h: f64| {
                let mut moved = r;
                moved[k] += h;
                potential(moved)
            };
            let slope = |h: f64| (side(h) - side(-h)) / (2.0 * h);
            let expected = -(4.0 * slope(1e-3) - slope(2e-3)) / 3.0;
            prop_assert!((with[3 + k] - plain[3 + k] - expected).abs() < 1e-7, "{} {expected}", with[3 + k] - plain[3 + k]);
        }
    }
}

#[test]
fn work_grows_quadratically_with_massive_and_linearly_with_massless_bodies() {
    let pairs = |massive: usize, massless: usize| {
        let mut gm = vec![1.0];
        gm.extend(vec![1e-6; massive]);
        gm.extend(vec![0.0; massless]);
        let cast = Cast::new(gm);
        let at: Vec<f64> = (0..3 * cast.bodies()).map(|k| (k * k + 1) as f64).collect();
        let mut out = vec![0.0; at.len()];
        Forces::newton().evaluate(&cast, &at, &vec![0.0; at.len()], &[], &mut out)
    };
    assert_eq!([1, 2, 4, 8].map(|n| pairs(n, 0)), [1, 3, 10, 36]);
    assert_eq!([0, 1, 10, 100, 1000].map(|n| pairs(2, n)), [3, 6, 33, 303, 3003]);
}

#[test]
fn massless_bodies_move_as_the_others_lead_them() {
    let (_, all) = solar_system("DE406");
    let giants = only(&all, &[4, 5]);
    let mut with = giants.clone();
    with.gm.push(0.0);
    with.pos.push([1.0, 0.0, 0.1]);
    with.vel.push([0.0, 0.0172, 0.0]);
    let days = 3000.0;
    let alone = advance(&giants, None, &Forces::newton(), days, TOLERANCE).unwrap().state;
    let led = advance(&with, None, &Forces::newton(), days, TOLERANCE).unwrap().state;
    for planet in 0..2 {
        // The steps differ, so only rounding may.
        assert!(distance(&alone.pos[planet], &led.pos[planet]) < 1e-13);
    }
    // A body of next to no mass is led along the same path.
    with.gm[2] = 1e-30;
    let light = advance(&with, None, &Forces::newton(), days, TOLERANCE).unwrap().state;
    assert!(distance(&light.pos[2], &led.pos[2]) < 1e-11);
}

/// A circular inclined orbit with G × star mass = 1, period 2π.
fn inclined(inclination: f64, eccentricity: f64) -> State {
    let r = 1.0 - eccentricity;
    let v = ((1.0 + eccentricity) / r).sqrt();
    State {
        star_gm: 1.0,
        gm: vec![0.0],
        pos: vec![[r, 0.0, 0.0]],
        vel: vec![[0.0, v * inclination.cos(), v * inclination.sin()]],
    }
}

#[test]
fn oblateness_turns_the_node_at_the_textbook_rate() {
    // dΩ/dt = −(3/2) n J₂ (R/p)² cos i to first order in J₂.
    for (inclination, eccentricity) in [(0.3f64, 0.0), (1.2, 0.2), (0.7, 0.5)] {
        let (j2, radius) = (1e-6, 0.05f64);
        let term = StarTerm::Oblateness { j2, radius_au: radius, pole: [0.0, 0.0, 1.0] };
        let turns = 2000.0;
        let days = turns * std::f64::consts::TAU;
        let state = inclined(inclination, eccentricity);
        let end = advance(&state, None, &Forces::newton().with(term), days, TOLERANCE).unwrap().state;
        let (r, v) = (end.pos[0], end.vel[0]);
        let normal = [r[1] * v[2] - r[2] * v[1], r[2] * v[0] - r[0] * v[2]];
        let node = normal[0].atan2(-normal[1]);
        let p = 1.0 - eccentricity * eccentricity;
        let expected = -1.5 * j2 * (radius / p).powi(2) * inclination.cos() * days;
        assert!((node / expected - 1.0).abs() < 1e-3, "{node:e} {expected:e}");
    }
}

#[test]
fn the_energy_account_closes_with_every_term() {
    let (_, all) = solar_system("DE406");
    let inner = only(&all, &[0, 1, 2, 3, 4]);
    // Relativity and oblateness made ten thousand times stronger than the Sun's.
    let forces = Forces::newton()
        .with(StarTerm::Relativity { light_au_day: LIGHT / 100.0 })
        .with(StarTerm::Oblateness { j2: 2e-3, radius_au: 0.00465, pole: [0.0, 0.6, 0.8] })
        .with_on(StarTerm::Satellite { k_au2: 5e-6 }, 2);
    let mut engine = Engine::from_state(&inner, &[], &forces, TOLERANCE).unwrap();
    run(&mut engine, 20_000.0);
    let error = engine.energy_error().unwrap();
    assert!(error.abs() < 5e-15, "{error:e}");
}
