//! Three-body problems with known ends.

use super::radau_support::classics::{
    EXPONENT_FROM, RATIOS, closest_approach, exponent, follow, jupiter_limit_au, sun_jupiter_saturn_off,
    tangent_at_l4,
};
use super::radau_support::{number, table};
use super::report::{Report, met};
use super::schemes::end_error_au;
use abide::integrate::Scheme;

const WORDS: &str = "
Source: tests/truth/three-body-classics.csv, 128-bit Taylor series of order 42 against order 50; only digits on which both agree. Burrau (1913) and Szebehely &
Peters (1967) for the Pythagorean problem, Chenciner & Montgomery (2000) for the figure eight, Routh and Gascheau for the triangle. `conditioning` is what
a unit displacement becomes: all twelve or eighteen unit displacements of the start, and of every moment of a passage within 0.05, are carried along by
the variational equations and the largest is taken, times the size of what is rounded there. No program in double precision can do better than about
2.2e-16 times that; `limit` is 4 (Pythagorean) or 10 of these roundings. Rows whose limit is above 0.1 have no digit left; they are shown and not judged.
`L4` rows: the tangent vector of a light particle at the triangle point just below and above the critical mass ratio 0.0385209, its relative departure; limit
2 roundings × t × (growth + 100). Exponent and frequency at mu = 0.045 against the exact eigenfrequencies, from three values 1.5 apart once the decaying modes have died: 2e-9. Sun, Jupiter and Saturn: rounding walks in energy like √steps and in phase like t^1.5 (Brouwer 1937), 18 steps per
turn; four times that walk for the adaptive integrator; for (10,6,4) in steps of 50 days three times 2.2e-16 × √substeps × 3π per turn of Jupiter × 5.2 au.
";

pub fn write() {
    let mut rows = Vec::new();
    for (problem, roundings) in [
        ("pythagorean", 4.0),
        ("figure-eight-8digits", 10.0),
        ("figure-eight-refined", 10.0),
        ("lagrange-stable", 10.0),
        ("lagrange-unstable", 10.0),
    ] {
        for seen in follow(problem, f64::INFINITY) {
            let limit = roundings * f64::EPSILON * seen.conditioning;
            let mut row = cells(problem, "position", seen.t, seen.error, limit);
            row[4] = format!("{:.1e}", seen.conditioning);
            rows.push(row);
        }
    }
    rows.extend(closest());
    rows.extend(triangle());
    rows.extend(giants());
    let report = Report {
        name: "classics",
        title: "Three-body problems with known ends",
        words: WORDS.to_string(),
        columns: vec!["problem", "what", "engine", "time", "conditioning", "difference", "limit", "met"],
        rows,
    };
    report.write();
}

fn cells(problem: &str, what: &str, t: f64, found: f64, limit: f64) -> Vec<String> {
    let judged = if limit > 0.1 { "not judged".to_string() } else { met(found, limit) };
    let time = format!("{t:.6}").trim_end_matches('0').trim_end_matches('.').to_string();
    let number = |x: f64| format!("{x:.1e}");
    let adaptive = "adaptive".to_string();
    vec![
        problem.to_string(),
        what.to_string(),
        adaptive,
        time,
        String::new(),
        number(found),
        number(limit),
        judged,
    ]
}

/// One rounding is worth about 1e-15 of the time and, of v = 200 at d = 4e-4, 1e-13 of the distance; the start's
/// roundings are 2000 times larger until then.
fn closest() -> [Vec<String>; 2] {
    let rows = table("three-body-classics.csv");
    let truth = rows.iter().find(|r| r["part"] == "closest-approach").unwrap();
    let (closest, _) = closest_approach();
    let time = closest.day - number(truth, "t");
    let relative = closest.distance_au / number(truth, "x") - 1.0;
    let row = |what, off: f64, limit| cells("pythagorean", what, closest.day, off.abs(), limit);
    [row("time of the closest approach", time, 2e-12), row("closest approach, relative", relative, 5e-12)]
}

fn triangle() -> Vec<Vec<String>> {
    let mut rows = Vec::new();
    for ratio in RATIOS {
        for (t, error, limit) in tangent_at_l4(ratio) {
            let problem = format!("L4, mu = {ratio}");
            rows.push(cells(&problem, "tangent vector, relative", t, error, limit));
        }
    }
    let (found, stated) = exponent();
    for (k, what) in ["exponent", "frequency"].iter().enumerate() {
        let off = found[k] - stated[k];
        let what = format!("{what}: {:.9}, stated {:.9}", found[k], stated[k]);
        rows.push(cells("L4, mu = 0.0450", &what, EXPONENT_FROM, off.abs(), 2e-9));
    }
    rows
}

fn giants() -> Vec<Vec<String>> {
    let problem = "Sun, Jupiter, Saturn";
    let mut rows = Vec::new();
    for (years, off) in sun_jupiter_saturn_off() {
        let limit = jupiter_limit_au(years);
        rows.push(cells(problem, "position, au (years)", years, off, limit));
    }
    let scheme = Scheme::named("(10,6,4)").unwrap();
    for years in [100.0, 1000.0, 10_000.0, -100.0, -1000.0, -10_000.0f64] {
        let off = end_error_au(scheme, years);
        let substeps = years.abs() * 365.25 / 50.0 * (scheme.stages() + 1) as f64;
        let turns = (years.abs() / 11.86).max(1.0);
        let limit = 3.0 * f64::EPSILON * substeps.sqrt() * 3.0 * std::f64::consts::PI * turns * 5.2;
        let mut row = cells(problem, "position, au (years)", years, off, limit);
        row[2] = scheme.name.to_string();
        rows.push(row);
    }
    rows
}
