//! The kernel alone: nanoseconds per planet-step beside the processor's peak of fused multiply-adds, at every width.
//!
//! For N = 2, 3, 5, 8 planets, with and without tangent vector, scalar, AVX2 and AVX-512, in short chunks in turn; the
//! share of the peak is operations counted by a counting number type over operations of the peak loop of the same width
//! in the same time. Then the Kepler drift with tangent map by eccentricity. One step is one drift per planet, one kick, one jump, the
//! watch on distances and a quarter of a MEGNO sample; 20 steps per inner orbit.
//!
//! `cargo bench --bench kernel` writes reports/speed/kernel.csv and reports/speed/drift.csv.

mod counted;
mod measure;
mod systems;

use abide::integrate::{Advance, Block, Scheme};
use abide::kepler::{Body, Midway, drift};
use abide::lanes::{Job, Level, Real, WIDTH, run_wide_at};
use measure::{interleave, median, ratios, spread, write_table};
use std::hint::black_box;

/// Independent chains of fused multiply-adds: enough to fill the pipes, few enough for the registers.
struct Peak<const CHAINS: usize>;

const ROUNDS: usize = 4000;

impl<const CHAINS: usize> Job for Peak<CHAINS> {
    type Output = f64;
    #[inline(always)]
    fn run<R: Real>(self) -> f64 {
        let mut chains = [R::splat(0.0); CHAINS];
        for (k, c) in chains.iter_mut().enumerate() {
            *c = R::splat(1.0 + k as f64);
        }
        let (a, b) = (R::splat(black_box(0.999_999)), R::splat(black_box(1e-7)));
        for _ in 0..ROUNDS {
            for c in chains.iter_mut() {
                *c = c.mul_add(a, b);
            }
        }
        let mut total = R::splat(0.0);
        for c in chains {
            total = total + c;
        }
        let mut out = [0.0; WIDTH];
        total.store(&mut out);
        out.iter().sum()
    }
}

/// Operations of one call of [`peak`].
fn peak(level: Level) -> f64 {
    // An eight is two registers of AVX2, which has sixteen.
    let chains = if level == Level::Avx2 {
        black_box(run_wide_at(level, Peak::<6>));
        6
    } else {
        black_box(run_wide_at(level, Peak::<12>));
        12
    };
    (chains * ROUNDS * 2 * level.width()) as f64
}

/// Steps per chunk: about a tenth of a millisecond.
const STEPS: usize = 400;
const REPEAT: usize = 60;

fn steps(level: Level, block: &mut Block, tangent: bool) {
    run_wide_at(level, Advance { block, scheme: Scheme::leapfrog(), steps: STEPS, tangent });
    if tangent {
        (0..block.width()).for_each(|lane| block.rescale(lane));
    }
}

fn kernel() {
    let mut rows = Vec::new();
    for n in [2, 3, 5, 8] {
        let levels = Level::available();
        let mut blocks: Vec<[Block; 2]> = levels
            .iter()
            .map(|l| systems::block(n, l.width() * l.groups(n), 20.0))
            .map(|b| [b.clone(), b])
            .collect();
        let mut pieces: Vec<Box<dyn FnMut()>> = Vec::new();
        for (level, [with, without]) in levels.iter().zip(&mut blocks) {
            pieces.push(Box::new(|| {
                peak(*level);
            }));
            pieces.push(Box::new(|| steps(*level, with, true)));
            pieces.push(Box::new(|| steps(*level, without, false)));
        }
        let mut pieces: Vec<&mut dyn FnMut()> =
            pieces.iter_mut().map(|p| &mut **p as &mut dyn FnMut()).collect();
        let times = interleave(REPEAT, &mut pieces);
        for (k, level) in levels.iter().enumerate() {
            let lanes = level.width() * level.groups(n);
            let planet_steps = (STEPS * n * lanes) as f64;
            for (column, tangent) in [(1, true), (2, false)] {
                let (own, of_scalar) = (&times[3 * k + column], &times[column]);
                let flops = counted::flops_per_planet_step(n, tangent);
                let share: Vec<f64> = ratios(&times[3 * k], own)
                    .iter()
                    .map(|r| 100.0 * r * flops * planet_steps / peak(*level))
                    .collect();
                let ns = 1e9 * median(own) / planet_steps;
                let faster = median(&ratios(of_scalar, own)) * lanes as f64;
                rows.push(format!(
                    "{n},{},{},{ns:.2},{:.1},{:.1},{flops:.0},{:.1},{faster:.2}",
                    level.word(),
                    if tangent { "with" } else { "without" },
                    spread(own),
                    peak(*level) / median(&times[3 * k]) / 1e9,
                    median(&share),
                ));
                println!("{}", rows.last().expect("just pushed"));
            }
        }
    }
    if only_print() {
        return;
    }
    write_table(
        "kernel",
        "planets,lanes,tangent,ns_per_planet_step,spread_percent,peak_gflops,flops_per_planet_step,share_of_peak_percent,times_scalar",
        &rows,
    );
}

