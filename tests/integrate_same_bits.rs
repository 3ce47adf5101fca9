//! A cell has the same bits whichever lanes, neighbours or path it was computed with.

mod truth_support;

use std::collections::BTreeMap;
use std::path::Path;
use std::process::Command;

use abide::assess::{Assessment, Plan, assess, run_batch};
use abide::coords::{Configuration, configure};
use abide::input::{parse_study, read_system};
use abide::lanes::Level;
use abide::verdict::Verdict;
use truth_support::truth_path;

/// HD 45364 with planet c from inside the orbit of b to far outside, e up to 0.95: ten thousand regular, chaotic and lost
/// cells.
const STUDY: &str = r#"
system = "hd-45364.toml"
span = "400 orbits"
[[axis]]
vary = "c.period"
from = "300 d"
to = "900 d"
cells = 125
[[axis]]
vary = "c.eccentricity"
from = 0.0
to = 0.95
cells = 80
"#;

fn table_made_with(level: &str, threads: usize, folder: &Path) -> Vec<u8> {
    let run = folder.join(level);
    let output = Command::new(env!("CARGO_BIN_EXE_abide"))
        .args(["survey", "map.toml", "--quiet", "--into"])
        .arg(&run)
        .args(["--threads", &threads.to_string()])
        .env("ABIDE_LANES", level)
        .current_dir(folder)
        .output()
        .unwrap();
    assert!(output.status.success(), "{level}: {}", String::from_utf8_lossy(&output.stderr));
    std::fs::read(run.join("cells.ecsv")).unwrap()
}

#[test]
fn scalar_avx2_and_avx512_write_the_same_table() {
    let folder = tempfile::tempdir().unwrap();
    std::fs::copy(truth_path("hd-45364.toml"), folder.path().join("hd-45364.toml")).unwrap();
    std::fs::write(folder.path().join("map.toml"), STUDY).unwrap();
    let levels: Vec<&str> = Level::available().into_iter().map(Level::word).collect();
    assert!(levels.contains(&"scalar"));
    let tables: Vec<Vec<u8>> = levels
        .iter()
        .zip([3, 1, 2])
        .map(|(level, threads)| table_made_with(level, threads, folder.path()))
        .collect();
    for (level, table) in levels.iter().zip(&tables) {
        assert!(*table == tables[0], "{level} differs from {}", levels[0]);
    }
    let text = String::from_utf8(tables[0].clone()).unwrap();
    for verdict in ["regular", "chaotic", "lost"] {
        let cells = text.lines().filter(|line| line.split(',').any(|field| field == verdict)).count();
        assert!(cells >= 20, "{cells} cells are {verdict}: too few to say anything");
    }
}

fn configurations() -> (Plan, Vec<Configuration>) {
    let system = read_system(truth_path("hd-45364.toml")).unwrap_or_else(|error| panic!("{error}"));
    let study = parse_study("map.toml", STUDY, system).unwrap_or_else(|error| panic!("{error}"));
    let stated = &study.system.system;
    let plan = Plan::for_study(&study.study, &configure(stated).unwrap(), &[]);
    let [across, up] = &study.study.axes[..] else { panic!("two axes") };
    let mut all = Vec::new();
    for i in (0..across.cells).step_by(5) {
        for j in (0..up.cells).step_by(5) {
            let mut system = stated.clone();
            across.apply(across.at(i), &mut system, stated).unwrap();
            up.apply(up.at(j), &mut system, stated).unwrap();
            all.push(configure(&system).unwrap());
        }
    }
    (plan, all)
}

fn in_lanes(plan: &Plan, all: &[Configuration], order: &[usize]) -> BTreeMap<u64, Assessment> {
    let mut feed = order.iter().map(|k| (*k as u64, all[*k].clone()));
    let mut answers = BTreeMap::new();
    run_batch(
        plan,
        || feed.next(),
        |number, assessment| {
            assert!(answers.insert(number, assessment).is_none(), "{number} is answered twice");
            true
        },
    );
    answers
}

/// `assess` alone, a batch, and the same batch in another order: the same assessments.
#[test]
fn alone_and_in_any_company_a_cell_is_the_same() {
    let (plan, all) = configurations();
    let forward: Vec<usize> = (0..all.len()).collect();
    // 7 and the number of cells have no common factor, so this visits each once.
    assert_ne!(all.len() % 7, 0);
    let shuffled: Vec<usize> = (0..all.len()).map(|k| 7 * k % all.len()).collect();
    let (first, second) = (in_lanes(&plan, &all, &forward), in_lanes(&plan, &all, &shuffled));
    assert_eq!(first.len(), all.len());
    assert_eq!(first, second);
    let mut seen = [0; 3];
    for (k, configuration) in all.iter().enumerate() {
        let alone = assess(configuration, &plan);
        assert_eq!(alone, first[&(k as u64)], "cell {k}");
        let kinds = [Verdict::Regular, Verdict::Chaotic, Verdict::Lost];
        kinds.iter().zip(&mut seen).for_each(|(v, n)| *n += usize::from(alone.verdict == *v));
    }
    assert!(seen.iter().all(|n| *n >= 5), "{seen:?} regular, chaotic, lost cells");
}
