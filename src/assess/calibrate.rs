//! Scheme and step for the energy error that was asked, from short runs of the study's own corners.

use super::batch::assess;
use super::cell::RESOLVE_HILL;
use super::plan::{Plan, STEPS_PER_PASSAGE, innermost_period_day, outermost_period_day};
use super::why::{SchemeWhy, StepWhy, Trial};
use crate::coords::Configuration;
use crate::integrate::Scheme;

/// Schemes that "auto" chooses among where the step is open too: each is the cheapest for some energy error when a passage
/// takes 20 steps or more (measured; see DEVELOPERS.md).
const CANDIDATES: [&str; 4] = ["(2,2)", "(8,4)", "(8,6,4)", "(10,6,4)"];
/// The same where the step is asked: cheapest first.
const CANDIDATES_AT_A_STEP: [&str; 7] = ["(2,2)", "(4,2)", "(6,2)", "(8,2)", "(8,4)", "(8,6,4)", "(10,6,4)"];
/// Short runs see less than long ones: over 1e4 orbits the largest error is up to three times that of a few hundred
/// (measured; see DEVELOPERS.md). So the short runs must stay below this share of the target.
const SAFETY: f64 = 0.25;
/// Each next trial takes so many times the steps.
const FINER: f64 = std::f64::consts::SQRT_2;
/// Trials per scheme: up to 20 × √2¹⁰ = 640 steps in a passage.
const TRIALS: u32 = 11;
/// A scheme that so many finer steps in a row did not bring nearer has met rounding.
const FRUITLESS: u32 = 2;
/// Periods of the innermost planet in a short run, and at least so many of the outermost.
const INNER_ORBITS: f64 = 200.0;
const OUTER_ORBITS: f64 = 5.0;
/// No short run takes more than this many inner orbits, however far out the outermost planet is.
const MOST_INNER_ORBITS: f64 = 2000.0;
/// Nor more than this many steps of a length that was asked.
const MOST_ASKED_STEPS: f64 = 4e5;

/// Chooses what the plan leaves open: the scheme (when `any_scheme`) and the steps per pericentre passage (when the step
/// is each configuration's own), never fewer than 20.
///
/// `steps` is how many the span takes at 20 per passage. Every trial follows `nominal` and `corners` for a few hundred
/// inner orbits; a configuration that does not survive them tells nothing, and no trial wins by losing what another one held:
/// only those count that were told by as many configurations as any. The cheapest of them whose largest relative energy
/// error is below a quarter of the target wins; when none is, the one with the smallest error, and the plan says so. When
/// no run tells anything, it is the first candidate at 20 steps or the step asked, and the plan says that.
pub(super) fn calibrate(
    plan: Plan,
    steps: f64,
    any_scheme: bool,
    nominal: &Configuration,
    corners: &[Configuration],
) -> Plan {
    let runs = Runs { plan: &plan, nominal, corners };
    let schemes = |names: &[&str]| -> Vec<&'static Scheme> {
        names.iter().filter_map(|name| Scheme::named(name)).collect()
    };
    match (&plan.step_why, any_scheme) {
        (StepWhy::Pericentre { .. }, true) => {
            let found = runs.cheapest(&schemes(&CANDIDATES));
            let scheme_why = found.why(&schemes(&CANDIDATES), false);
            with_steps(&plan, steps, found.chosen, scheme_why)
        }
        (StepWhy::Pericentre { .. }, false) => {
            let found = runs.cheapest(&[plan.splitting()]);
            with_steps(&plan, steps, found.chosen, SchemeWhy::Asked)
        }
        (StepWhy::Asked { steps_per_passage }, true) => {
            let found = runs.at_asked_step(&schemes(&CANDIDATES_AT_A_STEP), *steps_per_passage);
            let scheme_why = found.why(&[], true);
            Plan { scheme: found.chosen.scheme, scheme_why, ..plan }
        }
        (StepWhy::Asked { .. }, false) => plan,
    }
}

