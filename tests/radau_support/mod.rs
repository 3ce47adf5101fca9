//! Outside data for the tests of the adaptive integrator.
#![allow(dead_code)]

pub mod classics;
pub mod planets;

use std::collections::HashMap;
use std::path::Path;

use abide::integrate::State;
use abide::integrate::radau::{Bodies, Engine, Watch};
use std::ops::ControlFlow;

/// One row of a table: column name → text.
pub type Row = HashMap<String, String>;

/// Rows of a table under tests/truth.
pub fn table(name: &str) -> Vec<Row> {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/truth").join(name);
    let mut reader = csv::ReaderBuilder::new().flexible(true).comment(Some(b'#')).from_path(path).unwrap();
    let head = reader.headers().unwrap().clone();
    let rows: Vec<Row> = reader
        .records()
        .map(|record| head.iter().map(String::from).zip(record.unwrap().iter().map(String::from)).collect())
        .collect();
    assert!(!rows.is_empty(), "{name} has no rows");
    rows
}

pub fn number(row: &Row, column: &str) -> f64 {
    row[column].parse().unwrap_or_else(|_| panic!("{column} of {row:?}"))
}

pub fn triple(row: &Row, columns: [&str; 3]) -> [f64; 3] {
    columns.map(|column| number(row, column))
}

pub const AT: [&str; 3] = ["x", "y", "z"];
pub const VEL: [&str; 3] = ["vx", "vy", "vz"];

/// The `init` rows of a problem as inertial bodies.
pub fn start(rows: &[Row], problem: &str) -> Bodies {
    let rows: Vec<&Row> = rows.iter().filter(|r| r["problem"] == problem && r["part"] == "init").collect();
    assert!(!rows.is_empty(), "{problem}");
    Bodies {
        gm: rows.iter().map(|r| number(r, "gm")).collect(),
        pos: rows.iter().map(|r| triple(r, AT)).collect(),
        vel: rows.iter().map(|r| triple(r, VEL)).collect(),
    }
}

pub fn distance(a: &[f64; 3], b: &[f64; 3]) -> f64 {
    (0..3).map(|k| (a[k] - b[k]).powi(2)).sum::<f64>().sqrt()
}

/// Runs an engine to a time, past everything.
pub fn run(engine: &mut Engine, day: f64) {
    engine.advance(day, &Watch::default(), |_| ControlFlow::Continue(())).unwrap();
}

/// GM of the Sun in the ephemeris, au³/day².
pub const SUN_GM: f64 = 0.0002959122082855911;
/// Speed of light with the ephemeris's au, au/day.
pub const LIGHT: f64 = 299_792.458 * 86_400.0 / 149_597_870.691;

/// Sun and nine planets of the ephemeris at J2000 as heliocentric positions and barycentric velocities.
pub fn solar_system(source: &str) -> (Vec<String>, State) {
    let rows: Vec<Row> = table("solar-system-j2000.csv")
        .into_iter()
        .filter(|r| r["source"] == source && r["body"] != "sun")
        .collect();
    assert_eq!(rows.len(), 9, "{source}");
    let names = rows.iter().map(|r| r["body"].clone()).collect();
    let gm: Vec<f64> = rows.iter().map(|r| number(r, "gm_au3_per_day2")).collect();
    let pos = rows.iter().map(|r| triple(r, ["x_au", "y_au", "z_au"])).collect();
    let vel: Vec<[f64; 3]> =
        rows.iter().map(|r| triple(r, ["vx_au_per_day", "vy_au_per_day", "vz_au_per_day"])).collect();
    (names, from_heliocentric(gm, pos, vel))
}

/// From heliocentric velocities.
pub fn from_heliocentric(gm: Vec<f64>, pos: Vec<[f64; 3]>, helio: Vec<[f64; 3]>) -> State {
    let total = SUN_GM + gm.iter().sum::<f64>();
    let sun = [0, 1, 2].map(|k| -gm.iter().zip(&helio).map(|(m, v)| m * v[k]).sum::<f64>() / total);
    let vel = helio.iter().map(|v| [0, 1, 2].map(|k| v[k] + sun[k])).collect();
    State { star_gm: SUN_GM, gm, pos, vel }
}

/// Some of the planets of a state.
pub fn only(state: &State, planets: &[usize]) -> State {
    // Velocities are made heliocentric first: the Sun's own depends on who is there.
    let sun = [0, 1, 2]
        .map(|k| -state.gm.iter().zip(&state.vel).map(|(m, v)| m * v[k]).sum::<f64>() / state.star_gm);
    let pick = |x: &[[f64; 3]]| planets.iter().map(|&p| x[p]).collect::<Vec<_>>();
    let helio = pick(&state.vel).iter().map(|v| [0, 1, 2].map(|k| v[k] - sun[k])).collect();
    from_heliocentric(planets.iter().map(|&p| state.gm[p]).collect(), pick(&state.pos), helio)
}
