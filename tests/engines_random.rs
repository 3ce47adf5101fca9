//! Both engines on orbits at the edges: hyperbolas and near-parabolas, retrograde, polar and coplanar planes, circles, and
//! mass ratios from 1e-12 to 1. What must hold at the limits is known without either engine.

use std::f64::consts::{PI, TAU};
use std::ops::ControlFlow;

use abide::coords::Elements;
use abide::integrate::forces::Forces;
use abide::integrate::radau::{Engine, TOLERANCE, Watch};
use abide::integrate::{
    Advance, Block, Coordinates, Scheme, State, Tangent, advance, angular_momentum, energy,
};
use proptest::prelude::*;

/// An orbit about GM = `gm`: place and velocity relative to the star, from pericentre distance, e, true anomaly and plane.
fn orbit(gm: f64, pericentre: f64, e: f64, anomaly: f64, tilt: f64, node: f64) -> ([f64; 3], [f64; 3]) {
    let p = pericentre * (1.0 + e);
    let r = p / (1.0 + e * anomaly.cos());
    let speed = (gm / p).sqrt();
    let flat =
        [[r * anomaly.cos(), r * anomaly.sin()], [-speed * anomaly.sin(), speed * (e + anomaly.cos())]];
    let turned = flat.map(|[x, y]| {
        let (y, z) = (y * tilt.cos(), y * tilt.sin());
        [x * node.cos() - y * node.sin(), x * node.sin() + y * node.cos(), z]
    });
    (turned[0], turned[1])
}

fn state(gm: &[f64], bodies: &[([f64; 3], [f64; 3])]) -> State {
    let total = 1.0 + gm.iter().sum::<f64>();
    let star = [0, 1, 2].map(|k| -bodies.iter().zip(gm).map(|(b, m)| m * b.1[k]).sum::<f64>() / total);
    State {
        star_gm: 1.0,
        gm: gm.to_vec(),
        pos: bodies.iter().map(|b| b.0).collect(),
        vel: bodies.iter().map(|b| [0, 1, 2].map(|k| b.1[k] + star[k])).collect(),
    }
}

/// The symplectic engine from a state over a time.
fn symplectic(start: &State, coordinates: Coordinates, time: f64, steps: usize) -> (State, Tangent) {
    let mut block = Block::in_coordinates(coordinates, 1, start.gm.len());
    let tangent = Tangent { pos: start.pos.clone(), vel: start.vel.clone() };
    block.start(0, start, &tangent, time / steps as f64, 1.0);
    advance(Advance { block: &mut block, scheme: Scheme::named("(10,6,4)").unwrap(), steps, tangent: true });
    (block.state(0), block.tangent(0))
}

/// The adaptive engine.
fn adaptive(start: &State, time: f64) -> State {
    let mut engine = Engine::from_state(start, &[], &Forces::newton(), TOLERANCE).unwrap();
    engine.advance(time, &Watch::default(), |_| ControlFlow::Continue(())).unwrap();
    engine.state()
}

fn size(v: &[f64; 3]) -> f64 {
    v.iter().map(|x| x * x).sum::<f64>().sqrt()
}

/// Largest distance of two states' planets, positions and velocities.
fn gap(a: &State, b: &State) -> f64 {
    let all = |s: &State| s.pos.iter().chain(&s.vel).copied().collect::<Vec<_>>();
    all(a).iter().zip(all(b)).map(|(p, q)| size(&[0, 1, 2].map(|k| p[k] - q[k]))).fold(0.0, f64::max)
}

fn finite(state: &State) -> bool {
    state.pos.iter().chain(&state.vel).flatten().all(|x| x.is_finite())
}

/// Relative changes of energy and angular momentum.
fn kept(start: &State, end: &State) -> (f64, f64) {
    let scale: f64 = start.gm.iter().zip(&start.pos).map(|(gm, q)| gm / size(q)).sum();
    let (l0, l1) = (angular_momentum(start), angular_momentum(end));
    let turning: f64 =
        start.gm.iter().zip(start.pos.iter().zip(&start.vel)).map(|(m, (q, v))| m * size(q) * size(v)).sum();
    ((energy(end) - energy(start)).abs() / scale, size(&[0, 1, 2].map(|k| l1[k] - l0[k])) / turning)
}

/// Any plane, with the exactly coplanar, polar and retrograde ones as often as all others.
fn tilt() -> impl Strategy<Value = f64> {
    prop_oneof![Just(0.0), Just(0.5 * PI), Just(PI), 0.0..PI]
}

