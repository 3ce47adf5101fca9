//! `abide survey` as a user meets it.

mod cli_support;

use cli_support::{Desk, PAIR, PAIR_MAP};

const OUTPUTS: [&str; 3] = ["cells.ecsv", "map.png", "summary.txt"];

#[test]
fn a_study_becomes_a_run_with_table_map_and_summary() {
    let desk = Desk::with_pair();
    desk.abide("survey").arg("map.toml").run().done().said("63 of 63 cells (100 %)").said("map.png");
    let run = |name: &str| desk.read(format!("reports/runs/map/{name}"));
    assert_eq!(run("study.toml"), PAIR_MAP.as_bytes());
    assert_eq!(run("system.toml"), PAIR.as_bytes());
    assert!(run("map.png").starts_with(b"\x89PNG\r\n\x1a\n"));
    assert!(!run("summary.txt").is_empty());
    let table = String::from_utf8(run("cells.ecsv")).unwrap();
    assert!(table.starts_with("# %ECSV"));
    assert_eq!(table.lines().filter(|line| !line.starts_with('#')).count(), 1 + 63);
    assert_eq!(String::from_utf8(run("journal.csv")).unwrap().lines().count(), 1 + 63);
}

#[test]
fn the_manifest_says_program_input_host_plan_and_columns() {
    let desk = Desk::with_pair();
    desk.abide("survey").args(["map.toml", "--into", "out"]).run().done();
    let manifest: serde_json::Value = serde_json::from_str(&desk.text("out/run.json")).unwrap();
    assert_eq!(manifest["version"], env!("CARGO_PKG_VERSION"));
    assert_eq!(manifest["cells"], 63);
    for key in ["study_sha256", "system_sha256", "settings_sha256"] {
        assert_eq!(manifest[key].as_str().unwrap().len(), 64, "{key}");
    }
    assert!(!manifest["host"].as_str().unwrap().is_empty());
    assert!(manifest["started"].as_str().unwrap().ends_with('Z'));
    assert!(manifest["plan"]["span_day"].as_f64().unwrap() > 2000.0);
    for (key, words) in [("step_why", "err by at most"), ("scheme_why", "in short runs")] {
        let why = manifest["plan"][key].as_str().unwrap();
        assert!(why.contains(words), "{key}: {why}");
    }
    let summary = desk.text("out/summary.txt");
    for words in [
        "  why        the fewest kicks per passage",
        "  why        short runs of 3 configurations (2 more were lost in them)",
    ] {
        assert!(summary.contains(words), "{words}: {summary}");
    }
    let columns: Vec<&str> =
        manifest["journal_columns"].as_array().unwrap().iter().map(|c| c.as_str().unwrap()).collect();
    assert_eq!(&columns[..3], ["cell", "c.period", "c.eccentricity"]);
    let header = desk.text("out/journal.csv");
    assert_eq!(header.lines().next().unwrap(), columns.join(","));
}

#[test]
fn one_two_and_seven_threads_give_the_same_bytes() {
    let tables: Vec<Vec<u8>> = ["1", "2", "7"]
        .into_iter()
        .map(|threads| {
            let desk = Desk::with_pair();
            desk.abide("survey").args(["map.toml", "--into", "out", "--threads", threads]).run().done();
            OUTPUTS.iter().flat_map(|name| desk.read(format!("out/{name}"))).collect()
        })
        .collect();
    assert_eq!(tables[0], tables[1]);
    assert_eq!(tables[0], tables[2]);
}

#[test]
fn a_finished_run_says_so_and_makes_what_is_missing_again() {
    let desk = Desk::with_pair();
    desk.abide("survey").args(["map.toml", "--into", "out"]).run().done();
    let before: Vec<Vec<u8>> = OUTPUTS.iter().map(|name| desk.read(format!("out/{name}"))).collect();
    let journal = desk.read("out/journal.csv");
    std::fs::remove_file(desk.path("out/map.png")).unwrap();
    std::fs::remove_file(desk.path("out/cells.ecsv")).unwrap();
    let again = desk.abide("survey").args(["map.toml", "--into", "out"]).run().done();
    let again = again.said("out is finished: all 63 cells are done").said("cells.ecsv");
    assert!(!again.stderr.contains("summary.txt"), "{}", again.stderr);
    assert_eq!(desk.read("out/journal.csv"), journal);
    for (name, before) in OUTPUTS.iter().zip(before) {
        assert_eq!(desk.read(format!("out/{name}")), before, "{name}");
    }
}

