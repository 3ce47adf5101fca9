//! Tangent vectors and MEGNO against 128-bit integrations (tests/truth/variational-reference.csv).

mod truth_support;

use truth_support::tangent::{Growth, Inertial, Mark, Problem, follow};

fn relative_gap(found: &[f64], stated: &[f64]) -> f64 {
    let square = |x: &mut dyn Iterator<Item = f64>| x.map(|v| v * v).sum::<f64>().sqrt();
    square(&mut found.iter().zip(stated).map(|(a, b)| a - b)) / square(&mut stated.iter().copied())
}

fn flat(bodies: &[Inertial], which: std::ops::Range<usize>) -> Vec<f64> {
    bodies.iter().flat_map(|b| b[which.clone()].iter().flatten().copied().collect::<Vec<_>>()).collect()
}

#[test]
fn measure() {
    for (name, years, per_year) in [
        ("kepler-two-body", 1000.0, 128),
        ("compact-two-planet-chaotic", 200.0, 128),
        ("cr3bp-regular", 2000.0, 32),
        ("cr3bp-chaotic-2to1", 2000.0, 32),
        ("cr3bp-chaotic-strong", 1000.0, 64),
    ] {
        for factor in [1, 2, 4] {
            let problem = Problem::read(name);
            let n = per_year * factor;
            let mut growth = Growth::new(1.0 / f64::from(n), problem.last_only);
            let marks = problem.marks();
            follow(&problem, n, years, |count, bodies| {
                let Some(Mark { time, log, y, mean_y }) = growth.see(count, bodies) else { return };
                let Some(stated) = marks.iter().find(|m| m.time == time) else { return };
                let truth: Vec<Inertial> = (0..bodies.len()).map(|b| problem.stated(time, b).unwrap()).collect();
                println!(
                    "{name} {n} {time} pos {:.1e} tangent {:.1e} exp(-L) {:.1e} L {:.1e} Y {:.1e} <Y> {:.1e}",
                    relative_gap(&flat(bodies, 0..1), &flat(&truth, 0..1)),
                    relative_gap(&flat(bodies, 2..4), &flat(&truth, 2..4)),
                    stated.log.exp(),
                    log - stated.log,
                    y - stated.y,
                    mean_y - stated.mean_y
                );
            });
        }
    }
}
