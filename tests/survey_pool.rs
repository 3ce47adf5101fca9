//! The pool gives the same table whatever the threads, the kills and the faults.

mod survey_support;

use std::path::{Path, PathBuf};
use std::process::{Child, Command};
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, AtomicU64, Ordering};
use std::time::{Duration, Instant};

use abide::survey::{Desk, Ended, News, Policy, Run, SurveyError, fill};
use survey_support::{Fake, engine, identity, plan, right_table, run, scramble, table};

const NONE: Duration = Duration::ZERO;

#[test]
fn any_number_of_threads_gives_the_same_table() {
    for threads in [1, 2, 7] {
        let folder = tempfile::tempdir().unwrap();
        let ended = run(folder.path(), 500, threads, engine(NONE, |_| {})).unwrap();
        assert_eq!(ended, Ended::Complete);
        assert_eq!(table(folder.path(), 500), right_table(500), "{threads} threads");
    }
}

#[test]
fn a_study_smaller_than_a_batch_ends() {
    for cells in [1, 2, 13] {
        let folder = tempfile::tempdir().unwrap();
        run(folder.path(), cells, 3, engine(NONE, |_| {})).unwrap();
        assert_eq!(table(folder.path(), cells), right_table(cells));
    }
}

#[test]
fn a_finished_run_computes_nothing_again() {
    let folder = tempfile::tempdir().unwrap();
    run(folder.path(), 60, 2, engine(NONE, |_| {})).unwrap();
    let ended = run(folder.path(), 60, 2, engine(NONE, |cell| panic!("cell {cell} was drawn again")));
    assert_eq!(ended.unwrap(), Ended::Complete);
}

#[test]
fn a_stop_keeps_what_was_finished_and_the_rest_follows_later() {
    let folder = tempfile::tempdir().unwrap();
    let (mut open, found) = Run::open(folder.path(), &identity(300)).unwrap();
    let stop = Arc::new(AtomicBool::new(false));
    let mut seen = 0;
    let mut watch = |news: News| {
        seen += u64::from(matches!(news, News::Integrated(_)));
        if seen >= 50 {
            stop.store(true, Ordering::SeqCst);
        }
    };
    let desk = Desk { journal: &mut open.journal, stop: Arc::clone(&stop), watch: &mut watch };
    let source = Arc::new(Fake { cells: 300 });
    let slow = engine(Duration::from_millis(1), |_| {});
    let ended = fill(source, slow, &plan(), Policy::every_cell(), found.recovered, 2, desk).unwrap();
    assert_eq!(ended, Ended::Interrupted);
    drop(open);

    let (open, found) = Run::open(folder.path(), &identity(300)).unwrap();
    assert!(found.resumed);
    assert_eq!((found.recovered.done.count(), found.recovered.dropped), (seen, 0));
    assert!((50..300).contains(&seen), "{seen}");
    assert!(
        matches!(open.records(), Err(SurveyError::Incomplete { missing, total: 300 }) if missing == 300 - seen)
    );
    drop(open);
    run(folder.path(), 300, 2, engine(NONE, |_| {})).unwrap();
    assert_eq!(table(folder.path(), 300), right_table(300));
}

#[test]
fn a_stop_does_not_wait_for_a_cell_that_takes_long() {
    let folder = tempfile::tempdir().unwrap();
    let (mut open, found) = Run::open(folder.path(), &identity(50)).unwrap();
    let stop = Arc::new(AtomicBool::new(false));
    let (seen, started) = (Arc::clone(&stop), Instant::now());
    let mut watch = |_: News| seen.store(started.elapsed() > Duration::from_millis(150), Ordering::SeqCst);
    let desk = Desk { journal: &mut open.journal, stop, watch: &mut watch };
    let endless = engine(NONE, |cell| {
        if cell == 20 {
            loop {
                std::thread::park();
            }
        }
    });
    let ended =
        fill(Arc::new(Fake { cells: 50 }), endless, &plan(), Policy::every_cell(), found.recovered, 2, desk)
            .unwrap();
    assert_eq!(ended, Ended::Interrupted);
    drop(open);
    run(folder.path(), 50, 2, engine(NONE, |_| {})).unwrap();
    assert_eq!(table(folder.path(), 50), right_table(50));
}