fn with_steps(plan: &Plan, steps: f64, chosen: Trial, scheme_why: SchemeWhy) -> Plan {
    let steps_per_passage = chosen.steps_per_passage;
    Plan {
        scheme: chosen.scheme,
        scheme_why,
        step_why: StepWhy::Pericentre { steps_per_passage, trial: Some(chosen) },
        block_steps: Plan::block_for(steps * steps_per_passage / STEPS_PER_PASSAGE, plan.resolve),
        ..plan.clone()
    }
}

/// What trials led to.
struct Found {
    chosen: Trial,
    /// The most accurate trial of each scheme.
    each: Vec<Trial>,
}

impl Found {
    /// From all trials, at least one, in the order of their cost.
    fn of(trials: &[Trial]) -> Found {
        let error = |trial: &Trial| trial.energy_error.unwrap_or(f64::INFINITY);
        let most_told = trials.iter().map(|trial| trial.told).max().unwrap_or(0);
        let better = |one: &Trial, other: &Trial| {
            one.told > other.told || (one.told == other.told && error(one) < error(other))
        };
        let mut each: Vec<Trial> = Vec::new();
        for trial in trials {
            match each.iter_mut().find(|best| best.scheme == trial.scheme) {
                Some(best) if better(trial, best) => *best = *trial,
                Some(_) => {}
                None => each.push(*trial),
            }
        }
        let counted = || trials.iter().copied().filter(|trial| trial.told == most_told);
        let nearest = counted().reduce(|a, b| if error(&b) < error(&a) { b } else { a });
        let met = counted().find(Trial::met);
        let chosen = met.or(nearest).expect("at least one scheme was tried");
        each.iter_mut().filter(|best| best.scheme == chosen.scheme).for_each(|best| *best = chosen);
        Found { chosen, each }
    }

    fn why(&self, candidates: &[&'static Scheme], at_asked_step: bool) -> SchemeWhy {
        let untried = candidates.iter().filter(|s| self.each.iter().all(|trial| trial.scheme != s.name));
        let fewest = |s: &&'static Scheme| (s.name, STEPS_PER_PASSAGE * s.stages() as f64);
        SchemeWhy::Tried {
            chosen: self.chosen,
            each: self.each.clone(),
            dearer: untried.map(fewest).collect(),
            at_asked_step,
        }
    }
}

/// A scheme with the steps of its next trial.
struct Next {
    scheme: &'static Scheme,
    steps_per_passage: f64,
    left: u32,
    best: f64,
    fruitless: u32,
}

impl Next {
    fn cost(&self) -> f64 {
        self.steps_per_passage * self.scheme.stages() as f64
    }

    /// Whether a finer step may still help.
    fn goes_on(&mut self, error: f64) -> bool {
        self.fruitless = if error < self.best { 0 } else { self.fruitless + 1 };
        self.best = self.best.min(error);
        self.left -= 1;
        self.steps_per_passage *= FINER;
        self.left > 0 && self.fruitless < FRUITLESS
    }
}

/// Who is followed in the short runs.
struct Runs<'a> {
    plan: &'a Plan,
    nominal: &'a Configuration,
    corners: &'a [Configuration],
}

