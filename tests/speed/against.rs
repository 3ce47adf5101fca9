//! The engine against a textbook integrator and against a general-purpose one.
//!
//! 1. textbook.rs makes the same steps of the same leapfrog with tangent vector, one configuration at a time; it is first
//!    checked to arrive where the engine arrives. Time per planet-step, in short chunks in turn.
//! 2. `ode_solvers::Dop853` integrates the same equations with the variational ones. Its tolerance is set so that the
//!    largest energy error measured over the span is the one asked, the engine's scheme is the cheapest among leapfrog with
//!    corrector and (10,6,4) whose measured largest error (eight neighbouring configurations) is no greater, once with 15
//!    steps per orbit at least, as a study may ask for, once with no fewer than the program takes by itself. Processor time
//!    per orbit and configuration, in turn.
//!
//! `cargo bench --bench against` writes reports/speed/textbook.csv, reports/speed/general.csv and reports/speed/schemes.csv.

mod general;
mod measure;
mod systems;
mod textbook;

use abide::assess::{FEWEST_STEPS_PER_PASSAGE, STEPS_PER_PASSAGE};
use abide::integrate::{Advance, Block, Scheme, advance, energy, from_map, to_map};
use abide::kepler::pericentre_passage_day;
use abide::lanes::Level;
use general::General;
use measure::{interleave, median, ratios, spread, write_table};
use std::f64::consts::TAU;
use std::hint::black_box;
use std::time::Instant;
use textbook::Textbook;

/// Inner orbits over which energy errors are measured.
const ORBITS: usize = 4000;
/// Steps between two looks.
const LOOK_EVERY: usize = 1016;

fn against_textbook() {
    const STEPS: usize = 400;
    let mut rows = Vec::new();
    for n in [2, 3, 5, 8] {
        let lanes = Level::chosen().width() * Level::chosen().groups(n);
        let mut wide = systems::block(n, lanes, 20.0);
        let (state, tangent) = systems::start(n, 0);
        let mut plain = Textbook::new(state, tangent, TAU / 20.0);
        agree(&mut plain, n);
        let times = interleave(
            40,
            &mut [
                &mut || {
                    advance(Advance {
                        block: &mut wide,
                        scheme: Scheme::leapfrog(),
                        steps: STEPS,
                        tangent: true,
                    });
                    (0..lanes).for_each(|lane| wide.rescale(lane));
                },
                &mut || {
                    plain.steps(STEPS);
                    black_box(plain.nearest());
                },
            ],
        );
        let ratio: Vec<f64> = ratios(&times[1], &times[0]).iter().map(|r| r * lanes as f64).collect();
        let ns = |k: usize, lanes: usize| 1e9 * median(&times[k]) / (STEPS * n * lanes) as f64;
        rows.push(format!(
            "{n},{:.2},{:.1},{:.1},{:.1}",
            ns(0, lanes),
            ns(1, 1),
            median(&ratio),
            spread(&ratio)
        ));
        println!("{}", rows.last().expect("just pushed"));
    }
    write_table("textbook", "planets,engine_ns,textbook_ns,ratio,spread_percent", &rows);
}

/// The twin must do the same work: after 400 steps both stand at the same place with the same tangent vector.
fn agree(plain: &mut Textbook, n: usize) {
    let mut one = systems::block(n, 1, 20.0);
    advance(Advance { block: &mut one, scheme: Scheme::leapfrog(), steps: 400, tangent: true });
    plain.steps(400);
    let (state, tangent) = (one.state(0), one.tangent(0));
    let size: f64 = tangent.pos.iter().flatten().map(|x| x.abs()).fold(0.0, f64::max);
    for p in 0..n {
        for k in 0..3 {
            let gap = (state.pos[p][k] - plain.state().pos[p][k]).abs();
            let d_gap = (tangent.pos[p][k] - plain.tangent().pos[p][k]).abs() / size;
            assert!(gap < 1e-10 && d_gap < 1e-9, "planet {p} axis {k}: {gap:e} {d_gap:e}");
        }
    }
}

/// Eight neighbours on their way with one scheme.
struct Ours {
    block: Block,
    scheme: &'static Scheme,
    per_orbit: f64,
    first: Vec<f64>,
    worst: f64,
    /// Per orbit and configuration, one of each look.
    seconds: Vec<f64>,
}

impl Ours {
    fn new(n: usize, scheme: &'static Scheme, per_orbit: f64) -> Ours {
        let lanes = Level::chosen().width() * Level::chosen().groups(n);
        let mut block = systems::block(n, lanes, per_orbit);
        to_map(&mut block, scheme);
        let first = (0..lanes).map(|lane| energy(&systems::start(n, lane).0)).collect();
        Ours { block, scheme, per_orbit, first, worst: 0.0, seconds: Vec::new() }
    }

    /// Goes on to the next look; what is timed includes the way back to true states.
    fn look(&mut self) {
        let start = Instant::now();
        advance(Advance { block: &mut self.block, scheme: self.scheme, steps: LOOK_EVERY, tangent: true });
        let lanes = self.first.len();
        (0..lanes).for_each(|lane| self.block.rescale(lane));
        let mut seen = self.block.clone();
        from_map(&mut seen, self.scheme);
        let orbits = LOOK_EVERY as f64 / self.per_orbit * lanes as f64;
        self.seconds.push(start.elapsed().as_secs_f64() / orbits);
        for (lane, first) in self.first.iter().enumerate() {
            self.worst = self.worst.max(((energy(&seen.state(lane)) - first) / first).abs());
        }
    }

