//! Criteria and secular modes as `abide inspect` shows them.

use std::io::Write;
use std::process::Command;

fn inspect(text: &str, more: &[&str]) -> String {
    let mut file = tempfile::Builder::new().suffix(".toml").tempfile().unwrap();
    file.write_all(text.as_bytes()).unwrap();
    let output = Command::new(env!("CARGO_BIN_EXE_abide"))
        .arg("inspect")
        .arg(file.path())
        .args(more)
        .output()
        .unwrap();
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout).unwrap()
}

/// An invented system of planets given by period (d), mass (Earth masses) and eccentricity.
fn system(planets: &[(f64, f64, f64)]) -> String {
    let mut text = String::from("[star]\nmass = \"1 Msun\"\n");
    for (index, (period, mass, e)) in planets.iter().enumerate() {
        text += &format!(
            "[[planet]]\nname = \"a-rather-long-name-{index}\"\nperiod = \"{period} d\"\nmass = \"{mass} Mearth\"\n\
             eccentricity = {e}\nargument_of_pericentre = \"{} deg\"\nmean_anomaly = \"{} deg\"\n",
            67 * index,
            100 * index
        );
    }
    text
}

fn json(planets: &[(f64, f64, f64)]) -> serde_json::Value {
    serde_json::from_str(&inspect(&system(planets), &["--json"])).unwrap()
}

#[test]
fn a_long_chain_fits_the_page() {
    let planets: Vec<(f64, f64, f64)> =
        (0..8).map(|k| (4.0 * 1.5f64.powi(k) * (1.0 + 0.003 * f64::from(k)), 5.0, 0.02)).collect();
    let page = inspect(&system(&planets), &[]);
    for line in page.lines() {
        assert!(line.chars().count() <= 100, "{line}");
        assert!(line.trim_end() == line, "blanks at the end of {line:?}");
    }
    for words in ["Criteria", "Three-body", "Secular modes", "g8", "s8", "largest e"] {
        assert!(page.contains(words), "{words} in\n{page}");
    }
}

/// Two wide, round, light planets are stable in every sense; the same crowded and eccentric in none.
#[test]
fn calls_follow_the_orbits() {
    let wide = json(&[(100.0, 10.0, 0.01), (250.0, 10.0, 0.01)]);
    let amd = &wide["criteria"]["pairs"][0]["amd"];
    let number = |value: &serde_json::Value| value.as_f64().unwrap();
    for key in ["collision", "hill", "overlap"] {
        assert!(number(&amd["relative"]) < number(&amd[key]), "{key}: {amd}");
    }
    assert_eq!(wide["criteria"]["exact_hill"]["stable"], true);
    let crowded = json(&[(100.0, 300.0, 0.25), (135.0, 300.0, 0.25)]);
    let amd = &crowded["criteria"]["pairs"][0]["amd"];
    for key in ["collision", "hill", "overlap"] {
        assert!(number(&amd["relative"]) > number(&amd[key]), "{key}: {amd}");
    }
    assert_eq!(crowded["criteria"]["exact_hill"]["stable"], false);
    let pair = &crowded["criteria"]["pairs"][0];
    assert!(number(&pair["relative_eccentricity"]) > number(&pair["critical_relative_eccentricity"]));
}

/// Outside its domain a criterion is absent and its reason is given.
#[test]
fn what_is_not_said_has_its_reason() {
    let eccentric = json(&[(100.0, 10.0, 0.6), (900.0, 10.0, 0.1)]);
    assert!(eccentric["criteria"]["secular"].is_null());
    let silent = eccentric["criteria"]["silent"].to_string();
    assert!(silent.contains("Laplace and Lagrange says nothing for e = 0.6"), "{silent}");
    assert!(silent.contains("Hadden & Lithwick (2018) says nothing for a2/a1"), "{silent}");
}

/// The secular modes of the page are those of the theory: frequencies positive for pericentres, one node mode at rest.
#[test]
fn modes_have_their_signs() {
    let view = json(&[(10.0, 5.0, 0.02), (25.0, 8.0, 0.04), (70.0, 30.0, 0.03)]);
    let list = |kind: &str| -> Vec<f64> {
        let modes = view["criteria"]["secular"][kind].as_array().unwrap();
        modes.iter().map(|mode| mode["deg_yr"].as_f64().unwrap()).collect()
    };
    let (g, s) = (list("pericentres"), list("nodes"));
    assert_eq!((g.len(), s.len()), (3, 3));
    assert!(g.iter().all(|g| *g > 0.0), "{g:?}");
    let fastest = g.iter().copied().fold(0.0, f64::max);
    assert_eq!(s.iter().filter(|s| s.abs() < 1e-12 * fastest).count(), 1, "{s:?}");
    assert!(s.iter().all(|s| *s < 1e-12 * fastest), "{s:?}");
}

