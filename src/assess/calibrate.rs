//! Scheme and step for the energy error that was asked, from short runs of the study's own corners.

use super::batch::assess;
use super::plan::{Plan, STEPS_PER_PASSAGE, StepWhy, innermost_period_day, outermost_period_day};
use crate::coords::Configuration;
use crate::integrate::Scheme;

/// Schemes that "auto" chooses among: the cheapest per step, and those whose error falls fastest with the step.
const CANDIDATES: [&str; 3] = ["(2,2)", "(8,4)", "(10,6,4)"];
/// Short runs see less than long ones: over 1e4 orbits the largest error is up to three times that of a few hundred
/// (measured; see DEVELOPERS.md). So the short runs must stay below this share of the target.
const SAFETY: f64 = 0.25;
/// Each next trial takes so many times the steps.
const FINER: f64 = std::f64::consts::SQRT_2;
/// Trials per scheme: up to 20 × √2¹⁰ = 640 steps in a passage.
const TRIALS: u32 = 10;
/// Periods of the innermost planet in a short run, and at least so many of the outermost.
const INNER_ORBITS: f64 = 200.0;
const OUTER_ORBITS: f64 = 5.0;
/// No short run takes more than this many inner orbits, however far out the outermost planet is.
const MOST_INNER_ORBITS: f64 = 2000.0;

/// One scheme with the fewest steps that met the target.
struct Offer {
    scheme: &'static Scheme,
    steps_per_passage: f64,
    error: f64,
}

impl Offer {
    /// Kicks per passage: what a passage costs.
    fn cost(&self) -> f64 {
        self.steps_per_passage * self.scheme.stages() as f64
    }
}

/// Chooses what the plan leaves open: the scheme (when `any_scheme`) and the steps per pericentre passage (when the step
/// is each configuration's own), never fewer than 20.
///
/// `steps` is how many the span takes at 20 per passage. Every trial follows `nominal` and `corners` for a few hundred inner orbits; a corner that does not survive them says
/// nothing. The cheapest offer whose largest relative energy error is below a quarter of the target wins; when none is,
/// the one with the smallest error, and the plan says so.
pub(super) fn calibrate(
    plan: Plan,
    steps: f64,
    any_scheme: bool,
    nominal: &Configuration,
    corners: &[Configuration],
) -> Plan {
    let StepWhy::Pericentre { .. } = plan.step_why else { return plan };
    let schemes: Vec<&'static Scheme> = if any_scheme {
        CANDIDATES.iter().filter_map(|name| Scheme::named(name)).collect()
    } else {
        vec![plan.splitting()]
    };
    let mut met: Vec<Offer> = Vec::new();
    let mut missed: Vec<Offer> = Vec::new();
    for scheme in schemes {
        let mut steps_per_passage = STEPS_PER_PASSAGE;
        for trial in 0..=TRIALS {
            let dearer = |o: &Offer| o.cost() <= steps_per_passage * scheme.stages() as f64;
            if met.iter().any(dearer) {
                break;
            }
            let error = largest_error(&plan, scheme, steps_per_passage, nominal, corners);
            let offer = Offer { scheme, steps_per_passage, error };
            if error <= SAFETY * plan.energy_error {
                met.push(offer);
                break;
            }
            if trial == TRIALS {
                missed.push(offer);
            }
            steps_per_passage *= FINER;
        }
    }
    let cheapest = met.into_iter().min_by(|a, b| a.cost().total_cmp(&b.cost()));
    let best = missed.into_iter().min_by(|a, b| a.error.total_cmp(&b.error));
    let Some(chosen) = cheapest.or(best) else { return plan };
    let why = StepWhy::Pericentre {
        steps_per_passage: chosen.steps_per_passage,
        trial: Some((chosen.error, 1 + corners.len())),
    };
    let steps = steps * chosen.steps_per_passage / STEPS_PER_PASSAGE;
    Plan {
        scheme: chosen.scheme.name,
        step_why: why,
        block_steps: Plan::block_for(steps, plan.resolve),
        ..plan
    }
}

/// Largest relative energy error of the short runs.
fn largest_error(
    plan: &Plan,
    scheme: &'static Scheme,
    steps_per_passage: f64,
    nominal: &Configuration,
    corners: &[Configuration],
) -> f64 {
    let short = |configuration: &Configuration| {
        let inner = innermost_period_day(configuration);
        let span = (INNER_ORBITS * inner).max(OUTER_ORBITS * outermost_period_day(configuration));
        let span_day = span.min(MOST_INNER_ORBITS * inner).min(plan.span_day);
        let trial = Plan {
            span_day,
            scheme: scheme.name,
            step_why: StepWhy::Pericentre { steps_per_passage, trial: None },
            energy_error: f64::INFINITY,
            extent: false,
            megno: false,
            resolve: false,
            block_steps: 28,
            ..plan.clone()
        };
        let outcome = assess(configuration, &trial);
        let survived = outcome.loss.is_none();
        outcome.energy_error.filter(|_| survived)
    };
    let errors = std::iter::once(nominal).chain(corners).filter_map(short);
    errors.fold(0.0, f64::max)
}
