//! Fifty random compact systems with both engines, over two spans.

use std::f64::consts::{PI, TAU};
use std::ops::ControlFlow;

use abide::assess::{Assessment, Plan, assess, innermost_period_day};
use abide::coords::{Configuration, configure};
use abide::input::parse_system;
use abide::integrate::forces::Forces;
use abide::integrate::radau::{Engine, TOLERANCE, Watch};
use abide::integrate::{Advance, Block, State, Tangent, advance, from_map, to_map};
use abide::system::Span;
use abide::verdict::Verdict;
use rayon::prelude::*;

use super::random::Random;
use super::report::{Report, short};
use super::truth_support::{plan, state};

const SYSTEMS: usize = 50;
/// Spans in inner orbits: the first was chosen for its cost alone, the second is what the program takes where nothing is asked.
const SPANS: [f64; 2] = [1500.0, 1e4];
const SEED: u64 = 4711;

const WORDS: &str = "
Invented systems drawn with seed 4711: star of 0.7 to 1.2 solar masses, 2 to 4 planets, innermost period 5 to 30 d, neighbours' periods in ratios between
1.25 and 2.1, masses 1 to 40 Earth masses (uniform in the logarithm), e from 0 to 0.12, inclinations to the plane up to 2 deg, all angles by chance. Encounters
end a cell at one mutual Hill radius, energy error 1e-6 asked. Symplectic: the plan that the program chooses by itself. Adaptive: the same plan with
`adaptive`. Limit: the same verdict on at least 49 of 50.

Two spans, `orbits` of the innermost planet. The first table made had 1500, chosen for its cost alone; 1e4 is the program's own default. Before the longer runs were made it was
written down here why both are shown: whether a chaotic system meets with an encounter before a given moment is not decided by the stated numbers beyond some Lyapunov times, so two engines
can differ there by chance, as two starts that differ in a far digit do; a longer span leaves fewer systems half way. How often chance alone makes two engines differ, and whether one of them
loses systems more easily, is measured in [fifty-losses](fifty-losses.md).

End states, where both say regular: the symplectic scheme of that plan from the start to the end of the span in steps no longer than those used, against
the adaptive engine alone. `gap_rad` is the largest distance of any planet over its distance from the star. `expected_rad` is the phase error expected of the step: the same
run with half the step differs by d, so that the error is near d/(1 - 1/4) for an error falling with the square of the step and less for higher orders;
`rounding_rad` what rounding may add, 3 pi N times four units times the root of the number of kicks (Brouwer 1937). Limit: 1.5 times
expected + rounding. The estimate does not use the adaptive run.
";

/// What became of one system.
struct Outcome {
    planets: usize,
    symplectic: Assessment,
    adaptive: Assessment,
    /// Gap, expected and rounding, rad.
    ends: Option<[f64; 3]>,
}

/// The systems in their order.
pub fn systems() -> Vec<Configuration> {
    let mut random = Random::new(SEED);
    (0..SYSTEMS).map(|_| system(&mut random)).collect()
}

