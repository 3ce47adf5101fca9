//! A lane of a block has the bits of a block of one lane, whatever the width and the kind of the block.

use abide::coords::{Elements, star_centred};
use abide::integrate::{Advance, Block, Coordinates, Scheme, StarTerms, State, Tangent};
use abide::lanes::{Level, WIDTH, run_one, run_wide_at};
use abide::system::Frame;

/// Neighbouring configurations: the eccentricities run so far up that some steps take the robust branch.
fn start(planets: usize, lane: usize) -> (State, Tangent) {
    let gm: Vec<f64> = (0..planets).map(|k| 1e-5 * (k + 1) as f64).collect();
    let elements: Vec<Elements> = (0..planets)
        .map(|k| Elements {
            semi_major_axis_au: 1.9f64.powi(k as i32) * (1.0 + 1e-3 * lane as f64),
            eccentricity: if k == 0 { 0.02 + 0.018 * lane as f64 } else { 0.05 },
            inclination: 0.02 * k as f64,
            ascending_node: 1.1 * k as f64,
            argument_of_pericentre: 0.7 * k as f64,
            mean_anomaly: 2.1 * k as f64 + 0.3,
        })
        .collect();
    let (pos, vel) = star_centred(Frame::Astrocentric, 1.0, &gm, &elements);
    let tangent = Tangent { pos: vec![[1.0, 0.3, -0.2]; planets], vel: vec![[0.1, -0.7, 0.4]; planets] };
    (State { star_gm: 1.0, gm, pos, vel }, tangent)
}

#[derive(Clone, Copy)]
struct Kind {
    coordinates: Coordinates,
    star_terms: bool,
    compensated: bool,
    tangent: bool,
}

fn block(kind: Kind, planets: usize, lanes: std::ops::Range<usize>) -> Block {
    let mut block = Block::in_coordinates(kind.coordinates, lanes.len(), planets);
    if kind.compensated {
        block = block.compensated();
    }
    for (at, lane) in lanes.enumerate() {
        let (state, tangent) = start(planets, lane);
        block.start(at, &state, &tangent, 0.3 + 1e-3 * lane as f64, 1.0);
        if kind.star_terms {
            let terms = StarTerms { relativity: 1e-7, oblateness: 1e-6, ..StarTerms::default() };
            block.set_star_terms(at, &terms);
        }
    }
    block
}

fn bits(block: &Block, lane: usize) -> Vec<u64> {
    let (state, tangent) = (block.state(lane), block.tangent(lane));
    let vectors = [state.pos, state.vel, tangent.pos, tangent.vel];
    let growth = block.growth(lane);
    let mut numbers: Vec<f64> = vectors.iter().flatten().flatten().copied().collect();
    numbers.extend([growth.log, growth.mean_y, growth.samples as f64]);
    for i in 0..block.planets() {
        let (near, far) = block.star_distances_au(i, lane);
        numbers.extend([near, far]);
        numbers.extend((i + 1..block.planets()).map(|j| block.nearest_pair_au(i, j, lane)));
    }
    numbers.into_iter().map(f64::to_bits).collect()
}

#[test]
fn every_width_gives_the_bits_of_one_lane() {
    let plain =
        Kind { coordinates: Coordinates::Heliocentric, star_terms: false, compensated: false, tangent: true };
    let kinds = [
        plain,
        Kind { tangent: false, ..plain },
        Kind { star_terms: true, ..plain },
        Kind { compensated: true, ..plain },
        Kind { coordinates: Coordinates::Jacobi, ..plain },
    ];
    let scheme = Scheme::leapfrog();
    let mut compared = 0;
    for kind in kinds {
        for planets in 1..=5 {
            let alone: Vec<Vec<u64>> = (0..6 * WIDTH)
                .map(|lane| {
                    let mut one = block(kind, planets, lane..lane + 1);
                    run_one(Advance { block: &mut one, scheme, steps: 40, tangent: kind.tangent });
                    bits(&one, 0)
                })
                .collect();
            for level in Level::available() {
                for width in [WIDTH, 2 * WIDTH, 3 * WIDTH, 6 * WIDTH] {
                    let mut wide = block(kind, planets, 0..width);
                    run_wide_at(
                        level,
                        Advance { block: &mut wide, scheme, steps: 40, tangent: kind.tangent },
                    );
                    for (lane, expected) in alone[..width].iter().enumerate() {
                        let place = format!("{level:?}, {planets} planets, lane {lane} of {width}");
                        assert!(bits(&wide, lane) == *expected, "{place}");
                        compared += 1;
                    }
                }
            }
        }
    }
    assert_eq!(compared, kinds.len() * 5 * Level::available().len() * 12 * WIDTH);
}
