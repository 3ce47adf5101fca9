//! A run is held by one process, knows its input, and refuses what is not its own.

mod survey_support;

use std::fs;

use abide::survey::{Run, SurveyError, read_run};
use survey_support::{STUDY, engine, identity, record, right_table, run};

#[test]
fn a_second_holder_is_refused_until_the_first_is_gone() {
    let folder = tempfile::tempdir().unwrap();
    let first = Run::open(folder.path(), &identity(20)).unwrap();
    let error = Run::open(folder.path(), &identity(20)).unwrap_err();
    assert!(error.is_input());
    let text = error.to_string();
    assert!(text.contains("another process") && text.contains(&std::process::id().to_string()), "{text}");
    drop(first);
    Run::open(folder.path(), &identity(20)).unwrap();
}

#[test]
fn a_changed_study_is_refused_key_by_key_with_advice() {
    let folder = tempfile::tempdir().unwrap();
    Run::open(folder.path(), &identity(20)).unwrap();
    let mut other = identity(20);
    other.study_text = STUDY.replace("10 orbits", "20 orbits");
    other.settings.push_str(" with another span");
    let error = Run::open(folder.path(), &other).unwrap_err();
    assert!(error.is_input());
    let text = error.to_string();
    assert!(text.contains("study.toml: span was \"10 orbits\", is now \"20 orbits\""), "{text}");
    assert!(text.contains("--into") && text.contains("delete"), "{text}");
    // Nothing was touched: the old input still goes on.
    Run::open(folder.path(), &identity(20)).unwrap();
}

#[test]
fn a_change_of_comments_goes_on() {
    let folder = tempfile::tempdir().unwrap();
    Run::open(folder.path(), &identity(20)).unwrap();
    let mut other = identity(20);
    other.study_text = format!("# a note\n{STUDY}");
    let (_, found) = Run::open(folder.path(), &other).unwrap();
    assert!(found.resumed && found.only_layout);
}

#[test]
fn another_version_of_the_program_is_refused() {
    let folder = tempfile::tempdir().unwrap();
    Run::open(folder.path(), &identity(20)).unwrap();
    let path = folder.path().join("run.json");
    let text = fs::read_to_string(&path).unwrap();
    let version = format!("\"version\": \"{}\"", env!("CARGO_PKG_VERSION"));
    assert!(text.contains(&version));
    fs::write(&path, text.replace(&version, "\"version\": \"0.0.1\"")).unwrap();
    let error = Run::open(folder.path(), &identity(20)).unwrap_err();
    assert!(error.is_input() && error.to_string().contains("version was 0.0.1"), "{error}");
}

#[test]
fn a_plan_that_changed_behind_the_same_files_is_refused() {
    let folder = tempfile::tempdir().unwrap();
    Run::open(folder.path(), &identity(20)).unwrap();
    let mut other = identity(20);
    other.settings.push('!');
    let error = Run::open(folder.path(), &other).unwrap_err();
    assert!(error.to_string().contains("plan"), "{error}");
}

#[test]
fn files_of_somebody_else_are_not_overwritten() {
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join("system.toml"), "title = \"mine\"").unwrap();
    let error = Run::open(folder.path(), &identity(20)).unwrap_err();
    assert!(matches!(error, SurveyError::Foreign { file: "system.toml", .. }), "{error}");
    assert_eq!(fs::read_to_string(folder.path().join("system.toml")).unwrap(), "title = \"mine\"");
}

#[test]
fn a_beginning_that_broke_off_is_begun_again() {
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join("study.toml"), STUDY).unwrap();
    let (_, found) = Run::open(folder.path(), &identity(20)).unwrap();
    assert!(!found.resumed);
}

#[test]
fn a_damaged_manifest_is_told_and_kept() {
    let folder = tempfile::tempdir().unwrap();
    Run::open(folder.path(), &identity(20)).unwrap();
    fs::write(folder.path().join("run.json"), "{").unwrap();
    let error = Run::open(folder.path(), &identity(20)).unwrap_err();
    assert!(error.is_input() && error.to_string().contains("run.json"), "{error}");
}

#[test]
fn a_line_damaged_after_the_end_is_redone() {
    let folder = tempfile::tempdir().unwrap();
    run(folder.path(), 40, 2, engine(std::time::Duration::ZERO, |_| {})).unwrap();
    let path = folder.path().join("journal.csv");
    let mut bytes = fs::read(&path).unwrap();
    let middle = bytes.len() / 2;
    bytes[middle] ^= 4;
    fs::write(&path, bytes).unwrap();
    let (_, found) = Run::open(folder.path(), &identity(40)).unwrap();
    let lost = 40 - found.recovered.done.count();
    // A line end hit by the damage joins two lines.
    assert!((1..=2).contains(&lost) && found.recovered.dropped >= 1);
    run(folder.path(), 40, 2, engine(std::time::Duration::ZERO, |_| {})).unwrap();
    assert_eq!(survey_support::table(folder.path(), 40), right_table(40));
}

#[test]
fn a_growing_run_is_read_without_taking_it() {
    let folder = tempfile::tempdir().unwrap();
    let (mut open, _) = Run::open(folder.path(), &identity(20)).unwrap();
    open.journal.append(&record(7)).unwrap();
    open.journal.append(&record(2)).unwrap();
    open.journal.flush().unwrap();
    let stored = read_run(folder.path()).unwrap();
    assert_eq!(stored.records, [record(2), record(7)]);
    assert_eq!(stored.study_text, STUDY);
    assert_eq!(stored.manifest.plan.scheme, "(2,2)");
}

#[test]
fn a_copy_that_was_edited_is_not_read_as_the_input() {
    let folder = tempfile::tempdir().unwrap();
    Run::open(folder.path(), &identity(20)).unwrap();
    fs::write(folder.path().join("study.toml"), STUDY.replace("10 orbits", "20 orbits")).unwrap();
    let error = read_run(folder.path()).unwrap_err();
    assert!(error.is_input() && error.to_string().contains("study.toml was edited"), "{error}");
}

#[test]
fn a_folder_that_is_no_run_is_told() {
    let folder = tempfile::tempdir().unwrap();
    let error = read_run(folder.path()).unwrap_err();
    assert!(error.is_input() && error.to_string().contains("no run"), "{error}");
}
