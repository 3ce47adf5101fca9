//! `abide follow` through the binary.

mod cli_support;

use cli_support::{Desk, Outcome, PAIR};
use serde_json::Value;

fn desk() -> Desk {
    Desk::new().file("pair.toml", PAIR)
}

fn follow(desk: &Desk, more: &[&str]) -> Outcome {
    desk.abide("follow").args(["pair.toml", "--into", "out"]).args(more).run()
}

/// Names and rows of a table.
fn table(text: &str) -> (Vec<String>, Vec<Vec<f64>>) {
    let mut lines = text.lines().filter(|line| !line.starts_with('#'));
    let names = lines.next().unwrap().split(',').map(str::to_string).collect();
    let number = |entry: &str| if entry.is_empty() { f64::NAN } else { entry.parse().unwrap() };
    (names, lines.map(|line| line.split(',').map(number).collect()).collect())
}

fn column(table: &(Vec<String>, Vec<Vec<f64>>), name: &str) -> Vec<f64> {
    let index = table.0.iter().position(|n| n == name).unwrap_or_else(|| panic!("no column {name}"));
    table.1.iter().map(|row| row[index]).collect()
}

#[test]
fn leaves_series_and_figure_and_prints_the_verdict() {
    let desk = desk();
    let outcome = follow(&desk, &["--span", "1000 orbits"]).done().said("wrote out/series.ecsv");
    assert!(
        outcome.stdout.starts_with("Lanthorn: regular over 1000 orbits of b (32.5 yr)\n"),
        "{outcome:#?}"
    );
    for words in [
        "why ",
        "⟨Y⟩ = ",
        "(Cincotta & Simó 2000",
        "span ",
        "orbits of c",
        "scheme     (2,2)",
        "Chosen:",
        "step ",
        "energy ",
        "(1e-6 asked)",
        "total angular momentum",
        "b and c to ",
        "mutual Hill radii",
        "range of",
    ] {
        assert!(outcome.stdout.contains(words), "{words}: {outcome:#?}");
    }
    assert!(outcome.stdout.lines().all(|line| line.chars().count() <= 100), "{outcome:#?}");
    let found = table(&desk.text("out/series.ecsv"));
    let time = column(&found, "time");
    // 1000 periods of b in julian years; b's stated period is astrocentric.
    assert_eq!((time[0], found.1.len() <= 2000), (0.0, true));
    assert!((time[time.len() - 1] - 11.862 * 1000.0 / 365.25).abs() < 1e-9, "{time:?}");
    // The first row is the stated orbit.
    for (name, value) in [
        ("b.e", 0.05),
        ("c.e", 0.03),
        ("b.argument_of_pericentre", 75.0),
        ("c.argument_of_pericentre", 190.0),
        ("b.i", 90.0),
    ] {
        let first = column(&found, name)[0];
        assert!((first - value).abs() < 1e-10, "{name}: {first}");
    }
    assert!((column(&found, "c.mean_anomaly")[0] - 40.0).abs() < 1e-10);
    for planet in ["b", "c"] {
        for element in ["a", "e"] {
            let of = |end: &str| column(&found, &format!("{planet}.{element}{end}"));
            let within =
                of("").iter().zip(of("_min")).zip(of("_max")).all(|((x, low), high)| low <= *x && *x <= high);
            assert!(within, "{planet}.{element}");
        }
    }
    assert!(column(&found, "energy_error").iter().all(|error| *error < 1e-6));
    assert!((1.0..2.1).contains(column(&found, "megno_mean").last().unwrap()));
    assert_eq!(desk.read("out/series.png")[..8], *b"\x89PNG\r\n\x1a\n");
}

#[test]
fn json_is_alone_on_standard_output_and_quiet_says_nothing() {
    let desk = desk();
    let outcome = follow(&desk, &["--span", "500 orbits", "--json", "--quiet"]).done().silent();
    let value: Value = serde_json::from_str(&outcome.stdout).unwrap();
    assert_eq!(value["verdict"], "regular");
    assert_eq!(value["loss"], Value::Null);
    assert_eq!(value["lyapunov_time_yr"], Value::Null);
    assert!((value["inner"]["orbits"].as_f64().unwrap() - 500.0).abs() < 1e-9);
    assert!(value["energy_error"].as_f64().unwrap() < 1e-6);
    assert_eq!(value["smallest_approach"]["pair"], serde_json::json!(["b", "c"]));
    // What was chosen, and why.
    assert_eq!((&value["scheme"], &value["coordinates"]), (&"(2,2)".into(), &"heliocentric".into()));
    assert_eq!(value["coordinates_why"], "the planets are light, and these are the cheaper");
    assert!(value["step_why"].as_str().unwrap().contains("steps in the shortest pericentre passage"));
    assert_eq!((&value["asked"]["span"], &value["asked"]["escape"]), (&"500 orbits".into(), &Value::Null));
    assert_eq!(value["system_sha256"].as_str().unwrap().len(), 64);
    let kept: Value = serde_json::from_str(&desk.text("out/verdict.json")).unwrap();
    assert_eq!(kept, value);
    let extent = &value["extent"]["c"]["e"];
    assert!(extent[0].as_f64().unwrap() <= 0.03 && extent[1].as_f64().unwrap() >= 0.03);
    let outcome =
        desk.abide("follow").args(["pair.toml", "--into", "other", "--quiet"]).run().done().silent();
    assert!(outcome.stdout.is_empty());
}

