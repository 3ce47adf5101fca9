//! Mean, eccentric, hyperbolic, parabolic and true anomaly.
//!
//! Kepler's equation is written as a sum of two terms of one sign, (1 − e) E + e (E − sin E), and the
//! differences E − sin E and sinh H − H come from their series when the angle is small. So nothing
//! cancels near e = 1 or near pericentre, and every answer is good to a few roundings of itself. Newton's
//! method runs on convex functions from above, where it falls towards the root and stops by itself at
//! the first step that does not fall.

use std::f64::consts::{PI, TAU};

use crate::num::wrap_half_turn;

/// Below this the differences E − sin E and sinh H − H are summed as series.
const SERIES_BELOW: f64 = 1.5;

/// Terms of those series; the first one left out is below 1e-17 of the sum at [`SERIES_BELOW`].
const SERIES_TERMS: u32 = 11;

/// x³/6 · (1 + s x²/(4·5) · (1 + s x²/(6·7) · …)) with s = ±1.
fn cubic_series(x: f64, sign: f64) -> f64 {
    let square = sign * x * x;
    let mut sum = 1.0;
    for term in (1..=SERIES_TERMS).rev() {
        let n = f64::from(2 * term + 2);
        sum = 1.0 + square / (n * (n + 1.0)) * sum;
    }
    x * x * x / 6.0 * sum
}

/// x − sin x without cancellation; x in radians.
pub fn x_minus_sin_x(x: f64) -> f64 {
    if x.abs() < SERIES_BELOW { cubic_series(x, -1.0) } else { x - x.sin() }
}

/// sinh x − x without cancellation.
pub fn sinh_x_minus_x(x: f64) -> f64 {
    if x.abs() < SERIES_BELOW { cubic_series(x, 1.0) } else { x.sinh() - x }
}

/// M = E − e sin E, rad, for 0 ≤ e < 1 and any E (the turn of E is kept).
pub fn mean_from_eccentric(eccentric: f64, eccentricity: f64) -> f64 {
    (1.0 - eccentricity) * eccentric + eccentricity * x_minus_sin_x(eccentric)
}

/// M = e sinh H − H for e > 1.
pub fn mean_from_hyperbolic(hyperbolic: f64, eccentricity: f64) -> f64 {
    (eccentricity - 1.0) * hyperbolic.sinh() + sinh_x_minus_x(hyperbolic)
}

/// M = D + D³/3 for D = tan(ν/2): Barker's equation, with M = √(μ / (2 q³)) (t − t_pericentre).
pub fn mean_from_barker(barker: f64) -> f64 {
    barker + barker * barker * barker / 3.0
}

/// E in [−π, π] with E − e sin E = M, rad, for 0 ≤ e < 1; M is first taken into [−π, π].
///
/// NaN when e is outside 0 ≤ e < 1. Kepler (1609).
pub fn eccentric_from_mean(mean: f64, eccentricity: f64) -> f64 {
    if !(0.0..1.0).contains(&eccentricity) || !mean.is_finite() {
        return f64::NAN;
    }
    let mean = wrap_half_turn(mean);
    let target = mean.abs();
    if target == 0.0 || eccentricity == 0.0 {
        return mean;
    }
    // Three upper bounds: M ≥ (1 − e) E; M ≥ E − e; and E − sin E ≥ E³/π² on [0, π].
    let start =
        (target / (1.0 - eccentricity)).min(target + eccentricity).min((PI * PI * target).cbrt()).min(PI);
    let root = fall_to_root(start, |x| {
        let half = (0.5 * x).sin();
        let slope = (1.0 - eccentricity) + 2.0 * eccentricity * half * half;
        (mean_from_eccentric(x, eccentricity) - target, slope)
    });
    root.copysign(mean)
}

/// H with e sinh H − H = M, for e > 1. NaN when e ≤ 1.
pub fn hyperbolic_from_mean(mean: f64, eccentricity: f64) -> f64 {
    if !(eccentricity > 1.0 && eccentricity.is_finite() && mean.is_finite()) {
        return f64::NAN;
    }
    let target = mean.abs();
    if target == 0.0 {
        return mean;
    }
    // Upper bounds: M ≥ (e − 1) sinh H, M ≥ sinh H − H ≥ H³/6; then sinh H = (M + H)/e keeps them above.
    let mut start = (target / (eccentricity - 1.0)).asinh().min((6.0 * target).cbrt());
    for _ in 0..2 {
        start = start.min(((target + start) / eccentricity).asinh() * (1.0 + 4.0 * f64::EPSILON));
    }
    let root = fall_to_root(start, |x| {
        let half = (0.5 * x).sinh();
        let slope = (eccentricity - 1.0) + 2.0 * eccentricity * half * half;
        (mean_from_hyperbolic(x, eccentricity) - target, slope)
    });
    root.copysign(mean)
}

