//! The Kepler drift against outside truth (tests/truth/two-body-worked-examples.csv, 90-digit arithmetic), against
//! its own mirror image and against finite differences.

use abide::kepler::{Body, Midway, drift};
use abide::lanes::{Job, Level, Real, WIDTH, run_one, run_wide_at};
use proptest::prelude::*;

/// One orbit as plain numbers: μ, r, v, δr, δv.
#[derive(Clone, Copy, Debug)]
struct Start {
    mu: f64,
    pos: [f64; 3],
    vel: [f64; 3],
    d_pos: [f64; 3],
    d_vel: [f64; 3],
}

/// Drifts `starts` (as many as lanes) by `times`; returns 12 numbers per lane.
struct Drift<'a> {
    starts: &'a [Start],
    times: &'a [f64],
    repeat: usize,
}

impl Job for Drift<'_> {
    type Output = Vec<[f64; 12]>;
    #[inline(always)]
    fn run<R: Real>(self) -> Vec<[f64; 12]> {
        let mut b = Body::<R>::still();
        let gather = |pick: &dyn Fn(&Start) -> f64| {
            let all: Vec<f64> = self.starts.iter().map(pick).collect();
            R::load(&all)
        };
        b.mu = gather(&|s| s.mu);
        for k in 0..3 {
            b.pos[k] = gather(&|s| s.pos[k]);
            b.vel[k] = gather(&|s| s.vel[k]);
            b.d_pos[k] = gather(&|s| s.d_pos[k]);
            b.d_vel[k] = gather(&|s| s.d_vel[k]);
        }
        let mut bodies = [b];
        let all = R::splat(0.0).lt(R::splat(1.0));
        for _ in 0..self.repeat {
            drift::<R, true, true>(&mut bodies, &mut [Midway::blank()], R::load(self.times), all);
        }
        let b = bodies[0];
        let mut out = vec![[0.0; 12]; R::LANES];
        for (group, triple) in [b.pos, b.vel, b.d_pos, b.d_vel].into_iter().enumerate() {
            for (k, number) in triple.into_iter().enumerate() {
                let mut lanes = [0.0; WIDTH];
                number.store(&mut lanes);
                for (lane, out) in out.iter_mut().enumerate() {
                    out[3 * group + k] = lanes[lane];
                }
            }
        }
        out
    }
}

fn one(start: Start, time: f64) -> [f64; 12] {
    run_one(Drift { starts: &[start], times: &[time], repeat: 1 })[0]
}

fn norm(v: &[f64]) -> f64 {
    v.iter().map(|x| x * x).sum::<f64>().sqrt()
}

/// How far position and velocity move when every input is off by half a unit in the last place: the least error
/// that double precision allows. From the tangent map in each input direction.
fn least_error(start: Start, time: f64) -> (f64, f64) {
    let eps = 0.5 * f64::EPSILON;
    let end = one(start, time);
    // μ and time enter as h√μ (scaled): μ off by ε acts as v off by −ε/2 and h off by ε/2.
    let slip = 1.5 * eps * time.abs();
    let mut pos = norm(&end[3..6]) * slip + norm(&end[0..3]) * eps;
    let r = norm(&end[0..3]);
    let mut vel = start.mu / (r * r) * slip + norm(&end[3..6]) * eps;
    for k in 0..6 {
        let mut s = Start { d_pos: [0.0; 3], d_vel: [0.0; 3], ..start };
        let size = if k < 3 { norm(&start.pos) } else { norm(&start.vel) };
        if k < 3 {
            s.d_pos[k] = eps * size
        } else {
            s.d_vel[k - 3] = eps * size
        }
        let end = one(s, time);
        pos += norm(&end[6..9]);
        vel += norm(&end[9..12]);
    }
    (pos, vel)
}

/// What errors of `pos` and `vel` (lengths of the error vectors) at the start can make of the position at the end.
fn carried_error(start: Start, time: f64, pos: f64, vel: f64) -> f64 {
    let mut total = 0.0;
    for k in 0..6 {
        let mut s = Start { d_pos: [0.0; 3], d_vel: [0.0; 3], ..start };
        if k < 3 {
            s.d_pos[k] = pos
        } else {
            s.d_vel[k - 3] = vel
        }
        total += norm(&one(s, time)[6..9]);
    }
    total
}

