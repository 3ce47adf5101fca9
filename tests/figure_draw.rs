//! `abide draw` through the binary, on a run made by hand.

mod cli_support;
mod figure_world;

use std::path::Path;

use abide::survey::{Identity, Run};
use abide::verdict::Verdict;
use cli_support::{Desk, PAIR, PAIR_MAP};
use figure_world::{assessment, noise, plan};

const CELLS: u64 = 9 * 7;

/// A run of the pair's map with its first `finished` cells, begun as a survey would.
fn run_with(folder: &Path, finished: u64) {
    let identity = Identity {
        study_text: PAIR_MAP.to_owned(),
        system_text: PAIR.to_owned(),
        settings: "by hand".to_owned(),
        plan: plan(),
        cells: CELLS,
        axes: vec!["c.period".to_owned(), "c.eccentricity".to_owned()],
        planets: vec!["b".to_owned(), "c".to_owned()],
    };
    let (mut run, _) = Run::open(folder, &identity).unwrap();
    for cell in 0..finished {
        let found = assessment(Verdict::Chaotic, None, 2.0 + 8.0 * noise(cell), 1.0);
        let record = abide::survey::Record { cell, values: vec![16.0, 0.1], assessment: found, filled: None };
        run.journal.append(&record).unwrap();
    }
    run.journal.close().unwrap();
}

fn size(bytes: &[u8]) -> (u32, u32) {
    let reader = png::Decoder::new(std::io::Cursor::new(bytes)).read_info().unwrap();
    (reader.info().width, reader.info().pixel_dims.unwrap().xppu)
}

#[test]
fn a_stored_run_is_drawn_under_the_name_of_its_column() {
    let desk = Desk::new();
    run_with(&desk.path("run"), CELLS);
    desk.abide("draw").arg("run").run().done();
    assert_eq!(size(&desk.read("run/map.png")), (2126, 11811));
    desk.abide("draw").args(["run", "--column", "c.e_max"]).run().done();
    assert_ne!(desk.read("run/map-c.e_max.png"), desk.read("run/map.png"));
    desk.abide("draw").args(["run", "--width", "88 mm", "--into", "narrow.png"]).run().done();
    assert_eq!(size(&desk.read("narrow.png")), (2079, 23622));
    let first = desk.read("run/map.png");
    desk.abide("draw").arg("run").run().done();
    assert_eq!(desk.read("run/map.png"), first, "the same run gives the same picture");
}

#[test]
fn an_incomplete_run_is_drawn_and_says_so() {
    let desk = Desk::new();
    run_with(&desk.path("part"), 40);
    desk.abide("draw").arg("part").run().done().said("40 of 63 cells");
    assert_eq!(size(&desk.read("part/map.png")).0, 2126);
}

#[test]
fn what_cannot_be_drawn_is_refused_with_what_can() {
    let desk = Desk::new();
    run_with(&desk.path("run"), CELLS);
    let refused = |words: &[&str], parts: &[&str]| {
        let outcome = desk.abide("draw").args(words).run().refused();
        for part in parts {
            assert!(outcome.stderr.contains(part), "{part}: {outcome:#?}");
        }
    };
    refused(&["run", "--column", "colour"], &["\"colour\"", "verdict", "megno", "c.a_range"]);
    refused(&["run", "--width", "88"], &["--width", "mm"]);
    refused(&["run", "--width", "2 m"], &["--width"]);
    refused(&["run", "--width", "20 mm"], &["60 to 400 mm"]);
    refused(&["nowhere"], &["nowhere"]);
    refused(&["run", "--into", "no/such/folder/map.png"], &["no/such/folder"]);
    assert!(!desk.path("run/map.png").exists());
}

#[test]
fn borders_of_criteria_are_drawn_on_request() {
    let desk = Desk::new();
    run_with(&desk.path("run"), CELLS);
    desk.abide("draw").args(["run", "--into", "bare.png"]).run().done();
    let mut seen = vec![desk.read("bare.png")];
    // In another order the dashes change hands.
    for pair in [["hill", "crossing"], ["crossing", "hill"]] {
        let words = ["run", "--criterion", pair[0], "--criterion", pair[1], "--into", "curves.png"];
        desk.abide("draw").args(words).run().done();
        let picture = desk.read("curves.png");
        assert!(!seen.contains(&picture), "{pair:?}");
        seen.push(picture);
    }
    let refused = |words: &[&str], part: &str| {
        let outcome = desk.abide("draw").arg("run").args(words).run().refused();
        assert!(outcome.stderr.contains(part), "{outcome:#?}");
    };
    refused(&["--criterion", "mass"], "there are hill, crossing");
    refused(&["--criterion", "hill", "--criterion", "hill"], "given twice");
    refused(&["--margins"], "--margins needs a criterion");
    let all: Vec<&str> =
        abide::system::Criterion::ALL.iter().flat_map(|c| ["--criterion", c.word()]).collect();
    refused(&all, "6 curves can be told apart");
}
