//! Nanoseconds per planet-step of the kernel beside the processor's peak of fused multiply-adds, interleaved.
//!
//! `cargo bench --bench kernel`

mod measure;
mod systems;

use abide::integrate::{Advance, Block, Scheme, advance};
use abide::lanes::{Job, Level, Real, WIDTH, run_one, run_wide};
use measure::{interleave, median, spread};
use std::hint::black_box;

/// Sixteen independent chains of fused multiply-adds; two operations each.
struct Peak {
    rounds: usize,
}

impl Job for Peak {
    type Output = f64;
    #[inline(always)]
    fn run<R: Real>(self) -> f64 {
        let mut chains = [R::splat(0.0); 16];
        for (k, c) in chains.iter_mut().enumerate() {
            *c = R::splat(1.0 + k as f64);
        }
        let (a, b) = (R::splat(black_box(0.999_999)), R::splat(black_box(1e-7)));
        for _ in 0..self.rounds {
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
        out[0]
    }
}

/// Steps per chunk: about a tenth of a millisecond.
const STEPS: usize = 400;

fn main() {
    println!("lanes: {:?}", Level::chosen());
    const ROUNDS: usize = 4000;
    let lanes = Level::chosen().width();
    for n in [2, 3, 5, 8] {
        let mut wide = systems::block(n, lanes);
        let mut wide_plain = wide.clone();
        let mut one = systems::block(n, 1);
        let run = |block: &mut Block, steps: usize, tangent: bool| {
            advance(Advance { block, scheme: Scheme::leapfrog(), steps, tangent });
            for lane in 0..block.width() {
                block.rescale(lane);
            }
        };
        let times = interleave(
            60,
            &mut [
                &mut || {
                    black_box(run_wide(Peak { rounds: ROUNDS }));
                },
                &mut || run(&mut wide, STEPS, true),
                &mut || run(&mut wide_plain, STEPS, false),
                &mut || run(&mut one, STEPS, true),
                &mut || {
                    black_box(run_one(Peak { rounds: ROUNDS }));
                },
            ],
        );
        let per = |k: usize, lanes: usize| -> Vec<f64> {
            times[k].iter().map(|t| t * 1e9 / (STEPS * n * lanes) as f64).collect()
        };
        let flops = (ROUNDS * 16 * 2 * lanes) as f64;
        let peak: Vec<f64> = times[0].iter().map(|t| flops / t / 1e9).collect();
        let (w, p, o) = (per(1, lanes), per(2, lanes), per(3, 1));
        let counted = systems::flops_per_planet_step(n);
        let share = counted / median(&w) / median(&peak) * 100.0;
        println!(
            "N={n}: peak {:.1} GFlop/s ({:.0} %), +tan wide {:.2} ns ({:.0} %) = {share:.0} % of peak; no tan {:.2}; scalar +tan {:.1}; scalar/wide {:.2}",
            median(&peak),
            spread(&peak),
            median(&w),
            spread(&w),
            median(&p),
            median(&o),
            median(&o) / median(&w),
        );
    }
}
