//! End states of four force models over four thousand years against independent 80-bit integrations.

use abide::integrate::forces::rate_matched;
use abide::integrate::radau::{Engine, TOLERANCE};
use abide::integrate::{Scheme, State};

use super::long_runs::{AXES_AU, Lane, Places, Symplectic, Truth, light_terms, matched_model, turns};
use super::radau_support::planets::model;
use super::radau_support::{LIGHT, distance, run, solar_system};
use super::report::{Report, met};

const WORDS: &str = "
Source: tests/truth/reference-integrations.csv, independent Gauss-Legendre collocation of order 16 in 80 bits (its own error < 1e-13 au); start: JPL DE406 at J2000,
Sun and nine bodies. Columns named for bodies: distance from the stated place, au. The row's `limit` is that of the body whose error is the
largest part of its limit (`worst`). Adaptive integrator: rounding, 1e-13 au per century and 4e-12 au × (centuries)^1.5, for Mercury twice that. (10,6,4), with compensated sums: rounding as of plain sums, 3 × 2.2e-16 × √substeps × 3π per turn × a, and the scheme's own error: one and a half
times the body's change on halving the step, for the shortest step half its change from the step before (the order is at least 2).
";

const EXACT: &str = "The symplectic scheme has this model exactly.";
const MATCHED: &str = "
The symplectic scheme has the potential −3(GM)²/(c²r²) for relativity and starts from rate-matched velocities (closed form). Its ends are compared twice. Against an
independent integration of just that (`…|rate-matched-start` in tests/truth/rate-matched-integrations.csv, by the same 80-bit program from the same start) the limit is as for a model that it has
exactly. Against the model with relativity in full the limit has on top what the independent integrations of the two models differ by at that year, and a tenth of it: this is what the
potential misses (periodic terms of some GM/c² = 1e-8 au, and what the closed form misses of the mean motion: most for Saturn and Pluto).
";

const MODELS: [(&str, &str, &str); 4] = [
    ("newton", "reference-integrations-newton", EXACT),
    ("newton+potential", "reference-integrations-newton+potential", EXACT),
    ("newton+1pn", "reference-integrations-newton+1pn", MATCHED),
    ("newton+1pn+quad", "reference-integrations-newton+1pn+quad", MATCHED),
];
const STEPS_DAY: [f64; 4] = [8.0, 4.0, 2.0, 1.0];

pub fn write() {
    let (names, start) = solar_system("DE406");
    let truth = Truth::read(&names);
    let symplectic: Vec<_> = STEPS_DAY.iter().map(|step| every_model(&start, &truth, *step)).collect();
    for (index, (name, file, how)) in MODELS.into_iter().enumerate() {
        let mut rows = adaptive(name, &start, &truth);
        let matched = (how == MATCHED).then(|| matched_model(name));
        for (k, step) in STEPS_DAY.iter().enumerate() {
            for year in &truth.years {
                let at = |k: usize| &symplectic[k][&(index, *year)];
                // From halving the step, or for the shortest from the step before.
                let (other, share) = if k + 1 < STEPS_DAY.len() { (k + 1, 1.5) } else { (k - 1, 0.5) };
                let change = at(k).iter().zip(at(other)).map(|(a, b)| share * distance(a, b));
                let own: Vec<f64> = change.zip(rounding_au(*year, *step)).map(|(a, b)| a + b).collect();
                let mut limits = own.clone();
                if let Some(matched) = &matched {
                    let off = truth.off(matched, *year, at(k));
                    rows.push(row(["(10,6,4)", matched], *step, *year, &off, &own, &names));
                    limits
                        .iter_mut()
                        .zip(truth.unmatched_au(name, *year))
                        .for_each(|(limit, au)| *limit += au);
                }
                let off = truth.off(name, *year, at(k));
                rows.push(row(["(10,6,4)", name], *step, *year, &off, &limits, &names));
            }
        }
        let mut columns = vec!["engine", "against", "step_day", "years"];
        columns.extend(names.iter().map(|n| -> &'static str { n.clone().leak() }));
        columns.extend(["worst", "limit", "met"]);
        let title = format!("End states of {name} over −3000 … +1000 years").leak();
        let met = rows.iter().filter(|row| row.last().unwrap() == "yes").count();
        let words = format!("{}\n\n{}\n\nMet: {met} of {} rows.", WORDS.trim(), how.trim(), rows.len());
        Report { name: file, title, words, columns, rows }.write_by("reference-integrations");
    }
}

/// The four models both ways are the eight lanes of one block.
fn every_model(start: &State, truth: &Truth, step: f64) -> Places {
    let matched = rate_matched(start, LIGHT);
    let lane = |state: &State, relativity, satellite| Lane {
        state: state.clone(),
        terms: light_terms(relativity, satellite),
    };
    let lanes = vec![
        lane(start, false, false),
        lane(start, true, false),
        lane(&matched, true, false),
        lane(&matched, true, true),
    ];
    Symplectic { lanes, scheme: Scheme::named("(10,6,4)").unwrap(), step_day: step }.places(&truth.years)
}

fn adaptive(name: &str, start: &State, truth: &Truth) -> Vec<Vec<String>> {
    let mut rows = Vec::new();
    let (names, _) = solar_system("DE406");
    for way in [-1, 1] {
        let mut engine = Engine::from_state(start, &[], &model(name), TOLERANCE).unwrap();
        for year in truth.outwards(way) {
            run(&mut engine, f64::from(year) * 365.25);
            let off = truth.off(name, year, &engine.state().pos);
            rows.push(row(["adaptive", name], 0.0, year, &off, &adaptive_limits(year), &names));
        }
    }
    rows
}

/// The limits that tests/radau_planets.rs holds.
fn adaptive_limits(year: i32) -> Vec<f64> {
    let span = f64::from(year.abs());
    let walk = 1e-13 * (span / 100.0) + 4e-12 * (span / 100.0).powf(1.5);
    (0..9).map(|body| if body == 0 { 2.0 * walk } else { walk }).collect()
}

fn rounding_au(year: i32, step: f64) -> Vec<f64> {
    let substeps = 9.0 * f64::from(year.abs()) * 365.25 / step;
    let one = |body| 3.0 * std::f64::consts::PI * turns(body, year).max(1.0) * AXES_AU[body];
    (0..9).map(|body| 3.0 * f64::EPSILON * substeps.sqrt() * one(body)).collect()
}

/// `who` is the engine and the model against which it is held.
fn row(who: [&str; 2], step: f64, year: i32, off: &[f64], limits: &[f64], names: &[String]) -> Vec<String> {
    let part = |body: usize| off[body] / limits[body];
    let worst = (0..9).max_by(|a, b| part(*a).total_cmp(&part(*b))).unwrap();
    let step = if step == 0.0 { "own".to_string() } else { step.to_string() };
    // A stroke would end the cell of a Markdown table.
    let mut cells = vec![who[0].to_string(), who[1].replace('|', ", "), step, year.to_string()];
    cells.extend(off.iter().map(|x| format!("{x:.1e}")));
    cells.extend([names[worst].clone(), format!("{:.1e}", limits[worst]), met(off[worst], limits[worst])]);
    cells
}
