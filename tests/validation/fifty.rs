//! Fifty random compact systems with both engines, over two spans and at several accuracies.

use abide::assess::{ADAPTIVE, Assessment, Plan, assess, innermost_period_day};
use abide::coords::Configuration;
use abide::system::Span;
use abide::verdict::Verdict;
use rayon::prelude::*;

use super::fifty_ends::{agrees, ends, parted_orbits};
use super::fifty_systems::{SYSTEMS, systems};
use super::report::{Report, met, short};
use super::truth_support::plan;

/// One comparison: the span in inner orbits, and the energy error asked of the symplectic scheme.
struct Case {
    orbits: f64,
    asked: f64,
}

/// The first span was chosen for its cost alone, the second is what the program takes where nothing is asked.
const CASES: [Case; 4] = [
    Case { orbits: 1500.0, asked: 1e-6 },
    Case { orbits: 1500.0, asked: 1e-9 },
    Case { orbits: 1500.0, asked: 1e-12 },
    Case { orbits: 1e4, asked: 1e-6 },
];

/// Systems that may differ.
const MAY_DIFFER: f64 = 1.0;

const WORDS: &str = "
Invented systems drawn with seed 4711: star of 0.7 to 1.2 solar masses, 2 to 4 planets, innermost period 5 to 30 d, neighbours' periods in ratios between
1.25 and 2.1, masses 1 to 40 Earth masses (uniform in the logarithm), e from 0 to 0.12, inclinations to the plane up to 2 deg, all angles by chance. Encounters
end a cell at one mutual Hill radius. Symplectic: the plan that the program chooses by itself for the energy error `asked`. Adaptive: the same plan with `adaptive`. Seed and systems have
been the same since the first table.

What is compared. A verdict about a chaotic system follows from the stated numbers only as long as exp(λt) times the engines' errors is small: until then both engines are on one trajectory and must
agree, after that each is on a trajectory of its own, and whether it meets with an encounter before the span ends is a matter of chance. So the engines are compared at several accuracies of the
symplectic one over a span of 1500 `orbits` of the innermost planet (λT of 5 to 100 for the chaotic ones, column `growth`, from the adaptive run), and at the program's default accuracy over its default span
of 1e4. `parted_orbits`: when any planet's two places were first farther apart than 0.03 of its distance from the star; empty where that never was while both lived (not measured where both say regular or the adaptive engine did all in the end). `near`: the
adaptive engine from a start whose velocities are one unit in the last place larger; where its verdict differs from that of the adaptive engine itself, no calculation in double precision decides it.
All are judged by 49 of 50; at 1e-6, the default, where the trajectories part soonest, a difference is no error of either engine once they have parted, and the limit is a matter of luck. More than 1e-12 says nothing new: at 1e-13 (tried once; 49 of 50) the
rounding of plain sums is met and the program hands most of the chaotic systems to the adaptive engine, which is then compared with itself. The systems that it hands over are counted under `schemes`; at 1e-12 they are
those lost, since the encounter that ends them takes the energy of the splitting with it. How often chance alone
makes two engines differ, and whether one of them loses systems more easily, is measured in [fifty-losses](fifty-losses.md).

End states, where both say regular: the symplectic scheme of that plan from the start to the end of the span in steps no longer than those used, against
the adaptive engine alone. `gap_rad` is the largest distance of any planet over its distance from the star. `expected_rad` is the phase error expected of the step: the same
run with half the step differs by d, so that the error is near d/(1 - 1/4) for an error falling with the square of the step and less for higher orders;
`rounding_rad` what rounding may add, 3 pi N times four units times the root of the number of kicks (Brouwer 1937). Limit: 1.5 times
expected + rounding. The estimate does not use the adaptive run.
";

/// What became of one system.
struct Outcome {
    symplectic: Assessment,
    adaptive: Assessment,
    /// By the adaptive engine from a start that differs in the last digit.
    near: Verdict,
    /// Gap, expected and rounding, rad.
    ends: Option<[f64; 3]>,
    /// λT of the adaptive run.
    growth: Option<f64>,
    /// Inner orbits.
    parted: Option<f64>,
}

impl Outcome {
    fn agrees(&self) -> bool {
        self.symplectic.verdict == self.adaptive.verdict
    }
}

pub fn write() {
    let systems = systems();
    let (mut rows, mut summary, mut differ) = (Vec::new(), SUMMARY.to_string(), String::new());
    for case in CASES {
        let outcomes: Vec<Outcome> = systems.par_iter().map(|system| outcome(system, &case)).collect();
        summary += &in_short(&case, &outcomes);
        differ += &differing(&case, &outcomes, &systems);
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
        "near",
        "parted_orbits",
        "gap_rad",
        "expected_rad",
        "rounding_rad",
        "met",
    ];
    Report {
        name: "fifty",
        title: "Fifty random systems with both engines",
        words: format!("{WORDS}{summary}\nThe systems on which they differ:\n\n{differ}"),
        columns,
        rows,
    }
    .write();
}

