//! The integrator that runs: state, step control, events, accounts.

use std::ops::ControlFlow;

use super::super::forces::{Cast, Forces};
use super::super::{State, Tangent};
use super::balance::{Sum, energy, kinetic};
use super::bodies::{Bodies, from_phase, restore_lows, state_of, to_phase};
use super::control::{Control, first_step};
use super::error::RadauError;
use super::event::{Candidate, Event, EventKind, Watch};
use super::phase::{Phase, dot};
use super::step::{Physics, Step};

/// What a step may err by, relative to the velocity change over it, when nothing else is asked.
///
/// Measured on the giant planets, 18 steps per turn of Jupiter: the energy walks by 2e-14 in 2e5 years, and its mean rate over
/// starts that differ in a far digit is (-3.5 ± 2.7)e-20 per step (six of them, 2e5 years) and (6.5 ± 4.5)e-20 (24, 2e4 years): none; it was 2.6e-19 before the first weights
/// carried what rounding left of them. At 1e-20 there is (10 ± 4)e-20; at 1e-19 (-23 ± 5)e-20, no less with tighter sweeps: what the steps themselves err by.
pub const TOLERANCE: f64 = 1e-21;
/// A step that does not settle is tried again with this part of it, so many times in a row.
const PART: f64 = 0.3;
const MOST_TRIES: u32 = 24;
/// Below this part of the kinetic energy the total no longer is a measure.
const VANISHING: f64 = 1e-6;
/// Newton steps that place an event.
const PLACINGS: u32 = 6;

/// Limits on the work.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct StepLimits {
    pub smallest_day: f64,
    pub most_steps: u64,
}

impl Default for StepLimits {
    fn default() -> StepLimits {
        StepLimits { smallest_day: 1e-13, most_steps: u64::MAX }
    }
}

/// What a run has cost.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct RadauWork {
    /// Steps taken.
    pub steps: u64,
    /// Steps tried and done again, shorter.
    pub rejected: u64,
    pub sweeps: u64,
    /// Evaluations of all forces.
    pub evaluations: u64,
    /// Pairs computed in them.
    pub pairs: u64,
}

/// How far [`Engine::advance`] came.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Stop {
    /// The time asked for is reached.
    Time,
    /// The caller stopped at this event; the state is at it.
    At(Event),
}

/// A 15th-order integrator on its way: one configuration and its tangent vectors.
///
/// Times are days from the start of the run; they may fall as well as rise.
#[derive(Clone, Debug)]
pub struct Engine {
    pub limits: StepLimits,
    physics: Physics,
    tangents: usize,
    control: Control,
    phase: Phase,
    next: Phase,
    day: Sum,
    step: Step,
    /// Length of the next step, > 0, day.
    wish: f64,
    fresh: bool,
    work: RadauWork,
    energy_start: f64,
    energy_scale: f64,
    /// Energy that the terms beside Newton's have brought in.
    brought: Sum,
    last_event: Option<Event>,
}

impl Engine {
    /// Starts from heliocentric positions and barycentric velocities.
    ///
    /// `tolerance` as [`TOLERANCE`]. Errors: `Shape`, `NotFinite`.
    pub fn from_state(
        state: &State,
        tangents: &[Tangent],
        forces: &Forces,
        tolerance: f64,
    ) -> Result<Engine, RadauError> {
        let bodies = Bodies::from_state(state);
        let tangents: Vec<Bodies> = tangents.iter().map(|tangent| bodies.displaced(tangent)).collect();
        let mut engine = Engine::from_bodies(&bodies, &tangents, forces, tolerance)?;
        restore_lows(&mut engine.phase, state);
        engine.start_account();
        Ok(engine)
    }

    /// Starts from inertial states, the star first; displacements need not keep the barycentre.
    ///
    /// Errors: `Shape`, `NotFinite`.
    pub fn from_bodies(
        bodies: &Bodies,
        tangents: &[Bodies],
        forces: &Forces,
        tolerance: f64,
    ) -> Result<Engine, RadauError> {
        for set in std::iter::once(bodies).chain(tangents) {
            let (found, _) = set.shape();
            let (_, needed) = bodies.shape();
            if found != needed {
                return Err(RadauError::Shape { bodies: bodies.gm.len(), found, needed });
            }
        }
        let phase = to_phase(bodies, tangents);
        if !phase.is_finite() || bodies.gm.iter().any(|gm| !gm.is_finite()) {
            return Err(RadauError::NotFinite { day: 0.0 });
        }
        let len = phase.at.len();
        let cast = Cast::new(bodies.gm.clone());
        let mut engine = Engine {
            limits: StepLimits::default(),
            tangents: tangents.len(),
            control: Control::new(tolerance),
            next: Phase::zero(len),
            day: Sum::default(),
            step: Step::new(len),
            wish: first_step(&phase, &cast),
            fresh: true,
            work: RadauWork::default(),
            energy_start: 0.0,
            energy_scale: 0.0,
            brought: Sum::default(),
            last_event: None,
            physics: Physics { forces: forces.clone(), cast },
            phase,
        };
        engine.start_account();
        Ok(engine)
    }