    /// Looks until so many orbits are done.
    fn follow(mut self, orbits: usize) -> Ours {
        (0..(orbits as f64 * self.per_orbit / LOOK_EVERY as f64).ceil() as usize).for_each(|_| self.look());
        self
    }
}

/// Energy error against cost, every scheme, a range of steps.
fn schemes() {
    let mut rows = Vec::new();
    for n in [2, 5] {
        for scheme in Scheme::all() {
            let mut stages = 10.0;
            while stages < 400.0 {
                let run = Ours::new(n, scheme, stages / scheme.stages() as f64).follow(400);
                let (error, seconds) = (run.worst, median(&run.seconds));
                rows.push(format!("{n},\"{}\",{stages:.1},{error:.3e},{:.1}", scheme.name, seconds * 1e9));
                stages *= 1.35;
            }
        }
    }
    write_table(
        "schemes",
        "planets,scheme,kicks_per_inner_orbit,largest_energy_error,ns_per_inner_orbit",
        &rows,
    );
}

/// The fewest steps per orbit with an error no greater than asked: leapfrog from `least` up.
fn cheapest(n: usize, asked: f64, least: f64) -> (&'static Scheme, f64) {
    let candidates = [(Scheme::leapfrog(), least), (Scheme::named("(10,6,4)").expect("it is listed"), 4.0)];
    let fits = candidates.into_iter().filter_map(|(scheme, least)| {
        let mut per_orbit = least;
        while Ours::new(n, scheme, per_orbit).follow(ORBITS).worst > asked {
            per_orbit *= 1.06;
            if per_orbit * scheme.stages() as f64 > 600.0 {
                return None;
            }
        }
        Some((scheme, per_orbit))
    });
    let cost = |fit: &(&Scheme, f64)| fit.0.stages() as f64 * fit.1;
    fits.min_by(|a, b| cost(a).total_cmp(&cost(b))).expect("one scheme reaches every error asked here")
}

fn general_error<const D: usize>(n: usize, tolerance: f64) -> f64 {
    let (state, tangent) = systems::start(n, 0);
    let first = energy(&state);
    let mut run = General::<D>::new(&state, &tangent, tolerance);
    let mut worst = 0.0f64;
    for _ in 0..ORBITS / 10 {
        run.advance(10.0 * TAU);
        worst = worst.max(((energy(&run.state()) - first) / first).abs());
    }
    worst
}

/// The tolerance that gives the error asked, within a factor 1.15 (the error is about proportional to it).
fn tolerance<const D: usize>(n: usize, asked: f64) -> (f64, f64) {
    let mut tolerance = asked * 1e-3;
    for _ in 0..12 {
        let error = general_error::<D>(n, tolerance);
        if error < asked && error > asked / 1.3 {
            return (tolerance, error);
        }
        tolerance *= (0.88 * asked / error).clamp(0.05, 20.0);
    }
    (tolerance, general_error::<D>(n, tolerance))
}

/// Fewest steps per inner orbit of the leapfrog: what a study may ask for without false chaos, and what the program takes
/// unless asked.
fn fewest_steps() -> [(&'static str, f64); 2] {
    let passage = pericentre_passage_day(1.0, systems::ECCENTRICITY, 1.0);
    [("asked", FEWEST_STEPS_PER_PASSAGE), ("automatic", STEPS_PER_PASSAGE * TAU / passage)]
}

fn against_general<const D: usize>(n: usize, rows: &mut Vec<String>) {
    for asked in [1e-6, 1e-9] {
        let (tolerance, general_error) = tolerance::<D>(n, asked);
        for (which, least) in fewest_steps() {
            let (scheme, per_orbit) = cheapest(n, asked, least);
            let engine_error = Ours::new(n, scheme, per_orbit).follow(ORBITS).worst;
            let (state, tangent) = systems::start(n, 0);
            let mut run = General::<D>::new(&state, &tangent, tolerance);
            let mut ours = Ours::new(n, scheme, per_orbit);
            let mut theirs = Vec::new();
            for _ in 0..80 {
                let start = Instant::now();
                run.advance(10.0 * TAU);
                theirs.push(start.elapsed().as_secs_f64() / 10.0);
                ours.look();
            }
            let ours = ours.seconds;
            let ratio = ratios(&theirs, &ours);
            rows.push(format!(
                "{n},{asked:e},{which},\"{}\",{per_orbit:.1},{engine_error:.2e},{:.0},{tolerance:.2e},{general_error:.2e},{:.0},{:.1},{:.1}",
                scheme.name, median(&ours) * 1e9, median(&theirs) * 1e9, median(&ratio), spread(&ratio),
            ));
            println!("{}", rows.last().expect("just pushed"));
        }
    }
}

fn main() {
    against_textbook();
    let mut rows = Vec::new();
    against_general::<24>(2, &mut rows);
    against_general::<60>(5, &mut rows);
    write_table(
        "general",
        "planets,energy_error_asked,step,scheme,steps_per_inner_orbit,engine_error,engine_ns_per_orbit,dop853_tolerance,dop853_error,dop853_ns_per_orbit,ratio,spread_percent",
        &rows,
    );
    schemes();
}