/// Shapes: exact circles, ellipses, both sides of the parabola, the parabola, hyperbolas.
fn shape() -> impl Strategy<Value = f64> {
    let near = (-14.0f64..-3.0, any::<bool>())
        .prop_map(|(log, above)| 1.0 + if above { 1.0 } else { -1.0 } * 10f64.powf(log));
    prop_oneof![Just(0.0), 0.0..0.9, near, Just(1.0), 1.1..5.0]
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(96))]

    /// A star and one planet of any mass: the relative motion is a Kepler orbit about the sum of the masses. From −θ to the
    /// mirror point +θ through the pericentre in a time that the other engine agrees on; r(t) is even about the pericentre.
    #[test]
    fn a_passage_is_a_mirror_image(
        e in shape(), tilt in tilt(), node in 0.0..TAU, pericentre in 0.3..2.0f64, log_mass in -12.0..0.0f64,
    ) {
        let gm = 10f64.powf(log_mass);
        let start = state(&[gm], &[orbit(1.0 + gm, pericentre, e, -1.5, tilt, node)]);
        let mirror = state(&[gm], &[orbit(1.0 + gm, pericentre, e, 1.5, tilt, node)]);
        let time = time_between(1.0 + gm, pericentre, e, 1.5);
        // Jacobi coordinates hold two bodies exactly, at any mass ratio and in any number of steps.
        for steps in [1, 7] {
            let (end, tangent) = symplectic(&start, Coordinates::Jacobi, time, steps);
            prop_assert!(finite(&end) && tangent.pos.iter().chain(&tangent.vel).flatten().all(|x| x.is_finite()));
            prop_assert!(gap(&end, &mirror) < 1e-11 * (1.0 + pericentre), "{} steps, Jacobi: {:e}", steps, gap(&end, &mirror));
        }
        let end = adaptive(&start, time);
        prop_assert!(finite(&end));
        prop_assert!(gap(&end, &mirror) < 1e-11 * (1.0 + pericentre), "adaptive: {:e}", gap(&end, &mirror));
        // Far too light to move the star: heliocentric coordinates hold the orbit too, but for the mass ratio.
        if gm < 1e-8 {
            let (end, _) = symplectic(&start, Coordinates::Heliocentric, time, 16);
            prop_assert!(gap(&end, &mirror) < (30.0 * gm + 1e-11) * (1.0 + pericentre), "{:e}", gap(&end, &mirror));
        }
    }

    /// Two planets in any planes, from massless to as heavy as the star: nothing becomes NaN, energy and angular momentum stay,
    /// both engines and both coordinate sets end in the same place.
    #[test]
    fn two_planets_in_any_planes(
        tilts in [tilt(), tilt()], nodes in [0.0..TAU, 0.0..TAU], anomalies in [0.0..TAU, 0.0..TAU],
        shapes in [prop_oneof![Just(0.0), 0.0..0.3], prop_oneof![Just(0.0), 0.0..0.3]],
        logs in [-12.0..-3.0f64, -12.0..0.0f64],
    ) {
        let gm = logs.map(|log| 10f64.powf(log));
        let inner = orbit(1.0 + gm[0], 1.0, shapes[0], anomalies[0], tilts[0], nodes[0]);
        // The outer one about the barycentre of star and inner one (Jacobi), put back to the star.
        let about = orbit(1.0 + gm[0] + gm[1], 5.0, shapes[1], anomalies[1], tilts[1], nodes[1]);
        let share = gm[0] / (1.0 + gm[0]);
        let outer = (
            [0, 1, 2].map(|k| about.0[k] + share * inner.0[k]),
            [0, 1, 2].map(|k| about.1[k] + share * inner.1[k]),
        );
        let start = state(&gm, &[inner, outer]);
        let time = 10.0 * TAU;
        let truth = adaptive(&start, time);
        let (energy_kept, momentum_kept) = kept(&start, &truth);
        prop_assert!(finite(&truth) && energy_kept < 1e-13 && momentum_kept < 1e-13, "{energy_kept:e} {momentum_kept:e}");
        let (end, tangent) = symplectic(&start, Coordinates::Jacobi, time, 600);
        prop_assert!(finite(&end) && tangent.pos.iter().chain(&tangent.vel).flatten().all(|x| x.is_finite()));
        let (energy_kept, momentum_kept) = kept(&start, &end);
        prop_assert!(energy_kept < 1e-9 && momentum_kept < 1e-12, "{energy_kept:e} {momentum_kept:e}");
        prop_assert!(gap(&end, &truth) < 1e-7, "Jacobi {:e}", gap(&end, &truth));
        let (end, tangent) = symplectic(&start, Coordinates::Heliocentric, time, 600);
        prop_assert!(finite(&end) && tangent.pos.iter().chain(&tangent.vel).flatten().all(|x| x.is_finite()));
        if gm[1] < 1e-3 {
            prop_assert!(gap(&end, &truth) < 1e-7, "heliocentric {:e}", gap(&end, &truth));
        }
    }

    /// An exactly coplanar system stays exactly in its plane, forwards or backwards going round.
    #[test]
    fn a_flat_system_stays_flat(
        retrograde in [any::<bool>(), any::<bool>()], anomalies in [0.0..TAU, 0.0..TAU], e in 0.0..0.3f64, log in -12.0..-3.0f64,
    ) {
        let gm = [10f64.powf(log), 1e-4];
        let bodies = [0, 1].map(|k| {
            let (pos, vel) = orbit(1.0, [1.0, 2.5][k], e, anomalies[k], 0.0, 0.3);
            if retrograde[k] { (pos, vel.map(|x| -x)) } else { (pos, vel) }
        });
        let start = state(&gm, &bodies);
        for end in [
            symplectic(&start, Coordinates::Heliocentric, 60.0, 300).0,
            symplectic(&start, Coordinates::Jacobi, 60.0, 300).0,
            adaptive(&start, 60.0),
        ] {
            prop_assert!(finite(&end));
            prop_assert!(end.pos.iter().chain(&end.vel).all(|v| v[2] == 0.0), "{end:?}");
            for k in 0..2 {
                let turning = end.pos[k][0] * end.vel[k][1] - end.pos[k][1] * end.vel[k][0];
                prop_assert_eq!(turning < 0.0, retrograde[k]);
            }
        }
    }

    /// A massless planet on an exact circle keeps e = 0 to rounding however it is stepped, and its phase is n t.
    #[test]
    fn a_circle_stays_a_circle(axis in 0.1..10.0f64, tilt in tilt(), node in 0.0..TAU, phase in 0.0..TAU) {
        let start = state(&[0.0], &[orbit(1.0, axis, 0.0, phase, tilt, node)]);
        let rate = axis.powf(-1.5);
        let time = 20.3 * TAU / rate;
        let (place, _) = orbit(1.0, axis, 0.0, phase + rate * time, tilt, node);
        for (end, steps) in [
            (symplectic(&start, Coordinates::Heliocentric, time, 400).0, 400.0),
            (symplectic(&start, Coordinates::Jacobi, time, 3).0, 3.0),
            // 18 steps per turn, see the measure of the adaptive engine.
            (adaptive(&start, time), 20.3 * 18.0),
        ] {
            let found = Elements::from_state(1.0, end.pos[0], end.vel[0]);
            prop_assert!(found.eccentricity < 1e-13, "{found:?}");
            let off = size(&[0, 1, 2].map(|k| end.pos[0][k] - place[k]));
            // One unit in the last place of the energy per step, all of one sign, shifts the phase by 3/4 of it per step
            // and radian; a step over many radians halves its argument up to three times and doubles back, some ten units.
            // On top, in units per radian: the start's six numbers (6); 1/r and v², of which β = 2/r − v² keeps half, in
            // the power 3/2 of the period (12); the period's root, division and product and what is left of the time
            // (4); rate, time and the place it is compared with (6): 28.
            let per_step = if steps < 10.0 { 10.0 } else { 1.0 };
            let limit = axis * rate * time * f64::EPSILON * (0.75 * per_step * steps + 28.0);
            prop_assert!(off < limit, "{off:e} in {steps} steps, limit {limit:e}");
        }
    }
}

/// Time from −θ to +θ: 2 ∫₀^θ r²/L dθ′, by Gauss–Legendre of 5 points on 400 pieces: no Kepler equation, so it serves every shape.
fn time_between(gm: f64, pericentre: f64, e: f64, angle: f64) -> f64 {
    let p = pericentre * (1.0 + e);
    let rate = |theta: f64| (p / (1.0 + e * theta.cos())).powi(2) / (gm * p).sqrt();
    let nodes = [
        (0.0, 128.0 / 225.0),
        (0.538_469_310_105_683_1, 0.478_628_670_499_366_47),
        (0.906_179_845_938_664, 0.236_926_885_056_189_08),
    ];
    let (pieces, mut sum) = (400, 0.0);
    let half = angle / f64::from(2 * pieces);
    for piece in 0..pieces {
        let middle = half * f64::from(2 * piece + 1);
        for (at, weight) in nodes {
            let both =
                if at == 0.0 { rate(middle) } else { rate(middle - half * at) + rate(middle + half * at) };
            sum += weight * half * both;
        }
    }
    2.0 * sum
}