    fn start_account(&mut self) {
        let kinetic = kinetic(&self.phase, &self.physics.cast).value();
        self.energy_start = energy(&self.phase, &self.physics.cast).value();
        let size = self.energy_start.abs();
        self.energy_scale = if size > VANISHING * kinetic { size } else { kinetic };
    }

    /// Time from the start of the run, day.
    pub fn day(&self) -> f64 {
        self.day.value()
    }

    pub fn state(&self) -> State {
        state_of(&self.phase, &self.physics.cast.gm)
    }

    pub fn bodies(&self) -> Bodies {
        from_phase(&self.phase, &self.physics.cast.gm, 0)
    }

    /// Tangent vector `index`; none where there are fewer.
    pub fn tangent(&self, index: usize) -> Option<Tangent> {
        self.displacement(index).map(|bodies| bodies.to_tangent())
    }

    /// The same as a displacement of the inertial states.
    pub fn displacement(&self, index: usize) -> Option<Bodies> {
        (index < self.tangents).then(|| from_phase(&self.phase, &self.physics.cast.gm, index + 1))
    }

    /// Relative energy error so far: (E − E₀ − work of the terms beside Newton's)/|E₀|, E kinetic and Newtonian.
    ///
    /// Where E₀ all but vanishes (a parabola), relative to the kinetic energy at the start. None when all planets are
    /// massless.
    pub fn energy_error(&self) -> Option<f64> {
        let mut change = energy(&self.phase, &self.physics.cast);
        change.add(-self.energy_start);
        change.add(-self.brought.value());
        (self.energy_scale > 0.0).then(|| change.value() / self.energy_scale)
    }

    pub fn work(&self) -> RadauWork {
        RadauWork { evaluations: self.step.evaluations, pairs: self.step.pairs, ..self.work }
    }

    /// Distance and its half rate (d·v) of two bodies now.
    pub(super) fn gap(&self, first: usize, second: usize) -> (f64, f64) {
        let (d, v) = self.phase.apart(first, second);
        (dot(&d, &d).sqrt(), dot(&d, &v))
    }

    /// Runs to `to_day` after the start of the run, or until `on_event` breaks off at an event of the watch.
    ///
    /// Errors: `StepTooSmall`, `TooManySweeps`, `TooManySteps`, `NotFinite`; the state is then that of the last good
    /// step.
    pub fn advance(
        &mut self,
        to_day: f64,
        watch: &Watch,
        mut on_event: impl FnMut(&Event) -> ControlFlow<()>,
    ) -> Result<Stop, RadauError> {
        loop {
            let mut rest = Sum::default();
            rest.add(to_day);
            rest.add(-self.day.value());
            let rest = rest.value();
            if rest == 0.0 {
                return Ok(Stop::Time);
            }
            self.attempt(rest)?;
            let arrived = self.step.length == rest;
            if !watch.is_blind() {
                let seen = watch.search(&self.physics.cast, &mut self.step, &self.phase, &self.next);
                if let Some(event) = self.report(&seen, &mut on_event)? {
                    self.commit();
                    self.last_event = Some(event);
                    return Ok(Stop::At(event));
                }
            }
            self.commit();
            if arrived {
                self.day = Sum::from(to_day);
            }
        }
    }

    /// Solves a step over at most `rest`; the end is in `next` and the wish for the step after it is set.
    fn attempt(&mut self, rest: f64) -> Result<(), RadauError> {
        self.check_limits()?;
        self.step.begin(&self.physics, &self.phase);
        let mut length = self.clipped(rest);
        if self.fresh {
            self.step.length = length;
            self.step.forget();
            self.fresh = false;
        } else {
            self.step.predict(length);
        }
        let mut unsettled = 0;
        loop {
            let settling = self.step.solve(&self.physics, &self.phase);
            self.work.sweeps += u64::from(settling.sweeps);
            let (factor, good) = if settling.settled {
                unsettled = 0;
                self.control.judge(self.step.tail(self.physics.cast.bodies()))
            } else {
                unsettled += 1;
                self.step.forget();
                (PART, false)
            };
            if good {
                self.wish = (length.abs() * factor).min(2.0 * self.wish.max(length.abs()));
                self.step.finish(&self.phase, &mut self.next);
                return if self.next.is_finite() { Ok(()) } else { Err(self.not_finite()) };
            }
            self.work.rejected += 1;
            if unsettled > MOST_TRIES {
                let (day, step_day) = (self.day(), length);
                let (sweeps, change) = (settling.sweeps, settling.change);
                return Err(RadauError::TooManySweeps { day, step_day, sweeps, change });
            }
            length *= factor.min(0.9);
            self.wish = length.abs();
            self.check_limits()?;
            self.step.stretch(length);
        }
    }