#[test]
fn a_damaged_journal_is_mended_and_told() {
    let desk = Desk::with_pair();
    desk.abide("survey").args(["map.toml", "--into", "out"]).run().done();
    let table = desk.read("out/cells.ecsv");
    let mut journal = desk.read("out/journal.csv");
    let place = journal.len() / 2;
    journal[place] ^= 1;
    journal.truncate(journal.len() - 5);
    desk.write("out/journal.csv", journal);
    desk.abide("survey")
        .args(["map.toml", "--into", "out"])
        .run()
        .done()
        .said("2 lines of the journal were torn or damaged and dropped; the cells are done again")
        .said("goes on");
    assert_eq!(desk.read("out/cells.ecsv"), table);
}

#[test]
fn a_changed_study_or_system_is_refused_and_says_what_changed() {
    let desk = Desk::with_pair();
    desk.abide("survey").args(["map.toml", "--into", "out"]).run().done();
    desk.write("map.toml", PAIR_MAP.replace("cells = 7", "cells = 8"));
    let line = || desk.abide("survey").args(["map.toml", "--into", "out"]);
    line().run().refused().said("axis[c.eccentricity].cells was 7, is now 8").said("--into").said("delete");
    desk.write("map.toml", PAIR_MAP);
    desk.write("pair.toml", PAIR.replace("0.87", "0.88"));
    line()
        .run()
        .refused()
        .said("system.toml: star.mass was \"0.87 ± 0.03 Msun\", is now \"0.88 ± 0.03 Msun\"");
    desk.write("pair.toml", format!("# only a comment\n{PAIR}"));
    line().run().done().said("comments and layout only");
}

#[test]
fn vary_writes_a_study_that_can_be_run_again() {
    let desk = Desk::with_pair();
    let words = [
        "pair.toml",
        "--vary",
        "c.period",
        "--vary",
        "c.eccentricity",
        "--cells",
        "5",
        "--span",
        "100 orbits",
    ];
    desk.abide("survey").args(words).run().done();
    let folder = "reports/runs/pair-c.period-c.eccentricity";
    let study = format!("{folder}/study.toml");
    desk.abide("survey").args([&study, "--into", "again"]).run().done().said("25 of 25 cells");
    let table = |folder: &str| desk.read(format!("{folder}/cells.ecsv"));
    assert_eq!(table(folder), table("again"));
    // ±3σ of 18.2 ± 0.2 d; the eccentricity is cut at 0.
    let text = String::from_utf8(table("again")).unwrap();
    let first = text.lines().find(|line| line.starts_with("0,")).unwrap();
    let values: Vec<f64> = first.split(',').skip(1).take(2).map(|v| v.parse().unwrap()).collect();
    assert!((values[0] - 17.6).abs() < 1e-12 && (0.0..1e-3).contains(&values[1]), "{first}");
}

#[test]
fn json_goes_to_standard_output_and_talk_does_not() {
    let desk = Desk::with_pair();
    let outcome = desk.abide("survey").args(["map.toml", "--json", "--quiet"]).run().done().silent();
    let summary: serde_json::Value = serde_json::from_str(&outcome.stdout).unwrap();
    assert_eq!(summary["cells"], 63);
    let again = desk.abide("survey").args(["map.toml", "--json", "--quiet"]).run().done();
    assert_eq!(again.stdout, outcome.stdout);
}

#[test]
fn more_than_ten_million_cells_need_a_confirmation() {
    let desk = Desk::with_pair();
    desk.write(
        "map.toml",
        PAIR_MAP.replace("cells = 9", "cells = 4000").replace("cells = 7", "cells = 2501"),
    );
    desk.abide("survey")
        .args(["map.toml", "--into", "out"])
        .run()
        .refused()
        .said("10004000 cells")
        .said("--really");
    assert!(!desk.path("out").exists());
}

#[test]
fn an_unwritable_folder_is_told_before_the_work() {
    let desk = Desk::with_pair().file("taken", "");
    desk.abide("survey")
        .args(["map.toml", "--into", "taken/run"])
        .run()
        .refused()
        .said("taken/run")
        .said("--into");
}

