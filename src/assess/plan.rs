//! What will be done to every cell of a study, decided before anything runs.

use super::calibrate::calibrate;
use super::physics::{has_companion, massless};
use super::why::{CoordinatesWhy, HEAVY, SchemeWhy, StepWhy};
use crate::coords::{BodyKind, Configuration};
use crate::integrate::{Block, Coordinates, SAMPLE_EVERY, Scheme};
use crate::kepler::pericentre_passage_day;
use crate::observe::ResonantAngle;
use crate::system::{
    Compensation, CoordinateChoice, Encounter, Engine, Frame, Group, Limits, Measure, Span, Step, Study,
};

/// Steps in the shortest pericentre passage time scale when the step is chosen for the user.
///
/// Step resonance, not energy error, spoils chaos indicators: from 15 steps upward the averaged MEGNO no longer
/// changes (measured; see DEVELOPERS.md).
pub const STEPS_PER_PASSAGE: f64 = 20.0;
/// Fewer than this draw a warning.
pub const FEWEST_STEPS_PER_PASSAGE: f64 = 15.0;
/// Steps between two looks at a cell. Times a step of 1/20 of a period this is no whole number of orbits, so that
/// samples do not always meet a planet at the same phase. A look costs as much as some 50 steps, so it must be rare.
const BLOCK_STEPS: usize = 254 * SAMPLE_EVERY;
/// The same where encounters are resolved: the adaptive engine does a whole block around each of them.
const RESOLVED_BLOCK_STEPS: usize = 127 * SAMPLE_EVERY;
/// Samples of a shorter block that is still no whole number of orbits of 20 steps: no multiples of 5.
pub(super) const BLOCK_SAMPLES: [usize; 22] =
    [1, 2, 3, 4, 7, 11, 13, 17, 19, 23, 31, 37, 47, 61, 73, 89, 107, 127, 151, 179, 211, 254];
/// Looks at a cell whose frequency drift is measured, at least: half of them are one Fourier transform.
const DRIFT_SAMPLES: f64 = 1000.0;
/// Inner orbits between two looks at an angle, times √(mass of the planets / star): six looks in a libration of 0.8 of
/// this unit. Two giants of 1e-3 in a 3:2 resonance librate in 29 inner orbits (HD 45364), which is 0.93.
const ANGLE_ORBITS: f64 = 0.133;
/// A cell is looked at least so often.
const FEWEST_BLOCKS: f64 = 32.0;
/// Default escape distance in units of the largest apocentre.
const ESCAPE_APOCENTRES: f64 = 20.0;

/// The choice, or what the heaviest planet of the stated configuration and the corners asks for.
fn coordinates(
    choice: CoordinateChoice,
    nominal: &Configuration,
    corners: &[Configuration],
) -> (Coordinates, CoordinatesWhy) {
    let share = |one: &Configuration| {
        let planets = one.planets.iter().filter(|p| p.kind == BodyKind::Planet);
        planets.map(|p| p.gm).fold(0.0, f64::max) / one.star_gm
    };
    let (stated, extreme) = (share(nominal), corners.iter().map(share).fold(0.0, f64::max));
    match choice {
        CoordinateChoice::Heliocentric => (Coordinates::Heliocentric, CoordinatesWhy::Asked),
        CoordinateChoice::Jacobi => (Coordinates::Jacobi, CoordinatesWhy::Asked),
        CoordinateChoice::Auto if has_companion(nominal) => (Coordinates::Jacobi, CoordinatesWhy::Companion),
        CoordinateChoice::Auto if stated.max(extreme) > HEAVY => {
            let (share, in_a_corner) = (stated.max(extreme), extreme > stated);
            (Coordinates::Jacobi, CoordinatesWhy::Heavy { share, in_a_corner })
        }
        CoordinateChoice::Auto => (Coordinates::Heliocentric, CoordinatesWhy::Light),
    }
}