impl Runs<'_> {
    /// Trials of all schemes in the order of their cost until one meets the target: so it is the cheapest that does. A scheme
    /// that told nothing is left.
    fn cheapest(&self, schemes: &[&'static Scheme]) -> Found {
        let first = |scheme: &'static Scheme| Next {
            scheme,
            steps_per_passage: STEPS_PER_PASSAGE,
            left: TRIALS,
            best: f64::INFINITY,
            fruitless: 0,
        };
        let mut open: Vec<Next> = schemes.iter().copied().map(first).collect();
        let mut trials: Vec<Trial> = Vec::new();
        while let Some(at) = (0..open.len()).min_by(|a, b| open[*a].cost().total_cmp(&open[*b].cost())) {
            let trial = self.trial(open[at].scheme, open[at].steps_per_passage);
            trials.push(trial);
            let most_told = trials.iter().map(|trial| trial.told).max().unwrap_or(0);
            if trial.met() && trial.told == most_told {
                break;
            }
            if !trial.energy_error.is_some_and(|error| open[at].goes_on(error)) {
                open.remove(at);
            }
        }
        Found::of(&trials)
    }

    /// Trials of all schemes at the plan's own step, until one meets the target and lost nothing. A step too long for one
    /// scheme may lose what another can hold.
    fn at_asked_step(&self, schemes: &[&'static Scheme], steps_per_passage: f64) -> Found {
        let mut trials: Vec<Trial> = Vec::new();
        for scheme in schemes {
            trials.push(self.trial(scheme, steps_per_passage));
            if trials.last().is_some_and(|trial| trial.met() && trial.told == trial.followed) {
                break;
            }
        }
        Found::of(&trials)
    }

    fn trial(&self, scheme: &'static Scheme, steps_per_passage: f64) -> Trial {
        let all = std::iter::once(self.nominal).chain(self.corners);
        let errors: Vec<f64> = all.filter_map(|one| self.error(one, scheme, steps_per_passage)).collect();
        Trial {
            scheme: scheme.name,
            kicks_per_step: scheme.stages(),
            steps_per_passage,
            followed: 1 + self.corners.len(),
            told: errors.len(),
            energy_error: errors.iter().copied().reduce(f64::max),
            wanted: SAFETY * self.plan.energy_error,
        }
    }

    /// Largest relative energy error of a short run; none when it was lost in it.
    fn error(&self, one: &Configuration, scheme: &'static Scheme, steps_per_passage: f64) -> Option<f64> {
        let plan = self.plan;
        let inner = innermost_period_day(one);
        let span = (INNER_ORBITS * inner).max(OUTER_ORBITS * outermost_period_day(one));
        let most_asked = plan.step_day.map_or(f64::INFINITY, |step| MOST_ASKED_STEPS * step);
        let step_why = match &plan.step_why {
            StepWhy::Pericentre { .. } => StepWhy::Pericentre { steps_per_passage, trial: None },
            asked => asked.clone(),
        };
        let trial = Plan {
            span_day: span.min(MOST_INNER_ORBITS * inner).min(most_asked).min(plan.span_day),
            scheme: scheme.name,
            step_why,
            energy_error: f64::INFINITY,
            extent: false,
            megno: false,
            // Where the adaptive engine will take over, the scheme's own error says nothing.
            encounter_hill: if plan.resolve { Some(RESOLVE_HILL) } else { plan.encounter_hill },
            resolve: false,
            block_steps: 28,
            ..plan.clone()
        };
        let outcome = assess(one, &trial);
        outcome.energy_error.filter(|error| outcome.loss.is_none() && error.is_finite())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn trial(scheme: &'static str, told: usize, energy_error: Option<f64>) -> Trial {
        Trial {
            scheme,
            kicks_per_step: 1,
            steps_per_passage: 3.0,
            followed: 5,
            told,
            energy_error,
            wanted: 1e-7,
        }
    }

    #[test]
    fn losing_the_hard_corners_wins_nothing() {
        let trials = [
            trial("(2,2)", 1, Some(1e-8)),
            trial("(4,2)", 0, None),
            trial("(8,2)", 5, Some(3e-7)),
            trial("(8,4)", 5, Some(9e-8)),
            trial("(10,6,4)", 5, Some(1e-9)),
        ];
        // The first that keeps the target among those that all five told.
        assert_eq!(Found::of(&trials).chosen, trials[3]);
        // None keeps it: the nearest of them, though (2,2) keeps it with one.
        assert_eq!(Found::of(&trials[..3]).chosen, trials[2]);
        assert_eq!(Found::of(&trials[..2]).chosen, trials[0]);
        assert_eq!(Found::of(&trials[1..2]).chosen, trials[1]);
    }
}