#[test]
fn each_end_is_told_with_the_limit_that_was_passed() {
    let cases: [(&[&str], &str, &str); 4] = [
        (
            &["--escape", "0.09 au"],
            "lost by escape at the start",
            "farther than 0.09 au from the star (as asked",
        ),
        (&["--encounter", "30 hill"], "lost by encounter", "closer than 30 mutual Hill radii (--encounter)"),
        (&["--span", "50 orbits"], "undecided over 50 orbits", "before 100 the transient"),
        (&["--energy-error", "1e-18"], "untrusted over", "round-off of double precision"),
    ];
    for (options, headline, why) in cases {
        let outcome = follow(&desk(), options).done().printed(headline);
        let flat = outcome.stdout.split_whitespace().collect::<Vec<_>>().join(" ");
        assert!(flat.contains(why), "{why}: {outcome:#?}");
    }
}

/// Two planets of 9 earth masses (μ = 2.7e-5 each) at a period ratio of 1.275, or 0.176 in a: close to where first-order
/// resonances overlap, 1.3 (2μ)^(2/7) = 0.078 for circles and more for e = 0.03 (Wisdom 1980; Deck et al. 2013).
const CLOSE: &str = r#"
title = "Tanglewood"
[star]
mass = "1 Msun"
[[planet]]
name = "b"
period = "10 d"
mass = "9 Mearth"
eccentricity = 0.03
argument_of_pericentre = "0 deg"
mean_anomaly = "0 deg"
[[planet]]
name = "c"
period = "12.75 d"
mass = "9 Mearth"
eccentricity = 0.03
argument_of_pericentre = "200 deg"
mean_anomaly = "140 deg"
"#;

#[test]
fn chaos_comes_with_its_lyapunov_time() {
    let desk = Desk::new().file("pair.toml", CLOSE);
    let outcome = follow(&desk, &["--span", "3e4 orbits", "--json"]).done();
    let value: Value = serde_json::from_str(&outcome.stdout).unwrap();
    assert_eq!(value["verdict"], "chaotic", "{value:#}");
    let (time, error) = (&value["lyapunov_time_yr"]["value"], &value["lyapunov_time_yr"]["error"]);
    let (time, error) = (time.as_f64().unwrap(), error.as_f64().unwrap());
    assert!(error > 0.0 && error < time, "{time} ± {error}");
    // On a chaotic orbit ⟨Y⟩ tends to λt/2.
    let expected = 0.5 * value["span_yr"].as_f64().unwrap() / time;
    let megno = value["megno_mean"].as_f64().unwrap();
    assert!((0.3..3.0).contains(&(megno / expected)), "{megno} against {expected}");
    let words = follow(&desk, &["--span", "3e4 orbits"]).done().printed("chaotic over 30000 orbits of b");
    words.printed("; Lyapunov time ").printed(" ± ");
}

