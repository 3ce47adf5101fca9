//! Eight planets against the JPL ephemeris, beside an independent integration of the same models.

use std::collections::{BTreeMap, BTreeSet};
use std::f64::consts::{PI, TAU};

use abide::integrate::radau::{Bodies, Engine, TOLERANCE, advance};
use abide::integrate::{Scheme, State};
use rayon::prelude::*;

use super::long_runs::{Lane, Symplectic, light_terms};
use super::radau_support::planets::{EARTH, model};
use super::radau_support::{Row, number, run, solar_system, table, triple};
use super::report::{Report, met};

const WORDS: &str = "
Sources: JPL DE406 (Standish 1998) at every century (tests/truth/de406-positions.csv, its positions good to 25 m), and an independent integration of the same models from the
same start (tests/truth/model-vs-de406.csv and model-vs-de406-max.csv: Gauss-Legendre of order 16, 80 bits, double precision for `mean-emb-start` without potential). Heliocentric longitude
and latitude, model minus ephemeris, arcsec; `stated` is that integration's departure, `found` ours. A row is met when both agree within 10 %, or within that reference's own error:
1e-4 arcsec (print, digits of its start factor), and for its runs in double precision 6e-7 arcsec per year for Mercury, as its authors measured, less for slower planets by the cube of a.
Spans give the largest departure at any century in them. Start: the ephemeris's node JD 2451536.5, found from the `DE406-NODE-MEANEMB` rows by going back 8.5 days with
the model that had carried them; `mean-emb-start` has the velocity of the Earth-Moon barycentre times 1 + 1.76252e-9, fitted to DE406, since one body for Earth and Moon lacks their monthly
wobble: the Earth rows of these models are no independent prediction within 1000 years. `rate-matched-start`: velocities for the potential, the `…-RATEPOT` rows.
(10,6,4): steps of 4 days with compensated sums, J2000 reached by the adaptive integrator. What rounding does is measured without a look at the
ephemeris: eight runs of the model `newton+potential+quad|mean-emb-start|rate-matched-start` whose start velocities differ by some 1e-15 are compared with the adaptive integrator, which has
the same model and start. The standard deviation is the rounding of one run that goes either way; the mean is the error of the step (Mercury, 6 and 8 days) and rounding that goes one way.
";

/// Steps that are weighed, day.
const STEP_DAY: f64 = 4.0;
const STEPS_DAY: [f64; 4] = [3.0, 4.0, 6.0, 8.0];
/// Years at which they are.
const WEIGHED_AT: [i32; 3] = [-3000, -1000, 1000];
const NODE_DAY: f64 = -8.5;
const MEAN_EMB: f64 = 1.762_52e-9;
pub const BEST: &str = "newton+1pn+quad|mean-emb-start";
pub const MATCHED: &str = "newton+potential+quad|mean-emb-start|rate-matched-start";
const MODELS: [&str; 8] = [
    "newton",
    "newton+quad",
    "newton+1pn",
    "newton+1pn+quad",
    BEST,
    "newton+potential",
    "newton+potential+quad",
    MATCHED,
];
const POTENTIALS: [&str; 4] = ["newton", "newton+potential", "newton+potential+quad", MATCHED];
/// Semi-major axes, au.
const AXES_AU: [f64; 8] = [0.387, 0.723, 1.0, 1.524, 5.203, 9.58, 19.2, 30.1];

/// Longitude and latitude of every planet minus the ephemeris, arcsec, by years.
pub type Departures = BTreeMap<i32, Vec<[f64; 2]>>;

pub fn write() {
    let ephemeris = ephemeris();
    let adaptive: Vec<Departures> = MODELS.par_iter().map(|name| adaptive(name, &ephemeris)).collect();
    let rounding = rounding_in_words(&ephemeris, &adaptive[7]);
    let symplectic = symplectic(&ephemeris);
    let mut rows = Vec::new();
    for (name, found) in MODELS.iter().zip(&adaptive) {
        rows.extend(compare(name, "adaptive", found));
    }
    for (name, found) in POTENTIALS.iter().zip(&symplectic) {
        rows.extend(compare(name, "(10,6,4)", found));
    }
    let best = [(BEST, "adaptive", &adaptive[4]), (MATCHED, "(10,6,4)", &symplectic[3])];
    let words: Vec<String> = best.iter().map(|(name, engine, found)| in_words(name, engine, found)).collect();
    let report = Report {
        name: "de406",
        title: "Eight planets against JPL DE406 over 1000 and 3000 years",
        words: format!("{}\n\n{}\n{rounding}", WORDS.trim(), words.join("\n")),
        columns: vec![
            "model",
            "engine",
            "body",
            "years",
            "found_lon",
            "stated_lon",
            "limit_lon",
            "found_lat",
            "stated_lat",
            "limit_lat",
            "met",
        ],
        rows,
    };
    report.write();
}

/// Longitude and latitude of a place, rad.
fn direction(at: &[f64; 3]) -> [f64; 2] {
    [at[1].atan2(at[0]), at[2].atan2(at[0].hypot(at[1]))]
}

