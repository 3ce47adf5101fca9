//! Every splitting: its coefficients against the table, one run against many, its tangent map, its samples, the star's terms.

mod shelf;
mod truth_support;

use abide::integrate::{Advance, Block, Coordinates, Scheme, StarTerms, State, Tangent, advance};
use shelf::{gap, placed, state};
use truth_support::table;

const BOTH: [Coordinates; 2] = [Coordinates::Heliocentric, Coordinates::Jacobi];

/// Two planets, not coplanar, that pull on each other.
fn start() -> State {
    let mut bodies = [placed(1.0, 0.1, 0.4, 0.0), placed(1.8, 0.05, 2.3, 1.1)];
    for (v, tilt) in [(0, 0.1f64), (1, -0.05)] {
        let (pos, vel) = &mut bodies[v];
        for v in [pos, vel] {
            *v = [v[0], v[1] * tilt.cos(), v[1] * tilt.sin()];
        }
    }
    state(1.0, &[3e-4, 1e-3], &bodies)
}

fn tangent() -> Tangent {
    Tangent { pos: vec![[1.0, 0.4, -0.6], [0.3, -0.2, 0.5]], vel: vec![[-0.2, 0.9, 0.8], [0.7, 0.1, -0.3]] }
}

fn terms() -> StarTerms {
    StarTerms { relativity: 3e-3, oblateness: 2e-3, pole: [0.48, 0.6, 0.64], satellites: vec![1e-3, 0.0] }
}

/// The map itself, from states in its own variables: `calls` runs of `steps` steps.
fn run(
    coordinates: Coordinates,
    scheme: &Scheme,
    start: &State,
    step: f64,
    [calls, steps]: [usize; 2],
) -> Block {
    let mut block = Block::in_coordinates(coordinates, 1, start.gm.len());
    block.start(0, start, &tangent(), step, 1.0);
    for _ in 0..calls {
        advance(Advance { block: &mut block, scheme, steps, tangent: true });
    }
    block
}

/// tests/truth/splitting-coefficients.csv: every coefficient to the last bit, every scheme there and none beside.
#[test]
fn coefficients_are_those_of_the_table() {
    let rows = table("splitting-coefficients.csv");
    let mut compared = 0;
    for scheme in Scheme::all() {
        let (kind, order) = match scheme.name.strip_suffix(" kick-first") {
            Some(order) => ("BAB", order),
            None => ("ABA", scheme.name),
        };
        let mine = rows.iter().filter(|r| r.text("kind") == kind && r.text("generalised_order") == order);
        for row in mine {
            let (list, index) = row.text("coefficient").split_at(1);
            let stated = row.number("value").unwrap();
            assert_eq!(row.number("stages"), Some(scheme.stages() as f64), "{}", scheme.name);
            let list = match list {
                "a" => &scheme.a,
                "b" => &scheme.b,
                _ => continue,
            };
            let index: usize = index.parse().unwrap();
            assert_eq!(list[index - 1].to_bits(), stated.to_bits(), "{} {index}", scheme.name);
            assert_eq!(list[list.len() - index], list[index - 1], "{} is symmetric", scheme.name);
            compared += 1;
        }
    }
    assert_eq!(compared, rows.iter().filter(|r| r.text("coefficient") != "corrector_c").count());
}

/// What the commutator {{A,B},B} is left with, Σ bᵢ cᵢ tᵢ − 1/6, is the table's `corrector_c`.
#[test]
fn the_second_order_in_the_perturbation_is_that_of_the_table() {
    let rows = table("splitting-coefficients.csv");
    let mut compared = 0;
    for row in rows.iter().filter(|r| r.text("coefficient") == "corrector_c") {
        let suffix = if row.text("kind") == "BAB" { " kick-first" } else { "" };
        let scheme = Scheme::named(&format!("{}{suffix}", row.text("generalised_order"))).unwrap();
        let before = usize::from(!scheme.is_kick_first());
        let left: f64 = (0..scheme.b.len())
            .map(|i| {
                let drifted: f64 = scheme.a[..i + before].iter().sum();
                let kicked = 0.5 * scheme.b[i] + scheme.b[i + 1..].iter().sum::<f64>();
                scheme.b[i] * drifted * kicked
            })
            .sum();
        let stated = row.number("value").unwrap();
        assert!((left - 1.0 / 6.0 - stated).abs() < 1e-15, "{}: {left} {stated}", scheme.name);
        compared += 1;
    }
    assert_eq!(compared, 12);
}

