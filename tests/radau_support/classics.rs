//! The three-body problems with known ends (tests/truth/three-body-classics.csv), run by the adaptive integrator.

use std::ops::ControlFlow;

use abide::integrate::forces::Forces;
use abide::integrate::radau::{Bodies, Engine, Event, EventKind, Stop, TOLERANCE, Watch};

use super::*;

/// Period of the figure eight to which its rows refer.
const EIGHT: f64 = 6.32591398;

/// A time as the table writes it.
pub fn time(text: &str) -> f64 {
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
pub fn units(bodies: &Bodies) -> Vec<Bodies> {
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
pub struct Conditioning {
    /// Moment, engine started from it, sizes of position and velocity there.
    moments: Vec<(f64, Engine, [f64; 2])>,
}

impl Conditioning {
    pub fn new(bodies: &Bodies, to: f64) -> Conditioning {
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

    pub fn at(&mut self, t: f64) -> f64 {
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

/// A problem at one of its times.
#[derive(Clone, Debug)]
pub struct Seen {
    pub t: f64,
    /// Largest distance of a body from where it must be.
    pub error: f64,
    /// What a rounding of one unit becomes until then.
    pub conditioning: f64,
}

/// Runs a problem to all its times.
pub fn follow(problem: &str, to: f64) -> Vec<Seen> {
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
        seen.push(Seen { t, error, conditioning: condition.at(t) });
    }
    seen
}

/// The closest approach of the Pythagorean problem up to t = 70, and how many there are.
pub fn closest_approach() -> (Event, usize) {
    let rows = table("three-body-classics.csv");
    let bodies = start(&rows, "pythagorean");
    let mut engine = Engine::from_bodies(&bodies, &[], &Forces::newton(), TOLERANCE).unwrap();
    let mut closest: Option<Event> = None;
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
    (closest.unwrap(), approaches)
}

/// A unit displacement along x of the particle at L4: the table's rows for this mass ratio, and the engine.
fn displaced_at_l4(rows: &[Row], problem: &str) -> Engine {
    let bodies = start(rows, problem);
    let mut shift = Bodies { pos: vec![[0.0; 3]; 3], vel: vec![[0.0; 3]; 3], ..bodies.clone() };
    shift.pos[2] = [1.0, 0.0, 0.0];
    Engine::from_bodies(&bodies, &[shift], &Forces::newton(), TOLERANCE).unwrap()
}

/// Mass ratios of the problems `lagrange-L4-mu…`; the critical one is 0.0385209.
pub const RATIOS: [&str; 5] = ["0.0380", "0.0385", "0.0386", "0.0390", "0.0450"];

/// The tangent vector at L4 for a mass ratio: time, relative departure, what rounding may do.
///
/// A rounding of the place grows like the tangent vector, and over t it bends the tangent vector.
pub fn tangent_at_l4(ratio: &str) -> Vec<(f64, f64, f64)> {
    let rows = table("three-body-classics.csv");
    let problem = format!("lagrange-L4-mu{ratio}");
    let mut engine = displaced_at_l4(&rows, &problem);
    let each = rows.iter().filter(|r| r["problem"] == problem && r["part"] == "tangent").map(|row| {
        let t = number(row, "t");
        run(&mut engine, t);
        let found = engine.displacement(0).unwrap();
        let (at, vel) = (triple(row, AT), triple(row, VEL));
        let size = distance(&at, &[0.0; 3]).hypot(distance(&vel, &[0.0; 3]));
        let error = distance(&found.pos[2], &at).hypot(distance(&found.vel[2], &vel)) / size;
        (t, error, 2.0 * f64::EPSILON * t * (size + 100.0))
    });
    each.collect()
}

/// From when on the exponent is measured: the decaying modes are e^(−2·0.139·80) = 2e-10 of the growing one, rounding is
/// 1e-10 of it.
pub const EXPONENT_FROM: f64 = 80.0;

/// Growth per unit time and turning frequency of the unstable triangle of μ = 0.045, found and stated.
pub fn exponent() -> ([f64; 2], [f64; 2]) {
    let rows = table("three-body-classics.csv");
    let truth = rows.iter().find(|r| r["part"] == "eigenfrequencies" && r["body"] == "mu=0.045").unwrap();
    let mut engine = displaced_at_l4(&rows, "lagrange-L4-mu0.0450");
    // In the turning frame δ = e^{xt} (a cos yt + b sin yt) once the other modes (decaying, e^{−xt}) have died, so
    // three values at equal spacing obey u₂ − p u₁ + q u₀ = 0 with q = e^{2xh}, p = 2 e^{xh} cos yh.
    let (first, spacing) = (EXPONENT_FROM, 1.5);
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
    let found = [q.ln() / (2.0 * spacing), (p / (2.0 * q.sqrt())).acos() / spacing];
    (found, [number(truth, "x"), number(truth, "y")])
}

/// What rounding may do to Jupiter's place, au: it walks in energy like √steps and in phase like t^1.5 (Brouwer 1937); 5
/// au, 1.5 turns per decade, 18 steps per turn; one rounding of the start runs away like t. Four times that.
pub fn jupiter_limit_au(years: f64) -> f64 {
    let turns = years.abs() / 11.86;
    let walk = 5.2 * 6.3 * 1.1e-16 * (3.0 * turns + 1.5 * (18.0f64).sqrt() * turns.powf(1.5));
    4.0 * walk.max(2e-15)
}

/// Sun, Jupiter and Saturn both ways: years and the largest distance from where a planet must be, au.
pub fn sun_jupiter_saturn_off() -> Vec<(f64, f64)> {
    let rows = table("three-body-classics.csv");
    let of = |part: &str| -> Vec<&Row> {
        rows.iter().filter(|r| r["problem"] == "sun-jupiter-saturn" && r["part"] == part).collect()
    };
    let init = of("init");
    let planets = &init[1..];
    let state = from_heliocentric(
        planets.iter().map(|r| number(r, "gm")).collect(),
        planets.iter().map(|r| triple(r, AT)).collect(),
        planets.iter().map(|r| triple(r, VEL)).collect(),
    );
    let trajectory = of("trajectory");
    let mut seen = Vec::new();
    for way in [1.0, -1.0] {
        let mut engine = Engine::from_state(&state, &[], &Forces::newton(), TOLERANCE).unwrap();
        let mut sets: Vec<&[&Row]> =
            trajectory.chunks(2).filter(|set| number(set[0], "t") * way > 0.0).collect();
        sets.sort_by(|a, b| number(a[0], "t").abs().total_cmp(&number(b[0], "t").abs()));
        for set in sets {
            let years = number(set[0], "t");
            run(&mut engine, years * 365.25);
            let now = engine.state();
            let off = set.iter().zip(&now.pos).map(|(r, at)| distance(&triple(r, AT), at));
            seen.push((years, off.fold(0.0, f64::max)));
        }
    }
    seen
}
