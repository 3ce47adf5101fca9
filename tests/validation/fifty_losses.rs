//! Whether one of the engines loses systems more easily than the other: many neighbouring starts of each unstable system.

use abide::assess::{Assessment, Plan, assess, innermost_period_day, run_batch};
use abide::coords::Configuration;
use abide::system::Span;
use abide::verdict::Verdict;
use rayon::prelude::*;

use super::fifty_passages::{Passage, in_words as passages_in_words, passages};
use super::fifty_systems::systems;
use super::random::Random;
use super::report::Report;
use super::truth_support::plan;

/// The longer span of the fifty; losses before the shorter one are counted from the same runs.
const ORBITS: f64 = 1e4;
const SHORT_ORBITS: f64 = 1500.0;
const STARTS: usize = 32;
/// Every velocity component is changed by chance within this share of itself: more than the scheme's own error of the mean
/// motions (up to 2e-7, from the gaps of the regular ones), so that both engines draw from the same cloud.
const SPREAD: f64 = 1e-6;
const SEED: u64 = 1847;
/// Two losses are told apart when their times differ by more inner orbits than this: an encounter is dated at the end of a step or exactly.
const ALIKE_ORBITS: f64 = 3.0;

const WORDS: &str = "
The systems of [fifty](fifty.md) that are not regular with both engines over 1e4 inner orbits, each from 32 neighbouring starts (every velocity component changed by chance by up to 1e-6 of
itself, seed 1847), the same starts for both engines. Encounters end a cell at one mutual Hill radius, 1e-6 energy error asked, no tangent vector. Lost within 1500 and 1e4 orbits: how many
of the 32, by engine; `only_…`: starts that only that engine lost within the span; `first_…`: starts that this engine lost earlier than the other by more than three
inner orbits. If no engine is biased towards loss, each of the starts on which they differ is as likely to be one way as the other: `p` is the chance of a split at least as uneven (exact
binomial test on the pairs, McNemar 1947; two-sided). `alike` is the chance p² + (1 − p)² that two independent draws agree about loss, with p the loss share of both engines together.
";

/// Of one system: the time of loss of every start, in inner orbits, by engine.
struct Losses {
    system: usize,
    symplectic: Vec<Option<f64>>,
    adaptive: Vec<Option<f64>>,
    passages: Vec<Passage>,
}

pub fn write() {
    let found: Vec<Losses> =
        systems().par_iter().enumerate().filter_map(|(k, system)| losses(k + 1, system)).collect();
    let rows = found.iter().map(row).collect();
    let columns = vec![
        "system",
        "lost_symplectic_1500",
        "lost_adaptive_1500",
        "only_symplectic_1500",
        "only_adaptive_1500",
        "lost_symplectic_1e4",
        "lost_adaptive_1e4",
        "only_symplectic_1e4",
        "only_adaptive_1e4",
        "first_symplectic",
        "first_adaptive",
        "alike_1500",
        "alike_1e4",
    ];
    let passages: Vec<Passage> = found.iter().flat_map(|l| l.passages.iter().copied()).collect();
    let words = format!("{WORDS}\n{}\n{}", in_words(&found), passages_in_words(&passages));
    Report {
        name: "fifty-losses",
        title: "Losses of the unstable among the fifty by engine",
        words,
        columns,
        rows,
    }
    .write();
}

/// None for a system that both engines call regular.
fn losses(number: usize, system: &Configuration) -> Option<Losses> {
    let plan = plan(system, Span::Orbits(ORBITS), 1e-6);
    let regular = |plan: &Plan| assess(system, plan).verdict == Verdict::Regular;
    if regular(&plan) && regular(&Plan { adaptive: true, ..plan.clone() }) {
        return None;
    }
    let plan = Plan { megno: false, extent: false, ..plan };
    let mut random = Random::new(SEED + number as u64);
    let starts: Vec<Configuration> = (0..STARTS).map(|_| neighbour(system, &mut random)).collect();
    let period = innermost_period_day(system);
    let orbits = |a: &Assessment| (a.verdict == Verdict::Lost).then(|| a.end_time_day / period);
    let by = |plan: &Plan| {
        let mut times = vec![None; STARTS];
        let mut feed = starts.iter().cloned().enumerate().map(|(k, c)| (k as u64, c));
        run_batch(
            plan,
            || feed.next(),
            |k, assessment| {
                times[k as usize] = orbits(&assessment);
                true
            },
        );
        times
    };
    let symplectic = by(&plan);
    let adaptive = by(&Plan { adaptive: true, ..plan.clone() });
    let passages = starts.iter().filter_map(|start| passages(start, &plan)).collect();
    Some(Losses { system: number, symplectic, adaptive, passages })
}

