//! Fifty random compact systems with both engines, over two spans and at several accuracies.

use abide::assess::{Assessment, Plan, assess, innermost_period_day};
use abide::coords::Configuration;
use abide::system::Span;
use abide::verdict::Verdict;
use rayon::prelude::*;

use super::fifty_ends::{agrees, ends, parted_orbits};
use super::fifty_systems::{SYSTEMS, systems};
use super::report::{Report, short};
use super::truth_support::plan;

/// One comparison: the span in inner orbits, and the energy error asked of the symplectic scheme.
struct Case {
    orbits: f64,
    asked: f64,
}

/// The first span was chosen for its cost alone, the second is what the program takes where nothing is asked.
const CASES: [Case; 5] = [
    Case { orbits: 1500.0, asked: 1e-6 },
    Case { orbits: 1500.0, asked: 1e-9 },
    Case { orbits: 1500.0, asked: 1e-12 },
    Case { orbits: 1500.0, asked: 1e-13 },
    Case { orbits: 1e4, asked: 1e-6 },
];

const WORDS: &str = "
TODO
";

/// What became of one system.
struct Outcome {
    symplectic: Assessment,
    adaptive: Assessment,
    /// By the adaptive engine from a start that differs in the last digit.
    neighbour: Verdict,
    /// Gap, expected and rounding, rad.
    ends: Option<[f64; 3]>,
    /// λT of the adaptive run.
    growth: Option<f64>,
    parted: Option<f64>,
}

pub fn write() {
    let systems = systems();
    let (mut rows, mut found) = (Vec::new(), String::new());
    for case in CASES {
        let began = std::time::Instant::now();
        let outcomes: Vec<Outcome> = systems.par_iter().map(|system| outcome(system, &case)).collect();
        let words = in_words(&case, &outcomes);
        eprintln!("{:?} {words}", began.elapsed());
        for (k, o) in outcomes.iter().enumerate() {
            if o.ends.is_none() || o.symplectic.verdict != o.adaptive.verdict {
                eprintln!(
                    "{} {:?} {:?} {:?} Y {:?} {:?} lT {:?} parted {:?} end {} {} redone {} {}",
                    k + 1,
                    o.symplectic.verdict,
                    o.adaptive.verdict,
                    o.neighbour,
                    o.symplectic.megno,
                    o.adaptive.megno,
                    o.growth,
                    o.parted,
                    o.symplectic.end_time_day / innermost_period_day(&systems[k]),
                    o.adaptive.end_time_day / innermost_period_day(&systems[k]),
                    o.symplectic.scheme,
                    innermost_period_day(&systems[k]) / o.symplectic.step_day,
                );
            }
        }
        found += &words;
        let all = outcomes.iter().zip(&systems).enumerate();
        rows.extend(all.map(|(k, (o, s))| row(k + 1, &case, o, s)));
    }
    let columns = vec![
        "orbits",
        "asked",
        "system",
        "planets",
        "symplectic",
        "adaptive",
        "same",
        "megno_symplectic",
        "megno_adaptive",
        "end_orbits_share_symplectic",
        "end_orbits_share_adaptive",
        "energy_symplectic",
        "energy_adaptive",
        "scheme",
        "steps_per_orbit",
        "growth",
        "parted_orbits",
        "gap_rad",
        "expected_rad",
        "rounding_rad",
        "met",
    ];
    Report {
        name: "fifty",
        title: "Fifty random systems with both engines",
        words: format!("{WORDS}\n{found}"),
        columns,
        rows,
    }
    .write();
}