#[test]
fn a_panic_costs_its_own_cell_only_and_is_named() {
    let folder = tempfile::tempdir().unwrap();
    let fault = |cell: u64| assert!(cell != 17 && cell != 18 && cell != 201, "invented fault in {cell}");
    let error = run(folder.path(), 250, 2, engine(NONE, fault)).unwrap_err();
    let SurveyError::Failed { failed, total: 250 } = &error else { panic!("{error}") };
    assert_eq!(failed.iter().map(|f| f.cell).collect::<Vec<_>>(), [17, 18, 201]);
    let text = error.to_string();
    assert!(text.contains("cell 201") && text.contains("invented fault in 201"), "{text}");
    assert!(!error.is_input());
    // All others are there; the same command does only these.
    let drawn = Arc::new(AtomicU64::new(0));
    let count = Arc::clone(&drawn);
    let cured = engine(NONE, move |cell| {
        assert!([17, 18, 201].contains(&cell));
        count.fetch_add(1, Ordering::SeqCst);
    });
    run(folder.path(), 250, 2, cured).unwrap();
    assert!(drawn.load(Ordering::SeqCst) >= 3);
    assert_eq!(table(folder.path(), 250), right_table(250));
}

#[test]
fn an_engine_that_forgets_a_cell_is_told() {
    let folder = tempfile::tempdir().unwrap();
    let forgetful =
        |_: &abide::assess::Plan, next: abide::survey::Next<'_>, done: abide::survey::Done<'_>| {
            while let Some((cell, _)) = next() {
                if cell != 5 && !done(cell, survey_support::answer(cell)) {
                    return;
                }
            }
        };
    let error = run(folder.path(), 20, 2, forgetful).unwrap_err();
    assert!(error.to_string().contains("cell 5") && error.to_string().contains("no answer"), "{error}");
}

const CHILD_FOLDER: &str = "ABIDE_TEST_CHILD_FOLDER";
const CHILD_CELLS: u64 = 3000;

/// Not a test of its own: the process that the next test kills.
#[test]
fn child_that_is_killed() {
    if let Some(folder) = std::env::var_os(CHILD_FOLDER) {
        let slow = engine(Duration::from_micros(500), |_| {});
        run(&PathBuf::from(folder), CHILD_CELLS, 2, slow).unwrap();
    }
}

#[test]
fn killed_at_ten_moments_gives_the_table_of_an_undisturbed_run() {
    let folder = tempfile::tempdir().unwrap();
    let journal = folder.path().join("journal.csv");
    let mut grown = 0;
    for kill in 0..10u64 {
        let mut child = start_child(folder.path());
        // The first two at any moment from the start of the process, the others while cells are being written.
        if kill >= 2 {
            wait_until(|| lines(&journal) > grown + 1);
        }
        std::thread::sleep(Duration::from_micros(scramble(kill) % 20_000));
        child.kill().unwrap();
        child.wait().unwrap();
        let now = lines(&journal);
        assert!(now + 1 >= grown, "only a torn line may go: {now} after {grown}");
        grown = now;
    }
    assert!(grown > 8 && (grown as u64) < CHILD_CELLS, "{grown} lines after ten kills");
    assert!(start_child(folder.path()).wait().unwrap().success());
    assert_eq!(table(folder.path(), CHILD_CELLS), right_table(CHILD_CELLS));
}

fn lines(path: &Path) -> usize {
    std::fs::read(path).map_or(0, |bytes| bytes.iter().filter(|byte| **byte == b'\n').count())
}

fn wait_until(holds: impl Fn() -> bool) {
    let started = Instant::now();
    while !holds() {
        assert!(started.elapsed() < Duration::from_secs(60), "the child writes nothing");
        std::thread::sleep(Duration::from_micros(200));
    }
}

fn start_child(folder: &Path) -> Child {
    Command::new(std::env::current_exe().unwrap())
        .args(["--exact", "child_that_is_killed", "--quiet"])
        .env(CHILD_FOLDER, folder)
        .stdout(std::process::Stdio::null())
        .spawn()
        .unwrap()
}
