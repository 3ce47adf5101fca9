//! Frequencies and resonances that `abide follow` leaves and prints.

mod cli_support;

use cli_support::{Desk, Outcome, PAIR};
use serde_json::Value;

/// An invented pair locked in 2:1: systems/ombra.toml.
const LOCKED: &str = include_str!("../systems/ombra.toml");

fn follow(desk: &Desk, span: &str, more: &[&str]) -> Outcome {
    desk.abide("follow").args(["system.toml", "--into", "out", "--span", span]).args(more).run()
}

/// Rows of a table by the names of its columns.
fn rows(text: &str) -> Vec<std::collections::HashMap<String, String>> {
    let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_reader(text.as_bytes());
    let names: Vec<String> = reader.headers().unwrap().iter().map(str::to_string).collect();
    let records = reader.records().map(|record| record.unwrap());
    records.map(|r| names.iter().cloned().zip(r.iter().map(str::to_string)).collect()).collect()
}

fn number(row: &std::collections::HashMap<String, String>, column: &str) -> f64 {
    row[column].parse().unwrap_or_else(|_| panic!("{column}: {row:?}"))
}

fn json(outcome: &Outcome) -> Value {
    serde_json::from_str(&outcome.stdout).unwrap()
}

#[test]
fn three_tables_and_what_is_printed_agree() {
    let desk = Desk::new().file("system.toml", PAIR);
    let text = follow(&desk, "3000 orbits", &[]).done();
    for name in ["frequencies", "lines", "resonances"] {
        assert!(text.stderr.contains(&format!("wrote out/{name}.ecsv")), "{text:#?}");
        assert!(desk.text(format!("out/{name}.ecsv")).starts_with("# %ECSV 1.0\n"));
    }
    for words in [
        "drift ",
        "log10 |1 − n₂/n₁| = −",
        "frequency ",
        "n_b ",
        "g1 ",
        "survival   all are still there",
        "chaos      none seen; ⟨Y⟩ = ",
    ] {
        assert!(text.stdout.contains(words), "{words}: {text:#?}");
    }
    assert!(text.stdout.lines().all(|line| line.chars().count() <= 100), "{text:#?}");
    let value = json(&follow(&desk, "3000 orbits", &["--json"]).done());
    assert_eq!((&value["survived"], &value["chaotic"]), (&Value::Bool(true), &Value::Bool(false)));
    let table = rows(&desk.text("out/frequencies.ecsv"));
    let told = value["frequencies"]["fundamental"].as_array().unwrap();
    assert_eq!(table.len(), told.len());
    for (row, told) in table.iter().zip(told) {
        assert_eq!(row["name"], told["name"].as_str().unwrap());
        assert_eq!(number(row, "frequency"), told["deg_per_yr"].as_f64().unwrap());
    }
    // Stated osculating periods; masses of 2e-4 move the mean ones by parts in a thousand.
    for (row, period_day) in table.iter().zip([11.862, 18.2]) {
        let expected = 360.0 * 365.25 / period_day;
        assert!((number(row, "frequency") / expected - 1.0).abs() < 5e-3, "{row:?}");
        assert!(number(row, "drift") < -4.0, "{row:?}");
    }
    let angles = rows(&desk.text("out/resonances.ecsv"));
    assert_eq!(angles.len(), value["resonances"].as_array().unwrap().len());
    assert!(angles.iter().any(|row| row["resonance"] == "3:2" && row["angle"] == "3λ_c − 2λ_b − ϖ_b"));
    assert!(angles.iter().any(|row| row["resonance"] == "apsides"));
    let lines = rows(&desk.text("out/lines.ecsv"));
    let first =
        |signal: &str| lines.iter().find(|row| row["signal"] == signal && row["rank"] == "1").unwrap();
    assert_eq!(first("b: a exp(i λ)")["combination"], "n_b");
    assert_eq!(first("c: a exp(i λ)")["combination"], "n_c");
    let axis = number(first("b: a exp(i λ)"), "amplitude");
    let expected = (0.87f64 * (11.862f64 / 365.25).powi(2)).cbrt();
    assert!((axis / expected - 1.0).abs() < 1e-2, "{axis} {expected}");
}

