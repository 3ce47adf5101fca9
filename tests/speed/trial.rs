mod counted; mod measure; mod systems;
use abide::integrate::{Advance, Block, Scheme};
use abide::lanes::{Job, Level, Real, WIDTH, run_wide_at};
use measure::{interleave, median, ratios, spread};
use std::hint::black_box;
struct Peak<const CHAINS: usize>;
const ROUNDS: usize = 4000;
impl<const CHAINS: usize> Job for Peak<CHAINS> {
    type Output = f64;
    #[inline(always)]
    fn run<R: Real>(self) -> f64 {
        let mut chains = [R::splat(0.0); CHAINS];
        for (k, c) in chains.iter_mut().enumerate() { *c = R::splat(1.0 + k as f64); }
        let (a, b) = (R::splat(black_box(0.999_999)), R::splat(black_box(1e-7)));
        for _ in 0..ROUNDS { for c in chains.iter_mut() { *c = c.mul_add(a, b); } }
        let mut total = R::splat(0.0);
        for c in chains { total = total + c; }
        let mut out = [0.0; WIDTH];
        total.store(&mut out);
        out.iter().sum()
    }
}
const STEPS: usize = 400;
fn steps(level: Level, block: &mut Block) {
    run_wide_at(level, Advance { block, scheme: Scheme::leapfrog(), steps: STEPS, tangent: true });
    (0..block.width()).for_each(|lane| block.rescale(lane));
}
fn main() {
    let level = Level::Avx512;
    for n in [2, 3, 5] {
    let mut one = systems::block(n, 8, 20.0);
    let mut two = systems::block(n, if n == 2 { 16 } else { 8 }, 20.0);
    let mut p = || { black_box(run_wide_at(level, Peak::<12>)); };
    let mut a = || steps(level, &mut one);
    let mut b = || steps(level, &mut two);
    let times = interleave(200, &mut [&mut p, &mut a, &mut b]);
    let flops = counted::flops_per_planet_step(n, true);
    let peak = (12 * ROUNDS * 2 * 8) as f64;
    for (k, w) in [(1, 8), (2, if n == 2 { 16 } else { 8 })] {
        let ps = (STEPS * n * w) as f64;
        let share: Vec<f64> = ratios(&times[0], &times[k]).iter().map(|r| 100.0 * r * flops * ps / peak).collect();
        println!("N {n} width {w}: {:.2} ns spread {:.1} share {:.1} % of peak {:.1} GFlop/s", 1e9 * median(&times[k]) / ps, spread(&times[k]), median(&share), peak / median(&times[0]) / 1e9);
    }
    }
}
