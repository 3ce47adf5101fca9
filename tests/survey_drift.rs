//! Frequency drift and libration in surveys, against the tests' own integrator with the dense analysis.

mod cli_support;
mod frequency_support;

use abide::assess::{AngleFound, Assessment, Follower, Plan, assess, follow as series_of, run_batch};
use abide::coords::{Configuration, Elements, configure};
use abide::input::{parse_study, parse_system};
use abide::num::{Complex, Kept, Search, decompose};
use abide::observe::{AngleMotion, ResonantAngle, angle_motion};
use abide::system::{Encounter, Engine, Frame, Limits, Span};
use abide::units::{DEGREE, YEAR_DAY};
use abide::verdict::Verdict;
use cli_support::Desk;
use frequency_support::{Motion, follow};

/// HD 45364; its source is named there.
const HD_45364: &str = include_str!("truth/hd-45364.toml");

/// Giants near 5:2 (invented, but like the two largest of ours): the great inequality makes the mean motions of two
/// halves of 1200 yr differ, the same for every good integrator.
const GIANTS: &str = r#"
title = "Giants"
[star]
mass = "1 Msun"
[[planet]]
name = "b"
semi_major_axis = "5.2 au"
mass = "1 Mjup"
eccentricity = 0.048
argument_of_pericentre = "14 deg"
mean_anomaly = "20 deg"
[[planet]]
name = "c"
semi_major_axis = "9.555 au"
mass = "0.3 Mjup"
eccentricity = 0.054
argument_of_pericentre = "92 deg"
mean_anomaly = "317 deg"
"#;

fn start(text: &str) -> Configuration {
    configure(&parse_system("system.toml", text).unwrap().system).unwrap()
}

/// With the measures of a survey.
fn plan(start: &Configuration, span_day: f64, block_steps: usize) -> Plan {
    let limits = Limits { encounter: Encounter::Off, ..Limits::default() };
    let plan = Plan::new(Span::Days(span_day), &limits, &Engine::default(), start);
    let angle = ResonantAngle::new(vec![2, -3], vec![1, 0]).ok();
    Plan { frequency_drift: true, angle, block_steps, ..plan }
}

/// The tests' own integrator, a row each `every` steps.
fn slow_twin(start: &Configuration, step_day: f64, every: usize, rows: usize) -> Motion {
    let gm: Vec<f64> = start.planets.iter().map(|p| p.gm).collect();
    let orbits = start.elements_in(Frame::Astrocentric);
    follow(start.star_gm, &gm, Frame::Astrocentric, &orbits, step_day, every, rows)
}

/// log₁₀ |1 − n₂/n₁| from a exp(iλ) of a dense series over the two halves of so many sparse samples: the full analysis with
/// a joint fit of one line. Each sparse sample stands for the time about it; an odd one in the middle is left out.
fn dense_drift(rows: &[(f64, Elements)], samples: f64, apart_day: f64) -> f64 {
    let step = (rows[rows.len() - 1].0 - rows[0].0) / (rows.len() - 1) as f64;
    let half_day = (0.5 * samples).floor() * apart_day;
    let end_day = (samples + 0.5) * apart_day;
    let [first, second] = [0.5 * apart_day, end_day - half_day].map(|begin| {
        let inside = rows.iter().filter(|(time, _)| (begin..begin + half_day).contains(time));
        let signal: Vec<Complex> =
            inside.map(|(_, e)| Complex::from_polar(e.semi_major_axis_au, e.mean_longitude())).collect();
        decompose(&signal, step, Search { most: 1, window_power: 3 }).unwrap().lines[0].frequency
    });
    (1.0 - second / first).abs().log10()
}

