//! Three-body problems with known ends (tests/truth/three-body-classics.csv: 128-bit Taylor runs).

mod radau_support;

use std::ops::ControlFlow;

use abide::integrate::forces::Forces;
use abide::integrate::radau::{Bodies, Engine, EventKind, Stop, TOLERANCE, Watch};
use radau_support::*;

/// Period of the figure eight to which its rows refer.
const EIGHT: f64 = 6.32591398;

fn time(text: &str) -> f64 {
    match text.split_once('/') {
        Some(("T", part)) => EIGHT / part.parse::<f64>().unwrap(),
        _ if text == "T" => EIGHT,
        _ => match text.strip_suffix('T') {
            Some(many) => EIGHT * many.parse::<f64>().unwrap(),
            None => text.parse().unwrap_or_else(|_| panic!("time {text}")),
        },
    }
}

/// All unit displacements of position and velocity.
fn units(bodies: &Bodies) -> Vec<Bodies> {
    let count = bodies.gm.len();
    let still = Bodies { pos: vec![[0.0; 3]; count], vel: vec![[0.0; 3]; count], ..bodies.clone() };
    let mut all = Vec::new();
    for body in 0..count {
        for axis in 0..3 {
            let (mut pos, mut vel) = (still.clone(), still.clone());
            pos.pos[body][axis] = 1.0;
            vel.vel[body][axis] = 1.0;
            all.extend([pos, vel]);
        }
    }
    all
}

/// What one rounding becomes: of the start, or in the depth of a passage, where speeds are high and the distance small.
///
/// From each such moment unit displacements are carried along; a rounding there is 1e-16 of the speed or of the distance
/// of the pair (the integrator keeps the rest of the place).
struct Conditioning {
    /// Moment, engine started from it, sizes of position and velocity there.
    moments: Vec<(f64, Engine, [f64; 2])>,
}

impl Conditioning {
    fn new(bodies: &Bodies, to: f64) -> Conditioning {
        let largest = |x: &[[f64; 3]]| x.iter().flatten().fold(0.0f64, |most, x| most.max(x.abs()));
        let mut states = vec![(0.0, bodies.clone(), [largest(&bodies.pos), largest(&bodies.vel)])];
        let mut engine = Engine::from_bodies(bodies, &[], &Forces::newton(), TOLERANCE).unwrap();
        let watch = Watch { approach_au: 0.05, ..Watch::default() };
        while let Stop::At(event) = engine.advance(to.min(1e3), &watch, |_| ControlFlow::Break(())).unwrap() {
            let bodies = engine.bodies();
            let sizes = [event.distance_au, largest(&bodies.vel)];
            states.push((event.day, bodies, sizes));
        }
        let moments = states.into_iter().map(|(t, bodies, sizes)| {
            let engine = Engine::from_bodies(&bodies, &units(&bodies), &Forces::newton(), TOLERANCE).unwrap();
            (t, engine, sizes)
        });
        Conditioning { moments: moments.collect() }
    }

    fn at(&mut self, t: f64) -> f64 {
        let mut most: f64 = 1.0;
        for (from, engine, sizes) in self.moments.iter_mut().filter(|moment| moment.0 < t) {
            run(engine, t - *from);
            // Displacements of position and velocity take turns.
            for (index, displaced) in (0..).map_while(|k| engine.displacement(k).map(|d| (k, d))) {
                let size = sizes[index % 2];
                most = displaced.pos.iter().flatten().fold(most, |most, x| most.max(x.abs() * size));
            }
        }
        most
    }
}

/// Runs a problem to all its times; each error must be below `roundings` times what one rounding of the start does.
fn follow(problem: &str, roundings: f64, to: f64) -> Vec<(f64, f64, f64)> {
    let rows = table("three-body-classics.csv");
    let bodies = start(&rows, problem);
    let mut engine = Engine::from_bodies(&bodies, &[], &Forces::newton(), TOLERANCE).unwrap();
    let mut condition = Conditioning::new(&bodies, to);
    let wanted: Vec<&Row> =
        rows.iter().filter(|r| r["problem"] == problem && r["part"] == "trajectory").collect();
    let mut seen = Vec::new();
    for set in wanted.chunks(bodies.gm.len()) {
        let t = time(&set[0]["t"]);
        if t > to {
            break;
        }
        run(&mut engine, t);
        let now = engine.bodies();
        let error = set.iter().zip(&now.pos).map(|(r, at)| distance(&triple(r, AT), at)).fold(0.0, f64::max);
        let condition = condition.at(t);
        println!("{problem} t = {t}: error {error:.1e}, conditioning {condition:.1e}");
        assert!(
            error <= roundings * f64::EPSILON * condition,
            "{problem} at {t}: error {error:e}, conditioning {condition:e}"
        );
        seen.push((t, error, condition));
    }
    seen
}

