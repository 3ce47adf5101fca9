//! Lyapunov exponents of chaotic orbits against the independently measured ones of the table.

use abide::integrate::{Advance, Block, Scheme, State, advance};
use abide::observe::GrowthRecord;

use super::random::Random;
use super::report::{Report, met, short};
use super::truth_support::table;
use super::truth_support::tangent::Problem;

const WORDS: &str = "
Source: rows `lyapunov` of tests/truth/variational-orbits.csv: mean over eight double-precision runs of an independent program, from starts 1e-9 au apart, first tenth dropped, with the standard
error of that mean and the range of the eight. Here: eight starts whose positions differ by up to 1e-9 au, the eight lanes of one block, leapfrog with the steps per year given, over the same time;
exponents as the program itself fits them (slope of ln(|δ|/|δ₀|) over the last three quarters). A chaotic orbit of a mixed phase space sticks to islands for long, so that the eight differ
much (`least`, `most`). Limit: three standard errors of the difference of both means.
";

/// Name and steps per year.
const PROBLEMS: [(&str, u32); 3] =
    [("cr3bp-chaotic-2to1", 64), ("compact-two-planet-chaotic", 256), ("cr3bp-chaotic-strong", 128)];
const STARTS: usize = 8;
const APART_AU: f64 = 1e-9;
const SEED: u64 = 2718;
const BLOCK_STEPS: usize = 508;

pub fn write() {
    let rows = PROBLEMS.iter().map(|(name, per_year)| row(name, *per_year)).collect();
    Report {
        name: "lyapunov",
        title: "Lyapunov exponents of chaotic orbits",
        words: WORDS.to_string(),
        columns: vec![
            "problem",
            "years",
            "steps_per_year",
            "stated_per_year",
            "stated_error",
            "found_per_year",
            "found_error",
            "least",
            "most",
            "departure_in_errors",
            "met",
        ],
        rows,
    }
    .write();
}

fn row(name: &str, per_year: u32) -> Vec<String> {
    let entries = table("variational-orbits.csv");
    let stated = entries.iter().find(|e| e.text("problem") == name && e.text("part") == "lyapunov").unwrap();
    let (years, value) = (stated.number("t_yr").unwrap(), stated.number("ln_growth").unwrap());
    let note = stated.text("note");
    let error: f64 =
        note.split("standard error ").nth(1).and_then(|t| t.split(';').next()).unwrap().parse().unwrap();
    let found = exponents(&Problem::read(name), per_year, years);
    let mean = found.iter().sum::<f64>() / STARTS as f64;
    let square: f64 = found.iter().map(|x| (x - mean).powi(2)).sum();
    let mean_error = (square / (STARTS * (STARTS - 1)) as f64).sqrt();
    let both = error.hypot(mean_error);
    vec![
        name.to_string(),
        years.to_string(),
        per_year.to_string(),
        short(value),
        short(error),
        short(mean),
        short(mean_error),
        short(found.iter().copied().fold(f64::INFINITY, f64::min)),
        short(found.iter().copied().fold(f64::NEG_INFINITY, f64::max)),
        short((mean - value) / both),
        met((mean - value).abs(), 3.0 * both),
    ]
}

/// One exponent per start, per year.
fn exponents(problem: &Problem, per_year: u32, years: f64) -> Vec<f64> {
    let mut random = Random::new(SEED);
    let step = 1.0 / f64::from(per_year);
    let mut block = Block::new(STARTS, problem.start.gm.len());
    for lane in 0..STARTS {
        block.start(lane, &moved(&problem.start, &mut random), &problem.tangent, step, 1.0);
    }
    let mut records: Vec<GrowthRecord> =
        (0..STARTS).map(|_| GrowthRecord::new(step * BLOCK_STEPS as f64)).collect();
    let blocks = (years * f64::from(per_year) / BLOCK_STEPS as f64) as u64;
    for _ in 0..blocks {
        advance(Advance { block: &mut block, scheme: Scheme::leapfrog(), steps: BLOCK_STEPS, tangent: true });
        for (lane, record) in records.iter_mut().enumerate() {
            record.see(block.growth(lane).log);
            block.rescale(lane);
        }
    }
    records.iter().map(|record| record.lyapunov().unwrap().per_day).collect()
}

fn moved(start: &State, random: &mut Random) -> State {
    let mut moved = start.clone();
    moved.pos.iter_mut().flatten().for_each(|x| *x += random.between(-APART_AU, APART_AU));
    moved
}
