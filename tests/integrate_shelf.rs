//! Problems with known ends: every scheme runs every problem.

mod shelf;
mod truth_support;

use abide::integrate::{Scheme, State};
use shelf::{RESONANT_PAIR, all, gap, run};
use truth_support::{Entry, state, sun_jupiter_saturn, table};

/// How much rounding may do after so many substeps: each rounds by about a unit, at random (Brouwer 1937), and three
/// times the standard deviation is allowed; a relative change of the start grows by the conditioning.
fn rounding(scheme: &Scheme, steps: usize, conditioning: f64) -> f64 {
    3.0 * f64::EPSILON * (((scheme.stages() + 1) * steps) as f64).sqrt() * conditioning
}

/// Pure Kepler problems end where they must to rounding. Where planets pull on each other a scheme's own error comes on
/// top: the change on halving the step bounds it (an error of second order would be 4/3 of the change).
#[test]
fn every_scheme_ends_where_it_must() {
    let mut runs = 0;
    for problem in all().iter().filter(|p| p.name != RESONANT_PAIR) {
        for scheme in Scheme::all() {
            let end = run(&problem.start, scheme, problem.step, problem.steps);
            let halved = run(&problem.start, scheme, 0.5 * problem.step, 2 * problem.steps);
            let own = if problem.kepler { 0.0 } else { 1.5 * gap(&end, &halved) };
            let limit = own + rounding(scheme, 2 * problem.steps, problem.conditioning);
            let found = gap(&end, &problem.end);
            assert!(found <= limit, "{} with {}: {found:e}, limit {limit:e}", problem.name, scheme.name);
            assert!(gap(&halved, &problem.end) <= limit, "{} with {}, halved", problem.name, scheme.name);
            assert!(limit < 1e-3, "{} with {}: the limit says nothing: {limit:e}", problem.name, scheme.name);
            runs += 1;
        }
    }
    assert_eq!(runs, 3 * Scheme::all().len());
}

/// Every scheme is symmetric: the same steps backwards undo what was done. This is so for the map itself; the corrector
/// of leapfrog is left out, as its kicks come in the other order when the step is negative, which differs by ε².
#[test]
fn what_was_done_is_undone_backwards() {
    let problem = all().into_iter().find(|p| p.name == RESONANT_PAIR).unwrap();
    for scheme in Scheme::all() {
        let scheme = &Scheme { corrected: false, ..scheme.clone() };
        let there = run(&problem.start, scheme, problem.step, problem.steps);
        assert!(gap(&there, &problem.start) > 0.1, "it went somewhere");
        let back = run(&there, scheme, -problem.step, problem.steps);
        let limit = rounding(scheme, 2 * problem.steps, problem.conditioning);
        let found = gap(&back, &problem.end);
        assert!(found <= limit, "{}: {found:e}, limit {limit:e}", scheme.name);
    }
}

fn stated(entries: &[Entry], years: f64) -> State {
    let rows: Vec<&Entry> =
        entries.iter().filter(|e| e.text("part") == "trajectory" && e.number("t") == Some(years)).collect();
    assert_eq!(rows.len(), 2);
    State {
        star_gm: 0.0,
        gm: Vec::new(),
        pos: rows.iter().map(|e| e.triple(["x", "y", "z"])).collect(),
        vel: rows.iter().map(|e| e.triple(["vx", "vy", "vz"])).collect(),
    }
}

/// tests/truth/sun-jupiter-saturn.csv, 128-bit, either way in time. The limit is the scheme's own error, bounded by its
/// change on halving the step, and rounding: 3π per revolution of Jupiter.
#[test]
fn sun_jupiter_saturn_as_in_128_bits() {
    let entries = table("sun-jupiter-saturn.csv");
    let start = state(&sun_jupiter_saturn());
    for years in [10.0f64, 100.0, -100.0, 1000.0, -1000.0] {
        let truth = stated(&entries, years);
        let conditioning = 3.0 * std::f64::consts::PI * (years.abs() / 11.86).max(1.0) * 5.2;
        for scheme in Scheme::all() {
            let steps = (years.abs() * 365.25 / 100.0).ceil() as usize;
            let step = years * 365.25 / steps as f64;
            let end = run(&start, scheme, step, steps);
            let halved = run(&start, scheme, 0.5 * step, 2 * steps);
            let limit = 1.5 * gap(&end, &halved) + rounding(scheme, 2 * steps, conditioning);
            let found = gap(&end, &truth);
            assert!(found <= limit, "{} {years}: {found:e}, limit {limit:e}", scheme.name);
            assert!(gap(&halved, &truth) <= limit, "{} {years} halved", scheme.name);
        }
    }
}

/// The best scheme reaches what double precision can hold over ten thousand years.
#[test]
fn the_best_scheme_holds_all_digits_over_10000_years() {
    let entries = table("sun-jupiter-saturn.csv");
    let start = state(&sun_jupiter_saturn());
    let scheme = Scheme::named("(10,6,4)").unwrap();
    for years in [10_000.0f64, -10_000.0] {
        let steps = 73_050;
        let end = run(&start, scheme, years * 365.25 / f64::from(steps), steps as usize);
        let conditioning = 3.0 * std::f64::consts::PI * (10_000.0 / 11.86) * 5.2;
        let (found, limit) =
            (gap(&end, &stated(&entries, years)), rounding(scheme, steps as usize, conditioning));
        assert!(found <= limit, "{years}: {found:e}, limit {limit:e}");
    }
}
