//! The relativistic advance of Mercury's pericentre, by differencing runs with and without relativity.

use abide::integrate::radau::{Engine, TOLERANCE};
use abide::integrate::{Advance, Block, Scheme, State, Tangent, advance};

use super::long_runs::light_terms;
use super::radau_support::planets::{advance_per_century, model};
use super::radau_support::{SUN_GM, number, only, run, solar_system, table};
use super::report::{Report, met};
use super::truth_support::line::slope;

const WORDS: &str = "
Sources: 42.98 arcsec per century (Einstein 1915, modern constants: 6πGM/(c²a(1−e²)) per orbit; `formula` from tests/truth/precession-check.csv), start: JPL DE406 at J2000. Limit: 0.1 %
of 42.98. `alone`: a massless Mercury about the Sun, 400 orbits, between closest approaches (adaptive) or the slope of the direction of the eccentricity vector at 1200 moments ((10,6,4));
the same measurement without relativity is taken off. `among the planets`: Sun and nine bodies from 300 years before to 300 years after J2000, the angle between Mercury's eccentricity vectors
with and without relativity every 50 days; the slope of a straight line through it, the span symmetric so that what the planets make of the difference (which grows as its
square) drops out. (10,6,4): steps of 2 days, relativity as the potential −3(GM)²/(c²r²).
";

const LIMIT: f64 = 1e-3 * 42.98;

pub fn write() {
    let formula = number(&table("precession-check.csv")[0], "formula_arcsec_per_century");
    let mut rows = Vec::new();
    let mut add = |what: &str, engine: &str, law: &str, without: String, found: f64| {
        let mut row = vec![what.to_string(), engine.to_string(), law.to_string(), without];
        row.extend([format!("{found:.5}"), format!("{:.6}", formula), "42.98".to_string()]);
        row.extend([format!("{:.4}", found - 42.98), format!("{LIMIT:.4}"), met(found - 42.98, LIMIT)]);
        rows.push(row);
    };
    let newton = advance_per_century(0, &model("newton"), 400);
    for name in ["newton+1pn", "newton+potential"] {
        let found = advance_per_century(0, &model(name), 400) - newton;
        add("alone", "adaptive", name, format!("{newton:.1e}"), found);
    }
    let (found, without) = alone();
    add("alone", "(10,6,4)", "newton+potential", format!("{without:.1e}"), found);
    let (_, planets) = solar_system("DE406");
    let plain = adaptive("newton", &planets);
    for name in ["newton+1pn", "newton+potential"] {
        let found = rate(&adaptive(name, &planets), &plain, SPACING_DAY);
        add("among the planets", "adaptive", name, "differenced".to_string(), found);
    }
    let [with, without] = [true, false].map(|relativity| symplectic(&planets, relativity));
    let found = rate(&with, &without, SPACING_DAY);
    add("among the planets", "(10,6,4)", "newton+potential", "differenced".to_string(), found);
    let report = Report {
        name: "mercury",
        title: "Mercury's relativistic advance, arcsec per Julian century",
        words: WORDS.to_string(),
        columns: vec![
            "what",
            "engine",
            "law",
            "without",
            "found",
            "formula",
            "published",
            "difference",
            "limit",
            "met",
        ],
        rows,
    };
    report.write();
}

const SPACING_DAY: f64 = 50.0;
const SAMPLES: usize = 2191;

/// Eccentricity vector and normal of Mercury's osculating orbit.
#[derive(Clone, Copy)]
struct Orbit {
    towards: [f64; 3],
    normal: [f64; 3],
}

fn orbit(state: &State) -> Orbit {
    let sun = [0, 1, 2]
        .map(|k| -state.gm.iter().zip(&state.vel).map(|(m, v)| m * v[k]).sum::<f64>() / state.star_gm);
    let (r, v) = (state.pos[0], [0, 1, 2].map(|k| state.vel[0][k] - sun[k]));
    let normal = cross(&r, &v);
    let mu = SUN_GM + state.gm[0];
    let turned = cross(&v, &normal);
    let distance = dot(&r, &r).sqrt();
    Orbit { towards: [0, 1, 2].map(|k| turned[k] / mu - r[k] / distance), normal }
}

fn cross(a: &[f64; 3], b: &[f64; 3]) -> [f64; 3] {
    [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]
}

fn dot(a: &[f64; 3], b: &[f64; 3]) -> f64 {
    (0..3).map(|k| a[k] * b[k]).sum()
}

/// Angle from `b`'s eccentricity vector to `a`'s about the normal of `b`, rad.
fn angle(a: &Orbit, b: &Orbit) -> f64 {
    let area = dot(&cross(&b.towards, &a.towards), &b.normal) / dot(&b.normal, &b.normal).sqrt();
    area.atan2(dot(&a.towards, &b.towards))
}

/// Arcsec per century of the angle between two series.
fn rate(with: &[Orbit], without: &[Orbit], spacing_day: f64) -> f64 {
    assert_eq!(with.len(), without.len());
    let angles: Vec<f64> = with.iter().zip(without).map(|(a, b)| angle(a, b)).collect();
    slope(&angles, spacing_day / 36_525.0).0.to_degrees() * 3600.0
}

/// Orbits from the past to the future, J2000 in the middle.
fn both_ways(mut at: impl FnMut(f64) -> Vec<Orbit>) -> Vec<Orbit> {
    let mut past = at(-1.0);
    past.reverse();
    past.extend(at(1.0).into_iter().skip(1));
    past
}

fn adaptive(name: &str, start: &State) -> Vec<Orbit> {
    both_ways(|way| {
        let mut engine = Engine::from_state(start, &[], &model(name), TOLERANCE).unwrap();
        let each = (0..=SAMPLES).map(|k| {
            run(&mut engine, way * SPACING_DAY * k as f64);
            orbit(&engine.state())
        });
        each.collect()
    })
}

fn symplectic(start: &State, relativity: bool) -> Vec<Orbit> {
    both_ways(|way| series(start, relativity, way * 2.0, 25, SAMPLES))
}

/// The orbit at the start and after every `every` steps.
fn series(start: &State, relativity: bool, step: f64, every: usize, samples: usize) -> Vec<Orbit> {
    let tangent = Tangent { pos: start.pos.clone(), vel: start.vel.clone() };
    let scheme = Scheme::named("(10,6,4)").unwrap();
    let mut block = Block::with_massless(
        abide::integrate::Coordinates::Heliocentric,
        1,
        start.gm.len(),
        start.gm.iter().filter(|gm| **gm == 0.0).count(),
    );
    block.start(0, start, &tangent, step, 1.0);
    block.set_star_terms(0, &light_terms(relativity, false));
    let mut orbits = vec![orbit(&block.state(0))];
    for _ in 0..samples {
        advance(Advance { block: &mut block, scheme, steps: every, tangent: false });
        orbits.push(orbit(&block.state(0)));
    }
    orbits
}

/// A massless Mercury alone over 400 orbits: with relativity minus without, and without.
fn alone() -> (f64, f64) {
    let (_, all) = solar_system("DE406");
    let one = only(&all, &[0]);
    let helio = one.vel[0].map(|v| v * (1.0 + one.gm[0] / one.star_gm));
    let start = State { gm: vec![0.0], vel: vec![helio], ..one };
    let spacing = 400.0 * 87.969 / 1200.0;
    let turned = |relativity| {
        let orbits = series(&start, relativity, spacing / 15.0, 15, 1200);
        rate(&orbits, &vec![orbits[0]; orbits.len()], spacing)
    };
    let without = turned(false);
    (turned(true) - without, without)
}