#[test]
fn what_is_wrong_is_said_once_before_anything_is_made() {
    let cases: [(&[&str], &str); 14] = [
        (&["--span", "3 bananas"], "span:1:3: unknown unit"),
        (&["--span", "1e4"], "span:1:1: the unit is missing"),
        (&["--span", "-1 yr"], "span:1:1: the number is out of range"),
        (&["--span", "nan yr"], "span:1:1: the number is not finite"),
        (&["--span", "1e30 yr"], "more than 1e15; shorten it or lengthen --step"),
        (&["--step", "5"], "step:1:1: the unit is missing"),
        (&["--step", "0 d"], "step:1:1: the number is out of range"),
        (&["--scheme", "(3,3)"], "allowed: auto, (2,2)"),
        (&["--escape", "5 d"], "escape:1:3: wrong unit"),
        (&["--escape", "-5 au"], "escape:1:1: the number is out of range"),
        (&["--encounter", "1"], "allowed: mutual Hill radii as \"1 hill\", \"resolve\" or \"off\""),
        (&["--rows", "1"], "--rows is 1, but a series has 2 to 1000000"),
        (&["--checkpoint", "5 au"], "time:1:3: wrong unit"),
        (&["--checkpoint", "-5 s"], "is no time to wait"),
    ];
    let desk = desk();
    for (options, words) in cases {
        follow(&desk, options).refused().said(words);
    }
    // The name of the option ends as the word that leads every message.
    let outcome = follow(&desk, &["--energy-error", "2"]).code(2);
    outcome.said("error: energy-error:1:1: the number is out of range").said("0 < energy_error < 1");
    follow(&desk, &["--energy-error", "1e-6 d"]).code(2).said("energy-error:1:6: wrong unit");
    let inside = PAIR.replace("11.862 ± 0.004 d", "0.05 d");
    desk.write("inside.toml", inside);
    let refused = desk.abide("follow").args(["inside.toml", "--into", "out"]).run().refused();
    let refused = refused.said("inside.toml").said("star");
    assert_eq!(refused.stderr.matches("inside.toml").count(), 1);
    desk.abide("follow")
        .args(["none.toml", "--into", "out"])
        .run()
        .refused()
        .said("none.toml: the file cannot be read");
    assert!(!desk.path("out").exists());
    desk.write("taken", "");
    let blocked = desk.abide("follow").args(["pair.toml", "--into", "taken/out"]).run().refused();
    assert_eq!(blocked.stderr.matches("cannot be made").count(), 1, "{blocked:#?}");
}

#[test]
fn a_finished_one_is_shown_again_and_a_changed_one_refused() {
    let desk = desk();
    let first = follow(&desk, &["--span", "300 orbits"]).done();
    let table = desk.read("out/series.ecsv");
    std::fs::remove_file(desk.path("out/series.ecsv")).unwrap();
    let again = follow(&desk, &["--span", "3e2 orbits"]).done().said("is finished");
    assert_eq!(first.stdout, again.stdout);
    assert!(desk.read("out/series.ecsv") == table);

    desk.write("pair.toml", format!("# a remark\n{PAIR}"));
    follow(&desk, &["--span", "300 orbits"]).done().said("is finished");

    desk.write("pair.toml", PAIR.replace("90 ± 8 Mearth", "91 ± 8 Mearth"));
    follow(&desk, &["--span", "400 orbits", "--rows", "100"])
        .refused()
        .said("out holds something else, which is finished")
        .said("--span: was \"300 orbits\", is now \"400 orbits\"")
        .said("--rows: was \"2000\", is now \"100\"")
        .said("pair.toml: planet[c].mass was \"90 ± 8 Mearth\", is now \"91 ± 8 Mearth\"")
        .said("--anew");
    assert!(desk.read("out/series.ecsv") == table, "nothing is touched");
    follow(&desk, &["--span", "400 orbits", "--rows", "100", "--anew"]).done().said("over 400 orbits of b");
    assert!(desk.read("out/series.ecsv") != table);
}

#[test]
fn a_damaged_checkpoint_and_the_folder_of_a_survey_are_refused() {
    let desk = desk();
    follow(&desk, &["--span", "300 orbits"]).done();
    let path = desk.path("out/follow.checkpoint");
    let bytes = std::fs::read(&path).unwrap();
    for at in [3, 60, bytes.len() / 2, bytes.len() - 1] {
        let mut damaged = bytes.clone();
        damaged[at] ^= 1;
        std::fs::write(&path, damaged).unwrap();
        follow(&desk, &["--span", "300 orbits"]).refused().said("cannot be gone on with").said("--anew");
    }
    std::fs::write(&path, &bytes[..bytes.len() - 40]).unwrap();
    follow(&desk, &["--span", "300 orbits"]).refused().said("its checksum differs");
    std::fs::create_dir(desk.path("run")).unwrap();
    desk.write("run/journal.csv", "cell\n");
    desk.abide("follow").args(["pair.toml", "--into", "run"]).run().refused().said("holds a survey");
}

/// The word is told, and is one of the settings that a checkpoint is of.
#[test]
fn compensated_sums_are_told() {
    let desk = desk();
    let plain = follow(&desk, &["--span", "300 orbits", "--rows", "20"]).done();
    assert!(!plain.stdout.contains("compensated sums"), "{plain:#?}");
    let table = desk.text("out/series.ecsv");
    let asked = ["--span", "300 orbits", "--rows", "20", "--compensated", "on"];
    let other = desk.abide("follow").args(["pair.toml", "--into", "other"]).args(asked).run().done();
    assert!(other.stdout.replace('\n', " ").contains("compensated sums"), "{other:#?}");
    assert_ne!(desk.text("other/series.ecsv"), table, "other roundings, other last digits");
    let refused = follow(&desk, &asked);
    assert_eq!(refused.code, Some(2), "{refused:#?}");
    assert!(refused.stderr.contains("--compensated"), "{refused:#?}");
}