/// `-- print`: the kernel only, and no file is written.
fn only_print() -> bool {
    std::env::args().any(|argument| argument == "print")
}

/// Two bodies of one eccentricity at different phases, drifting.
struct Drifts {
    eccentricity: f64,
    steps: usize,
}

impl Job for Drifts {
    type Output = f64;
    #[inline(always)]
    fn run<R: Real>(self) -> f64 {
        let e = self.eccentricity;
        let mut bodies = [Body::<R>::still(); 2];
        for (k, body) in bodies.iter_mut().enumerate() {
            // Lanes start at pericentre, each with its own size.
            let mut size = [1.0; WIDTH];
            for (lane, a) in size.iter_mut().enumerate() {
                *a += 0.37 * k as f64 + 0.05 * lane as f64;
            }
            let a = R::load(&size);
            body.mu = R::splat(1.0);
            body.pos[0] = a * R::splat(1.0 - e);
            body.vel[1] = R::splat(((1.0 + e) / (1.0 - e)).sqrt()) / a.sqrt();
            body.d_pos = [0.3, -0.2, 0.1].map(R::splat);
            body.d_vel = [0.1, 0.4, -0.5].map(R::splat);
        }
        let mut midway = [Midway::<R>::blank(); 2];
        let all = R::splat(0.0).lt(R::splat(1.0));
        for _ in 0..self.steps {
            drift::<R, true, true>(&mut bodies, &mut midway, R::splat(std::f64::consts::TAU / 20.0), all);
        }
        let mut out = [0.0; WIDTH];
        bodies[0].pos[0].store(&mut out);
        out[0]
    }
}

fn drifts() {
    let level = Level::chosen();
    let eccentricities = [0.0, 0.1, 0.3, 0.5, 0.7, 0.9, 0.97];
    let mut pieces: Vec<Box<dyn FnMut()>> = eccentricities
        .iter()
        .map(|&eccentricity| -> Box<dyn FnMut()> {
            Box::new(move || {
                black_box(run_wide_at(level, Drifts { eccentricity, steps: STEPS }));
            })
        })
        .collect();
    let mut pieces: Vec<&mut dyn FnMut()> = pieces.iter_mut().map(|p| &mut **p as &mut dyn FnMut()).collect();
    let times = interleave(REPEAT, &mut pieces);
    let rows: Vec<String> = eccentricities
        .iter()
        .zip(&times)
        .map(|(e, own)| {
            let ns = 1e9 * median(own) / (STEPS * 2 * level.width()) as f64;
            let dearer = median(&ratios(own, &times[0]));
            format!("{e},{},{ns:.2},{:.1},{dearer:.2}", level.word(), spread(own))
        })
        .collect();
    rows.iter().for_each(|row| println!("{row}"));
    write_table("drift", "eccentricity,lanes,ns_per_drift,spread_percent,times_circular", &rows);
}

fn main() {
    kernel();
    if !only_print() {
        drifts();
    }
}
