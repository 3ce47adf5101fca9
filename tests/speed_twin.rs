//! The textbook twin of the benches does the engine's work, and the engine's work is what it was.

#[path = "speed/counted.rs"]
mod counted;
#[path = "speed/systems.rs"]
mod systems;
#[path = "speed/textbook.rs"]
mod textbook;

use abide::integrate::{Advance, Scheme, advance};
use textbook::Textbook;

/// Two codes that share no line: the same places to 1e-10, the same direction of the tangent vector to 1e-9.
#[test]
fn the_textbook_twin_arrives_where_the_engine_does() {
    for n in [2, 3, 5, 8] {
        let (state, tangent) = systems::start(n, 0);
        let mut plain = Textbook::new(state, tangent, std::f64::consts::TAU / 20.0);
        plain.steps(400);
        let mut block = systems::block(n, 1, 20.0);
        advance(Advance { block: &mut block, scheme: Scheme::leapfrog(), steps: 400, tangent: true });
        let (state, tangent) = (block.state(0), block.tangent(0));
        let size: f64 = tangent.pos.iter().flatten().map(|x| x.abs()).fold(0.0, f64::max);
        for p in 0..n {
            for k in 0..3 {
                let gap = (state.pos[p][k] - plain.state().pos[p][k]).abs();
                let d_gap = (tangent.pos[p][k] - plain.tangent().pos[p][k]).abs() / size;
                assert!(gap < 1e-10 && d_gap < 1e-9, "{n} planets, planet {p} axis {k}: {gap:e} {d_gap:e}");
            }
        }
    }
}

/// Operations of a planet-step (a fused multiply-add counts two), pinned so that a kernel that becomes dearer turns this red.
#[test]
fn a_planet_step_costs_what_it_did() {
    let counted = |tangent| [2, 3, 5, 8].map(|n| counted::flops_per_planet_step(n, tangent).round() as u64);
    assert_eq!(counted(true), [468, 503, 575, 685]);
    assert_eq!(counted(false), [304, 327, 372, 441]);
}