#[test]
fn a_folder_with_files_of_its_own_is_left_alone() {
    let desk = Desk::with_pair().file("system.toml", "title = \"mine\"");
    desk.abide("survey").args(["map.toml", "--into", "."]).run().refused().said("system.toml of its own");
    assert_eq!(desk.text("system.toml"), "title = \"mine\"");
    std::fs::create_dir(desk.path("data")).unwrap();
    desk.write("data/notes.txt", "mine");
    desk.abide("survey")
        .args(["map.toml", "--into", "data"])
        .run()
        .refused()
        .said("data is no run, but holds other files, as notes.txt")
        .said("--into");
    assert_eq!(std::fs::read_dir(desk.path("data")).unwrap().count(), 1);
}

#[test]
fn a_finished_run_leaves_no_lock() {
    let desk = Desk::with_pair();
    desk.abide("survey").args(["map.toml", "--into", "out"]).run().done();
    assert!(desk.path("out/journal.csv").exists() && !desk.path("out/.lock").exists());
}

#[test]
fn a_failed_write_is_told_with_its_cause_once() {
    let desk = Desk::with_pair().file("taken", "");
    let told = desk.abide("survey").args(["map.toml", "--into", "taken/run"]).run().refused().stderr;
    assert_eq!(told.matches("(os error").count(), 1, "{told}");
}

#[test]
fn usage_that_does_not_fit_is_refused() {
    let desk = Desk::with_pair();
    let refused = |words: &[&str]| desk.abide("survey").args(words).run().refused();
    refused(&["map.toml", "--vary", "c.period"]).said("leave --vary out");
    refused(&["map.toml", "--cells", "5"]).said("--cells goes with --vary");
    refused(&["map.toml", "--span", "5 d"]).said("--span goes with --vary");
    refused(&["map.toml", "--threads", "0"]).said("--threads");
    refused(&["pair.toml"]).said("this is a system file").said("name a study, or keys").said("--vary");
    refused(&["pair.toml", "--vary", "d.period"]).said("d");
    refused(&["pair.toml", "--vary", "c.argument_of_pericentre"]).said("without uncertainty");
    let three = ["pair.toml", "--vary", "c.period", "--vary", "c.eccentricity", "--vary", "c.mass"];
    refused(&three).said("one or two axes");
    refused(&["absent.toml"]).said("absent.toml");
}

#[test]
fn an_impossible_system_is_refused_and_an_impossible_cell_is_recorded() {
    let desk = Desk::with_pair();
    desk.write("pair.toml", PAIR.replace("\"0.82 Rsun\"", "\"40 Rsun\""));
    desk.abide("survey").arg("map.toml").run().refused().said("inside the star").said("pair.toml:8:8: ");
    desk.write("pair.toml", PAIR.replace("\"0.82 Rsun\"", "\"15 Rsun\""));
    // At e = 0.6 the pericentre of c is inside such a star; the first row is outside.
    desk.write("map.toml", PAIR_MAP.replace("to = 0.3", "to = 0.6"));
    desk.abide("survey").arg("map.toml").run().done().said("cannot start").said("inside the star");
    let table = desk.text("reports/runs/map/cells.ecsv");
    let last = table.lines().last().unwrap();
    assert!(last.starts_with("62,") && last.contains("lost") && last.contains("star"), "{last}");
}

/// Every table that a run leaves is named.
#[test]
fn margins_of_criteria_are_named_among_what_was_written() {
    let map = format!("{PAIR_MAP}[figure]\ncriteria = [\"hill\"]\n");
    let desk = Desk::new().file("pair.toml", PAIR).file("map.toml", &map);
    let done = desk.abide("survey").args(["map.toml", "--into", "out"]).run().done();
    assert!(done.stderr.contains("wrote out/criteria.ecsv"), "{}", done.stderr);
    assert!(desk.text("out/criteria.ecsv").contains("name: \"hill\""));
    let without = Desk::with_pair().abide("survey").args(["map.toml", "--into", "out"]).run().done();
    assert!(!without.stderr.contains("criteria.ecsv"), "{}", without.stderr);
}