fn neighbour(system: &Configuration, random: &mut Random) -> Configuration {
    let mut near = system.clone();
    near.planets
        .iter_mut()
        .flat_map(|p| &mut p.velocity_au_day)
        .for_each(|v| *v *= 1.0 + random.between(-SPREAD, SPREAD));
    near
}

impl Losses {
    /// Lost within so many orbits: symplectic, adaptive, only symplectic, only adaptive.
    fn within(&self, orbits: f64) -> [usize; 4] {
        let lost = |t: &Option<f64>| t.is_some_and(|t| t <= orbits);
        let pairs: Vec<(bool, bool)> =
            self.symplectic.iter().zip(&self.adaptive).map(|(s, a)| (lost(s), lost(a))).collect();
        let count = |which: &dyn Fn(&(bool, bool)) -> bool| pairs.iter().filter(|p| which(p)).count();
        [count(&|p| p.0), count(&|p| p.1), count(&|p| p.0 && !p.1), count(&|p| !p.0 && p.1)]
    }

    /// Starts that the symplectic, and that the adaptive engine lost clearly earlier.
    fn first(&self) -> [usize; 2] {
        let time = |t: &Option<f64>| t.unwrap_or(f64::INFINITY);
        let count = |earlier: &[Option<f64>], later: &[Option<f64>]| {
            earlier.iter().zip(later).filter(|(e, l)| time(e) + ALIKE_ORBITS < time(l)).count()
        };
        [count(&self.symplectic, &self.adaptive), count(&self.adaptive, &self.symplectic)]
    }

    /// Whether the same befalls most starts with both engines, lost or not lost; half and half is neither.
    fn most_agree(&self, orbits: f64) -> bool {
        let [s, a, ..] = self.within(orbits);
        (2 * s).cmp(&STARTS) == (2 * a).cmp(&STARTS)
    }

    fn alike(&self, orbits: f64) -> f64 {
        let [s, a, ..] = self.within(orbits);
        let share = (s + a) as f64 / (2 * STARTS) as f64;
        share * share + (1.0 - share) * (1.0 - share)
    }
}

fn row(losses: &Losses) -> Vec<String> {
    let mut cells = vec![losses.system.to_string()];
    for orbits in [SHORT_ORBITS, ORBITS] {
        cells.extend(losses.within(orbits).map(|n| n.to_string()));
    }
    cells.extend(losses.first().map(|n| n.to_string()));
    cells.extend([SHORT_ORBITS, ORBITS].map(|orbits| format!("{:.2}", losses.alike(orbits))));
    cells
}

fn in_words(all: &[Losses]) -> String {
    let mut words = String::new();
    for orbits in [SHORT_ORBITS, ORBITS] {
        let sum = |k: usize| all.iter().map(|l| l.within(orbits)[k]).sum::<usize>();
        let [only_s, only_a] = [sum(2), sum(3)];
        let alike: f64 = (50 - all.len()) as f64 + all.iter().map(|l| l.alike(orbits)).sum::<f64>();
        let starts = STARTS * all.len();
        words += &format!(
            "\nWithin {orbits} orbits: of {starts} starts {} lost with the symplectic and {} with the adaptive engine; {only_s} only with the symplectic, {only_a} only \
             with the adaptive one: p = {:.3}. Two unbiased engines are expected to agree about loss on {alike:.1} of the 50. Taken as what befalls most of its 32 starts, the \
             verdict of a system is the same on {} of the 50.\n",
            sum(0),
            sum(1),
            sign_test(only_s, only_a),
            50 - all.iter().filter(|l| !l.most_agree(orbits)).count(),
        );
    }
    let [s, a] = [0, 1].map(|k| all.iter().map(|l| l.first()[k]).sum::<usize>());
    words
        + &format!(
            "\nLost first with the symplectic engine: {s}, with the adaptive one: {a}: p = {:.3}.\n",
            sign_test(s, a)
        )
}

/// Chance that n fair coins fall at least as unevenly as `a` to `b`.
pub fn sign_test(a: usize, b: usize) -> f64 {
    let n = a + b;
    // Logarithms of factorials, summed: n is small.
    let log_factorial = |k: usize| (1..=k).map(|i| (i as f64).ln()).sum::<f64>();
    let whole = log_factorial(n) - n as f64 * std::f64::consts::LN_2;
    let tail = (0..=a.min(b)).map(|k| (whole - log_factorial(k) - log_factorial(n - k)).exp()).sum::<f64>();
    (2.0 * tail).min(1.0)
}