#[test]
fn pythagorean_problem_to_the_digits_that_its_conditioning_leaves() {
    let seen = follow("pythagorean", 4.0, 70.0);
    assert_eq!(seen.len(), 14);
    assert!(seen[2].1 < 1e-12 && seen[9].1 < 1e-6, "{seen:?}");
}

#[test]
fn pythagorean_closest_approach() {
    let rows = table("three-body-classics.csv");
    let truth = rows.iter().find(|r| r["part"] == "closest-approach").unwrap();
    let bodies = start(&rows, "pythagorean");
    let mut engine = Engine::from_bodies(&bodies, &[], &Forces::newton(), TOLERANCE).unwrap();
    let mut closest: Option<abide::integrate::radau::Event> = None;
    let watch = Watch { approach_au: f64::INFINITY, ..Watch::default() };
    let mut approaches = 0;
    engine
        .advance(70.0, &watch, |event| {
            assert_eq!(event.kind, EventKind::Approach);
            approaches += 1;
            if closest.is_none_or(|old| event.distance_au < old.distance_au) {
                closest = Some(*event);
            }
            ControlFlow::Continue(())
        })
        .unwrap();
    let closest = closest.unwrap();
    assert!(approaches > 20, "{approaches}");
    // Masses 4 and 5 are the second and third body.
    assert_eq!((closest.first, closest.second), (1, 2));
    // One rounding, 1e-16, is worth about 1e-15 of the time; the distance is of the square root kind in angular
    // momentum, where a rounding of v = 200 at d = 4e-4 is 1e-13 of it.
    let time_error = (closest.day - truth["t"].parse::<f64>().unwrap()).abs();
    let relative = (closest.distance_au / number(truth, "x") - 1.0).abs();
    println!("closest approach: time off by {time_error:e}, distance by {relative:e} of itself");
    assert!(time_error < 2e-12 && relative < 5e-12, "{time_error:e} {relative:e}");
}

#[test]
fn figure_eight() {
    for problem in ["figure-eight-8digits", "figure-eight-refined"] {
        let seen = follow(problem, 10.0, f64::INFINITY);
        assert_eq!(seen.len(), 7, "{problem}");
    }
}

#[test]
fn lagrange_solutions_on_both_sides_of_the_critical_ratio() {
    let stable = follow("lagrange-stable", 10.0, 200.0);
    // The unstable one leaves its triangle; at 200 no digit is left in double precision.
    let unstable = follow("lagrange-unstable", 10.0, 100.0);
    let growth = |seen: &[(f64, f64, f64)]| seen.iter().find(|s| s.0 == 100.0).unwrap().2;
    assert!(growth(&unstable) > 1e3 * growth(&stable));
}

#[test]
fn tangent_vectors_of_a_particle_at_l4() {
    let rows = table("three-body-classics.csv");
    for mu in ["0.0380", "0.0385", "0.0386", "0.0390", "0.0450"] {
        let problem = format!("lagrange-L4-mu{mu}");
        let bodies = start(&rows, &problem);
        let mut shift = Bodies { pos: vec![[0.0; 3]; 3], vel: vec![[0.0; 3]; 3], ..bodies.clone() };
        shift.pos[2] = [1.0, 0.0, 0.0];
        let mut engine = Engine::from_bodies(&bodies, &[shift], &Forces::newton(), TOLERANCE).unwrap();
        for row in rows.iter().filter(|r| r["problem"] == problem && r["part"] == "tangent") {
            let t = number(row, "t");
            run(&mut engine, t);
            let found = engine.displacement(0).unwrap();
            let (at, vel) = (triple(row, AT), triple(row, VEL));
            let size = distance(&at, &[0.0; 3]).hypot(distance(&vel, &[0.0; 3]));
            let error = distance(&found.pos[2], &at).hypot(distance(&found.vel[2], &vel)) / size;
            println!("{problem} t = {t}: tangent off by {error:.1e} of itself");
            // A rounding of the place grows like the tangent vector, and over t it bends the tangent vector.
            let limit = 2.0 * f64::EPSILON * t * (size + 100.0);
            assert!(error < limit, "{problem} at {t}: {error:e} against {limit:e}");
        }
    }
}

