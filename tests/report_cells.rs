//! Columns of the table of cells that few runs have, and what the summary makes of them.

mod figure_world;

use abide::assess::{Assessment, Range};
use abide::report::{Entry, Summary, cells_table};
use abide::survey::Record;
use abide::verdict::Verdict;
use figure_world::{assessment, plan, study, system};

fn names() -> Vec<String> {
    vec!["b".to_owned(), "c".to_owned()]
}

#[test]
fn passages_have_columns_where_there_can_be_any() {
    let study = study(3, 2);
    let cell = |cell, passages, passage_energy_error| {
        let regular = assessment(Verdict::Regular, None, 2.0, 1.0);
        let assessment = Assessment { passages, passage_energy_error, ..regular };
        Record { cell, values: vec![0.0; 2], assessment, filled: None }
    };
    let records = [
        cell(0, Some(12), Some(3e-14)),
        cell(1, Some(0), None),
        cell(2, None, None),
        cell(3, Some(5), Some(7e-14)),
    ];
    let mut plan = plan();
    let names_of = |plan| -> Vec<String> {
        cells_table(&study, &names(), plan, &records).columns.iter().map(|c| c.name.clone()).collect()
    };
    assert!(!names_of(&plan).iter().any(|name| name.contains("passage")));
    plan.resolve = true;
    let table = cells_table(&study, &names(), &plan, &records);
    let count = Entry::Count;
    let expected = [&count(12), &count(0), &Entry::Absent, &count(5)];
    assert_eq!(table.column("passages").unwrap(), expected);
    let float = Entry::Float;
    let expected = [&float(3e-14), &Entry::Absent, &Entry::Absent, &float(7e-14)];
    assert_eq!(table.column("passage_energy_error").unwrap(), expected);
    let summary = Summary::of(&study, &system(), &plan, &records, None);
    let line = "passages     17 blocks of steps in 2 cells done by the adaptive engine; \
                largest relative energy error over one 7e-14\n";
    assert!(summary.text().contains(line), "{}", summary.text());
    assert_eq!(
        summary.json()["passages"],
        serde_json::json!({ "cells": 2, "blocks": 17, "largest_energy_error": 7e-14 })
    );
    let none = Summary::of(&study, &system(), &plan, &records[1..3], None);
    assert!(!none.text().contains("passages") && none.json()["passages"].is_null());
}

#[test]
fn what_was_never_bound_has_no_range_of_its_axis() {
    let study = study(3, 2);
    let mut found = assessment(Verdict::Chaotic, None, 6.0, 1.0);
    found.extent[1].semi_major_axis_au = Range::empty();
    found.extent[1].eccentricity.max = 4.5;
    let records = [Record { cell: 0, values: vec![0.0; 2], assessment: found, filled: None }];
    let table = cells_table(&study, &names(), &plan(), &records);
    assert_eq!(table.column("c.a_range").unwrap(), [&Entry::Absent]);
    assert_eq!(table.column("c.e_max").unwrap(), [&Entry::Float(4.5)]);
    assert!(matches!(table.column("b.a_range").unwrap()[0], Entry::Float(width) if *width > 0.0));
    let column = table.columns.iter().find(|c| c.name == "c.a_range").unwrap();
    assert!(column.description.contains("while bound"), "{}", column.description);
}
