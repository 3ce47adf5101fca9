//! How rounding makes the energy error grow over 1e8 steps, without and with compensated sums.

use std::f64::consts::TAU;

use abide::integrate::{Advance, Block, Scheme, State, Tangent, advance, energy};
use rayon::prelude::*;

use super::giants::processor_s;
use super::random::Random;
use super::report::{Report, folder, short};
use super::shelf::{placed, state};

const LANES: usize = 8;
/// Starts of the long run.
const STARTS: usize = 2 * LANES;
const STEPS: usize = 100_000_000;
/// Steps per turn of the inner planet.
const PER_TURN: f64 = 32.0;
/// The fit begins here: before, what the scheme itself swings by can be seen.
const FIT_FROM: f64 = 1e4;

pub fn write() {
    let mut random = Random::new(20_260_712);
    let groups: Vec<Vec<State>> =
        (0..STARTS / LANES).map(|_| (0..LANES).map(|_| pair(&mut random)).collect()).collect();
    let (at, plain, seconds) = all_runs(&groups, false);
    let (_, compensated, compensated_seconds) = all_runs(&groups, true);
    curve(&at, &plain, &compensated);
    let mut rows = pair_rows(&at, &plain, "");
    rows.extend(pair_rows(&at, &compensated, ", compensated sums"));
    let words = WORDS.replace("LONGER", &format!("{compensated_seconds:.0}"));
    let words = words.replace("SECONDS", &format!("{seconds:.0}"));
    let columns = vec!["what", "found", "standard_error", "allowed", "met"];
    Report { name: "round-off", title: "Growth of rounding", words, columns, rows }.write();
}

const WORDS: &str = "
Brouwer (1937): errors of one rounding each that know nothing of one another add up as a walk, so that the energy error grows with the
root of the number of steps; errors of one sign would grow with the number itself.

`exponent`: two planets (mass ratios 1e-4 and 5e-5, axes 1 and 1.9, e up to 0.1, inclined by up to 3 deg), sixteen starts drawn with seed 20260712 in the lanes of
two blocks, 1e8 steps of (10,6,4) at 32 steps per inner turn (SECONDS s of one processor), whose own error is below rounding. Slope of the logarithm of the
energy error's root mean square (over starts and over the samples in equal ratios of steps) against that of the number of steps, from 1e4 steps
on. Its standard error is that of true walks: 200 sets of sixteen walks of independent steps, looked at at the same numbers of steps and fitted the same way (their
mean exponent is listed too); allowed is 1/2 and two standard errors. `drift` is the mean over the starts of the error at the end, per step; allowed: two standard errors, from the spread of the starts.
The curve is in [round-off-curve.csv](round-off-curve.csv).

`compensated sums`: the same starts in blocks whose positions and velocities keep what rounding cuts off (LONGER s of one processor).
";

/// Numbers of steps, per start the relative energy errors at them, and the processor time, s.
fn all_runs(groups: &[Vec<State>], compensated: bool) -> (Vec<usize>, Vec<Vec<f64>>, f64) {
    let runs: Vec<_> = groups.par_iter().map(|starts| pair_run(starts, compensated)).collect();
    let at = runs[0].0.clone();
    let seconds = runs.iter().map(|run| run.2).sum();
    (at, runs.into_iter().flat_map(|run| run.1).collect(), seconds)
}

/// Numbers of steps, per lane the relative energy errors at them,
/// and the processor time, s.
fn pair_run(starts: &[State], compensated: bool) -> (Vec<usize>, Vec<Vec<f64>>, f64) {
    let worked = processor_s();
    let scheme = Scheme::named("(10,6,4)").unwrap();
    let block = Block::new(LANES, 2);
    let mut block = if compensated { block.compensated() } else { block };
    let mut first = Vec::new();
    for (lane, start) in starts.iter().enumerate() {
        first.push(energy(start));
        let tangent = Tangent { pos: start.pos.clone(), vel: start.vel.clone() };
        block.start(lane, start, &tangent, TAU / PER_TURN, 1.0);
    }
    let (mut at, mut errors) = (Vec::new(), vec![Vec::new(); LANES]);
    let mut done = 0;
    while done < STEPS {
        let steps = (done / 200).max(20).min(STEPS - done);
        advance(Advance { block: &mut block, scheme, steps, tangent: false });
        (0..LANES).for_each(|lane| block.rescale(lane));
        done += steps;
        at.push(done);
        for lane in 0..LANES {
            errors[lane].push((energy(&block.state(lane)) - first[lane]) / first[lane]);
        }
    }
    (at, errors, processor_s() - worked)
}

fn pair(random: &mut Random) -> State {
    let mut bodies = [1.0, 1.9].map(|axis| {
        let axis = axis * random.between(0.98, 1.02);
        placed(axis, random.between(0.01, 0.1), random.between(0.0, TAU), random.between(0.0, TAU))
    });
    for (pos, vel) in &mut bodies {
        let tilt = random.between(0.0, 0.05);
        for v in [pos, vel] {
            *v = [v[0], v[1] * tilt.cos(), v[1] * tilt.sin()];
        }
    }
    state(1.0, &[1e-4, 5e-5], &bodies)
}

