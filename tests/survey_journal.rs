//! The journal keeps every bit of a record and takes no damaged line for a good one.

mod survey_support;

use std::fs;
use std::path::Path;

use abide::survey::{Journal, Layout, Recovered};
use proptest::prelude::*;
use survey_support::{identity, record};

fn layout() -> Layout {
    identity(40).manifest().layout
}

fn filled(path: &Path, cells: impl Iterator<Item = u64>) {
    let (mut journal, _) = Journal::open(path, &layout(), 40).unwrap();
    cells.for_each(|cell| journal.append(&record(cell)).unwrap());
    journal.close().unwrap();
}

fn reopened(path: &Path) -> Recovered {
    Journal::open(path, &layout(), 40).unwrap().1
}

fn done(recovered: &Recovered) -> Vec<u64> {
    (0..40).filter(|cell| recovered.done.has(*cell)).collect()
}

#[test]
fn a_line_reads_back_to_the_same_bits() {
    let layout = layout();
    for cell in 0..2000 {
        let line = layout.encode(&record(cell));
        assert_eq!(layout.decode(line.as_bytes()), Some(record(cell)), "{line}");
        assert_eq!(line.matches("\"(2,2)\"").count() as u64, u64::from(cell % 2 == 0));
    }
}

/// What `run.json` of earlier runs says of their journals: they can still be read.
#[test]
fn a_layout_without_the_later_columns_is_understood() {
    let words = r#"{"axes": ["c.period"], "planets": ["b", "c"], "extent": true, "seal": "x"}"#;
    let old: Layout = serde_json::from_str(words).unwrap();
    assert!(!old.frequency_drift && !old.angle && !old.passages);
    let all = Layout { frequency_drift: true, angle: true, passages: true, ..old.clone() };
    assert_eq!(all.columns().len(), old.columns().len() + 2 + 3 + 2);
    let mut record = record(3);
    record.values.truncate(1);
    (record.assessment.frequency_drift, record.assessment.angle) = (Vec::new(), None);
    (record.assessment.passages, record.assessment.passage_energy_error) = (None, None);
    let line = old.encode(&record);
    assert_eq!(old.decode(line.as_bytes()), Some(record));
    assert_eq!(all.decode(line.as_bytes()), None, "no line of a journal that has the columns");
}

#[test]
fn the_header_names_as_many_columns_as_a_line_has() {
    let layout = layout();
    let mut reader = csv::ReaderBuilder::new().from_reader(std::io::Cursor::new(format!(
        "{}\n{}\n",
        layout.header(),
        layout.encode(&record(4))
    )));
    let names: Vec<String> = reader.headers().unwrap().iter().map(String::from).collect();
    assert_eq!(names, layout.columns());
    let row = reader.records().next().unwrap().unwrap();
    assert_eq!(row.len(), names.len());
    let field = |name: &str| &row[names.iter().position(|n| n == name).unwrap()];
    assert_eq!(field("cell"), "4");
    assert_eq!(field("scheme"), "(2,2)");
    assert_eq!(field("redone"), "1");
}

#[test]
fn absent_is_empty_and_zero_is_not() {
    let layout = layout();
    let mut none = record(1);
    none.assessment.megno = None;
    let mut zero = none.clone();
    zero.assessment.megno = Some(0.0);
    assert_ne!(layout.encode(&none), layout.encode(&zero));
    assert_eq!(layout.decode(layout.encode(&none).as_bytes()).unwrap().assessment.megno, None);
    assert_eq!(layout.decode(layout.encode(&zero).as_bytes()).unwrap().assessment.megno, Some(0.0));
}

#[test]
fn a_line_of_another_run_is_not_taken() {
    let other = Layout { seal: "another".to_string(), ..layout() };
    assert_eq!(other.decode(layout().encode(&record(3)).as_bytes()), None);
}

#[test]
fn a_torn_tail_is_dropped_wherever_it_is_torn() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("journal.csv");
    filled(&path, 0..3);
    let whole = fs::read(&path).unwrap();
    let start_of_last = whole[..whole.len() - 1].iter().rposition(|b| *b == b'\n').unwrap() + 1;
    for length in start_of_last..whole.len() {
        fs::write(&path, &whole[..length]).unwrap();
        let recovered = reopened(&path);
        assert_eq!(done(&recovered), [0, 1], "torn at {length} of {}", whole.len());
        assert_eq!(recovered.dropped, u64::from(length > start_of_last));
        // What is appended after the repair stands on a line of its own.
        filled(&path, 2..3);
        assert_eq!(fs::read(&path).unwrap(), whole);
    }
}

#[test]
fn a_second_line_of_one_cell_is_dropped() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("journal.csv");
    filled(&path, [5, 6, 5].into_iter());
    let recovered = reopened(&path);
    assert_eq!((done(&recovered), recovered.dropped), (vec![5, 6], 1));
    assert_eq!(recovered.tally.total(), 2);
    assert_eq!(reopened(&path).dropped, 0);
}

#[test]
fn a_damaged_header_costs_no_cell() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("journal.csv");
    filled(&path, 0..4);
    let whole = fs::read(&path).unwrap();
    let mut damaged = whole.clone();
    damaged[2] ^= 1;
    fs::write(&path, damaged).unwrap();
    let recovered = reopened(&path);
    assert_eq!((done(&recovered), recovered.dropped), (vec![0, 1, 2, 3], 1));
    assert_eq!(fs::read(&path).unwrap(), whole);
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(2000))]

    /// Every byte of a line but none outside it may change, in any way.
    #[test]
    fn no_damaged_line_is_accepted(cell in 0u64..1000, damage in prop::collection::vec((any::<prop::sample::Index>(), 1u8..), 1..6)) {
        let layout = layout();
        let whole = layout.encode(&record(cell)).into_bytes();
        let mut line = whole.clone();
        for (place, flip) in &damage {
            let place = place.index(line.len());
            line[place] ^= flip;
        }
        prop_assert_eq!(layout.decode(&line).is_some(), line == whole);
    }

    /// Bytes of a whole file change, line ends too: no record comes back that was not written.
    #[test]
    fn a_damaged_file_gives_back_only_what_was_written(damage in prop::collection::vec((any::<prop::sample::Index>(), 1u8..), 1..40)) {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("journal.csv");
        filled(&path, 0..30);
        let mut bytes = fs::read(&path).unwrap();
        for (place, flip) in &damage {
            let place = place.index(bytes.len());
            bytes[place] ^= flip;
        }
        fs::write(&path, bytes).unwrap();
        let before = done(&reopened(&path));
        prop_assert!(before.iter().all(|cell| *cell < 30));
        // After the repair the file holds exactly these, in full.
        let again = reopened(&path);
        prop_assert_eq!(again.dropped, 0);
        prop_assert_eq!(&done(&again), &before);
        let text = fs::read_to_string(&path).unwrap();
        let kept: Vec<_> = text.lines().skip(1).map(|line| layout().decode(line.as_bytes()).unwrap()).collect();
        prop_assert_eq!(kept, before.into_iter().map(record).collect::<Vec<_>>());
    }
}
