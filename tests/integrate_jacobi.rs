//! The two coordinate sets against each other: different splittings of the same motion.

use abide::integrate::{
    Advance, Block, Coordinates, Scheme, State, Tangent, advance, angular_momentum, energy, from_map, to_map,
};

/// A star, an eccentric planet and a heavier one outside, not coplanar; listed outermost first on purpose.
fn pair(outer_gm: f64) -> State {
    let gm = vec![outer_gm, 3e-4];
    let pos = vec![[-1.5, 2.0, 0.2], [0.8, 0.3, -0.1]];
    let vel = [[-0.5, -0.4, 0.05], [-0.25, 0.95, 0.1]];
    let total = 1.0 + gm[0] + gm[1];
    let shift = [0, 1, 2].map(|k| (gm[0] * vel[0][k] + gm[1] * vel[1][k]) / total);
    let vel = vel.iter().map(|v: &[f64; 3]| [0, 1, 2].map(|k| v[k] - shift[k])).collect();
    State { star_gm: 1.0, gm, pos, vel }
}

fn tangent() -> Tangent {
    Tangent { pos: vec![[0.3, -0.2, 0.5], [1.0, 0.4, -0.6]], vel: vec![[0.7, 0.1, -0.3], [-0.2, 0.9, 0.8]] }
}

fn run(coordinates: Coordinates, scheme: &Scheme, state: &State, step: f64, steps: usize) -> Block {
    let mut block = Block::in_coordinates(coordinates, 1, 2);
    block.start(0, state, &tangent(), step, 1.0);
    to_map(&mut block, scheme);
    advance(Advance { block: &mut block, scheme, steps, tangent: true });
    from_map(&mut block, scheme);
    block
}

fn gap(a: &[[f64; 3]], b: &[[f64; 3]]) -> f64 {
    let square = |(x, y): (&f64, &f64)| (x - y) * (x - y);
    a.iter().flatten().zip(b.iter().flatten()).map(square).sum::<f64>().sqrt()
}

#[test]
fn states_and_tangents_come_back_from_jacobi_places() {
    let state = pair(0.4);
    let mut block = Block::in_coordinates(Coordinates::Jacobi, 1, 2);
    block.start(0, &state, &tangent(), 0.1, 1.0);
    let (back, moved) = (block.state(0), block.tangent(0));
    assert_eq!(back.gm, state.gm);
    assert!(gap(&back.pos, &state.pos) < 1e-15 && gap(&back.vel, &state.vel) < 1e-15);
    assert!(gap(&moved.pos, &tangent().pos) < 1e-15 && gap(&moved.vel, &tangent().vel) < 2e-15);
}

/// Both splittings of order (10,6,4) with short steps follow the same orbit and the same tangent vector.
#[test]
fn both_sets_reach_the_same_end() {
    let scheme = Scheme::named("(10,6,4)").unwrap();
    let state = pair(1e-3);
    let helio = run(Coordinates::Heliocentric, scheme, &state, 0.05, 400);
    let jacobi = run(Coordinates::Jacobi, scheme, &state, 0.05, 400);
    let (h, j) = (helio.state(0), jacobi.state(0));
    assert!(gap(&h.pos, &j.pos) < 3e-12 && gap(&h.vel, &j.vel) < 3e-12, "{}", gap(&h.pos, &j.pos));
    let (h, j) = (helio.tangent(0), jacobi.tangent(0));
    let size = gap(&h.pos, &[[0.0; 3]; 2]);
    assert!(
        gap(&h.pos, &j.pos) < 3e-12 * size && gap(&h.vel, &j.vel) < 3e-12 * size,
        "{}",
        gap(&h.pos, &j.pos)
    );
    for (i, k) in [(0, 1), (1, 0)] {
        let (a, b) = (helio.nearest_pair_au(i, k, 0), jacobi.nearest_pair_au(i, k, 0));
        assert!((a - b).abs() < 1e-3 * a, "{a} {b}");
    }
}

/// A companion nearly half as heavy as the star: only Jacobi coordinates keep the energy.
#[test]
fn a_heavy_companion_is_kept_in_jacobi_coordinates() {
    let scheme = Scheme::named("(8,4)").unwrap();
    let state = State { pos: vec![[-9.0, 12.0, 1.0], [0.8, 0.3, -0.1]], vel: pair(0.45).vel, ..pair(0.45) };
    let slow = state.vel[0].map(|x| 0.45 * x);
    let state = State { vel: vec![slow, state.vel[1]], ..state };
    let (before, spin) = (energy(&state), angular_momentum(&state));
    let end = run(Coordinates::Jacobi, scheme, &state, 0.25, 4000).state(0);
    let error = ((energy(&end) - before) / before).abs();
    assert!(error < 1e-10, "{error:e}");
    let after = angular_momentum(&end);
    assert!(gap(&[spin], &[after]) < 1e-12 * gap(&[spin], &[[0.0; 3]]));
}