const SUMMARY: &str = "
| orbits | asked | schemes | same verdict | limit | met | of the unstable that stayed together | of those that parted | chaotic and lost as one | adaptive and near | regular ends within limit |
| --- | --- | --- | --- | --- | --- | --- | --- | --- | --- | --- |
";

/// What came out of one comparison, a line of the summary.
fn in_short(case: &Case, outcomes: &[Outcome]) -> String {
    let count = |which: &dyn Fn(&Outcome) -> bool| outcomes.iter().filter(|o| which(o)).count();
    let same = count(&Outcome::agrees);
    // Of the regular ones it was not measured, and the adaptive engine cannot part from itself.
    let stayed = |o: &Outcome| o.parted.is_none() && o.ends.is_none() && o.symplectic.scheme != ADAPTIVE;
    let (together, parted) = (count(&stayed), count(&|o| o.parted.is_some()));
    let scheme = |name: &str| format!("{name} {}", count(&|o| o.symplectic.scheme == name));
    let cells = [
        case.orbits.to_string(),
        format!("{:e}", case.asked),
        ["(2,2)", "(8,4)", "(10,6,4)", ADAPTIVE].map(scheme).join(", "),
        same.to_string(),
        "49".to_string(),
        met((SYSTEMS - same) as f64, MAY_DIFFER),
        format!("{} of {together}", count(&|o| stayed(o) && o.agrees())),
        format!("{} of {parted}", count(&|o| o.parted.is_some() && o.agrees())),
        count(&|o| o.agrees() || (is_unstable(&o.symplectic) && is_unstable(&o.adaptive))).to_string(),
        count(&|o| o.near == o.adaptive.verdict).to_string(),
        format!("{} of {}", count(&|o| o.ends.is_some_and(agrees)), count(&|o| o.ends.is_some())),
    ];
    format!("| {} |\n", cells.join(" | "))
}

/// The systems on which the engines differ, a sentence each.
fn differing(case: &Case, outcomes: &[Outcome], systems: &[Configuration]) -> String {
    let differ = outcomes.iter().enumerate().filter(|(_, o)| !o.agrees());
    let one = |(k, o): (usize, &Outcome)| {
        let period = innermost_period_day(&systems[k]);
        let end = |a: &Assessment| format!("{} at {:.0}", a.verdict.word(), a.end_time_day / period);
        let number = |x: Option<f64>| x.map_or("unknown".to_string(), |x| format!("{x:.0}"));
        format!(
            "* {} orbits, {:e} asked, system {}: {} by the symplectic, {} by the adaptive engine, {} from the start next to it; λT {}, parted after {} orbits.\n",
            case.orbits,
            case.asked,
            k + 1,
            end(&o.symplectic),
            end(&o.adaptive),
            o.near.word(),
            number(o.growth),
            number(o.parted),
        )
    };
    differ.map(one).collect()
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
        word(outcome.agrees()),
        maybe(s.megno),
        maybe(a.megno),
        share(s),
        share(a),
        maybe(s.energy_error),
        maybe(a.energy_error),
        s.scheme.to_string(),
        format!("{:.0}", period / s.step_day),
        maybe(outcome.growth),
        outcome.near.word().to_string(),
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
    let near = assess(&last_digit(system), &adaptive_plan).verdict;
    let both = [&symplectic, &adaptive].iter().all(|a| a.verdict == Verdict::Regular);
    let step_day = symplectic.step_day;
    let ends = both.then(|| ends(system, case.orbits, &symplectic_plan, step_day));
    let alive_day = symplectic.end_time_day.min(adaptive.end_time_day);
    let known = both || symplectic.scheme == ADAPTIVE;
    let parted = if known { None } else { parted_orbits(system, alive_day, &symplectic_plan, step_day) };
    let growth = adaptive.lyapunov.map(|l| l.per_day * adaptive.end_time_day);
    Outcome { symplectic, adaptive, near, ends, growth, parted }
}

fn is_unstable(assessment: &Assessment) -> bool {
    matches!(assessment.verdict, Verdict::Chaotic | Verdict::Lost)
}

/// The same start, every velocity component larger by one part in 2⁵².
fn last_digit(system: &Configuration) -> Configuration {
    let mut near = system.clone();
    near.planets.iter_mut().flat_map(|p| &mut p.velocity_au_day).for_each(|v| *v *= 1.0 + f64::EPSILON);
    near
}