/// Bins of equal ratio, four per decade: mean logarithm of the steps and root mean square over the chosen lanes.
fn bins(at: &[usize], errors: &[Vec<f64>], left_out: Option<usize>) -> Vec<(f64, f64)> {
    let bin = |n: usize| ((n as f64).log10() * 4.0).floor() as i64;
    let mut points = Vec::new();
    for group in (0..at.len()).collect::<Vec<_>>().chunk_by(|a, b| bin(at[*a]) == bin(at[*b])) {
        let used = errors.iter().enumerate().filter(|(lane, _)| Some(*lane) != left_out);
        let squares: Vec<f64> = used.flat_map(|(_, e)| group.iter().map(|k| e[*k].powi(2))).collect();
        let mean = squares.iter().sum::<f64>() / squares.len() as f64;
        let log = group.iter().map(|k| (at[*k] as f64).log10()).sum::<f64>() / group.len() as f64;
        points.push((log, mean.sqrt().log10()));
    }
    points
}

/// Slope of a straight line by least squares.
pub fn slope(points: &[(f64, f64)]) -> f64 {
    let n = points.len() as f64;
    let (x, y) = points.iter().fold((0.0, 0.0), |(x, y), p| (x + p.0 / n, y + p.1 / n));
    let (above, below) =
        points.iter().fold((0.0, 0.0), |(a, b), p| (a + (p.0 - x) * (p.1 - y), b + (p.0 - x).powi(2)));
    above / below
}

fn exponent(at: &[usize], errors: &[Vec<f64>], left_out: Option<usize>) -> f64 {
    let mut points = bins(at, errors, left_out);
    points.retain(|p| p.0 >= FIT_FROM.log10());
    slope(&points)
}

/// Mean and standard error of the mean.
pub fn mean(values: &[f64]) -> (f64, f64) {
    let n = values.len() as f64;
    let mean = values.iter().sum::<f64>() / n;
    let square = values.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / (n - 1.0);
    (mean, (square / n).sqrt())
}

fn pair_rows(at: &[usize], errors: &[Vec<f64>], how: &str) -> Vec<Vec<String>> {
    let whole = exponent(at, errors, None);
    let parts: Vec<f64> = (0..STARTS).map(|lane| exponent(at, errors, Some(lane))).collect();
    // The spread of estimates that share all but one start, blown up to that of independent ones.
    let left_out = mean(&parts).1 * (STARTS as f64 - 1.0);
    let (walk, error) = walks(at);
    let ends: Vec<f64> = errors.iter().map(|e| e[e.len() - 1] / STEPS as f64).collect();
    let (drift, drift_error) = mean(&ends);
    let rms = |from: usize| {
        let squares: Vec<f64> = errors.iter().map(|e| e[from].powi(2)).collect();
        (squares.iter().sum::<f64>() / STARTS as f64).sqrt()
    };
    let yes = |good: bool| if good { "yes" } else { "NO" }.to_string();
    let none = String::new;
    let mut rows = vec![
        vec![
            "exponent".to_string(),
            format!("{whole:.3}"),
            format!("{error:.3}"),
            format!("{:.3}", 0.5 + 2.0 * error),
            yes(whole <= 0.5 + 2.0 * error),
        ],
        vec![
            "exponent, error by leaving one start out".to_string(),
            format!("{whole:.3}"),
            format!("{left_out:.3}"),
            none(),
            none(),
        ],
        vec![
            "exponent of true walks".to_string(),
            format!("{walk:.3}"),
            format!("{error:.3}"),
            none(),
            none(),
        ],
        vec![
            "drift per step".to_string(),
            short(drift),
            short(drift_error),
            short(2.0 * drift_error),
            yes(drift.abs() <= 2.0 * drift_error),
        ],
        vec!["rms after 1e8 steps".to_string(), short(rms(at.len() - 1)), none(), none(), none()],
        vec!["rms of the first look (20 steps)".to_string(), short(rms(0)), none(), none(), none()],
    ];
    rows.iter_mut().for_each(|row| row[0] += how);
    rows
}

/// Mean and spread of the exponent found from as many true walks of the same length, looked at at the same steps.
fn walks(at: &[usize]) -> (f64, f64) {
    let mut random = Random::new(1937);
    let mut exponents = Vec::new();
    for _ in 0..WALKS {
        let walk = |random: &mut Random| {
            let (mut place, mut before) = (0.0, 0);
            let mut step = |n: &usize| {
                // Six even numbers: normal enough for a sum of thousands.
                let chance: f64 = (0..6).map(|_| random.between(-1.0, 1.0)).sum::<f64>() / 2f64.sqrt();
                place += chance * ((n - before) as f64).sqrt();
                before = *n;
                place
            };
            at.iter().map(&mut step).collect::<Vec<f64>>()
        };
        let errors: Vec<Vec<f64>> = (0..STARTS).map(|_| walk(&mut random)).collect();
        exponents.push(exponent(at, &errors, None));
    }
    let (walk, error) = mean(&exponents);
    (walk, error * (WALKS as f64).sqrt())
}

fn curve(at: &[usize], plain: &[Vec<f64>], compensated: &[Vec<f64>]) {
    let mut csv = csv::Writer::from_path(folder().join("round-off-curve.csv")).unwrap();
    csv.write_record(["steps", "rms_relative_energy_error", "rms_with_compensated_sums"]).unwrap();
    for ((log, rms), (_, lower)) in bins(at, plain, None).into_iter().zip(bins(at, compensated, None)) {
        csv.write_record([log, rms, lower].map(|log| short(10f64.powf(log)))).unwrap();
    }
    csv.flush().unwrap();
}

/// Sets of true walks for comparison.
const WALKS: usize = 200;
