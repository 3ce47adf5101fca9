//! Work counters: how many operations a kick is made of.

#[path = "speed/counted.rs"]
mod counted;
#[path = "speed/systems.rs"]
mod systems;

use abide::integrate::{Beside, kick};
use abide::kepler::Body;
use counted::{Counted, Work};

fn bodies(n: usize) -> Vec<Body<Counted>> {
    let body = |k: usize| {
        let mut body = Body::<Counted>::still();
        let angle = 1.7 * k as f64;
        body.gm = Counted(1e-4 * (k + 1) as f64);
        body.pos = [angle.cos(), angle.sin(), 0.1].map(|x| Counted(x * (k + 1) as f64));
        body.vel = [-angle.sin(), angle.cos(), 0.0].map(Counted);
        body.d_pos = [0.3, -0.2, 0.1 * k as f64].map(Counted);
        body.d_vel = [0.1, 0.4, -0.5].map(Counted);
        body
    };
    (0..n).map(body).collect()
}

fn work_of<const TANGENT: bool, const WATCH: bool>(n: usize) -> Work {
    let (mut bodies, mut pairs) = (bodies(n), vec![Counted(f64::MAX); n * n.saturating_sub(1) / 2]);
    let (star, step, window) = (Counted(1.0), Counted(0.1), Counted(0.05));
    counted::work_of(|| {
        kick::<Counted, TANGENT, WATCH, false>(
            &mut bodies,
            n,
            &mut pairs,
            star,
            &Beside::none(),
            step,
            window,
        );
    })
}

/// What one body and one pair cost, and what is done once: 1/M and its product with the time.
fn of_bodies_and_pairs(n: usize, body: Work, pair: Work) -> Work {
    let pairs = n * n.saturating_sub(1) / 2;
    let sum = |part: fn(&Work) -> usize| n * part(&body) + pairs * part(&pair);
    Work {
        add: sum(|w| w.add),
        mul: 1 + sum(|w| w.mul),
        fused: sum(|w| w.fused),
        div: 1 + sum(|w| w.div),
        sqrt: sum(|w| w.sqrt),
    }
}

/// The direct sum is quadratic in the number of bodies, each pair is computed once: one root and one division per pair,
/// N (N − 1)/2 of them. The counts are pinned, so that a kick that becomes dearer turns this red.
#[test]
fn a_kick_costs_one_root_per_pair() {
    let body = Work { add: 3, mul: 1, fused: 3, div: 0, sqrt: 0 };
    let pair = Work { add: 3, mul: 5, fused: 8, div: 1, sqrt: 1 };
    for n in 0..=12 {
        assert_eq!(work_of::<false, false>(n), of_bodies_and_pairs(n, body, pair), "{n} bodies");
    }
}

/// The tangent vector shares distance, root and division with the kick itself.
#[test]
fn the_tangent_adds_no_root_and_no_division() {
    let body = Work { add: 6, mul: 1, fused: 6, div: 0, sqrt: 0 };
    let pair = Work { add: 6, mul: 8, fused: 19, div: 1, sqrt: 1 };
    for n in 0..=12 {
        assert_eq!(work_of::<true, false>(n), of_bodies_and_pairs(n, body, pair), "{n} bodies");
    }
}

/// The watch on close approaches costs one more division per pair.
#[test]
fn the_watch_adds_one_division_per_pair() {
    let body = Work { add: 6, mul: 1, fused: 6, div: 0, sqrt: 0 };
    let pair = Work { add: 12, mul: 11, fused: 24, div: 2, sqrt: 1 };
    for n in 0..=12 {
        assert_eq!(work_of::<true, true>(n), of_bodies_and_pairs(n, body, pair), "{n} bodies");
    }
}

/// With a number type of its own the kick does what it does with plain numbers: third law, so momentum is kept.
#[test]
fn a_counted_kick_keeps_the_momentum() {
    let (mut bodies, mut pairs) = (bodies(7), vec![Counted(f64::MAX); 21]);
    let momentum =
        |bodies: &[Body<Counted>]| [0, 1, 2].map(|k| bodies.iter().map(|b| b.gm.0 * b.vel[k].0).sum::<f64>());
    let before = momentum(&bodies);
    let (star, step, window) = (Counted(1.0), Counted(0.1), Counted(0.05));
    kick::<Counted, true, true, false>(&mut bodies, 7, &mut pairs, star, &Beside::none(), step, window);
    for (a, b) in before.iter().zip(momentum(&bodies)) {
        assert!((a - b).abs() < 1e-17, "{a} {b}");
    }
}
