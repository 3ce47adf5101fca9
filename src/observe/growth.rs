//! The maximal Lyapunov exponent from the growth of the tangent vector.

use crate::num::{Kept, KeptReader};

/// Maximal Lyapunov exponent with its standard error.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Lyapunov {
    pub per_day: f64,
    pub error_per_day: f64,
}

/// ln(|δ|/|δ₀|) at evenly spaced times; when full, every second mark is dropped, so memory is bounded.
#[derive(Clone, Debug, PartialEq)]
pub struct GrowthRecord {
    marks: Vec<f64>,
    /// Calls per mark.
    stride: u64,
    calls: u64,
    call_day: f64,
}

impl GrowthRecord {
    const MOST: usize = 128;

    /// `call_day` is the time between two calls of [`GrowthRecord::see`].
    pub fn new(call_day: f64) -> GrowthRecord {
        GrowthRecord { marks: vec![0.0], stride: 1, calls: 0, call_day }
    }

    pub fn keep(&self, kept: &mut Kept) {
        kept.count(self.stride);
        kept.count(self.calls);
        kept.float(self.call_day);
        kept.count(self.marks.len() as u64);
        kept.floats(&self.marks);
    }

    pub fn restore(&mut self, kept: &mut KeptReader<'_>) -> Option<()> {
        self.stride = kept.count()?;
        self.calls = kept.count()?;
        self.call_day = kept.float()?;
        let marks = kept.size().filter(|marks| (1..=GrowthRecord::MOST).contains(marks))?;
        self.marks = kept.floats(marks)?;
        Some(())
    }

    pub fn see(&mut self, log: f64) {
        self.calls += 1;
        if !self.calls.is_multiple_of(self.stride) {
            return;
        }
        self.marks.push(log);
        if self.marks.len() > GrowthRecord::MOST {
            self.marks = self.marks.iter().copied().step_by(2).collect();
            self.stride *= 2;
        }
    }

    /// Mean slope over the last three quarters of the span, and its standard error from the slopes of up to 16
    /// equal pieces of it (batch means; the pieces are long against the orbits, so nearly independent).
    ///
    /// λ = lim (1/t) ln(|δ|/|δ₀|), rad-free, per day (Benettin et al. 1980). None with fewer than four pieces.
    pub fn lyapunov(&self) -> Option<Lyapunov> {
        let last = self.marks.len() - 1;
        let first = last / 4;
        let pieces = (last - first).min(16);
        if pieces < 4 {
            return None;
        }
        let at = |k: usize| first + (last - first) * k / pieces;
        let mark_day = self.call_day * self.stride as f64;
        let slope =
            |from: usize, to: usize| (self.marks[to] - self.marks[from]) / ((to - from) as f64 * mark_day);
        let mean = slope(first, last);
        let spread: f64 = (0..pieces).map(|k| (slope(at(k), at(k + 1)) - mean).powi(2)).sum();
        let n = pieces as f64;
        Some(Lyapunov { per_day: mean, error_per_day: (spread / (n * (n - 1.0))).sqrt() })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_straight_line_gives_its_slope_whatever_was_thinned() {
        for calls in [8u64, 100, 128, 129, 5000] {
            let mut record = GrowthRecord::new(2.0);
            for k in 1..=calls {
                record.see(0.3 * 2.0 * k as f64);
            }
            let lyapunov = record.lyapunov().unwrap();
            assert!((lyapunov.per_day - 0.3).abs() < 1e-13 && lyapunov.error_per_day < 1e-13, "{calls}");
            assert!(record.marks.len() <= GrowthRecord::MOST);
        }
    }

    #[test]
    fn the_error_covers_a_noisy_slope() {
        // Independent steps of mean 0.1 and deviation 1 (sums of twelve uniform numbers): the standard error of the
        // mean over 75 % of 4096 calls is 1/√3072.
        let mut state = 1u64;
        let mut uniform = || {
            state = state.wrapping_mul(6364136223846793005).wrapping_add(1442695040888963407);
            (state >> 11) as f64 / (1u64 << 53) as f64
        };
        let (mut within, mut mean_error) = (0, 0.0);
        for _ in 0..200 {
            let mut record = GrowthRecord::new(1.0);
            let mut log = 0.0;
            for _ in 0..4096 {
                log += 0.1 + (0..12).map(|_| uniform()).sum::<f64>() - 6.0;
                record.see(log);
            }
            let lyapunov = record.lyapunov().unwrap();
            within += i32::from((lyapunov.per_day - 0.1).abs() < 2.0 * lyapunov.error_per_day);
            mean_error += lyapunov.error_per_day / 200.0;
        }
        assert!((170..=198).contains(&within), "{within} of 200 within two standard errors");
        assert!((mean_error * 3072f64.sqrt() - 1.0).abs() < 0.1, "{mean_error}");
    }
}