/// Directions of the eight planets by years.
pub fn ephemeris() -> BTreeMap<i32, Vec<[f64; 2]>> {
    let mut all: BTreeMap<i32, Vec<[f64; 2]>> = BTreeMap::new();
    for row in table("de406-positions.csv").iter().filter(|r| r["body"] != "pluto") {
        let year = 100 * row["century"].parse::<i32>().unwrap();
        all.entry(year).or_default().push(direction(&triple(row, ["x_au", "y_au", "z_au"])));
    }
    assert!(all.values().all(|planets| planets.len() == 8));
    all
}

fn departures(at: &[[f64; 3]], ephemeris: &[[f64; 2]]) -> Vec<[f64; 2]> {
    let arcsec = |angle: f64| ((angle + PI).rem_euclid(TAU) - PI).to_degrees() * 3600.0;
    let one = |(at, stated): (&[f64; 3], &[f64; 2])| {
        let found = direction(at);
        [arcsec(found[0] - stated[0]), arcsec(found[1] - stated[1])]
    };
    at.iter().zip(ephemeris).map(one).collect()
}

/// Forces of a model, and its start with the day on which it is.
fn start(name: &str) -> (String, State, f64) {
    let parts: Vec<&str> = name.split('|').collect();
    if parts.contains(&"rate-matched-start") {
        return (parts[0].to_string(), solar_system("DE406-NODE-MEANEMB-RATEPOT").1, 0.0);
    }
    let (_, j2000) = solar_system("DE406-NODE-MEANEMB");
    let mut node = advance(&j2000, None, &model("newton+1pn+quad"), NODE_DAY, TOLERANCE).unwrap().state;
    if !parts.contains(&"mean-emb-start") {
        let mut bodies = Bodies::from_state(&node);
        let (sun, earth) = (bodies.vel[0], bodies.vel[EARTH + 1]);
        bodies.vel[EARTH + 1] = [0, 1, 2].map(|k| sun[k] + (earth[k] - sun[k]) / (1.0 + MEAN_EMB));
        node = bodies.to_state();
    }
    (parts[0].to_string(), node, NODE_DAY)
}

/// A model by the adaptive integrator at every year of the ephemeris.
pub fn adaptive(name: &str, ephemeris: &BTreeMap<i32, Vec<[f64; 2]>>) -> Departures {
    let (forces, state, day) = start(name);
    let mut all = Departures::new();
    let past: Vec<i32> = ephemeris.keys().copied().filter(|y| *y <= 0).rev().collect();
    let future: Vec<i32> = ephemeris.keys().copied().filter(|y| *y > 0).collect();
    for years in [past, future] {
        let mut engine = Engine::from_state(&state, &[], &model(&forces), TOLERANCE).unwrap();
        for year in years {
            run(&mut engine, f64::from(year) * 365.25 - day);
            all.insert(year, departures(&engine.state().pos, &ephemeris[&year]));
        }
    }
    all
}

fn symplectic(ephemeris: &BTreeMap<i32, Vec<[f64; 2]>>) -> Vec<Departures> {
    let lanes = POTENTIALS.map(|name| {
        let (forces, state, day) = start(name);
        let state = match day {
            0.0 => state,
            _ => advance(&state, None, &model(&forces), -day, TOLERANCE).unwrap().state,
        };
        Lane { state, terms: light_terms(forces.contains("potential"), forces.contains("quad")) }
    });
    let scheme = Scheme::named("(10,6,4)").unwrap();
    let years: BTreeSet<i32> = ephemeris.keys().copied().collect();
    let places = Symplectic { lanes: lanes.into(), scheme, step_day: STEP_DAY }.places(&years);
    let of = |index: usize| {
        years.iter().map(|year| (*year, departures(&places[&(index, *year)], &ephemeris[year]))).collect()
    };
    (0..POTENTIALS.len()).map(of).collect()
}

/// What step and rounding do to Mercury and the Earth in eight runs, in words.
fn rounding_in_words(ephemeris: &BTreeMap<i32, Vec<[f64; 2]>>, exact: &Departures) -> String {
    let (names, _) = solar_system("DE406");
    let mut words = String::new();
    for step_day in STEPS_DAY {
        let runs: Vec<Departures> =
            [0, 4].into_par_iter().flat_map(|first| neighbours(ephemeris, step_day, first)).collect();
        let mut found = Vec::new();
        for body in [0, EARTH] {
            for year in WEIGHED_AT {
                let off: Vec<f64> =
                    runs.iter().map(|run| run[&year][body][0] - exact[&year][body][0]).collect();
                let mean = off.iter().sum::<f64>() / off.len() as f64;
                let squares = off.iter().map(|x| (x - mean).powi(2)).sum::<f64>();
                let deviation = (squares / (off.len() - 1) as f64).sqrt();
                found.push(format!("{} {year}: {mean:.5} ± {deviation:.5}", names[body]));
            }
        }
        words += &format!(
            "* steps of {step_day} days, mean ± deviation of eight, arcsec of longitude: {}.\n",
            found.join("; ")
        );
    }
    words
}

