//! Work counters of batches, and the early end of cells whose chaos is certain.

use std::collections::BTreeMap;

use abide::assess::{Assessment, BatchWork, Plan, run_batch};
use abide::coords::{Configuration, configure};
use abide::input;
use abide::survey::{Grid, Made, Source};
use abide::verdict::Verdict;

/// An invented pair; c is moved towards b until half of the map is lost within a few orbits.
const PAIR: &str = r#"
title = "Lanthorn"
[star]
mass = "0.87 Msun"
radius = "0.82 Rsun"
[[planet]]
name = "b"
period = "11.862 d"
mass = "60 Mearth"
eccentricity = "0.05"
argument_of_pericentre = "75 deg"
mean_anomaly = "0 deg"
[[planet]]
name = "c"
period = "18.2 d"
mass = "90 Mearth"
eccentricity = "0.03"
argument_of_pericentre = "190 deg"
mean_anomaly = "40 deg"
"#;

const MAP: &str = r#"
system = "pair.toml"
span = "1500 orbits"
measure = ["megno", "lyapunov"]
[[axis]]
vary = "c.period"
from = "13.6 d"
to = "21 d"
cells = 40
[[axis]]
vary = "c.eccentricity"
from = 0.0
to = 0.32
cells = 36
"#;

struct Map {
    plan: Plan,
    cells: Vec<(u64, Configuration)>,
}

fn map(limits: &str) -> Map {
    let system = input::parse_system("pair.toml", PAIR).unwrap();
    let file = input::parse_study("map.toml", &format!("{MAP}{limits}"), system).unwrap();
    let plan = Plan::for_study(&file.study, &configure(&file.system.system).unwrap(), &[]);
    let grid = Grid::new(file.system.system.clone(), file.study.clone()).unwrap();
    let follow = |cell| match grid.make(cell) {
        Made::ToFollow(configuration) => Some((cell, configuration)),
        Made::Settled(_) => None,
    };
    Map { cells: (0..grid.cells()).filter_map(follow).collect(), plan }
}

fn run(map: &Map, order: impl Iterator<Item = usize>) -> (BTreeMap<u64, Assessment>, BatchWork) {
    let mut order = order;
    let mut found = BTreeMap::new();
    let next = || order.next().map(|index| map.cells[index].clone());
    let work = run_batch(&map.plan, next, |cell, assessment| found.insert(cell, assessment).is_none());
    (found, work)
}

#[test]
fn lanes_are_full_where_half_of_the_cells_are_lost_early() {
    let map = map("");
    let (found, work) = run(&map, 0..map.cells.len());
    let span = map.plan.span_day;
    let early = found.values().filter(|a| a.verdict == Verdict::Lost && a.end_time_day < 0.05 * span).count();
    assert!(2 * early >= found.len(), "{early} of {} lost early", found.len());
    assert_eq!(work.entered, map.cells.len() as u64);
    let occupancy = work.used as f64 / work.offered as f64;
    assert!(occupancy >= 0.95, "{occupancy} of {work:?}");
    // Whatever the order, the cells take the same lane-blocks and give the same answers.
    let (other, other_work) = run(&map, (0..map.cells.len()).rev());
    assert_eq!(other, found);
    assert_eq!((other_work.used, other_work.again), (work.used, work.again));
    // At least the blocks of the final attempts.
    let blocks: u64 = found.values().map(|a| a.steps / map.plan.block_steps as u64).sum();
    assert!(work.used >= blocks, "{work:?} {blocks}");
    // A change that is right but dearer must be seen.
    assert_eq!((work.used, work.again), (24_839, 290));
}

#[test]
fn certain_chaos_ends_early_and_changes_no_other_verdict() {
    let (whole, short) = (map(""), map("[limits]\nstop_when_chaotic = true\n"));
    let ((to_the_end, all), (ended, less)) =
        (run(&whole, 0..whole.cells.len()), run(&short, 0..short.cells.len()));
    let mut early = 0;
    for (cell, full) in &to_the_end {
        let stopped = &ended[cell];
        if stopped == full {
            continue;
        }
        early += 1;
        assert_eq!(stopped.verdict, Verdict::Chaotic, "cell {cell}");
        assert!(stopped.lyapunov.is_some() && stopped.redone <= full.redone, "cell {cell}: {stopped:?}");
        // A cell that misses the energy target later is done again, on another path, only if it is followed so far.
        let other_path = stopped.redone < full.redone;
        assert!(other_path || stopped.end_time_day < full.end_time_day, "cell {cell}: {stopped:?} {full:?}");
        // What was followed to the end was chaotic, or lost while the other had stopped to look.
        assert!(matches!(full.verdict, Verdict::Chaotic | Verdict::Lost), "cell {cell}: {full:?}");
    }
    let chaotic = to_the_end.values().filter(|a| a.verdict == Verdict::Chaotic).count();
    assert!(chaotic > 40 && early > chaotic / 2, "{early} ended early, {chaotic} chaotic");
    assert!(less.used < all.used, "{less:?} {all:?}");
    assert_eq!((early, less.used), (189, 19_636));
}

#[test]
fn a_study_that_does_not_ask_follows_chaos_to_the_end() {
    assert!(!map("").plan.stop_when_chaotic);
    let system = input::parse_system("pair.toml", PAIR).unwrap();
    let wrong = format!("{MAP}[limits]\nstop_when_chaotic = \"yes\"\n");
    let error = input::parse_study("map.toml", &wrong, system).unwrap_err().to_string();
    assert!(error.contains("map.toml:") && error.contains("true") && error.contains("false"), "{error}");
}
