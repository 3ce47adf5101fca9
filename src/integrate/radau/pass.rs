//! Whole passages of a heliocentric state: for an encounter, or a plain span.

use std::ops::ControlFlow;

use super::super::forces::Forces;
use super::super::{State, Tangent};
use super::engine::{Engine, RadauWork, Stop};
use super::error::RadauError;
use super::event::{Event, EventKind, Watch};

/// When a passage ends.
#[derive(Clone, Debug, PartialEq)]
pub struct Until {
    /// At the latest, in the same time as `from_day`; may lie before it.
    pub day: f64,
    /// Two bodies (0 is the star, k the planet k − 1) and the distance, au, at which they count as apart again.
    pub apart: Option<(usize, usize, f64)>,
    /// Radii, the star first; empty: nothing collides.
    pub radii_au: Vec<f64>,
    /// Distance from the star at which a planet has escaped.
    pub escape_au: Option<f64>,
}

/// Why a passage ended.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Ending {
    /// The pair is apart again.
    Apart,
    /// Two planets, counted from 0, touched.
    Collision { first: usize, second: usize },
    /// A planet, counted from 0, touched the star.
    Star { planet: usize },
    /// A planet, counted from 0, has escaped.
    Escape { planet: usize },
    /// The time is up.
    Time,
}

/// A configuration after a passage.
#[derive(Clone, Debug, PartialEq)]
pub struct Outcome {
    pub state: State,
    /// In the scale of the one handed in.
    pub tangent: Option<Tangent>,
    pub day: f64,
    pub ending: Ending,
    /// The closest approach of any two planets, located to rounding; none when no distance passed a minimum.
    pub nearest: Option<Event>,
    /// As [`Engine::energy_error`], over the passage.
    pub energy_error: Option<f64>,
    pub work: RadauWork,
}

/// Carries a state, and a tangent vector with it, until what `until` says.
///
/// A pair that is already apart and moving further apart, bodies that overlap and planets beyond the escape distance
/// that recede end the passage before it begins. Errors: those of [`Engine::advance`] and [`Engine::from_state`].
pub fn pass(
    state: &State,
    tangent: Option<&Tangent>,
    forces: &Forces,
    from_day: f64,
    until: &Until,
    tolerance: f64,
) -> Result<Outcome, RadauError> {
    let tangents: Vec<Tangent> = tangent.into_iter().cloned().collect();
    let mut engine = Engine::from_state(state, &tangents, forces, tolerance)?;
    let watch = Watch {
        approach_au: f64::INFINITY,
        radii_au: until.radii_au.clone(),
        escape_au: until.escape_au,
        apart: until.apart,
        near: Vec::new(),
    };
    let forward = until.day >= from_day;
    let mut nearest: Option<Event> = None;
    let ending = match ended_at_start(&engine, state.gm.len(), &watch, forward) {
        Some(ending) => ending,
        None => {
            let stop = engine.advance(until.day - from_day, &watch, |event| {
                keep_nearest(&mut nearest, event);
                if ends(event, &watch) { ControlFlow::Break(()) } else { ControlFlow::Continue(()) }
            })?;
            match stop {
                Stop::Time => Ending::Time,
                Stop::At(event) => ending_of(&event),
            }
        }
    };
    let day = if ending == Ending::Time { until.day } else { from_day + engine.day() };
    Ok(Outcome {
        state: engine.state(),
        tangent: engine.tangent(0),
        day,
        ending,
        nearest,
        energy_error: engine.energy_error(),
        work: engine.work(),
    })
}

/// Carries a state, and a tangent vector with it, through a span of days of either sign, past everything.
///
/// Errors: those of [`Engine::advance`] and [`Engine::from_state`].
pub fn advance(
    state: &State,
    tangent: Option<&Tangent>,
    forces: &Forces,
    days: f64,
    tolerance: f64,
) -> Result<Outcome, RadauError> {
    let tangents: Vec<Tangent> = tangent.into_iter().cloned().collect();
    let mut engine = Engine::from_state(state, &tangents, forces, tolerance)?;
    engine.advance(days, &Watch::default(), |_| ControlFlow::Continue(()))?;
    Ok(Outcome {
        state: engine.state(),
        tangent: engine.tangent(0),
        day: days,
        ending: Ending::Time,
        nearest: None,
        energy_error: engine.energy_error(),
        work: engine.work(),
    })
}

/// An approach of the watched pair that stays outside its distance ends the passage too: the pair is apart and
/// begins to recede.
fn ends(event: &Event, watch: &Watch) -> bool {
    event.kind != EventKind::Approach
        || watch.apart.is_some_and(|(a, b, au)| {
            (a.min(b), a.max(b)) == (event.first, event.second) && event.distance_au >= au
        })
}

fn keep_nearest(nearest: &mut Option<Event>, event: &Event) {
    let nearer = nearest.is_none_or(|old| event.distance_au < old.distance_au);
    if event.kind == EventKind::Approach && event.first > 0 && nearer {
        *nearest = Some(*event);
    }
}

fn ending_of(event: &Event) -> Ending {
    match event.kind {
        EventKind::Approach | EventKind::Apart => Ending::Apart,
        EventKind::Escape => Ending::Escape { planet: event.second - 1 },
        EventKind::Collision if event.first == 0 => Ending::Star { planet: event.second - 1 },
        // Nearness beyond contact is not watched for in a passage.
        EventKind::Collision | EventKind::Near => {
            Ending::Collision { first: event.first - 1, second: event.second - 1 }
        }
    }
}

/// What already holds before the first step.
fn ended_at_start(engine: &Engine, planets: usize, watch: &Watch, forward: bool) -> Option<Ending> {
    let recedes = |rate: f64| if forward { rate >= 0.0 } else { rate <= 0.0 };
    for first in 0..=planets {
        for second in first + 1..=planets {
            let (distance, rate) = engine.gap(first, second);
            if !watch.radii_au.is_empty() && distance <= watch.radii_au[first] + watch.radii_au[second] {
                let event = EventKind::Collision;
                return Some(ending_of(&Event {
                    kind: event,
                    day: 0.0,
                    first,
                    second,
                    distance_au: distance,
                    speed_au_day: 0.0,
                }));
            }
            if first == 0 && recedes(rate) && watch.escape_au.is_some_and(|au| distance >= au) {
                return Some(Ending::Escape { planet: second - 1 });
            }
            let watched = watch.apart.filter(|&(a, b, _)| (a.min(b), a.max(b)) == (first, second));
            if recedes(rate) && watched.is_some_and(|(_, _, au)| distance >= au) {
                return Some(Ending::Apart);
            }
        }
    }
    None
}