/// What came out of one comparison, a paragraph.
fn in_words(case: &Case, outcomes: &[Outcome]) -> String {
    let same = outcomes.iter().filter(|o| o.symplectic.verdict == o.adaptive.verdict).count();
    let near = outcomes.iter().filter(|o| o.neighbour == o.adaptive.verdict).count();
    let regular = outcomes.iter().filter(|o| o.ends.is_some()).count();
    let within = outcomes.iter().filter(|o| o.ends.is_some_and(agrees)).count();
    let unstable = |v: Verdict| matches!(v, Verdict::Chaotic | Verdict::Lost);
    let merged = |o: &&Outcome| {
        let (s, a) = (o.symplectic.verdict, o.adaptive.verdict);
        s == a || (unstable(s) && unstable(a))
    };
    let merged = outcomes.iter().filter(merged).count();
    let count = |verdict| outcomes.iter().filter(|o| o.adaptive.verdict == verdict).count();
    format!(
        "Found over {} orbits, {:e}: the same verdict on {same} of {SYSTEMS} ({}), near {near} with chaotic and lost taken together on {merged}; of {regular} regular systems {within} end \
         within the limit ({}). Adaptive verdicts: {} regular, {} chaotic, {} lost, {} undecided, {} untrusted.\n\n",
        case.orbits,
        case.asked,
        if same + 1 >= SYSTEMS { "met" } else { "NOT met" },
        if regular == within { "met" } else { "NOT met" },
        count(Verdict::Regular),
        count(Verdict::Chaotic),
        count(Verdict::Lost),
        count(Verdict::Undecided),
        count(Verdict::Untrusted),
    )
}

fn row(number: usize, case: &Case, outcome: &Outcome, system: &Configuration) -> Vec<String> {
    let Outcome { symplectic: s, adaptive: a, ends, .. } = outcome;
    let word = |yes: bool| if yes { "yes" } else { "NO" }.to_string();
    let maybe = |x: Option<f64>| x.map_or(String::new(), short);
    let period = innermost_period_day(system);
    let share = |x: &Assessment| short(x.end_time_day / (case.orbits * period));
    vec![
        case.orbits.to_string(),
        format!("{:e}", case.asked),
        number.to_string(),
        system.planets.len().to_string(),
        s.verdict.word().to_string(),
        a.verdict.word().to_string(),
        word(s.verdict == a.verdict),
        maybe(s.megno),
        maybe(a.megno),
        share(s),
        share(a),
        maybe(s.energy_error),
        maybe(a.energy_error),
        s.scheme.to_string(),
        format!("{:.0}", period / s.step_day),
        maybe(outcome.growth),
        maybe(outcome.parted),
        maybe(ends.map(|e| e[0])),
        maybe(ends.map(|e| e[1])),
        maybe(ends.map(|e| e[2])),
        ends.map_or(String::new(), |e| word(agrees(e))),
    ]
}

fn outcome(system: &Configuration, case: &Case) -> Outcome {
    let symplectic_plan = plan(system, Span::Orbits(case.orbits), case.asked);
    let symplectic = assess(system, &symplectic_plan);
    let adaptive_plan = Plan { adaptive: true, ..symplectic_plan.clone() };
    let adaptive = assess(system, &adaptive_plan);
    let neighbour = assess(&last_digit(system), &adaptive_plan).verdict;
    let both = [&symplectic, &adaptive].iter().all(|a| a.verdict == Verdict::Regular);
    let step_day = symplectic.step_day;
    let ends = both.then(|| ends(system, case.orbits, &symplectic_plan, step_day));
    let alive_day = symplectic.end_time_day.min(adaptive.end_time_day);
    let parted = if both { None } else { parted_orbits(system, alive_day, &symplectic_plan, step_day) };
    let growth = adaptive.lyapunov.map(|l| l.per_day * adaptive.end_time_day);
    Outcome { symplectic, adaptive, neighbour, ends, growth, parted }
}

/// The same start, every velocity component larger by one part in 2⁵².
fn last_digit(system: &Configuration) -> Configuration {
    let mut near = system.clone();
    near.planets.iter_mut().flat_map(|p| &mut p.velocity_au_day).for_each(|v| *v *= 1.0 + f64::EPSILON);
    near
}
