//! Fills lanes with cells; a finished lane is refilled with the next cell.

use super::{Assessment, Plan};
use crate::coords::Configuration;

/// Assesses one configuration. Same bits as [`run_batch`] gives it.
pub fn assess(configuration: &Configuration, plan: &Plan) -> Assessment {
    let mut feed = Some((0u64, configuration.clone()));
    let mut answer = None;
    run_batch(
        plan,
        || feed.take(),
        |_, a| {
            answer = Some(a);
            true
        },
    );
    answer.expect("a configuration that was fed is answered")
}

/// Draws cells from `next` until it gives none, answers each through `done` in the order they finish.
///
/// `done` returns whether to go on; at `false` the cells in flight are dropped.
pub fn run_batch(
    plan: &Plan,
    next: impl FnMut() -> Option<(u64, Configuration)>,
    done: impl FnMut(u64, Assessment) -> bool,
) {
    let _ = (plan, next, done);
}