/// The invented 2:1 pair: which angles librate, about what, and the relation that ties the frequencies.
#[test]
fn a_locked_pair_is_told_and_drawn() {
    let desk = Desk::new().file("system.toml", LOCKED);
    let text = follow(&desk, "6000 orbits", &[]).done();
    text.printed("Locked: n_b − 2n_c + g1 = 0").printed("2λ_c − λ_b − ϖ_b  2:1      librates");
    let angles = rows(&desk.text("out/resonances.ecsv"));
    let resonant: Vec<_> = angles.iter().filter(|row| row["resonance"] == "2:1").collect();
    assert_eq!(resonant.len(), 2);
    for row in &resonant {
        assert_eq!(row["motion"], "librates");
        assert!(number(row, "centre").abs() < 2.0 && number(row, "amplitude") < 90.0, "{row:?}");
    }
    let lines = rows(&desk.text("out/lines.ecsv"));
    let angle: Vec<_> = lines.iter().filter(|row| row["signal"] == "2λ_c − λ_b − ϖ_b").collect();
    assert!(angle.iter().any(|row| row["combination"] == "l"), "{angle:?}");
    assert!(angle.iter().any(|row| row["combination"] == "g2 − g1"), "{angle:?}");
    // Two panels more than four make a taller picture: height in bytes 20 to 23 of a PNG.
    let height = |picture: Vec<u8>| u32::from_be_bytes([picture[20], picture[21], picture[22], picture[23]]);
    let locked = height(desk.read("out/series.png"));
    let free = Desk::new().file("system.toml", PAIR);
    follow(&free, "1000 orbits", &[]).done();
    assert!(locked > height(free.read("out/series.png")), "{locked}");
}

/// Ten times longer: samples are ten times further apart, dense windows at the ends tell the turns between.
#[test]
fn a_long_span_has_the_same_frequencies_from_no_more_samples() {
    let desk = Desk::new().file("system.toml", LOCKED);
    let short = json(&follow(&desk, "6000 orbits", &["--json"]).done());
    let long = json(&follow(&desk, "60000 orbits", &["--json", "--anew"]).done());
    let f =
        |value: &Value, at: usize| value["frequencies"]["fundamental"][at]["deg_per_yr"].as_f64().unwrap();
    for at in 0..4 {
        assert!(
            (f(&long, at) / f(&short, at) - 1.0).abs() < 1e-4,
            "{at}: {} {}",
            f(&long, at),
            f(&short, at)
        );
    }
    assert!(long["frequencies"]["samples"].as_u64().unwrap() <= 8193);
    assert_eq!(long["frequencies"]["dense_windows"], 2);
    assert!(desk.read("out/follow.checkpoint").len() < 3_000_000);
}

#[test]
fn what_ends_at_once_has_no_frequencies_and_leaves_none_behind() {
    let desk = Desk::new().file("system.toml", PAIR);
    follow(&desk, "500 orbits", &[]).done();
    assert!(desk.path("out/frequencies.ecsv").exists());
    let text = follow(&desk, "500 orbits", &["--escape", "0.09 au", "--anew"]).done();
    text.printed("frequencies and resonances were not looked at: ").printed("survival   lost: ");
    for name in ["frequencies", "lines", "resonances"] {
        assert!(!desk.path(format!("out/{name}.ecsv")).exists(), "{name}");
    }
    let value = json(&follow(&desk, "500 orbits", &["--escape", "0.09 au", "--json"]).done());
    assert_eq!((&value["frequencies"], &value["survived"]), (&Value::Null, &Value::Bool(false)));
}

/// Two planets beside the 2:1 resonance, from circles: the line that the resonance forces, 2n_c − n_b, stands in the place of a g
/// and is called what it is; in the locked pair, where the same sum is g itself, nothing is said.
#[test]
fn a_forced_line_is_not_passed_off_as_a_mode() {
    let planet = |name: &str, period: &str, anomaly: &str| {
        format!(
            "[[planet]]\nname = \"{name}\"\nperiod = \"{period}\"\nmass = \"10 Mearth\"\nmean_anomaly = \"{anomaly}\"\n"
        )
    };
    let beside = format!(
        "epoch = \"2460000.5 JD\"\n[star]\nmass = \"1 Msun\"\n{}{}",
        planet("b", "10 d", "0 deg"),
        planet("c", "20.5 d", "100 deg")
    );
    let desk = Desk::new().file("system.toml", &beside);
    follow(&desk, "3000 orbits", &[]).done().printed("g1 is also 2n_c − n_b: perhaps forced");
    let frequencies = rows(&desk.text("out/frequencies.ecsv"));
    let of = |name: &str| frequencies.iter().find(|row| row["name"] == name).unwrap();
    let forced = 2.0 * number(of("n_c"), "frequency") - number(of("n_b"), "frequency");
    let g1 = of("g1");
    // A resolution element of 82.1 years is 4.4 deg/yr.
    assert!((number(g1, "frequency") - forced).abs() < 4.4, "{g1:?} {forced}");
    assert_eq!(g1["remark"], "also 2n_c − n_b: perhaps forced and no mode");
    let locked = Desk::new().file("system.toml", LOCKED);
    follow(&locked, "6000 orbits", &[]).done();
    let all = rows(&locked.text("out/frequencies.ecsv"));
    assert!(all.iter().all(|row| !row["remark"].contains("forced")), "{all:?}");
}
