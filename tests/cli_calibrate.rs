//! `abide survey --calibrate` as a user meets it.

mod cli_support;

use cli_support::{Desk, PAIR_MAP, wait_until};

/// Half of it is wild: some cells that live through the span are lost later.
fn study() -> String {
    PAIR_MAP
        .replace("span", "measure = [\"megno\", \"frequency_drift\"]\nspan")
        .replace("cells = 9", "cells = 16")
        .replace("cells = 7", "cells = 12")
}

fn desk() -> Desk {
    let desk = Desk::with_pair();
    desk.write("map.toml", study());
    desk
}

const CALIBRATE: [&str; 6] =
    ["map.toml", "--calibrate", "--calibrate-cells", "60", "--calibrate-longer", "20"];

#[test]
fn the_calibration_is_written_and_said() {
    let desk = desk();
    let line = desk.abide("survey").args(CALIBRATE).args(["--into", "out"]);
    line.run().done().said("calibration  60 surviving");
    let (words, summary) = (desk.text("out/calibration.txt"), desk.text("out/summary.txt"));
    assert!(summary.ends_with(&words) && words.contains("no verdict depends on it"), "{summary}");
    let table = desk.text("out/calibration.csv");
    let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_reader(table.as_bytes());
    let rows: Vec<csv::StringRecord> = reader.records().map(|row| row.unwrap()).collect();
    assert_eq!(rows.len(), 60);
    let count = |outcome: &str| rows.iter().filter(|row| &row[3] == outcome).count();
    let (lost, survived) = (count("lost"), count("survived"));
    assert!(lost >= 3 && survived >= 20, "{lost} lost, {survived} survived: too few to say anything");
    assert!(words.contains(&format!("{lost} lost, {survived} survived")), "{words}");
    // The threshold counted again from the table.
    let (_, rest) = table.split_once("\"threshold\": ").unwrap();
    let threshold: f64 = rest.split('}').next().unwrap().parse().unwrap();
    let above = |row: &csv::StringRecord| row[1].parse::<f64>().unwrap() > threshold;
    let right_lost = rows.iter().filter(|row| &row[3] == "lost" && above(row)).count();
    let right_survived = rows.iter().filter(|row| &row[3] == "survived" && !above(row)).count();
    assert!(words.contains(&format!("{right_lost} of {lost} above it")), "{words}");
    assert!(words.contains(&format!("{right_survived} of {survived} not above it")), "{words}");
    // A threshold that hangs on single cells says so.
    assert_eq!(words.contains("take the interval, not the threshold"), lost.min(survived) < 10, "{words}");
    assert!(lost.min(survived) < 10, "{lost} lost: no longer a test of that line");
    // Of use: better than a coin for both together.
    let shares = right_lost as f64 / lost as f64 + right_survived as f64 / survived as f64;
    assert!(shares > 1.2, "{words}");
    // The survey itself is what it is without.
    desk.abide("survey").args(["map.toml", "--into", "plain"]).run().done();
    assert_eq!(desk.read("plain/cells.ecsv"), desk.read("out/cells.ecsv"));
    assert_eq!(desk.text("plain/summary.txt") + &words, summary);
    // A summary that is made again keeps it.
    std::fs::remove_file(desk.path("out/summary.txt")).unwrap();
    desk.abide("survey").args(["map.toml", "--into", "out"]).run().done();
    assert_eq!(desk.text("out/summary.txt"), summary);
}

#[test]
fn interrupted_it_goes_on_to_the_same_bytes() {
    let desk = desk();
    let longer = ["map.toml", "--calibrate", "--calibrate-cells", "60", "--calibrate-longer", "60"];
    let start = |folder: &str| desk.abide("survey").args(longer).args(["--into", folder]);
    start("undisturbed").run().done();
    let journal = desk.path("out/calibration-60-cells-60-times.csv");
    let lines = || std::fs::read(&journal).map_or(0, |bytes| bytes.iter().filter(|b| **b == b'\n').count());
    let running = start("out").start();
    wait_until("the journal of the calibration grows", || lines() > 4);
    running.interrupt().code(130).said("The same command goes on");
    let kept = lines() - 1;
    assert!((4..60).contains(&kept) && !desk.path("out/calibration.csv").exists(), "{kept}");
    start("out").run().done().said(&format!("{kept} are done"));
    for name in ["calibration.csv", "calibration.txt", "summary.txt"] {
        assert_eq!(desk.read(format!("out/{name}")), desk.read(format!("undisturbed/{name}")), "{name}");
    }
}

#[test]
fn what_cannot_be_calibrated_is_refused_before_the_work() {
    let desk = desk();
    desk.write("silent.toml", PAIR_MAP);
    desk.write("early.toml", study() + "[limits]\nstop_when_chaotic = true\n");
    let line = |words: &[&str]| desk.abide("survey").args(words).run();
    line(&["silent.toml", "--calibrate"]).refused().said("\"frequency_drift\"").said("measure");
    line(&["early.toml", "--calibrate"]).refused().said("stop_when_chaotic").said("[limits]");
    line(&["map.toml", "--calibrate", "--calibrate-cells", "1"]).refused().said("--calibrate-cells is 1");
    for factor in ["1", "0.5", "nan", "inf"] {
        line(&["map.toml", "--calibrate", "--calibrate-longer", factor]).refused().said("--calibrate-longer");
    }
    line(&["map.toml", "--calibrate-cells", "9"]).code(2).said("--calibrate");
    assert!(!desk.path("reports").exists());
}