#[test]
fn the_drift_is_that_of_a_dense_series_of_another_integrator() {
    let start = start(GIANTS);
    let span_day = 1200.0 * YEAR_DAY;
    let dense = slow_twin(&start, 0.01 * YEAR_DAY, 25, 4 * 1260);
    // Samples from a fifth of an orbit to one orbit apart, 100 and more of them (a survey has 1000).
    for block_steps in [4, 8, 20] {
        let found = assess(&start, &plan(&start, span_day, block_steps));
        assert_eq!(found.frequency_drift.len(), 2);
        let apart_day = found.step_day * block_steps as f64;
        let samples = (span_day / apart_day).round();
        assert!(samples < 2048.0);
        for (planet, drift) in found.frequency_drift.iter().enumerate() {
            let rows: Vec<(f64, Elements)> =
                dense.times_day.iter().copied().zip(dense.rows.iter().map(|row| row[planet])).collect();
            let expected = dense_drift(&rows, samples, apart_day);
            println!("planet {planet}, {block_steps}: {drift:.4} {expected:.4}");
            assert!((-6.0..-2.0).contains(&expected), "{expected}: a drift that means something");
            assert!((drift - expected).abs() < 0.02, "planet {planet}, {block_steps}: {drift} {expected}");
        }
        assert_eq!(found.worst_drift(), found.frequency_drift.iter().copied().reduce(f64::max));
    }
}

/// Lanthorn, whose samples are nine orbits apart, against the analysis of the very same motion with some in every orbit.
#[test]
fn sparse_samples_of_a_survey_do_as_well_as_a_dense_series() {
    const MAP: &str = "system = \"lanthorn.toml\"\nspan = \"1e4 orbits\"\nmeasure = [\"megno\", \"frequency_drift\"]\n\
                       [[axis]]\nvary = \"c.period\"\nfrom = \"17 d\"\nto = \"18 d\"\ncells = 2\n";
    let text = include_str!("../systems/lanthorn.toml");
    let mut regular = 0;
    for period in ["17.3", "17.7", "17.86", "18.3", "18.6", "18.9"] {
        let text = text.replace("17.86 ± 0.05 d", &format!("{period} d"));
        let system = parse_system("lanthorn.toml", &text).unwrap();
        let start = configure(&system.system).unwrap();
        let study = parse_study("map.toml", MAP, system).unwrap().study;
        let plan = Plan::for_study(&study, &start, &[]);
        let found = assess(&start, &plan);
        let apart_day = plan.block_steps as f64 * found.step_day;
        let samples = (plan.span_day / apart_day).round();
        assert!((1000.0..2000.0).contains(&samples), "{samples} samples");
        // Blocks of four steps, of the same size: the same motion, more rows.
        let step = Some(found.step_day * (1.0 + 1e-12));
        let dense = Plan { block_steps: 4, step_day: step, ..plan };
        let (same, rows) = series_of(&start, &dense, usize::MAX, |_| true).unwrap();
        assert_eq!((same.step_day, same.steps), (found.step_day, found.steps));
        if found.verdict != Verdict::Regular {
            continue;
        }
        regular += 1;
        for (planet, drift) in found.frequency_drift.iter().enumerate() {
            let rows: Vec<(f64, Elements)> =
                rows.iter().map(|row| (row.time_day, row.elements[planet])).collect();
            let expected = dense_drift(&rows, samples, apart_day);
            println!("{period} planet {planet}: {drift:.3} {expected:.3}");
            // What sampling adds: lines of the synodic motion folded near that of the mean motion.
            let gap = (10f64.powf(expected) - 10f64.powf(*drift)).abs();
            assert!(gap < 2e-7 + 0.05 * 10f64.powf(expected), "{period}: {drift} {expected}");
        }
    }
    assert!(regular >= 3, "{regular} cells are regular");
}