/// Four runs of the rate-matched model whose velocities differ in a far digit.
fn neighbours(ephemeris: &BTreeMap<i32, Vec<[f64; 2]>>, step_day: f64, first: i32) -> Vec<Departures> {
    let (_, state, _) = start(MATCHED);
    let lanes = (first..first + 4).map(|k| {
        let mut near = state.clone();
        near.vel.iter_mut().flatten().for_each(|v| *v *= 1.0 + f64::from(k) * f64::EPSILON);
        Lane { state: near, terms: light_terms(true, true) }
    });
    let scheme = Scheme::named("(10,6,4)").unwrap();
    let years = BTreeSet::from(WEIGHED_AT);
    let places = Symplectic { lanes: lanes.collect(), scheme, step_day }.places(&years);
    let of =
        |lane: usize| years.iter().map(|y| (*y, departures(&places[&(lane, *y)], &ephemeris[y]))).collect();
    (0..4).map(of).collect()
}

/// What is to be compared: a name for it, and the years of which the largest departure counts.
fn spans(found: &Departures) -> Vec<(String, Vec<i32>)> {
    let within = |from: i32| found.keys().copied().filter(|y| *y >= from && *y <= 1000).collect::<Vec<_>>();
    let there = |y: &i32| found.contains_key(y);
    let epochs = [-1000, -3000, 1000].into_iter().filter(there).map(|y| (y.to_string(), vec![y]));
    let long = [-1000, -3000].into_iter().filter(|from| there(from) && there(&1000));
    epochs.chain(long.map(|from| (format!("{from} … 1000"), within(from)))).collect()
}

/// Stated longitude and latitude of a body in a span or at an epoch.
fn stated(body: &str, name: &str, years: &[i32]) -> [f64; 2] {
    let found = |file: &str, matches: &dyn Fn(&Row) -> bool, columns: [&str; 2]| {
        let rows = table(file);
        let row = rows.iter().find(|r| r["body"] == body && r["model"] == name && matches(r)).unwrap();
        columns.map(|c| number(row, c))
    };
    match years {
        [year] => {
            found("model-vs-de406.csv", &|r| r["years"] == year.to_string(), ["d_lon_arcsec", "d_lat_arcsec"])
        }
        _ => found(
            "model-vs-de406-max.csv",
            &|r| r["from_year"] == years[0].to_string(),
            ["max_abs_d_lon_arcsec", "max_abs_d_lat_arcsec"],
        ),
    }
}

fn largest(found: &Departures, body: usize, years: &[i32]) -> [f64; 2] {
    let each = |axis: usize| years.iter().map(move |y| found[y][body][axis]);
    match years {
        [_] => [0, 1].map(|axis| each(axis).next().unwrap()),
        _ => [0, 1].map(|axis| each(axis).fold(0.0, |most: f64, x| most.max(x.abs()))),
    }
}

/// Ours beside theirs, a row for every planet and every span that was run; the last cell says whether they agree.
pub fn compare(name: &str, engine: &str, found: &Departures) -> Vec<Vec<String>> {
    let (names, _) = solar_system("DE406");
    let mut rows = Vec::new();
    for body in 0..8 {
        for (label, years) in spans(found) {
            let (ours, theirs) = (largest(found, body, &years), stated(&names[body], name, &years));
            let longest = f64::from(years.iter().map(|y| y.abs()).max().unwrap());
            let double =
                if name == BEST { 6e-7 * longest * (AXES_AU[0] / AXES_AU[body]).powi(3) } else { 0.0 };
            let limits = theirs.map(|x| (0.1 * x.abs()).max(1e-4 + double));
            let worst = (0..2).map(|k| (ours[k] - theirs[k]).abs() / limits[k]).fold(0.0, f64::max);
            let mut cells = vec![name.to_string(), engine.to_string(), names[body].clone(), label];
            for axis in 0..2 {
                cells.extend([ours[axis], theirs[axis], limits[axis]].map(|x| format!("{x:.5}")));
            }
            cells.push(met(worst, 1.0));
            rows.push(cells);
        }
    }
    rows
}

/// The departures of a model over the long span, a sentence.
fn in_words(name: &str, engine: &str, found: &Departures) -> String {
    let (names, _) = solar_system("DE406");
    let most = |from: i32| {
        let years: Vec<i32> = found.keys().copied().filter(|y| *y >= from).collect();
        let each = (0..8).map(|body| (names[body].clone(), largest(found, body, &years)[0]));
        each.map(|(body, lon)| format!("{body} {lon:.3}")).collect::<Vec<_>>().join(", ")
    };
    format!(
        "* `{name}`, {engine}: largest departure in longitude from DE406, arcsec, over −1000 … +1000 years: {}; over −3000 … +1000 years: {}.",
        most(-1000),
        most(-3000)
    )
}