/// Everything the engine needs beside the configuration; the same for all cells of a study.
#[derive(Clone, Debug, PartialEq)]
pub struct Plan {
    pub span_day: f64,
    /// Largest step; absent: from each cell's own orbits.
    pub step_day: Option<f64>,
    pub step_why: StepWhy,
    /// "(2,2)" with corrector.
    pub scheme: &'static str,
    pub scheme_why: SchemeWhy,
    pub coordinates: Coordinates,
    pub coordinates_why: CoordinatesWhy,
    /// Of the elements that are observed: astrocentric, or Jacobi where planets circle a pair of stars.
    pub frame: Frame,
    pub energy_error: f64,
    pub escape_au: Option<f64>,
    /// Stop below this many mutual Hill radii; absent: go through.
    pub encounter_hill: Option<f64>,
    pub extent: bool,
    pub megno: bool,
    /// Drift of the mean motions between the halves of the span.
    pub frequency_drift: bool,
    /// Watched for libration.
    pub angle: Option<ResonantAngle>,
    /// A cell ends as chaotic once nothing that follows could make it regular; what would be lost later is not seen.
    pub stop_when_chaotic: bool,
    /// Go through encounters with the adaptive engine.
    pub resolve: bool,
    /// Do everything with the adaptive engine.
    pub adaptive: bool,
    /// Positions and velocities are compensated sums.
    pub compensated: bool,
    /// So many planets are massless in every cell.
    pub massless: usize,
    /// Steps between two looks at a cell, a multiple of [`SAMPLE_EVERY`]. A cell's steps are a whole number of blocks.
    pub block_steps: usize,
}

impl Plan {
    /// The plan of a study whose stated system is `nominal` and whose most demanding cells are among `corners`.
    pub fn for_study(study: &Study, nominal: &Configuration, corners: &[Configuration]) -> Plan {
        let wants = |measure| study.measure.contains(&measure);
        let mut plan = Plan::with_corners(study.span, &study.limits, &study.engine, nominal, corners);
        plan.extent = wants(Measure::Extent);
        plan.megno = wants(Measure::Megno) || wants(Measure::Lyapunov);
        plan.frequency_drift = wants(Measure::FrequencyDrift);
        plan.angle = study.angle.clone().and_then(|a| ResonantAngle::new(a.longitudes, a.pericentres).ok());
        plan.block_steps = plan.sampled_often(nominal, corners);
        if study.axes.iter().any(|axis| axis.target.key.group() == Group::Mass) {
            plan.massless = 0;
        }
        plan
    }

    /// A plan for one configuration, that measures everything.
    pub fn new(span: Span, limits: &Limits, engine: &Engine, nominal: &Configuration) -> Plan {
        Plan::with_corners(span, limits, engine, nominal, &[])
    }

    fn with_corners(
        span: Span,
        limits: &Limits,
        engine: &Engine,
        nominal: &Configuration,
        corners: &[Configuration],
    ) -> Plan {
        let auto = auto_step_day(nominal);
        let period = innermost_period_day(nominal);
        let span_day = match span {
            Span::Days(days) => days,
            Span::Orbits(orbits) => orbits * period,
        };
        let step_day = match engine.step {
            Step::Auto => None,
            Step::Days(days) => Some(days),
            Step::PerOrbit(steps) => Some(period / steps),
        };
        let step_why = match step_day {
            None => StepWhy::Pericentre { steps_per_passage: STEPS_PER_PASSAGE, trial: None },
            Some(step) => StepWhy::Asked { steps_per_passage: STEPS_PER_PASSAGE * auto / step },
        };
        let scheme = Scheme::named(&engine.scheme).unwrap_or(Scheme::leapfrog()).name;
        let encounter_hill = match limits.encounter {
            Encounter::Stop { hill } => Some(hill),
            Encounter::Off | Encounter::Resolve => None,
        };
        let (coordinates, coordinates_why) = coordinates(engine.coordinates, nominal, corners);
        let resolve = limits.encounter == Encounter::Resolve;
        let plan = Plan {
            span_day,
            step_day,
            step_why,
            scheme,
            scheme_why: SchemeWhy::Asked,
            coordinates,
            coordinates_why,
            frame: nominal.own_frame(),
            resolve,
            adaptive: false,
            compensated: engine.compensated == Compensation::On,
            massless: corners.iter().map(massless).fold(massless(nominal), usize::min),
            energy_error: engine.energy_error,
            escape_au: limits.escape_au,
            encounter_hill,
            extent: true,
            megno: true,
            frequency_drift: false,
            angle: None,
            stop_when_chaotic: limits.stop_when_chaotic,
            block_steps: Plan::block_for(span_day / step_day.unwrap_or(auto), resolve),
        };
        let steps = span_day / step_day.unwrap_or(auto);
        calibrate(plan, steps, Scheme::named(&engine.scheme).is_none(), nominal, corners)
    }

    /// Largest step for this configuration, day.
    pub(super) fn step_for(&self, configuration: &Configuration) -> f64 {
        match (self.step_day, &self.step_why) {
            (Some(step), _) => step,
            (None, StepWhy::Pericentre { steps_per_passage, .. }) => {
                auto_step_day(configuration) * STEPS_PER_PASSAGE / steps_per_passage
            }
            (None, StepWhy::Asked { .. }) => auto_step_day(configuration),
        }
    }

