//! The true mass follows from what was measured, and scans over it are one line of a study.

mod cli_support;

use abide::coords::configure;
use abide::input::{parse_study, parse_system};
use abide::survey::{cell_count, cell_system};
use abide::units::{GM_JUPITER, GM_SUN};
use cli_support::Desk;
use serde_json::Value;

/// Invented: b by its velocity, c by its minimum mass.
const SYSTEM: &str = r#"
title = "Measured"
epoch = "2459000.5 JD"
[star]
mass = "1.12 Msun"
[[planet]]
name = "b"
period = "310.4 d"
rv_semi_amplitude = "43.4 m/s"
eccentricity = 0.25
argument_of_pericentre = "60 deg"
mean_anomaly = "10 deg"
[[planet]]
name = "c"
period = "1511 d"
minimum_mass = "2.5 Mjup"
eccentricity = 0.05
argument_of_pericentre = "200 deg"
mean_anomaly = "300 deg"
"#;

/// m of b in Jupiter masses at an inclination, from the formula of review papers, K = 28.4329 m/s m sin i (Mjup)
/// (M + m)^(−2/3) (Msun) P^(−1/3) (yr) (1 − e²)^(−1/2) (e.g. Lovis & Fischer 2010, the constant from memory).
fn from_velocity(k_m_s: f64, inclination_deg: f64) -> f64 {
    let (mut mass, e, period_yr) = (0.0, 0.25f64, 310.4 / 365.25f64);
    let jupiter = GM_JUPITER / GM_SUN;
    for _ in 0..40 {
        let total: f64 = 1.12 + mass * jupiter;
        let projected = k_m_s / 28.4329 * total.powf(2.0 / 3.0) * period_yr.cbrt() * (1.0 - e * e).sqrt();
        mass = projected / inclination_deg.to_radians().sin();
    }
    mass
}

fn inspected(inclination: &str) -> [f64; 2] {
    let line = format!("mean_anomaly = \"10 deg\"\ninclination = \"{inclination} deg\"");
    let other = format!("mean_anomaly = \"300 deg\"\ninclination = \"{inclination} deg\"");
    let file =
        SYSTEM.replace("mean_anomaly = \"10 deg\"", &line).replace("mean_anomaly = \"300 deg\"", &other);
    let desk = Desk::new().file("a.toml", file);
    let view: Value =
        serde_json::from_str(&desk.abide("inspect").args(["a.toml", "--json"]).run().done().stdout).unwrap();
    [0, 1].map(|index| {
        let planet = &view["planets"][index];
        assert_eq!(planet["mass_unit"], "Mjup");
        planet["mass"].as_f64().unwrap()
    })
}

#[test]
fn inspect_shows_the_mass_that_the_inclination_makes() {
    for inclination in [90.0, 60.0, 30.0, 12.0f64] {
        let [b, c] = inspected(&inclination.to_string());
        let expected = from_velocity(43.4, inclination);
        assert!((b / expected - 1.0).abs() < 1e-4, "{inclination}: {b} for {expected}");
        assert!((c * inclination.to_radians().sin() / 2.5 - 1.0).abs() < 1e-12, "{inclination}: {c}");
    }
}

/// What a cell of a one-line study has: masses of b and c (Jupiter masses), and each orbit's inclination and node, deg.
type Cell = ([f64; 2], [f64; 2], [f64; 2]);

fn cells(axes: &str) -> Vec<Cell> {
    let text = format!("system = \"a.toml\"\nspan = \"100 orbits\"\n{axes}");
    let system = parse_system("a.toml", SYSTEM).unwrap();
    let study = parse_study("study.toml", &text, system.clone()).unwrap().study;
    let cell = |index: u64| {
        let moved = configure(&cell_system(&system.system, &study, index).unwrap()).unwrap();
        let of = |what: fn(&abide::coords::Planet) -> f64| [0, 1].map(|planet| what(&moved.planets[planet]));
        (
            of(|planet| planet.gm / GM_JUPITER),
            of(|planet| planet.elements.inclination.to_degrees()),
            of(|planet| planet.elements.ascending_node.to_degrees()),
        )
    };
    let found: Vec<Cell> = (0..cell_count(&study)).map(cell).collect();
    // The same lines through the program: every cell is followed.
    let desk = Desk::new().file("a.toml", SYSTEM).file("study.toml", &text);
    desk.abide("survey").args(["study.toml", "--into", "out"]).run().done();
    let table = desk.text("out/cells.ecsv");
    assert_eq!(table.lines().filter(|line| !line.starts_with('#')).count(), 1 + found.len());
    found
}

fn close(found: f64, expected: f64, share: f64) {
    assert!((found / expected - 1.0).abs() < share, "{found} for {expected}");
}

#[test]
fn a_coplanar_scan_is_one_line_and_moves_every_mass() {
    let line = "[[axis]]\nvary = \"all.inclination\"\nfrom = \"20 deg\"\nto = \"90 deg\"\ncells = 8\n";
    let found = cells(line);
    for (index, (masses, inclinations, _)) in found.iter().enumerate() {
        let inclination = 20.0 + 10.0 * index as f64;
        inclinations.iter().for_each(|one| close(*one, inclination, 1e-12));
        close(masses[0], from_velocity(43.4, inclination), 1e-4);
        close(masses[1], 2.5 / inclination.to_radians().sin(), 1e-12);
    }
    // Both ends by hand: 1/sin 20° = 2.9238.
    close(found[0].0[1] / found[7].0[1], 2.923_804_4, 1e-7);
}

#[test]
fn a_mutual_inclination_is_a_line_for_each_angle() {
    let found = cells(
        "[[axis]]\nvary = \"c.inclination\"\nfrom = \"50 deg\"\nto = \"130 deg\"\ncells = 3\n\
         [[axis]]\nvary = \"c.ascending_node\"\nfrom = \"0 deg\"\nto = \"60 deg\"\ncells = 3\n",
    );
    for (index, (masses, inclinations, nodes)) in found.iter().enumerate() {
        let (inclination, node) = (50.0 + 40.0 * (index % 3) as f64, 30.0 * (index / 3) as f64);
        assert!((inclinations[1] - inclination).abs() < 1e-9 && (nodes[1] - node).abs() < 1e-9);
        assert!((inclinations[0] - 90.0).abs() < 1e-9 && nodes[0] == 0.0, "b stays");
        close(masses[0], from_velocity(43.4, 90.0), 1e-4);
        close(masses[1], 2.5 / inclination.to_radians().sin(), 1e-12);
    }
}

#[test]
fn a_factor_on_what_was_measured_is_one_line() {
    let axis =
        |key: &str| format!("[[axis]]\nvary = \"{key}\"\nas = \"factor\"\nfrom = 0.5\nto = 2.0\ncells = 4\n");
    for (index, (masses, _, _)) in cells(&axis("c.minimum_mass")).iter().enumerate() {
        close(masses[1], 2.5 * (0.5 + 0.5 * index as f64), 1e-12);
    }
    for (index, (masses, _, _)) in cells(&axis("b.rv_semi_amplitude")).iter().enumerate() {
        close(masses[0], from_velocity(43.4 * (0.5 + 0.5 * index as f64), 90.0), 1e-4);
    }
}