    /// The wished step in the wished direction, not beyond the end, and no tiny last one.
    fn clipped(&self, rest: f64) -> f64 {
        let left = rest.abs();
        let length = if self.wish >= left {
            return rest;
        } else if 2.0 * self.wish > left {
            0.5 * left
        } else {
            self.wish
        };
        length.copysign(rest)
    }

    fn check_limits(&self) -> Result<(), RadauError> {
        let day = self.day();
        if self.work.steps >= self.limits.most_steps {
            return Err(RadauError::TooManySteps { day, most: self.limits.most_steps });
        }
        if self.wish.is_nan() {
            return Err(self.not_finite());
        }
        if self.wish < self.limits.smallest_day {
            let gap = |&(i, j): &(usize, usize)| self.gap(i, j).0;
            let closest = self.physics.cast.pairs().min_by(|a, b| gap(a).total_cmp(&gap(b)));
            let (first, second) = closest.unwrap_or((0, 0));
            return Err(RadauError::StepTooSmall {
                day,
                step_day: self.wish,
                smallest_day: self.limits.smallest_day,
                first,
                second,
                gap_au: gap(&(first, second)),
            });
        }
        Ok(())
    }

    fn not_finite(&self) -> RadauError {
        RadauError::NotFinite { day: self.day() }
    }

    /// Makes the end of the step the start of the next.
    fn commit(&mut self) {
        let brought = self.step.work_done(&self.physics, &self.phase);
        self.brought.add(brought);
        std::mem::swap(&mut self.phase, &mut self.next);
        self.day.add(self.step.length);
        self.work.steps += 1;
    }

    /// Places and reports events; the one at which the caller breaks off becomes the end of the step.
    fn report(
        &mut self,
        seen: &[Candidate],
        on_event: &mut impl FnMut(&Event) -> ControlFlow<()>,
    ) -> Result<Option<Event>, RadauError> {
        if seen.is_empty() {
            return Ok(None);
        }
        let (whole, end) = (self.step.clone(), self.next.clone());
        for candidate in seen {
            let event = self.place(candidate, whole.length);
            if self.is_old(&event, whole.length) {
                continue;
            }
            self.last_event = Some(event);
            if on_event(&event).is_break() {
                return Ok(Some(event));
            }
        }
        let (evaluations, pairs) = (self.step.evaluations, self.step.pairs);
        self.step = whole;
        (self.step.evaluations, self.step.pairs) = (evaluations, pairs);
        self.next = end;
        Ok(None)
    }

    /// An event at which the last run was broken off is met again by the first step from there.
    fn is_old(&self, event: &Event, length: f64) -> bool {
        self.last_event.is_some_and(|old| {
            (old.kind, old.first, old.second) == (event.kind, event.first, event.second)
                && (old.day - event.day).abs() <= 1e-9 * length.abs()
        })
    }

    /// Ends the step exactly at an event: inside, the polynomial has only order 9, at its end the step has order 15,
    /// so Newton's iteration moves the end.
    fn place(&mut self, candidate: &Candidate, whole: f64) -> Event {
        let (i, j) = (candidate.first, candidate.second);
        let mut length = candidate.s * whole;
        let (mut d, mut v) = ([0.0; 3], [0.0; 3]);
        for round in 0..=PLACINGS {
            self.step.stretch(length);
            self.work.sweeps += u64::from(self.step.solve(&self.physics, &self.phase).sweeps);
            self.step.finish(&self.phase, &mut self.next);
            (d, v) = self.next.apart(i, j);
            let away = match candidate.kind {
                EventKind::Approach => dot(&d, &v) / (dot(&v, &v) + dot(&d, &self.step.end_pull(i, j))),
                _ => (dot(&d, &d).sqrt() - candidate.level_au) * dot(&d, &d).sqrt() / dot(&d, &v),
            };
            let worth = away.abs() > f64::EPSILON * whole.abs() && away.abs() < 0.1 * whole.abs();
            if !worth || round == PLACINGS {
                break;
            }
            length -= away;
        }
        Event {
            kind: candidate.kind,
            day: self.day() + length,
            first: i,
            second: j,
            distance_au: dot(&d, &d).sqrt(),
            speed_au_day: dot(&v, &v).sqrt(),
        }
    }
}