#[test]
fn the_libration_is_that_of_a_dense_series_of_another_integrator() {
    let start = start(HD_45364);
    let years = 400.0;
    let dense = slow_twin(&start, 0.25 * YEAR_DAY / 80.0, 80, 1601);
    let angle = ResonantAngle::new(vec![2, -3], vec![1, 0]).unwrap();
    let values: Vec<f64> = dense.rows.iter().map(|row| angle.value(row)).collect();
    let Ok(AngleMotion::Librates(expected)) = angle_motion(&values, 0.25 * YEAR_DAY) else { panic!() };
    // The most sparse samples are as far apart as a survey's ever are, about five inner orbits.
    for block_steps in [12, 28, 92] {
        let found = assess(&start, &plan(&start, years * YEAR_DAY, block_steps));
        let Some(AngleFound::Librates { centre, amplitude }) = found.angle else { panic!("{found:?}") };
        // Sparse samples miss the crest a little.
        let share = amplitude / expected.amplitude;
        assert!((0.95..1.01).contains(&share), "{block_steps}: {amplitude} {expected:?}");
        let gap = abide::num::wrap_half_turn(centre - expected.centre);
        assert!(gap.abs() < 2.0 * DEGREE, "{centre} {expected:?}");
    }
}

#[test]
fn a_cell_that_is_lost_has_neither() {
    // Crossing orbits of heavy planets.
    let crossing = GIANTS.replace("9.555", "6.2").replace("0.3 Mjup", "3 Mjup").replace("0.054", "0.3");
    let start = start(&crossing);
    let mut plan = plan(&start, 2000.0 * YEAR_DAY, 28);
    plan.encounter_hill = Some(1.0);
    let found = assess(&start, &plan);
    assert!(found.loss.is_some(), "{found:?}");
    assert_eq!((found.frequency_drift.len(), found.angle), (0, None));
}

/// Put down in the middle and taken up again.
#[test]
fn a_checkpoint_changes_no_bit() {
    let start = start(HD_45364);
    let plan = plan(&start, 3000.0 * YEAR_DAY, 28);
    let mut follower = Follower::new(&start, &plan, 50);
    while follower.progress().share < 0.61 {
        follower.one_block();
    }
    let kept = Kept::from_bytes(&follower.keep().to_bytes()).unwrap();
    let mut again = Follower::restored(&start, &plan, 50, &kept).unwrap();
    while again.assessment().is_none() {
        again.one_block();
    }
    let whole = assess(&start, &plan);
    assert!(whole.angle.is_some() && whole.frequency_drift.len() == 2);
    assert_eq!(again.assessment(), Some(&whole));
}

/// Whatever shares the lanes.
#[test]
fn neighbours_change_no_bit() {
    let cells: Vec<Configuration> =
        (0..11).map(|k| start(&GIANTS.replace("9.555", &format!("{}", 8.3 + 0.13 * f64::from(k))))).collect();
    let plan = plan(&cells[0], 600.0 * YEAR_DAY, 28);
    let mut together: Vec<Option<Assessment>> = vec![None; cells.len()];
    let mut next = cells.iter().cloned().enumerate().map(|(k, cell)| (k as u64, cell));
    run_batch(&plan, || next.next(), |k, found| together[k as usize].replace(found).is_none());
    for (cell, found) in cells.iter().zip(together) {
        let found = found.unwrap();
        assert_eq!(format!("{:?}", assess(cell, &plan)), format!("{found:?}"));
        assert_eq!(found.frequency_drift.len(), if found.loss.is_some() { 0 } else { 2 });
    }
}

const MAP: &str = r#"
system = "hd-45364.toml"
span = "400 orbits"
measure = ["megno", "lyapunov", "extent", "frequency_drift"]
angle = "2 b.mean_longitude - 3 c.mean_longitude + b.longitude_of_pericentre"
[[axis]]
vary = "c.period"
from = "322.85 d"
to = "402.85 d"
cells = 9
[[axis]]
vary = "c.eccentricity"
from = 0.0974
to = 0.22
cells = 4
"#;

fn column(table: &str, name: &str) -> Vec<String> {
    let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_reader(table.as_bytes());
    let at = reader.headers().unwrap().iter().position(|head| head == name);
    let at = at.unwrap_or_else(|| panic!("no column {name}"));
    reader.records().map(|row| row.unwrap()[at].to_string()).collect()
}