#[test]
fn exponent_of_the_unstable_triangle() {
    let rows = table("three-body-classics.csv");
    let truth = rows.iter().find(|r| r["part"] == "eigenfrequencies" && r["body"] == "mu=0.045").unwrap();
    let bodies = start(&rows, "lagrange-L4-mu0.0450");
    let mut shift = Bodies { pos: vec![[0.0; 3]; 3], vel: vec![[0.0; 3]; 3], ..bodies.clone() };
    shift.pos[2] = [1.0, 0.0, 0.0];
    let mut engine = Engine::from_bodies(&bodies, &[shift], &Forces::newton(), TOLERANCE).unwrap();
    // In the turning frame δ = e^{xt} (a cos yt + b sin yt) once the other modes (decaying, e^{−xt}) have died, so
    // three values at equal spacing obey u₂ − p u₁ + q u₀ = 0 with q = e^{2xh}, p = 2 e^{xh} cos yh.
    let (first, spacing) = (60.0, 1.5);
    let u: Vec<[f64; 2]> = (0..3)
        .map(|k| {
            let t = first + spacing * k as f64;
            run(&mut engine, t);
            let [x, y, _] = engine.displacement(0).unwrap().pos[2];
            [x * t.cos() + y * t.sin(), y * t.cos() - x * t.sin()]
        })
        .collect();
    let cross = |a: [f64; 2], b: [f64; 2]| a[0] * b[1] - a[1] * b[0];
    let q = cross(u[1], u[2]) / cross(u[0], u[1]);
    let p = cross(u[0], u[2]) / cross(u[0], u[1]);
    let exponent = q.ln() / (2.0 * spacing);
    let turning = (p / (2.0 * q.sqrt())).acos() / spacing;
    println!("exponent {exponent}, frequency {turning}");
    assert!((exponent - number(truth, "x")).abs() < 2e-8, "{exponent}");
    assert!((turning - number(truth, "y")).abs() < 2e-8, "{turning}");
}

#[test]
fn sun_jupiter_saturn_over_ten_thousand_years_either_way() {
    let rows = table("three-body-classics.csv");
    let init: Vec<&Row> =
        rows.iter().filter(|r| r["problem"] == "sun-jupiter-saturn" && r["part"] == "init").collect();
    let planets = &init[1..];
    let state = from_heliocentric(
        planets.iter().map(|r| number(r, "gm")).collect(),
        planets.iter().map(|r| triple(r, AT)).collect(),
        planets.iter().map(|r| triple(r, VEL)).collect(),
    );
    for way in [1.0, -1.0] {
        let mut engine = Engine::from_state(&state, &[], &Forces::newton(), TOLERANCE).unwrap();
        let wanted: Vec<&Row> = rows
            .iter()
            .filter(|r| r["problem"] == "sun-jupiter-saturn" && r["part"] == "trajectory")
            .filter(|r| number(r, "t") * way > 0.0)
            .collect();
        let mut sets: Vec<&[&Row]> = wanted.chunks(2).collect();
        sets.sort_by(|a, b| number(a[0], "t").abs().total_cmp(&number(b[0], "t").abs()));
        assert!(sets.len() >= 3);
        for set in sets {
            let years = number(set[0], "t");
            run(&mut engine, years * 365.25);
            let now = engine.state();
            let error =
                set.iter().zip(&now.pos).map(|(r, at)| distance(&triple(r, AT), at)).fold(0.0, f64::max);
            // Rounding walks in energy like √steps and in phase like t^1.5 (Brouwer 1937); 5 au, 1.5 turns
            // per decade, 18 steps per turn; and one rounding of the start runs away like t.
            let turns = years.abs() / 11.86;
            let walk = 5.2 * 6.3 * 1.1e-16 * (3.0 * turns + 1.5 * (18.0f64).sqrt() * turns.powf(1.5));
            println!("Sun, Jupiter, Saturn {years} yr: error {error:.1e} au, walk of rounding {walk:.1e} au");
            assert!(error < 4.0 * walk.max(2e-15), "{years}: {error:e} against {walk:e}");
        }
    }
}