#[test]
fn propagation_rows_are_met_to_round_off_times_conditioning() {
    let mut reader = csv::Reader::from_path("tests/truth/two-body-worked-examples.csv").unwrap();
    let headers = reader.headers().unwrap().clone();
    let column = |name: &str| headers.iter().position(|h| h == name).unwrap();
    let (mut rows, mut ratios) = (0, Vec::new());
    for record in reader.records() {
        let record = record.unwrap();
        if !record[column("kind")].starts_with("propagate") {
            continue;
        }
        rows += 1;
        let get = |name: &str| record[column(name)].parse::<f64>().unwrap();
        let triple = |a: &str, b: &str, c: &str| [get(a), get(b), get(c)];
        let start = Start {
            mu: get("mu"),
            pos: triple("x0", "y0", "z0"),
            vel: triple("vx0", "vy0", "vz0"),
            d_pos: [0.0; 3],
            d_vel: [0.0; 3],
        };
        let end = one(start, get("dt"));
        let (pos, vel) = (triple("x1", "y1", "z1"), triple("vx1", "vy1", "vz1"));
        let d_pos: Vec<f64> = (0..3).map(|k| end[k] - pos[k]).collect();
        let d_vel: Vec<f64> = (0..3).map(|k| end[3 + k] - vel[k]).collect();
        let (least_pos, least_vel) = least_error(start, get("dt"));
        let ratio = (norm(&d_pos) / least_pos).max(norm(&d_vel) / least_vel);
        assert!(ratio.is_finite(), "{}: {end:?}", &record[0]);
        ratios.push((ratio, record[0].to_string(), record[column("kind")].to_string(), get("dt")));
    }
    assert!(rows > 150, "only {rows} rows");
    ratios.sort_by(|a, b| a.0.total_cmp(&b.0));
    let worst = &ratios[ratios.len() - 5..];
    // 20 half-units: the solver itself makes some ten roundings of its own.
    assert!(ratios[rows - 1].0 < 20.0, "errors over least possible: {worst:?}");
    assert!(ratios[rows * 9 / 10].0 < 4.0, "ninth decile {:?}", ratios[rows * 9 / 10]);
}

fn orbit() -> impl Strategy<Value = Start> {
    let unit = || -1.0f64..1.0;
    (
        0.1f64..3.0,
        [unit(), unit(), unit()],
        [unit(), unit(), unit()],
        0.0f64..1.6,
        [unit(), unit(), unit()],
        [unit(), unit(), unit()],
    )
        .prop_filter_map("too radial", |(mu, pos, vel, speed, d_pos, d_vel)| {
            let (r, v) = (norm(&pos), norm(&vel));
            if r < 0.1 || v < 0.1 {
                return None;
            }
            // speed in units of the circular one: ellipses, parabolas and hyperbolas.
            let scale = speed * (mu / r).sqrt() / v;
            let vel = vel.map(|x| x * scale);
            let cross = [
                pos[1] * vel[2] - pos[2] * vel[1],
                pos[2] * vel[0] - pos[0] * vel[2],
                pos[0] * vel[1] - pos[1] * vel[0],
            ];
            // Pericentre above 0.1 % of r: nearer the centre finite differences say nothing.
            let fits = norm(&cross).powi(2) / mu > 2e-3 * r;
            fits.then_some(Start { mu, pos, vel, d_pos, d_vel })
        })
}

fn energy(mu: f64, s: &[f64]) -> f64 {
    0.5 * norm(&s[3..6]).powi(2) - mu / norm(&s[0..3])
}

fn time() -> impl Strategy<Value = f64> {
    prop_oneof![-0.5f64..0.5, -10.0f64..10.0, -300.0f64..300.0]
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(2000))]

    /// There and back again, and energy and angular momentum kept, to round-off times conditioning.
    #[test]
    fn there_and_back(start in orbit(), time in time()) {
        let there = one(start, time);
        let at = |k: usize| [there[k], there[k + 1], there[k + 2]];
        let back = one(Start { pos: at(0), vel: at(3), ..start }, -time);
        let turned = Start { pos: at(0), vel: at(3), ..start };
        let (least_pos, least_vel) = least_error(start, time);
        let (least_back, _) = least_error(turned, -time);
        let carried = carried_error(turned, -time, least_pos, least_vel);
        let gap: Vec<f64> = (0..3).map(|k| back[k] - start.pos[k]).collect();
        // The error on the way out, carried back, and the error on the way back. In half-units of what enters: β = 2μ/r − v²
        // from a root, a division and two sums of three products (13), r and η (7), f and g and the sums of the update
        // (12); the series (6) is doubled up to three times over these spans, and each doubling doubles its error
        // (48): 80 where all point the same way.
        prop_assert!(norm(&gap) <= 80.0 * (carried + least_back), "{} {}", norm(&gap), carried + least_back);
        // Energy within what those errors of position and velocity make of it, |dE| = |μ r·dr/r³ + v·dv|.
        let before: Vec<f64> = start.pos.iter().chain(&start.vel).copied().collect();
        let kinetic = 0.5 * norm(&there[3..6]).powi(2) + 0.5 * norm(&start.vel).powi(2);
        let scale = kinetic + start.mu / norm(&there[0..3]) + start.mu / norm(&start.pos);
        let carried = start.mu / norm(&there[0..3]).powi(2) * least_pos + norm(&there[3..6]) * least_vel;
        let (e0, e1) = (energy(start.mu, &before), energy(start.mu, &there));
        prop_assert!((e1 - e0).abs() <= 80.0 * carried + 8.0 * f64::EPSILON * scale, "{e0} {e1}");
    }

    /// The tangent map is the derivative of the map: central differences agree to their own accuracy.
    #[test]
    fn tangent_is_the_derivative(start in orbit(), time in -3.0f64..3.0) {
        let step = 1e-6;
        let moved = |sign: f64| {
            let mut s = start;
            for k in 0..3 {
                s.pos[k] += sign * step * start.d_pos[k];
                s.vel[k] += sign * step * start.d_vel[k];
            }
            one(s, time)
        };
        let (plus, minus, exact) = (moved(1.0), moved(-1.0), one(start, time));
        let scale = norm(&exact[6..12]) + norm(&exact[0..6]);
        for k in 0..6 {
            let difference = (plus[k] - minus[k]) / (2.0 * step);
            prop_assert!((difference - exact[6 + k]).abs() <= 2e-5 * scale * (1.0 + scale), "{k}: {difference} {}", exact[6 + k]);
        }
    }

    /// Eight different orbits and steps, every level: the bits of the scalar path.
    #[test]
    fn lanes_have_scalar_bits(starts in prop::collection::vec(orbit(), 8), times in prop::collection::vec(time(), 8)) {
        for level in Level::available().into_iter().filter(|l| l.width() == WIDTH) {
            let wide = run_wide_at(level, Drift { starts: &starts, times: &times, repeat: 3 });
            for lane in 0..WIDTH {
                let scalar = run_one(Drift { starts: &starts[lane..=lane], times: &times[lane..=lane], repeat: 3 })[0];
                for k in 0..12 {
                    prop_assert_eq!(wide[lane][k].to_bits(), scalar[k].to_bits(), "{:?} lane {} number {}", level, lane, k);
                }
            }
        }
    }
}

