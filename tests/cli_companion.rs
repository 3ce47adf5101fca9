//! A second star through the binary: what `inspect` says about it.

use std::process::{Command, Output};

fn inspect(path: &str, more: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_abide")).arg("inspect").arg(path).args(more).output().unwrap()
}

fn page(path: &str) -> String {
    let output = inspect(path, &[]);
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    let page = String::from_utf8(output.stdout).unwrap();
    for line in page.lines() {
        assert!(line.chars().count() <= 100, "{line}");
        assert!(!line.contains("NaN") && line.trim_end() == line, "{line}");
    }
    page
}

/// The words of a page without its line breaks.
fn flowing(page: &str) -> String {
    page.split_whitespace().collect::<Vec<_>>().join(" ")
}

#[test]
fn both_kinds_are_told_with_the_reason() {
    let outside = flowing(&page("systems/castella.toml"));
    assert!(outside.contains("S-type: the planets circle the star"), "{outside}");
    assert!(outside.contains("longer than every planet's (up to 702.00 d)"), "{outside}");
    assert!(outside.contains("relativity first post-Newtonian term"), "{outside}");
    assert!(!outside.contains("barycentric b"), "{outside}");
    let inside = flowing(&page("systems/gemello.toml"));
    assert!(
        inside.contains("P-type: the planets circle the centre of mass of star and companion"),
        "{inside}"
    );
    assert!(inside.contains("(21.080 d) is shorter than every planet's (from 118.60 d)"), "{inside}");
    assert!(inside.contains("jacobi (stated)") && !inside.contains("astrocentric b"), "{inside}");
    // Spacing of b and c by hand, with both stars' mass: a from P and G (m₀ + m₁ + …), Hill radius from 1.519 Msun.
    let gm = 1.327_124_4e20 * (86_400.0f64.powi(2) / 149_597_870_700.0f64.powi(3));
    let jupiter = 1.266_865_3e17 / 1.327_124_4e20;
    let axis = |mass: f64, day: f64| (gm * mass * (day / std::f64::consts::TAU).powi(2)).cbrt();
    let stars = 0.98 * 1.55;
    let axes = [axis(stars + 0.21 * jupiter, 118.6), axis(stars + 0.56 * jupiter, 251.0)];
    let hill = (0.56 * jupiter / (3.0 * stars)).cbrt() * 0.5 * (axes[0] + axes[1]);
    let spacing = format!("{:.2}", (axes[1] - axes[0]) / hill);
    assert!(inside.contains(&format!("b c 2.1164 {spacing} ")), "{spacing}: {inside}");
}

#[test]
fn the_same_as_data() {
    let output = inspect("systems/gemello.toml", &["--json"]);
    let view: serde_json::Value = serde_json::from_slice(&output.stdout).unwrap();
    assert_eq!(view["companion"]["kind"], "P-type");
    assert_eq!(view["companion"]["around_both"], serde_json::json!(["b", "c"]));
    assert!((view["companion"]["mass_ratio"].as_f64().unwrap() - 0.55).abs() < 1e-15);
    assert_eq!(view["planets"].as_array().unwrap().len(), 2);
    assert_eq!(view["elements"].as_array().unwrap().len(), 1);
    assert_eq!(view["neighbours"].as_array().unwrap().len(), 1);
    let alone = inspect("systems/lanthorn.toml", &["--json"]);
    let view: serde_json::Value = serde_json::from_slice(&alone.stdout).unwrap();
    assert!(view["companion"].is_null());
    assert_eq!(view["physics"]["relativity"], false);
    assert_eq!(view["elements"].as_array().unwrap().len(), 3);
}

#[test]
fn a_pole_comes_back_as_the_angles_of_the_equator() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("flat.toml");
    let text = "[star]\nmass = \"1 Msun\"\nradius = \"1 Rsun\"\n[physics]\noblateness = { j2 = 3e-6, inclination = \
                \"70 deg\", ascending_node = \"250 deg\" }\n[[planet]]\nname = \"b\"\nperiod = \"3 d\"\nmass = \"0 \
                Mearth\"\nmean_anomaly = \"0 deg\"\nsatellite_mass_ratio = 0.1\nsatellite_semi_major_axis = \"1e-3 au\"\n";
    std::fs::write(&path, text).unwrap();
    let page = flowing(&page(path.to_str().unwrap()));
    assert!(page.contains("J2 of the star 3e-6 at 1.000 Rsun; equator inclined 70.00 deg"), "{page}");
    assert!(page.contains("node at 250.00 deg"), "{page}");
    // (3/4) · 0.1/1.21 · 1e-6
    assert!(page.contains("of b, averaged: K = 6.1983e-8 au^2"), "{page}");
    assert!(page.contains("massless b: they feel the others and do not pull"), "{page}");
}