/// Steps in one go merge what two steps share; with pauses nothing is merged. Both are the same map to rounding.
#[test]
fn pauses_change_nothing() {
    for coordinates in BOTH {
        for scheme in Scheme::all() {
            let whole = run(coordinates, scheme, &start(), 0.1, [1, 400]);
            let pieces = run(coordinates, scheme, &start(), 0.1, [100, 4]);
            let found = gap(&whole.state(0), &pieces.state(0));
            assert!(found < 1e-12, "{} {coordinates:?}: {found:e}", scheme.name);
            let (one, many) = (whole.growth(0), pieces.growth(0));
            assert_eq!((one.samples, many.samples), (100, 100), "{}", scheme.name);
            assert!((one.y - many.y).abs() < 1e-10, "{}: {} {}", scheme.name, one.y, many.y);
        }
    }
}

fn flat(pos: &[[f64; 3]], vel: &[[f64; 3]]) -> Vec<f64> {
    pos.iter().chain(vel).flatten().copied().collect()
}

/// The tangent vector is the derivative of the very same map, whatever the scheme.
#[test]
fn tangent_is_the_derivative_of_each_map() {
    let nudge = 1e-6;
    for coordinates in BOTH {
        for scheme in Scheme::all() {
            let moved = |sign: f64| {
                let (mut s, t) = (start(), tangent());
                for p in 0..2 {
                    for k in 0..3 {
                        s.pos[p][k] += sign * nudge * t.pos[p][k];
                        s.vel[p][k] += sign * nudge * t.vel[p][k];
                    }
                }
                let end = run(coordinates, scheme, &s, 0.3, [3, 20]).state(0);
                flat(&end.pos, &end.vel)
            };
            let (plus, minus) = (moved(1.0), moved(-1.0));
            let exact = run(coordinates, scheme, &start(), 0.3, [3, 20]).tangent(0);
            let exact = flat(&exact.pos, &exact.vel);
            let size = exact.iter().map(|x| x * x).sum::<f64>().sqrt();
            for k in 0..exact.len() {
                let difference = (plus[k] - minus[k]) / (2.0 * nudge);
                let off = (difference - exact[k]).abs() / size;
                assert!(off < 1e-7, "{} {coordinates:?} {k}: {off:e}", scheme.name);
            }
        }
    }
}

/// MEGNO of a regular orbit does not depend on the scheme that carries it, but for where in its step the first sample is
/// taken, on which the slow logarithm rests: 0.03 of Y here between the earliest and the latest.
#[test]
fn every_scheme_measures_the_same_growth() {
    for coordinates in BOTH {
        let of = |scheme: &Scheme| run(coordinates, scheme, &start(), 0.1, [25, 400]).growth(0);
        let best = of(Scheme::named("(10,6,4)").unwrap());
        for scheme in Scheme::all() {
            let found = of(scheme);
            assert_eq!(found.samples, best.samples);
            let label = format!("{} {coordinates:?}: {found:?} {best:?}", scheme.name);
            assert!((found.y - best.y).abs() < 0.05 && (found.mean_y - best.mean_y).abs() < 0.01, "{label}");
        }
    }
}

/// With the star's terms, which do not commute with the jump, a (2n,2) scheme still converges with the square of the step.
#[test]
fn the_stars_terms_keep_the_order() {
    let end = |coordinates, scheme: &Scheme, per_unit: usize| {
        let mut block = Block::in_coordinates(coordinates, 1, 2);
        block.start(0, &start(), &tangent(), 1.0 / per_unit as f64, 1.0);
        block.set_star_terms(0, &terms());
        advance(Advance { block: &mut block, scheme, steps: 24 * per_unit, tangent: true });
        block.state(0)
    };
    let mut compared = 0;
    for coordinates in BOTH {
        let truth = end(coordinates, Scheme::named("(8,6,4)").unwrap(), 128);
        for scheme in Scheme::all().iter().filter(|s| s.least_order() == 2) {
            let [coarse, fine] = [32, 64].map(|per_unit| gap(&end(coordinates, scheme, per_unit), &truth));
            let found = coarse / fine;
            assert!(
                (found - 4.0).abs() < 0.1,
                "{} {coordinates:?}: {coarse:e} {fine:e} {found}",
                scheme.name
            );
            compared += 1;
        }
    }
    assert_eq!(compared, 24);
}