#[test]
fn a_survey_carries_drift_and_libration() {
    let desk = Desk::new().file("hd-45364.toml", HD_45364).file("map.toml", MAP);
    desk.abide("survey").args(["map.toml", "--into", "out"]).run().done();
    let table = desk.text("out/cells.ecsv");
    let [verdict, motion, amplitude, worst, b, c] = [
        "verdict",
        "angle.motion",
        "angle.amplitude",
        "frequency_drift",
        "b.frequency_drift",
        "c.frequency_drift",
    ]
    .map(|name| column(&table, name));
    // The published solution: c.period = 342.85 d, e = 0.0974, the same span with the tests' own integrator.
    let dense = slow_twin(&start(HD_45364), 0.25 * YEAR_DAY / 80.0, 80, 4 * 248);
    let angle = ResonantAngle::new(vec![2, -3], vec![1, 0]).unwrap();
    let values: Vec<f64> = dense.rows.iter().map(|row| angle.value(row)).collect();
    let Ok(AngleMotion::Librates(expected)) = angle_motion(&values, 0.25 * YEAR_DAY) else { panic!() };
    assert_eq!(motion[2], "librates");
    let stated: f64 = amplitude[2].parse().unwrap();
    assert!((stated * DEGREE / expected.amplitude - 1.0).abs() < 0.05, "{stated} {expected:?}");
    // Far outside of the resonance nothing librates.
    assert_eq!(motion[8], "circulates");
    assert_eq!(amplitude[8], "");
    let number = |text: &String| text.parse::<f64>().unwrap();
    let (mut lost, mut lived) = (0, 0);
    for cell in 0..36 {
        if verdict[cell] == "lost" || verdict[cell] == "untrusted" {
            lost += 1;
            assert_eq!([&motion[cell], &worst[cell], &b[cell], &c[cell]], ["", "", "", ""]);
        } else {
            lived += 1;
            assert_eq!(number(&worst[cell]), number(&b[cell]).max(number(&c[cell])));
            assert_eq!(amplitude[cell].is_empty(), motion[cell] != "librates", "cell {cell}");
        }
    }
    assert!(lost >= 5 && lived >= 10, "{lost} {lived}");
    let summary = desk.text("out/summary.txt");
    for words in ["drift ", "angle ", "librates in", "Lyapunov "] {
        assert!(summary.contains(words), "{words}: {summary}");
    }
    // The figure says which angle it is.
    let file = abide::input::read_study(desk.path("map.toml")).unwrap();
    let nominal = configure(&file.system.system).unwrap();
    let plan = Plan::for_study(&file.study, &nominal, &[]);
    let caption =
        abide::report::caption(&file.study, &file.system.system, &plan, &[], "angle.amplitude").join(" ");
    assert!(caption.contains("The angle is 2λ_b + ϖ_b − 3λ_c."), "{caption}");
    for column in ["angle.amplitude", "angle.centre", "frequency_drift", "c.frequency_drift", "b.e_range"] {
        let picture = format!("map-{column}.png");
        desk.abide("draw").args(["out", "--column", column]).run().done().said(&picture);
    }
}

#[test]
fn levels_and_threads_give_the_same_bytes() {
    let desk = Desk::new().file("hd-45364.toml", HD_45364).file("map.toml", MAP);
    let levels: Vec<&str> = abide::lanes::Level::available().into_iter().map(|level| level.word()).collect();
    let ways = levels.iter().map(|level| (*level, "2")).chain([(levels[0], "1"), (levels[0], "5")]);
    let mut tables = Vec::new();
    for (level, threads) in ways {
        let folder = format!("{level}-{threads}");
        let line = desk.abide("survey").args(["map.toml", "--threads", threads, "--into", &folder]);
        line.env("ABIDE_LANES", level).run().done();
        tables.push((folder.clone(), desk.text(format!("{folder}/cells.ecsv"))));
    }
    assert!(tables.len() >= 3);
    for (name, table) in &tables {
        assert!(*table == tables[0].1, "{name} differs from {}", tables[0].0);
    }
}