/// Two planets that pass each other at three mutual Hill radii, every nine orbits.
const PASSING: &str = r#"
title = "Passing"
[star]
mass = "1 Msun"
[physics]
relativity = true
[[planet]]
name = "b"
semi_major_axis = "0.04 au"
mass = "10 Mearth"
mean_anomaly = "0 deg"
[[planet]]
name = "c"
semi_major_axis = "0.0445 au"
mass = "10 Mearth"
eccentricity = 0.04
mean_anomaly = "60 deg"
"#;

#[test]
fn passages_are_told_where_there_were_any() {
    let desk = desk().file("passing.toml", PASSING);
    let run = |more: &[&str]| {
        let options = ["passing.toml", "--span", "100 orbits", "--encounter", "resolve", "--anew"];
        desk.abide("follow").args(options).args(["--into", "out"]).args(more).run().done()
    };
    let value: Value = serde_json::from_str(&run(&["--json"]).stdout).unwrap();
    let passages = &value["passages"];
    assert!(passages["blocks"].as_u64().unwrap() >= 1, "{value}");
    assert!(passages["largest_energy_error"].as_f64().unwrap() < 1e-13, "{value}");
    run(&[]).printed("\npassages   ").printed("around close approaches");
    let alone = desk.abide("follow").args(["pair.toml", "--into", "other", "--json", "--quiet"]).run().done();
    let value: Value = serde_json::from_str(&alone.stdout).unwrap();
    assert!(value["passages"].is_null(), "{value}");
    // The stated axis, though the scheme moves with other velocities.
    let first = column(&table(&desk.text("out/series.ecsv")), "b.a")[0];
    assert!((first / 0.04 - 1.0).abs() < 1e-12, "{first}");
}

/// Scheme, step and coordinates stand in the header with their reasons, in the words that a survey's run.json has.
#[test]
fn the_header_says_what_was_chosen_and_why() {
    let desk = Desk::with_pair();
    let header = |more: &[&str]| {
        follow(&desk, more).done();
        let text = desk.text("out/series.ecsv");
        let lines = text.lines().take_while(|line| line.starts_with('#'));
        let entries =
            lines.filter_map(|line| line.strip_prefix("# - {\"")?.strip_suffix('}')?.split_once("\": "));
        entries
            .map(|(name, value)| (name.to_owned(), value.trim_matches('"').to_owned()))
            .collect::<std::collections::BTreeMap<_, _>>()
    };
    let found = header(&["--span", "200 orbits", "--step", "0.3 d"]);
    assert_eq!((found["scheme"].as_str(), found["coordinates"].as_str()), ("(2,2)", "heliocentric"));
    assert!((found["step_d"].parse::<f64>().unwrap() - 0.3).abs() < 0.01, "{found:?}");
    assert_eq!(found["compensated"], "no");
    assert!(found["step_why"].starts_with("as asked; "), "{found:?}");
    let study = "system = \"pair.toml\"\nspan = \"200 orbits\"\n[[axis]]\nvary = \"c.eccentricity\"\nfrom = 0.0\n\
                 to = 0.06\ncells = 3\n[engine]\nstep = \"0.3 d\"\n";
    desk.write("few.toml", study);
    desk.abide("survey").args(["few.toml", "--into", "few", "--quiet"]).run().done();
    let run: Value = serde_json::from_str(&desk.text("few/run.json")).unwrap();
    let reasons = run["plan"].as_object().unwrap().iter().filter(|(name, _)| name.ends_with("_why"));
    let mut compared = 0;
    // The largest error of the short runs is that of the corners in a survey, of the one configuration here.
    let but_error = |words: &str| words.split(" err ").next().unwrap().to_owned();
    for (name, words) in reasons {
        assert_eq!(but_error(&found[name]), but_error(words.as_str().unwrap()), "{name}");
        compared += 1;
    }
    assert!(compared >= 2, "{run:#}");
    let found = header(&["--span", "20 orbits", "--engine", "adaptive", "--anew"]);
    assert_eq!((found["scheme"].as_str(), found["scheme_why"].as_str()), ("adaptive", "as asked"));
    assert!(!found.contains_key("coordinates") && !found.contains_key("coordinates_why"), "{found:?}");
}
