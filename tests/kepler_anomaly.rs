//! Anomalies against 50-digit values and against halving.

use std::f64::consts::PI;

use abide::kepler;
use proptest::prelude::*;

struct Row {
    id: String,
    kind: String,
    eccentricity: f64,
    mean: f64,
    anomaly: f64,
    true_anomaly: f64,
}

/// tests/truth/anomalies.csv; its head says where it comes from.
fn rows() -> Vec<Row> {
    let mut reader = csv::ReaderBuilder::new()
        .comment(Some(b'#'))
        .from_path(concat!(env!("CARGO_MANIFEST_DIR"), "/tests/truth/anomalies.csv"))
        .unwrap();
    let number = |text: &str| text.parse::<f64>().unwrap();
    reader
        .records()
        .map(|record| {
            let record = record.unwrap();
            Row {
                id: record[0].to_string(),
                kind: record[1].to_string(),
                eccentricity: number(&record[2]),
                mean: number(&record[3]),
                anomaly: number(&record[4]),
                true_anomaly: number(&record[5]),
            }
        })
        .collect()
}

/// The anomaly found and dM/d(anomaly) there.
fn solve(row: &Row) -> (f64, f64) {
    let e = row.eccentricity;
    if row.kind.contains("elliptic") {
        let half = (0.5 * row.anomaly).sin();
        (kepler::eccentric_from_mean(row.mean, e), (1.0 - e) + 2.0 * e * half * half)
    } else if row.kind.contains("hyperbolic") {
        let half = (0.5 * row.anomaly).sinh();
        (kepler::hyperbolic_from_mean(row.mean, e), (e - 1.0) + 2.0 * e * half * half)
    } else {
        assert_eq!(row.kind, "parabolic-barker");
        (kepler::barker_from_mean(row.mean), 1.0 + row.anomaly * row.anomaly)
    }
}

/// dν/d(anomaly) at the row's anomaly.
fn true_slope(row: &Row) -> f64 {
    let e = row.eccentricity;
    if row.kind.contains("elliptic") {
        let half = (0.5 * row.anomaly).sin();
        ((1.0 - e) * (1.0 + e)).sqrt() / ((1.0 - e) + 2.0 * e * half * half)
    } else if row.kind.contains("hyperbolic") {
        let half = (0.5 * row.anomaly).sinh();
        ((e - 1.0) * (e + 1.0)).sqrt() / ((e - 1.0) + 2.0 * e * half * half)
    } else {
        2.0 / (1.0 + row.anomaly * row.anomaly)
    }
}

/// Limit: 4 ε of conditioning. An anomaly x holds ε|x| of its own rounding and ε|M| / (dM/dx) of the mean anomaly's.
#[test]
fn every_row_to_round_off() {
    let rows = rows();
    assert_eq!(rows.len(), 348, "rows of the table");
    for row in &rows {
        let (found, slope) = solve(row);
        let limit = 4.0 * f64::EPSILON * (row.anomaly.abs() + row.mean.abs() / slope);
        assert!(
            (found - row.anomaly).abs() <= limit,
            "{} {}: {found:e} for {:e}, limit {limit:e}",
            row.id,
            row.kind,
            row.anomaly
        );
        let mean = mean_of(row);
        let limit = 4.0 * f64::EPSILON * (row.mean.abs() + slope * row.anomaly.abs());
        assert!((mean - row.mean).abs() <= limit, "{}: mean {mean:e} for {:e}", row.id, row.mean);
    }
}

fn mean_of(row: &Row) -> f64 {
    let e = row.eccentricity;
    if row.kind.contains("elliptic") {
        kepler::mean_from_eccentric(row.anomaly, e)
    } else if row.kind.contains("hyperbolic") {
        kepler::mean_from_hyperbolic(row.anomaly, e)
    } else {
        kepler::mean_from_barker(row.anomaly)
    }
}

/// Limit: 4 ε of conditioning, through both the anomaly and the true anomaly's own rounding.
#[test]
fn every_true_anomaly_to_round_off_and_back() {
    let mut returned = 0;
    for row in &rows() {
        let (_, slope) = solve(row);
        let through = true_slope(row) * (row.anomaly.abs() + row.mean.abs() / slope);
        let limit = 4.0 * f64::EPSILON * (row.true_anomaly.abs() + through);
        let found = kepler::true_from_mean(row.mean, row.eccentricity);
        assert!(
            (found - row.true_anomaly).abs() <= limit,
            "{}: {found:e} for {:e}, limit {limit:e}",
            row.id,
            row.true_anomaly
        );
        // Back: the true anomaly's rounding, |ν| ε, grows by dM/dν = (dM/dx) / (dν/dx).
        let back = kepler::mean_from_true(row.true_anomaly, row.eccentricity);
        let rate = slope / true_slope(row);
        let limit =
            8.0 * f64::EPSILON * (row.mean.abs() + rate * row.true_anomaly.abs() + slope * row.anomaly.abs());
        // Beside the asymptote of a hyperbola one rounding of ν already passes it; then there is no way back.
        if row.kind.contains("hyperbolic")
            && rate * row.true_anomaly.abs() * f64::EPSILON > 0.01 * row.mean.abs()
        {
            continue;
        }
        assert!((back - row.mean).abs() <= limit, "{}: back {back:e} for {:e}, {limit:e}", row.id, row.mean);
        returned += 1;
    }
    assert!(returned > 320, "{returned} rows could be taken back");
}