pub fn write() {
    let systems = systems();
    let (mut rows, mut found) = (Vec::new(), String::new());
    for orbits in SPANS {
        let outcomes: Vec<Outcome> = systems.par_iter().map(|system| outcome(system, orbits)).collect();
        found += &in_words(orbits, &outcomes);
        let all = outcomes.iter().zip(&systems).enumerate();
        rows.extend(all.map(|(k, (o, s))| row(k + 1, orbits, o, s)));
    }
    let columns = vec![
        "orbits",
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

/// What came out over one span, a paragraph.
fn in_words(orbits: f64, outcomes: &[Outcome]) -> String {
    let same = outcomes.iter().filter(|o| o.symplectic.verdict == o.adaptive.verdict).count();
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
        "Found over {orbits} orbits: the same verdict on {same} of {SYSTEMS} ({}), with chaotic and lost taken together on {merged}; of {regular} regular systems {within} end \
         within the limit ({}). Adaptive verdicts: {} regular, {} chaotic, {} lost, {} undecided, {} untrusted.\n\n",
        if same + 1 >= SYSTEMS { "met" } else { "NOT met" },
        if regular == within { "met" } else { "NOT met" },
        count(Verdict::Regular),
        count(Verdict::Chaotic),
        count(Verdict::Lost),
        count(Verdict::Undecided),
        count(Verdict::Untrusted),
    )
}

fn agrees([gap, expected, rounding]: [f64; 3]) -> bool {
    gap <= 1.5 * expected + rounding
}

fn row(number: usize, orbits: f64, outcome: &Outcome, system: &Configuration) -> Vec<String> {
    let Outcome { planets, symplectic: s, adaptive: a, ends } = outcome;
    let word = |yes: bool| if yes { "yes" } else { "NO" }.to_string();
    let maybe = |x: Option<f64>| x.map_or(String::new(), short);
    let share = |x: &Assessment| short(x.end_time_day / (orbits * innermost_period_day(system)));
    vec![
        orbits.to_string(),
        number.to_string(),
        planets.to_string(),
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
        maybe(ends.map(|e| e[0])),
        maybe(ends.map(|e| e[1])),
        maybe(ends.map(|e| e[2])),
        ends.map_or(String::new(), |e| word(agrees(e))),
    ]
}

fn system(random: &mut Random) -> Configuration {
    let planets = random.between(2.0, 5.0) as usize;
    let mut period = random.between(5.0, 30.0);
    let mut text = format!(
        "title = \"Drawn\"\n[star]\nmass = \"{} Msun\"\nradius = \"1 Rsun\"\n",
        random.between(0.7, 1.2)
    );
    for k in 0..planets {
        let mass = random.between(0.0, 40f64.ln()).exp();
        text += &format!(
            "[[planet]]\nname = \"{}\"\nperiod = \"{period} d\"\nmass = \"{mass} Mearth\"\nradius = \"2 Rearth\"\n\
             eccentricity = {}\ninclination = \"{} deg\"\nascending_node = \"{} deg\"\nargument_of_pericentre = \"{} deg\"\n\
             mean_anomaly = \"{} deg\"\n",
            ["b", "c", "d", "e"][k],
            random.between(0.0, 0.12),
            90.0 + random.between(-2.0, 2.0),
            random.between(-2.0, 2.0),
            random.between(0.0, 360.0),
            random.between(0.0, 360.0),
        );
        period *= random.between(1.25, 2.1);
    }
    configure(&parse_system("drawn.toml", &text).unwrap_or_else(|e| panic!("{e}")).system).unwrap()
}

fn outcome(system: &Configuration, orbits: f64) -> Outcome {
    let symplectic_plan = plan(system, Span::Orbits(orbits), 1e-6);
    let symplectic = assess(system, &symplectic_plan);
    let adaptive = assess(system, &Plan { adaptive: true, ..symplectic_plan.clone() });
    let both = [&symplectic, &adaptive].iter().all(|a| a.verdict == Verdict::Regular);
    let ends = both.then(|| ends(system, orbits, &symplectic_plan, symplectic.step_day));
    Outcome { planets: system.planets.len(), symplectic, adaptive, ends }
}

/// Gap of the ends, the expected error of the step, and what rounding may add; rad.
fn ends(system: &Configuration, orbits: f64, plan: &Plan, step_day: f64) -> [f64; 3] {
    let start = state(system);
    let day = orbits * innermost_period_day(system);
    let steps = (day / step_day).ceil() as usize;
    let coarse = symplectic_end(&start, plan, day, steps);
    let fine = symplectic_end(&start, plan, day, 2 * steps);
    let mut engine = Engine::from_state(&start, &[], &Forces::newton(), TOLERANCE).unwrap();
    engine.advance(day, &Watch::default(), |_| ControlFlow::Continue(())).unwrap();
    let kicks = (steps * plan.splitting().stages()) as f64;
    let rounding = 3.0 * PI * orbits * 4.0 * f64::EPSILON * kicks.sqrt();
    debug_assert!(rounding < TAU);
    [apart(&coarse, &engine.state()), apart(&coarse, &fine) / 0.75, rounding]
}

fn symplectic_end(start: &State, plan: &Plan, day: f64, steps: usize) -> State {
    let mut block = Block::in_coordinates(plan.coordinates, 1, start.gm.len());
    let still = Tangent { pos: start.pos.clone(), vel: start.vel.clone() };
    block.start(0, start, &still, day / steps as f64, 1.0);
    to_map(&mut block, plan.splitting());
    advance(Advance { block: &mut block, scheme: plan.splitting(), steps, tangent: false });
    from_map(&mut block, plan.splitting());
    block.state(0)
}

/// Largest distance of a planet's two places over its distance from the star.
fn apart(a: &State, b: &State) -> f64 {
    let length = |v: [f64; 3]| v.iter().map(|x| x * x).sum::<f64>().sqrt();
    let each = a.pos.iter().zip(&b.pos);
    each.map(|(p, q)| length([0, 1, 2].map(|k| p[k] - q[k])) / length(*q)).fold(0.0, f64::max)
}