/// D = tan(ν/2) with D + D³/3 = M: D = 2 sinh(asinh(3M/2) / 3), without iteration.
pub fn barker_from_mean(mean: f64) -> f64 {
    2.0 * ((1.5 * mean).asinh() / 3.0).sinh()
}

/// Newton from above on a convex rising function; stops at the first step that does not go down.
fn fall_to_root(start: f64, value_and_slope: impl Fn(f64) -> (f64, f64)) -> f64 {
    // A start that rounding put below the root is led above it by the first step of a convex function.
    let (value, slope) = value_and_slope(start);
    let mut x = start - value / slope;
    loop {
        let (value, slope) = value_and_slope(x);
        let next = x - value / slope;
        if next < x {
            x = next;
        } else {
            return x;
        }
    }
}

/// True anomaly in [−π, π] from E, for 0 ≤ e < 1: tan(ν/2) = √((1+e)/(1−e)) tan(E/2).
pub fn true_from_eccentric(eccentric: f64, eccentricity: f64) -> f64 {
    let half = 0.5 * wrap_half_turn(eccentric);
    2.0 * ((1.0 + eccentricity).sqrt() * half.sin()).atan2((1.0 - eccentricity).sqrt() * half.cos())
}

/// E in [−π, π] from the true anomaly, for 0 ≤ e < 1.
pub fn eccentric_from_true(true_anomaly: f64, eccentricity: f64) -> f64 {
    let half = 0.5 * wrap_half_turn(true_anomaly);
    2.0 * ((1.0 - eccentricity).sqrt() * half.sin()).atan2((1.0 + eccentricity).sqrt() * half.cos())
}

/// True anomaly from H, for e > 1: tan(ν/2) = √((e+1)/(e−1)) tanh(H/2).
pub fn true_from_hyperbolic(hyperbolic: f64, eccentricity: f64) -> f64 {
    2.0 * ((eccentricity + 1.0).sqrt() * (0.5 * hyperbolic).tanh()).atan2((eccentricity - 1.0).sqrt())
}

/// H from the true anomaly, for e > 1. NaN at or beyond the asymptotes (1 + e cos ν ≤ 0).
pub fn hyperbolic_from_true(true_anomaly: f64, eccentricity: f64) -> f64 {
    let half = 0.5 * wrap_half_turn(true_anomaly);
    let tanh = ((eccentricity - 1.0) / (eccentricity + 1.0)).sqrt() * half.tan();
    2.0 * tanh.atanh()
}

/// True anomaly on a parabola: ν = 2 atan D.
pub fn true_from_barker(barker: f64) -> f64 {
    2.0 * barker.atan()
}

/// D = tan(ν/2) on a parabola.
pub fn barker_from_true(true_anomaly: f64) -> f64 {
    (0.5 * true_anomaly).tan()
}

/// True anomaly from the mean one, for any e ≥ 0 (e = 1: the mean anomaly of Barker's equation).
pub fn true_from_mean(mean: f64, eccentricity: f64) -> f64 {
    if eccentricity < 1.0 {
        true_from_eccentric(eccentric_from_mean(mean, eccentricity), eccentricity)
    } else if eccentricity > 1.0 {
        true_from_hyperbolic(hyperbolic_from_mean(mean, eccentricity), eccentricity)
    } else {
        true_from_barker(barker_from_mean(mean))
    }
}

/// Mean anomaly from the true one, for any e ≥ 0; for e < 1 in [−π, π].
pub fn mean_from_true(true_anomaly: f64, eccentricity: f64) -> f64 {
    if eccentricity < 1.0 {
        mean_from_eccentric(eccentric_from_true(true_anomaly, eccentricity), eccentricity)
    } else if eccentricity > 1.0 {
        mean_from_hyperbolic(hyperbolic_from_true(true_anomaly, eccentricity), eccentricity)
    } else {
        mean_from_barker(barker_from_true(true_anomaly))
    }
}

/// Time scale of a pericentre passage, day: how long a turn would take at the rate of pericentre.
///
/// 2π / (dν/dt at pericentre) = 2π q² / √(μ q (1 + e)), which is P (1 − e)^{3/2} / (1 + e)^{1/2} for an
/// ellipse; q = a (1 − e) in au (both factors negative for a hyperbola), μ in au³ day⁻².
pub fn pericentre_passage_day(semi_major_axis_au: f64, eccentricity: f64, gm: f64) -> f64 {
    let pericentre_au = semi_major_axis_au * (1.0 - eccentricity);
    TAU * (pericentre_au * pericentre_au * pericentre_au / (gm * (1.0 + eccentricity))).sqrt()
}
