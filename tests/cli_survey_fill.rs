//! `abide survey` on a grid whose calm parts are filled, as a user meets it.

mod cli_support;

use std::path::Path;
use std::time::Duration;

use cli_support::{Desk, PAIR_MAP, wait_until};

const OUTPUTS: [&str; 3] = ["cells.ecsv", "map.png", "summary.txt"];
const CELLS: usize = 60 * 40;

fn study() -> String {
    PAIR_MAP
        .replace("200 orbits", "600 orbits")
        .replace("from = \"16 d\"", "from = \"13 d\"")
        .replace("cells = 9", "cells = 60")
        .replace("cells = 7", "cells = 40")
}

fn desk() -> Desk {
    let desk = Desk::with_pair();
    desk.write("map.toml", study());
    desk
}

/// The fields of the named columns, row by row.
fn columns(table: &str, names: &[&str]) -> Vec<Vec<String>> {
    let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_reader(table.as_bytes());
    let head = reader.headers().unwrap().clone();
    let places: Vec<usize> = names.iter().map(|name| head.iter().position(|n| n == *name).unwrap()).collect();
    reader
        .records()
        .map(|row| row.unwrap())
        .map(|row| places.iter().map(|p| row[*p].to_owned()).collect())
        .collect()
}

fn lines(path: &Path) -> usize {
    std::fs::read(path).map_or(0, |bytes| bytes.iter().filter(|byte| **byte == b'\n').count())
}

#[test]
fn filled_cells_are_marked_counted_and_nearly_always_right() {
    let desk = desk();
    let words = ["map.toml", "--fill", "--into", "filled", "--json"];
    let outcome =
        desk.abide("survey").args(words).run().done().said("coarse grid first").said("--every-cell");
    let summary: serde_json::Value = serde_json::from_str(&outcome.stdout).unwrap();
    desk.abide("survey").args(["map.toml", "--into", "whole"]).run().done();
    let names = ["verdict", "filled", "megno", "end_time", "steps", "energy_error", "lost_body"];
    let filled = columns(&desk.text("filled/cells.ecsv"), &names);
    let whole = columns(&desk.text("whole/cells.ecsv"), &names);
    assert_eq!((filled.len(), whole.len()), (CELLS, CELLS));
    let (mut count, mut wrong) = (0, 0);
    for (ours, right) in filled.iter().zip(&whole) {
        if ours[1].is_empty() {
            assert_eq!(ours, right, "an integrated cell is the same in both");
            continue;
        }
        count += 1;
        wrong += usize::from(ours[0] != right[0]);
        assert!(ours[2..].iter().all(String::is_empty), "{ours:?}");
    }
    assert!(
        whole.iter().all(|row| row[1].is_empty()),
        "a small grid is integrated whole when nothing is said"
    );
    assert!(5 * count > CELLS, "{count} filled");
    assert!(100 * wrong < CELLS, "{wrong} of {count} filled cells have another verdict");
    assert_eq!(summary["filled"], count);
    assert_eq!(summary["integrated"], CELLS - count);
    let text = desk.text("filled/summary.txt");
    assert!(text.contains(&format!("filled     {count} (")), "{text}");
}

#[test]
fn threads_and_kills_give_the_same_bytes() {
    let desk = desk();
    let survey = |folder: &str, threads: &str| {
        desk.abide("survey").args(["map.toml", "--fill", "--into", folder, "--threads", threads])
    };
    survey("one", "1").run().done();
    let right: Vec<Vec<u8>> = OUTPUTS.iter().map(|name| desk.read(format!("one/{name}"))).collect();
    survey("seven", "7").run().done();
    let journal = desk.path("killed/journal.csv");
    for kill in 0..10usize {
        let running = survey("killed", "2").start();
        let before = lines(&journal);
        wait_until("the journal grows", || lines(&journal) > before + 5);
        std::thread::sleep(Duration::from_micros((kill as u64 * 7919) % 9000));
        running.kill();
    }
    assert!(lines(&journal) < CELLS, "killed at work, not after it");
    survey("killed", "2").run().done().said("goes on");
    for folder in ["seven", "killed"] {
        for (name, right) in OUTPUTS.iter().zip(&right) {
            assert!(desk.read(format!("{folder}/{name}")) == *right, "{folder}/{name}");
        }
    }
}

#[test]
fn a_run_that_was_stopped_is_drawn_as_a_whole_coarse_map() {
    let desk = desk();
    let running = desk.abide("survey").args(["map.toml", "--fill", "--into", "out"]).start();
    let journal = desk.path("out/journal.csv");
    // Five by four cells are the coarsest grid.
    wait_until("the coarsest grid", || lines(&journal) > 60);
    running.interrupt().code(130);
    desk.abide("draw").arg("out").run().done().said("each is shown over the cells around it");
    assert!(desk.read("out/map.png").starts_with(b"\x89PNG\r\n\x1a\n"));
}

#[test]
fn every_cell_goes_on_from_a_filled_run_and_leaves_no_trace_of_it() {
    let desk = desk();
    desk.abide("survey").args(["map.toml", "--fill", "--into", "out"]).run().done();
    let again = desk.abide("survey").args(["map.toml", "--fill", "--into", "out"]).run().done();
    again.said(&format!("all {CELLS} cells are done")).said("of them filled");
    desk.abide("survey").args(["map.toml", "--every-cell", "--into", "out"]).run().done().said("goes on");
    desk.abide("survey").args(["map.toml", "--every-cell", "--into", "whole"]).run().done();
    for name in OUTPUTS {
        assert!(desk.read(format!("out/{name}")) == desk.read(format!("whole/{name}")), "{name}");
    }
    desk.abide("survey").args(["map.toml", "--fill", "--every-cell"]).run().code(2).said("--every-cell");
}

#[test]
fn a_large_grid_is_filled_when_nothing_is_said() {
    let desk = desk();
    let large = study().replace("600 orbits", "40 orbits").replace("cells = 60", "cells = 200");
    desk.write("map.toml", large.replace("cells = 40", "cells = 200"));
    let running = desk.abide("survey").args(["map.toml", "--into", "out"]).start();
    wait_until("the journal grows", || lines(&desk.path("out/journal.csv")) > 20);
    running.interrupt().code(130).said("--every-cell integrates them too");
}
