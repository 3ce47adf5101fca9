//! Windowed transforms of a signal: where its strongest line lies.

use super::fourier::Complex;
use super::fourier_fit::Tone;
use super::wave::wave;
use rustfft::{Fft, FftPlanner};
use std::f64::consts::{PI, TAU};
use std::sync::Arc;

/// Weights (1 + cos πx)^p over the span, x from −1 to 1, summing to 1.
///
/// Places are counted in samples from the middle of the span, which keeps phases and frequencies uncorrelated.
pub(super) struct Window {
    power: u32,
    pub(super) weights: Vec<f64>,
    /// Of the places from the middle on, each standing for itself and its mirror: w, wx and wx² twice, x from 0 to 1.
    pub(super) mirrored: Vec<[f64; 3]>,
    /// Of twice the samples and more.
    padded: Arc<dyn Fft<f64>>,
}

impl Window {
    pub(super) fn new(count: usize, power: u32) -> Window {
        let padded = FftPlanner::new().plan_fft_forward((2 * count).next_power_of_two());
        let mut window = Window { power, weights: Vec::new(), mirrored: Vec::new(), padded };
        let half = 0.5 * count as f64;
        let raw: Vec<f64> = (0..count)
            .map(|k| (k as f64 - 0.5 * (count as f64 - 1.0)) / half)
            .map(|x| (1.0 + (PI * x).cos()).powi(power as i32))
            .collect();
        let total: f64 = raw.iter().sum();
        window.weights = raw.into_iter().map(|weight| weight / total).collect();
        let mirrored = (count / 2..count).map(|k| {
            // The middle of an odd number of samples has no mirror.
            let both = if window.place(k) == 0.0 { 1.0 } else { 2.0 };
            let (weight, x) = (both * window.weights[k], window.place(k) / half);
            [weight, weight * x, weight * x * x]
        });
        window.mirrored = mirrored.collect();
        window
    }

    /// exp(iωu) at every sample.
    pub(super) fn wave(&self, frequency: f64) -> Vec<Complex> {
        wave(frequency, self.place(0), self.weights.len())
    }

    /// Samples from the middle of the span.
    pub(super) fn place(&self, index: usize) -> f64 {
        index as f64 - 0.5 * (self.weights.len() as f64 - 1.0)
    }

    /// √(Σ w |f|²).
    pub(super) fn rms(&self, signal: &[Complex]) -> f64 {
        self.weights.iter().zip(signal).map(|(w, z)| w * z.norm_sqr()).sum::<f64>().sqrt()
    }

    /// Standard deviation of an amplitude per standard deviation of white noise: √(Σ w²).
    pub(super) fn noise_gain(&self) -> f64 {
        self.weights.iter().map(|w| w * w).sum::<f64>().sqrt()
    }

    /// Standard deviation of a frequency (rad per sample) per noise-to-line ratio: √(½ Σ w²u²)/Σ w u².
    pub(super) fn slope_gain(&self) -> f64 {
        let squares = self.weights.iter().enumerate().map(|(k, w)| (w, self.place(k).powi(2)));
        let (noise, lever) = squares.fold((0.0, 0.0), |(n, l), (w, u2)| (n + w * w * u2, l + w * u2));
        (0.5 * noise).sqrt() / lever
    }

    /// Half-width of the main lobe, rad per sample.
    pub(super) fn lobe(&self) -> f64 {
        TAU * f64::from(self.power + 1) / self.weights.len() as f64
    }
}

/// The strongest line of a signal: the maximum of |Σ w f exp(−iωu)|, frequency in rad per sample.
pub(super) fn peak(window: &Window, signal: &[Complex]) -> Tone {
    let weighted: Vec<Complex> = signal.iter().zip(&window.weights).map(|(z, w)| z * w).collect();
    let padded = window.padded.len();
    let mut buffer = weighted.clone();
    buffer.resize(padded, Complex::new(0.0, 0.0));
    window.padded.process(&mut buffer);
    let strongest = (0..padded)
        .max_by(|one, other| buffer[*one].norm_sqr().total_cmp(&buffer[*other].norm_sqr()))
        .unwrap_or(0);
    let bin = TAU / padded as f64;
    let start = if 2 * strongest > padded { strongest as f64 - padded as f64 } else { strongest as f64 };
    let frequency = climb(window, &weighted, start * bin, bin);
    Tone { frequency, amplitude: transform(window, &weighted, frequency)[0], held: false }
}

/// F = Σ w f exp(−iωu), F′ and F″ with respect to ω.
fn transform(window: &Window, weighted: &[Complex], frequency: f64) -> [Complex; 3] {
    let zero = Complex::new(0.0, 0.0);
    let mut sums = [zero; 3];
    for (k, (z, turn)) in weighted.iter().zip(window.wave(-frequency)).enumerate() {
        let place = window.place(k);
        let turned = z * turn;
        sums[0] += turned;
        sums[1] += turned * place;
        sums[2] += turned * (place * place);
    }
    [sums[0], sums[1] * Complex::new(0.0, -1.0), -sums[2]]
}

/// The maximum of |F|² within a bin of `start`, by Newton steps on its slope kept inside a shrinking bracket.
fn climb(window: &Window, weighted: &[Complex], start: f64, bin: f64) -> f64 {
    let slope = |frequency: f64| {
        let [value, first, second] = transform(window, weighted, frequency);
        ((value.conj() * first).re, first.norm_sqr() + (value.conj() * second).re)
    };
    let (mut low, mut high) = (start - bin, start + bin);
    let mut at = start;
    for _ in 0..60 {
        let (rise, bend) = slope(at);
        if rise > 0.0 {
            low = at;
        } else {
            high = at;
        }
        let newton = at - rise / bend;
        let next =
            if bend < 0.0 && newton > low && newton < high { newton } else { low + 0.5 * (high - low) };
        if (next - at).abs() <= 1e-13 * bin || rise == 0.0 {
            return next;
        }
        at = next;
    }
    at
}