#[test]
fn a_step_of_zero_changes_no_bit() {
    let start = Start {
        mu: 1.0,
        pos: [0.3, -0.9, 0.1],
        vel: [0.9, 0.2, -0.4],
        d_pos: [1.0, 2.0, 3.0],
        d_vel: [-1.0, 0.5, 0.25],
    };
    let end = one(start, 0.0);
    let before: Vec<f64> = [start.pos, start.vel, start.d_pos, start.d_vel].into_iter().flatten().collect();
    assert_eq!(end.to_vec(), before);
}

/// Orbits of one eccentricity, each lane at another phase, drifting by P/`per_turn`.
struct Rounds {
    eccentricity: f64,
    per_turn: f64,
    steps: usize,
}

impl Job for Rounds {
    /// Energies (μ = 1) before and after.
    type Output = [[f64; 2]; WIDTH];
    #[inline(always)]
    fn run<R: Real>(self) -> [[f64; 2]; WIDTH] {
        let e = self.eccentricity;
        let mut body = Body::<R>::still();
        body.mu = R::splat(1.0);
        let mut numbers = [[0.0; WIDTH]; 4];
        for lane in 0..WIDTH {
            let (sin, cos) = (0.4 + 0.77 * lane as f64).sin_cos();
            let r = 1.0 - e * cos;
            let ratio = (1.0 - e * e).sqrt();
            let lane_numbers = [cos - e, ratio * sin, -sin / r, ratio * cos / r];
            numbers.iter_mut().zip(lane_numbers).for_each(|(all, number)| all[lane] = number);
        }
        let [x, y, vx, vy] = numbers.map(|all| R::load(&all));
        (body.pos, body.vel) = ([x, y, R::splat(0.0)], [vx, vy, R::splat(0.0)]);
        let mut bodies = [body];
        let before = energies(&bodies[0]);
        let h = R::splat(std::f64::consts::TAU / self.per_turn);
        let all = R::splat(0.0).lt(R::splat(1.0));
        for _ in 0..self.steps {
            drift::<R, false, true>(&mut bodies, &mut [Midway::blank()], h, all);
        }
        let after = energies(&bodies[0]);
        std::array::from_fn(|lane| [before[lane], after[lane]])
    }
}

fn energies<R: Real>(body: &Body<R>) -> [f64; WIDTH] {
    let square = |v: &[R; 3]| v[0] * v[0] + v[1] * v[1] + v[2] * v[2];
    let energy = square(&body.vel) * R::splat(0.5) - body.mu / square(&body.pos).sqrt();
    let mut out = [0.0; WIDTH];
    energy.store(&mut out);
    out
}

/// Rounding errors may walk, but they must have no preferred sense. Allowed: four standard errors of the mean of walks of
/// one unit in the last place per drift.
#[test]
fn the_energy_has_no_preferred_sense() {
    const STEPS: usize = 4_000_000;
    for (eccentricity, per_turn) in [(0.6, 40.0123), (0.01, 20.0123)] {
        let ends = run_wide_at(Level::chosen(), Rounds { eccentricity, per_turn, steps: STEPS });
        let lanes = Level::chosen().width();
        let total: f64 = ends[..lanes].iter().map(|[before, after]| (after - before) / before).sum();
        let mean = total / (lanes * STEPS) as f64;
        let allowed = 4.0 * f64::EPSILON / ((lanes * STEPS) as f64).sqrt();
        assert!(mean.abs() < allowed, "e = {eccentricity}: {mean:e} per drift, allowed {allowed:e}");
    }
}