    /// Steps between two looks for that many steps in all: fewer when the span is short, so that it is still looked at
    /// often enough.
    pub(super) fn block_for(steps: f64, resolve: bool) -> usize {
        let most = if resolve { RESOLVED_BLOCK_STEPS } else { BLOCK_STEPS };
        let block = (steps / FEWEST_BLOCKS).clamp(SAMPLE_EVERY as f64, most as f64);
        (block as usize).next_multiple_of(SAMPLE_EVERY).min(most)
    }

    /// An empty block of the plan's kind.
    pub(super) fn block(&self, width: usize, planets: usize) -> Block {
        let block = Block::with_massless(self.coordinates, width, planets, self.massless);
        if self.compensated { block.compensated() } else { block }
    }

    /// Steps between two looks that what is measured allows: the block as it is, or a shorter one.
    ///
    /// The drift of mean motions needs [`DRIFT_SAMPLES`] of the span. An angle must be seen a few times in the shortest
    /// libration, whose period goes with 1/√(mass of the planets / star), as of any pendulum of mean-motion resonance.
    fn sampled_often(&self, nominal: &Configuration, corners: &[Configuration]) -> usize {
        let step = self.step_for(nominal);
        let drift = if self.frequency_drift { self.span_day / DRIFT_SAMPLES } else { f64::INFINITY };
        let planets = |one: &Configuration| {
            let planets = one.planets.iter().filter(|p| p.kind == BodyKind::Planet);
            planets.map(|p| p.gm).sum::<f64>() / one.star_gm
        };
        let mass = corners.iter().map(planets).fold(planets(nominal), f64::max);
        let angle = match self.angle {
            Some(_) => ANGLE_ORBITS / mass.sqrt() * innermost_period_day(nominal),
            None => f64::INFINITY,
        };
        let most = drift.min(angle) / step / SAMPLE_EVERY as f64;
        let fitting = BLOCK_SAMPLES.into_iter().rev().find(|samples| *samples as f64 <= most);
        self.block_steps.min(fitting.unwrap_or(1) * SAMPLE_EVERY)
    }

    /// The scheme itself.
    pub fn splitting(&self) -> &'static Scheme {
        Scheme::named(self.scheme).unwrap_or(Scheme::leapfrog())
    }

    /// Where a planet of this configuration has escaped, au.
    pub fn escape_limit_au(&self, configuration: &Configuration) -> f64 {
        self.escape_au.unwrap_or_else(|| {
            let orbits = configuration.elements_in(configuration.own_frame());
            ESCAPE_APOCENTRES * orbits.iter().map(|o| o.apocentre_au()).fold(0.0, f64::max)
        })
    }
}

/// The step that the plan gives a configuration when none is asked: 1/20 of the shortest pericentre
/// passage time scale of its bodies, day. Not a number when none is bound.
pub fn auto_step_day(configuration: &Configuration) -> f64 {
    let frame = configuration.own_frame();
    let orbits = configuration.elements_in(frame);
    let periods = configuration.periods_of(frame, &orbits);
    let passages = orbits.iter().zip(periods).filter_map(|(orbit, period)| {
        // A mass parameter of which only the period is known: G M = a³ (2π/P)².
        let gm = orbit.semi_major_axis_au.powi(3) * (std::f64::consts::TAU / period?).powi(2);
        Some(pericentre_passage_day(orbit.semi_major_axis_au, orbit.eccentricity, gm))
    });
    passages.fold(f64::NAN, f64::min) / STEPS_PER_PASSAGE
}

/// Shortest period of the planets, day.
pub fn innermost_period_day(configuration: &Configuration) -> f64 {
    periods_day(configuration).fold(f64::NAN, f64::min)
}

/// Longest period of the planets, day.
pub fn outermost_period_day(configuration: &Configuration) -> f64 {
    periods_day(configuration).fold(f64::NAN, f64::max)
}

fn periods_day(configuration: &Configuration) -> impl Iterator<Item = f64> {
    let frame = configuration.own_frame();
    let orbits = configuration.elements_in(frame);
    let periods = configuration.periods_of(frame, &orbits);
    let planets: Vec<bool> = configuration.planets.iter().map(|p| p.kind == BodyKind::Planet).collect();
    periods.into_iter().zip(planets).filter(|(_, planet)| *planet).filter_map(|(period, _)| period)
}