/// A flat system has a node mode of frequency 0; a planet alone has no modes at all.
#[test]
fn a_mode_at_rest_is_zero_and_one_planet_has_none() {
    let planets = [(4.3, 5.0, 0.02), (7.9, 8.0, 0.03), (15.1, 6.0, 0.01), (33.0, 9.0, 0.02)];
    let view = json(&planets);
    let nodes = view["criteria"]["secular"]["nodes"].as_array().unwrap();
    let rates: Vec<f64> = nodes.iter().map(|mode| mode["deg_yr"].as_f64().unwrap()).collect();
    assert_eq!(rates.iter().filter(|rate| **rate == 0.0).count(), 1, "{rates:?}");
    assert!(rates.iter().all(|rate| *rate == 0.0 || rate.abs() > 1e-4), "{rates:?}");
    let alone = [(10.0, 5.0, 0.1)];
    assert!(json(&alone)["criteria"]["secular"].is_null());
    let page = inspect(&system(&alone), &[]);
    assert!(!page.contains("Secular modes") && !page.contains("Not said"), "{page}");
}

/// Two pairs outside one domain: each sentence is there once and says of which pair it speaks.
#[test]
fn each_reason_names_its_pairs() {
    let view = json(&[(100.0, 10.0, 0.1), (900.0, 10.0, 0.1), (8100.0, 10.0, 0.1)]);
    let silent: Vec<&str> =
        view["criteria"]["silent"].as_array().unwrap().iter().map(|s| s.as_str().unwrap()).collect();
    let of_pairs: Vec<&&str> = silent.iter().filter(|s| s.contains("Hadden & Lithwick")).collect();
    assert!(!of_pairs.is_empty(), "{silent:?}");
    for sentence in &of_pairs {
        assert!(sentence.starts_with("a-rather-long-name-"), "{sentence}");
    }
    for pair in
        ["a-rather-long-name-0 and a-rather-long-name-1", "a-rather-long-name-1 and a-rather-long-name-2"]
    {
        assert!(of_pairs.iter().any(|sentence| sentence.contains(pair)), "{pair}: {silent:?}");
    }
    let once: std::collections::BTreeSet<&&str> = silent.iter().collect();
    assert_eq!(once.len(), silent.len(), "{silent:?}");
}

/// The modes are those of the forces in the file, and what relativity would add is told where it is left out.
#[test]
fn the_modes_follow_the_physics_of_the_file() {
    let planets = [(3.0, 5.0, 0.02), (9.0, 4.0, 0.04)];
    let flowing = |text: &str| inspect(text, &[]).split_whitespace().collect::<Vec<_>>().join(" ");
    let view =
        |text: &str| -> serde_json::Value { serde_json::from_str(&inspect(text, &["--json"])).unwrap() };
    let fastest = |view: &serde_json::Value| -> f64 {
        let modes = view["criteria"]["secular"]["pericentres"].as_array().unwrap();
        modes.iter().map(|mode| mode["deg_yr"].as_f64().unwrap()).fold(0.0, f64::max)
    };
    let without = system(&planets);
    let with = format!("{without}[physics]\nrelativity = true\n");
    let flat = format!(
        "{without}[physics]\noblateness = {{ j2 = 1e-4, radius = \"1 Rsun\", inclination = \"90 deg\" }}\n"
    );
    let page = flowing(&without);
    assert!(
        page.contains("Laplace-Lagrange without the star's relativity, to the invariable plane"),
        "{page}"
    );
    assert!(page.contains("relativity, which the file leaves out"), "{page}");
    assert!(page.contains("Amplitudes: e in the modes g"), "{page}");
    assert!(page.contains("of the angular momentum of circular orbits"), "{page}");
    let page = flowing(&with);
    assert!(page.contains("Laplace-Lagrange with the star's relativity, to the invariable plane"), "{page}");
    assert!(!page.contains("relativity, which the file leaves out"), "{page}");
    assert!(flowing(&flat).contains("with the star's J2, without relativity, to the star's equator"));
    let share = view(&without)["criteria"]["secular"]["relativity_would_add"].as_f64().unwrap();
    // 3 n G m/(a c²) of the inner planet in deg/yr: G m/c² of the Sun is 9.87e-9 au, a = 0.0407 au; a mode has a part of it.
    let rate = 3.0 * 360.0 * 365.25 / 3.0 * 9.870_63e-9 / 0.040_72;
    let (slow, fast) = (fastest(&view(&without)), fastest(&view(&with)));
    assert!(fast - slow < rate && fast - slow > 0.3 * rate, "{slow} {fast} {rate}");
    assert!(share > 0.01, "{share}");
    assert!(view(&with)["criteria"]["secular"]["relativity_would_add"].is_null());
}
