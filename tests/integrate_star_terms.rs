//! The star's terms beside Newton's pull, and massless bodies, in both coordinate sets.

use abide::integrate::{Advance, Block, Coordinates, Scheme, StarTerms, State, Tangent, advance, energy};

const BOTH: [Coordinates; 2] = [Coordinates::Heliocentric, Coordinates::Jacobi];

fn state() -> State {
    let vel = vec![[-0.25, 0.95, 0.1], [-0.5, -0.4, 0.05]];
    State { star_gm: 1.0, gm: vec![3e-4, 1e-3], pos: vec![[0.8, 0.3, -0.1], [-1.5, 2.0, 0.2]], vel }
}

fn tangent(planets: usize) -> Tangent {
    Tangent { pos: vec![[1.0, 0.4, -0.6]; planets], vel: vec![[-0.2, 0.9, 0.8]; planets] }
}

fn terms() -> StarTerms {
    let pole = [0.48, 0.6, 0.64];
    StarTerms { relativity: 3e-3, oblateness: 2e-3, pole, satellites: vec![1e-3, 0.0] }
}

fn run(
    coordinates: Coordinates,
    terms: &StarTerms,
    state: &State,
    tangent: &Tangent,
    step: f64,
    steps: usize,
) -> Block {
    let mut block = Block::in_coordinates(coordinates, 1, state.gm.len());
    block.start(0, state, tangent, step, 1.0);
    block.set_star_terms(0, terms);
    let scheme = Scheme::named("(8,6,4)").unwrap();
    advance(Advance { block: &mut block, scheme, steps, tangent: true });
    block
}

fn flat(state: &State) -> Vec<f64> {
    state.pos.iter().chain(&state.vel).flatten().copied().collect()
}

/// Energy with the terms' own potentials is kept; without any one of them it is not.
#[test]
fn each_force_is_the_slope_of_its_potential() {
    let start = state();
    for coordinates in BOTH {
        let end = run(coordinates, &terms(), &start, &tangent(2), 0.05, 2000).state(0);
        let whole = |s: &State, t: &StarTerms| energy(s) + t.energy(s);
        let change = |t: &StarTerms| ((whole(&end, t) - whole(&start, t)) / whole(&start, t)).abs();
        assert!(change(&terms()) < 1e-10, "{coordinates:?}: {:e}", change(&terms()));
        let lacking = [
            StarTerms { relativity: 0.0, ..terms() },
            StarTerms { oblateness: 0.0, ..terms() },
            StarTerms { satellites: vec![], ..terms() },
        ];
        for fewer in lacking {
            assert!(change(&fewer) > 1e-7, "{coordinates:?} without a term: {:e}", change(&fewer));
        }
    }
}

#[test]
fn both_coordinate_sets_move_alike() {
    let [a, b] = BOTH.map(|c| flat(&run(c, &terms(), &state(), &tangent(2), 0.02, 500).state(0)));
    for (a, b) in a.iter().zip(&b) {
        assert!((a - b).abs() < 1e-9, "{a} {b}");
    }
}

#[test]
fn tangent_is_the_derivative_with_the_terms() {
    for coordinates in BOTH {
        let nudge = 1e-6;
        let moved = |sign: f64| {
            let (mut s, t) = (state(), tangent(2));
            for p in 0..2 {
                for k in 0..3 {
                    s.pos[p][k] += sign * nudge * t.pos[p][k];
                    s.vel[p][k] += sign * nudge * t.vel[p][k];
                }
            }
            flat(&run(coordinates, &terms(), &s, &t, 0.1, 100).state(0))
        };
        let (plus, minus) = (moved(1.0), moved(-1.0));
        let exact = run(coordinates, &terms(), &state(), &tangent(2), 0.1, 100).tangent(0);
        let exact: Vec<f64> = exact.pos.iter().chain(&exact.vel).flatten().copied().collect();
        let size = exact.iter().map(|x| x * x).sum::<f64>().sqrt();
        for k in 0..exact.len() {
            let difference = (plus[k] - minus[k]) / (2.0 * nudge);
            assert!(
                (difference - exact[k]).abs() < 1e-7 * size,
                "{coordinates:?} {k}: {difference} {}",
                exact[k]
            );
        }
    }
}

/// The pericentre of a lone planet turns by 6πGM/(c²p) per orbit: here C = 6 (GM)²/c², so πC/(GM p).
#[test]
fn the_relativity_potential_turns_the_pericentre_as_it_should() {
    let (e, relativity) = (0.2f64, 1e-5);
    let start = State {
        star_gm: 1.0,
        gm: vec![0.0],
        pos: vec![[1.0 - e, 0.0, 0.0]],
        vel: vec![[0.0, ((1.0 + e) / (1.0 - e)).sqrt(), 0.0]],
    };
    let terms = StarTerms { relativity, ..StarTerms::default() };
    for coordinates in BOTH {
        let orbits = 200;
        let steps = 100 * orbits;
        let end =
            run(coordinates, &terms, &start, &tangent(1), std::f64::consts::TAU / 100.0, steps).state(0);
        let (r, v) = (end.pos[0], end.vel[0]);
        let distance = (r[0] * r[0] + r[1] * r[1]).sqrt();
        let (v2, rv) = (v[0] * v[0] + v[1] * v[1], r[0] * v[0] + r[1] * v[1]);
        let towards = [0, 1].map(|k| (v2 - 1.0 / distance) * r[k] - rv * v[k]);
        let turned = towards[1].atan2(towards[0]);
        let expected = std::f64::consts::PI * relativity / (1.0 - e * e) * f64::from(orbits as u32);
        assert!((turned / expected - 1.0).abs() < 1e-3, "{coordinates:?}: {turned} {expected}");
    }
}

/// A massless planet feels the others, moves nobody, and its place in the list changes no bit.
#[test]
fn massless_bodies_feel_but_do_not_pull() {
    let massive = state();
    let with = |at: usize| {
        let mut s = massive.clone();
        s.gm.insert(at, 0.0);
        s.pos.insert(at, [0.1, 1.3, 0.2]);
        s.vel.insert(at, [-0.85, 0.05, 0.1]);
        let mut block = Block::with_massless(Coordinates::Heliocentric, 1, 3, 1);
        block.start(0, &s, &tangent(3), 0.1, 1.0);
        advance(Advance { block: &mut block, scheme: Scheme::leapfrog(), steps: 1000, tangent: true });
        (block.state(0), block.pairs())
    };
    let alone = {
        let mut block = Block::with_massless(Coordinates::Heliocentric, 1, 2, 0);
        block.start(0, &massive, &tangent(2), 0.1, 1.0);
        advance(Advance { block: &mut block, scheme: Scheme::leapfrog(), steps: 1000, tangent: true });
        block.state(0)
    };
    let (first, pairs) = with(0);
    let (last, _) = with(2);
    assert_eq!(pairs, 3);
    assert_eq!(first.pos[0], last.pos[2]);
    // Without massless bodies the jump is not split in halves, so compare to round-off here.
    for k in 0..3 {
        assert!((first.pos[1][k] - alone.pos[0][k]).abs() < 1e-9);
        assert!((last.pos[1][k] - alone.pos[1][k]).abs() < 1e-9);
    }
    let counted =
        |massless: usize| Block::with_massless(Coordinates::Heliocentric, 1, 3 + massless, massless).pairs();
    // 3 among the massive ones, then 3 per massless one: linear.
    assert_eq!([0, 10, 1000].map(counted), [3, 33, 3003]);
}
