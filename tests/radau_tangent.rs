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
///
/// The table says by how much an 80-bit run differs; a rounding of a double is 2048 times larger. So many `roundings`
/// of that size are allowed: one run is one throw of the dice, and ours takes more steps than the Taylor series.
fn follow(problem: &str, first: usize, to: f64, roundings: f64) {
    let rows = table("variational-reference.csv");
    let bodies = start(&rows, problem);
    let shift = tangent(&rows, problem, &bodies);
    let mut engine =
        Engine::from_bodies(&bodies, std::slice::from_ref(&shift), &Forces::newton(), TOLERANCE).unwrap();
    let mut seen = 0;
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
        let limit = roundings * 2048.0 * extended_difference(&megno["note"]).max(1e-18);
        assert!(error < limit, "{problem} {t}: ln growth off by {error:e}, limit {limit:e}");
        assert!(relative < limit, "{problem} {t}: vector off by {relative:e}, limit {limit:e}");
        seen += 1;
    }
    assert!(seen >= 4, "{problem}");
}

/// From a note such as "128-bit, …; 80-bit run: tangent differs by 1.1e-18 relative, Y by 2.6e-18".
fn extended_difference(note: &str) -> f64 {
    let (_, rest) = note.split_once("tangent differs by ").unwrap_or_else(|| panic!("note {note}"));
    rest.split_once(' ').unwrap().0.parse().unwrap()
}

#[test]
fn regular_motion_to_rounding() {
    follow("kepler-two-body", 0, 1000.0, 16.0);
    follow("cr3bp-regular", 2, 2000.0, 16.0);
}

#[test]
fn chaotic_motion_while_double_precision_can_follow() {
    follow("compact-two-planet-chaotic", 0, 200.0, 64.0);
    follow("cr3bp-chaotic-strong", 2, 1000.0, 64.0);
    follow("cr3bp-chaotic-2to1", 2, 2000.0, 64.0);
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
