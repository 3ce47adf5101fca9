//! Lines in the spectrum of an evenly sampled complex signal.

use std::f64::consts::TAU;

use rustfft::FftPlanner;
use rustfft::num_complex::Complex;

/// Angular frequency (rad per unit of time) and amplitude of the strongest line between `low` and `high`.
///
/// Periodogram of the signal under a Hann window; the peak is refined by golden-section search on the windowed
/// sum itself, so the frequency is good to far better than one bin. `step` is the time between samples.
pub fn strongest(signal: &[Complex<f64>], step: f64, low: f64, high: f64) -> (f64, f64) {
    let n = signal.len();
    let window = |k: usize| 1.0 - (TAU * (k as f64 + 0.5) / n as f64).cos();
    let mut spectrum: Vec<Complex<f64>> = signal.iter().enumerate().map(|(k, z)| z * window(k)).collect();
    FftPlanner::new().plan_fft_forward(n).process(&mut spectrum);
    let bin = TAU / (n as f64 * step);
    let frequency = |k: usize| if k <= n / 2 { k as f64 * bin } else { (k as f64 - n as f64) * bin };
    let allowed = (0..n).filter(|k| (low..=high).contains(&frequency(*k)));
    let peak = allowed.max_by(|a, b| spectrum[*a].norm().total_cmp(&spectrum[*b].norm()));
    let centre = frequency(peak.expect("the band holds a bin"));
    let amplitude = |omega: f64| {
        let each = signal.iter().enumerate();
        let sum: Complex<f64> =
            each.map(|(k, z)| z * window(k) * Complex::cis(-omega * step * k as f64)).sum();
        sum.norm() / n as f64
    };
    let omega = highest(centre - bin, centre + bin, amplitude);
    (omega, amplitude(omega))
}

/// Golden-section search for the maximum of a function with one peak between `a` and `b`.
fn highest(mut a: f64, mut b: f64, value: impl Fn(f64) -> f64) -> f64 {
    let golden = 0.5 * (5f64.sqrt() - 1.0);
    let (mut x, mut y) = (b - golden * (b - a), a + golden * (b - a));
    let (mut at_x, mut at_y) = (value(x), value(y));
    for _ in 0..30 {
        if at_x > at_y {
            (b, y, at_y) = (y, x, at_x);
            x = b - golden * (b - a);
            at_x = value(x);
        } else {
            (a, x, at_x) = (x, y, at_y);
            y = a + golden * (b - a);
            at_y = value(y);
        }
    }
    0.5 * (a + b)
}

/// The real signal as a complex one.
pub fn real(signal: impl IntoIterator<Item = f64>) -> Vec<Complex<f64>> {
    signal.into_iter().map(|x| Complex::new(x, 0.0)).collect()
}

/// An angle without jumps: each value within half a turn of the one before.
pub fn unwrapped(angles: impl IntoIterator<Item = f64>) -> Vec<f64> {
    let mut last: Option<f64> = None;
    let follow = |angle: f64| {
        let next = last.map_or(angle, |l| angle + TAU * ((l - angle) / TAU).round());
        last = Some(next);
        next
    };
    angles.into_iter().map(follow).collect()
}

/// Slope of the straight line of least squares through values at even steps, with its standard error.
pub fn slope(values: &[f64], step: f64) -> (f64, f64) {
    let n = values.len() as f64;
    let mean = values.iter().sum::<f64>() / n;
    let at = |k: usize| (k as f64 - 0.5 * (n - 1.0)) * step;
    let square: f64 = (0..values.len()).map(|k| at(k).powi(2)).sum();
    let slope = values.iter().enumerate().map(|(k, y)| at(k) * (y - mean)).sum::<f64>() / square;
    let rest: f64 = values.iter().enumerate().map(|(k, y)| (y - mean - slope * at(k)).powi(2)).sum();
    (slope, (rest / (n - 2.0) / square).sqrt())
}
