//! Tangent vectors against 128-bit integrations (tests/truth/variational-reference.csv), lengths au, times years.

mod radau_support;

use abide::integrate::forces::Forces;
use abide::integrate::radau::{Bodies, Engine, TOLERANCE};
use radau_support::*;

const D_AT: [&str; 3] = ["dx", "dy", "dz"];
const D_VEL: [&str; 3] = ["dvx", "dvy", "dvz"];

fn tangent(rows: &[Row], problem: &str, bodies: &Bodies) -> Bodies {
    let init: Vec<&Row> = rows.iter().filter(|r| r["problem"] == problem && r["part"] == "init").collect();
    Bodies {
        gm: bodies.gm.clone(),
        pos: init.iter().map(|r| triple(r, D_AT)).collect(),
        vel: init.iter().map(|r| triple(r, D_VEL)).collect(),
    }
}

/// |δ|² over the bodies from `first` on.
fn square(d: &Bodies, first: usize) -> f64 {
    d.pos[first..].iter().chain(&d.vel[first..]).flatten().map(|x| x * x).sum()
}

/// Runs a problem to its tabulated times up to `to` years; `first`: the first body whose displacement counts.
/// Returns for each time: ln growth and its error, and the relative error of the tangent vector.
fn follow(problem: &str, first: usize, to: f64) -> Vec<(f64, f64, f64, f64)> {
    let rows = table("variational-reference.csv");
    let bodies = start(&rows, problem);
    let shift = tangent(&rows, problem, &bodies);
    let mut engine = Engine::from_bodies(&bodies, &[shift.clone()], &Forces::newton(), TOLERANCE).unwrap();
    let mut seen = Vec::new();
    for megno in rows.iter().filter(|r| r["problem"] == problem && r["part"] == "megno") {
        let t = number(megno, "t_yr");
        if t > to {
            break;
        }
        run(&mut engine, t);
        let found = engine.displacement(0).unwrap();
        let state: Vec<&Row> = rows
            .iter()
            .filter(|r| r["problem"] == problem && r["part"] == "state" && r["t_yr"] == megno["t_yr"])
            .collect();
        assert_eq!(state.len(), bodies.gm.len());
        let mut off: f64 = 0.0;
        for (body, row) in state.iter().enumerate().skip(first) {
            off += distance(&found.pos[body], &triple(row, D_AT)).powi(2)
                + distance(&found.vel[body], &triple(row, D_VEL)).powi(2);
        }
        let growth = 0.5 * (square(&found, first) / square(&shift, first)).ln();
        let error = (growth - number(megno, "ln_growth")).abs();
        let relative = (off / square(&found, first)).sqrt();
        println!("{problem} {t} yr: ln growth {growth}, off by {error:.1e}; vector off by {relative:.1e}");
        seen.push((t, growth, error, relative));
    }
    assert!(seen.len() >= 4, "{problem}");
    seen
}

#[test]
fn regular_motion_to_rounding() {
    for (problem, first) in [("kepler-two-body", 0), ("cr3bp-regular", 2)] {
        for (t, _, error, relative) in follow(problem, first, 1000.0) {
            // Rounding shifts the phase like t^1.5 at worst and so turns the vector.
            let limit = 1e-14 * (1.0 + t + 0.1 * t.powf(1.5));
            assert!(error < limit && relative < 10.0 * limit, "{problem} {t}: {error:e} {relative:e}");
        }
    }
}

#[test]
fn chaotic_motion_while_double_precision_can_follow() {
    for (problem, first, to) in [
        ("compact-two-planet-chaotic", 0, 200.0),
        ("cr3bp-chaotic-strong", 2, 1000.0),
        ("cr3bp-chaotic-2to1", 2, 2000.0),
    ] {
        for (t, growth, error, relative) in follow(problem, first, to) {
            // A rounding grows as the tangent vector does and bends it in turn.
            let limit = 2e-15 * (10.0 + t) * growth.exp();
            assert!(error < limit.max(1e-13), "{problem} {t}: ln growth off by {error:e}, limit {limit:e}");
            assert!(relative < 3.0 * limit.max(1e-13), "{problem} {t}: {relative:e}, limit {limit:e}");
        }
    }
}

#[test]
fn several_tangent_vectors_are_carried_as_each_would_be_alone() {
    let rows = table("variational-reference.csv");
    let problem = "compact-two-planet-chaotic";
    let bodies = start(&rows, problem);
    let one = tangent(&rows, problem, &bodies);
    let mut other = one.clone();
    other.pos[1] = [0.0, 0.0, 1.0];
    let mut both = one.clone();
    for body in 0..3 {
        for k in 0..3 {
            both.pos[body][k] = 2.0 * one.pos[body][k] - 3.0 * other.pos[body][k];
            both.vel[body][k] = 2.0 * one.vel[body][k] - 3.0 * other.vel[body][k];
        }
    }
    let set = [one, other, both];
    let mut engine = Engine::from_bodies(&bodies, &set, &Forces::newton(), TOLERANCE).unwrap();
    run(&mut engine, 20.0);
    let found: Vec<Bodies> = (0..3).map(|k| engine.displacement(k).unwrap()).collect();
    assert!(engine.displacement(3).is_none());
    let size = square(&found[2], 0).sqrt();
    for body in 0..3 {
        for k in 0..3 {
            let sum = 2.0 * found[0].pos[body][k] - 3.0 * found[1].pos[body][k];
            assert!((sum - found[2].pos[body][k]).abs() < 1e-12 * size);
        }
    }
    for (index, shift) in set.iter().enumerate() {
        let mut alone =
            Engine::from_bodies(&bodies, std::slice::from_ref(shift), &Forces::newton(), TOLERANCE).unwrap();
        run(&mut alone, 20.0);
        let alone = alone.displacement(0).unwrap();
        assert!(distance(&alone.pos[1], &found[index].pos[1]) < 1e-11 * square(&alone, 0).sqrt());
    }
}
