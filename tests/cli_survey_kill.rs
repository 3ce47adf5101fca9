//! A survey that is killed, stopped, or started twice.

mod cli_support;

use std::path::Path;
use std::time::Duration;

use cli_support::{Desk, PAIR_MAP, wait_until};

/// Long enough to be caught at work, short enough to be done again.
fn long_study() -> String {
    PAIR_MAP
        .replace("200 orbits", "3000 orbits")
        .replace("cells = 9", "cells = 30")
        .replace("cells = 7", "cells = 20")
}

const CELLS: usize = 600;

fn lines(path: &Path) -> usize {
    std::fs::read(path).map_or(0, |bytes| bytes.iter().filter(|byte| **byte == b'\n').count())
}

/// Spread evenly over the work by the golden ratio.
fn share(kill: usize) -> f64 {
    (0.618_033_988_749_895 * (kill + 1) as f64).fract()
}

#[test]
fn killed_at_ten_moments_gives_the_bytes_of_an_undisturbed_run() {
    let desk = Desk::with_pair();
    desk.write("map.toml", long_study());
    desk.abide("survey").args(["map.toml", "--into", "undisturbed"]).run().done();
    let journal = desk.path("killed/journal.csv");
    let start = || desk.abide("survey").args(["map.toml", "--into", "killed"]).start();
    for kill in 0..10 {
        let running = start();
        if kill >= 2 {
            // Each process gets a little further than the one before, wherever in a line it is hit.
            let goal = 1 + CELLS * (kill - 1) / 10 + (share(kill) * 20.0) as usize;
            wait_until("the journal grows", || lines(&journal) > goal);
        }
        std::thread::sleep(Duration::from_micros((share(kill) * 15_000.0) as u64));
        running.kill();
    }
    let done = lines(&journal);
    assert!(done > 100 && done <= CELLS, "{done} lines: killed at work, not after it");
    desk.abide("survey").args(["map.toml", "--into", "killed"]).run().done().said("goes on");
    for name in ["cells.ecsv", "summary.txt", "map.png"] {
        assert_eq!(desk.read(format!("killed/{name}")), desk.read(format!("undisturbed/{name}")), "{name}");
    }
}

#[test]
fn an_interrupted_survey_says_how_to_go_on() {
    let desk = Desk::with_pair();
    desk.write("map.toml", long_study());
    let running = desk.abide("survey").args(["map.toml", "--into", "out"]).start();
    let journal = desk.path("out/journal.csv");
    wait_until("the journal grows", || lines(&journal) > 20);
    running.interrupt().code(130).said("stopped").said("The same command goes on");
    let kept = lines(&journal) - 1;
    assert!(kept >= 20 && !desk.path("out/cells.ecsv").exists());
    let again = desk.abide("survey").args(["map.toml", "--into", "out"]).run().done();
    // Nothing that was finished is torn or done again.
    let again = again.said(&format!("goes on, {kept} of {CELLS} cells are done"));
    assert!(!again.stderr.contains("dropped"), "{}", again.stderr);
}

#[test]
fn a_second_process_on_one_run_is_refused() {
    let desk = Desk::with_pair();
    desk.write("map.toml", long_study());
    let mut first = desk.abide("survey").args(["map.toml", "--into", "out"]).start();
    let journal = desk.path("out/journal.csv");
    wait_until("the journal grows", || lines(&journal) > 5);
    let second = desk.abide("survey").args(["map.toml", "--into", "out"]).run();
    assert!(!first.has_ended(), "the first must be at work for this to mean anything");
    second.refused().said("held by another process").said("wait for it or stop it");
    first.wait().done();
}