/// The slow twin: halving on E − e sin E = M as it is written in books.
fn by_halving(target: f64, mut low: f64, mut high: f64, mean_of: impl Fn(f64) -> f64) -> f64 {
    for _ in 0..1200 {
        let middle = 0.5 * (low + high);
        if mean_of(middle) < target { low = middle } else { high = middle }
    }
    0.5 * (low + high)
}

proptest! {
    /// Limit: the book form rounds at 2 ε π whatever the angle, over dM/dE.
    #[test]
    fn ellipse_agrees_with_halving(mean in -PI..PI, eccentricity in 0.0..0.9999f64) {
        let found = kepler::eccentric_from_mean(mean, eccentricity);
        let twin = by_halving(mean, -PI, PI, |x| x - eccentricity * x.sin());
        let slope = 1.0 - eccentricity * twin.cos();
        let limit = 4.0 * f64::EPSILON * PI / slope;
        prop_assert!((found - twin).abs() <= limit, "{found} {twin}");
    }

    #[test]
    fn hyperbola_agrees_with_halving(size in -12.0..5.0f64, excess in -6.0..1.5f64, back in any::<bool>()) {
        let mean = if back { -(10f64.powf(size)) } else { 10f64.powf(size) };
        let eccentricity = 1.0 + 10f64.powf(excess);
        let found = kepler::hyperbolic_from_mean(mean, eccentricity);
        let twin = by_halving(mean, -40.0, 40.0, |x| eccentricity * x.sinh() - x);
        let slope = eccentricity * twin.cosh() - 1.0;
        let scale = eccentricity * twin.sinh().abs() + twin.abs();
        // Above 1.5 nothing of the book form cancels; below, its own rounding of e sinh H counts.
        prop_assert!((found - twin).abs() <= 4.0 * f64::EPSILON * (scale / slope + twin.abs()), "{found} {twin}");
    }

    #[test]
    fn whole_turns_do_not_matter(mean in -PI..PI, eccentricity in 0.0..0.95f64, turns in -50..50i32) {
        let near = kepler::eccentric_from_mean(mean, eccentricity);
        let far = kepler::eccentric_from_mean(mean + f64::from(turns) * 2.0 * PI, eccentricity);
        prop_assert!((near.cos() - far.cos()).abs() < 320.0 * f64::EPSILON / (1.0 - eccentricity) * PI);
    }
}

#[test]
fn out_of_domain_is_not_a_number() {
    assert!(kepler::eccentric_from_mean(1.0, 1.0).is_nan());
    assert!(kepler::eccentric_from_mean(1.0, -0.1).is_nan());
    assert!(kepler::hyperbolic_from_mean(1.0, 1.0).is_nan());
    assert!(kepler::hyperbolic_from_mean(f64::INFINITY, 2.0).is_nan());
}

/// P (1−e)^{3/2} / (1+e)^{1/2} beside finite differences of the true anomaly at pericentre.
#[test]
fn pericentre_passage_is_a_turn_at_pericentre_speed() {
    let (semi_major_axis_au, gm): (f64, f64) = (0.7, 3e-4);
    let mean_motion = (gm / semi_major_axis_au.powi(3)).sqrt();
    for eccentricity in [0.0, 0.1, 0.5, 0.9, 0.99] {
        let small = 1e-6 * (1.0f64 - eccentricity).powf(1.5);
        let rate = kepler::true_from_mean(small, eccentricity) / small * mean_motion;
        let found = kepler::pericentre_passage_day(semi_major_axis_au, eccentricity, gm);
        // The quotient is off by the curvature, of order (1e-6)².
        assert!((found * rate / (2.0 * PI) - 1.0).abs() < 1e-10, "e = {eccentricity}");
    }
    let hyperbola = kepler::pericentre_passage_day(-0.7, 1.5, gm);
    let ellipse = kepler::pericentre_passage_day(0.7, 0.5, gm);
    assert!((hyperbola / ellipse - (1.5f64 / 2.5).sqrt()).abs() < 1e-15);
}
