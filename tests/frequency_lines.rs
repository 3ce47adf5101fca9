//! Frequency analysis on signals whose lines are known.

use abide::num::{Complex, Ended, FourierError, Search, decompose, decompose_real};

/// Σ A exp(i(νt + φ)) at `count` times `step` apart.
fn signal(lines: &[(f64, f64, f64)], count: usize, step: f64) -> Vec<Complex> {
    (0..count)
        .map(|k| {
            let t = k as f64 * step;
            lines.iter().map(|(nu, a, phase)| Complex::from_polar(*a, nu * t + phase)).sum()
        })
        .collect()
}

/// Normal numbers by a fixed sequence: sums of twelve uniform ones.
fn noise(seed: u64) -> impl FnMut() -> f64 {
    let mut state = seed;
    let mut uniform = move || {
        state = state.wrapping_mul(6364136223846793005).wrapping_add(1442695040888963407);
        (state >> 11) as f64 / (1u64 << 53) as f64
    };
    move || (0..12).map(|_| uniform()).sum::<f64>() - 6.0
}

/// A quasi-periodic signal with two fundamental frequencies and combinations of them, as planets give: all nine lines, to
/// better than 1e-9 of each frequency.
#[test]
fn clean_lines_to_nine_digits() {
    let (n, g) = (0.713_205_117, 0.011_873_21);
    let lines = [
        (n, 1.0, 0.3),
        (g, 0.05, 1.0),
        (2.0 * n - g, 0.025, 2.0),
        (n + g, 1e-2, 3.0),
        (-n + 2.0 * g, 4e-3, 4.0),
        (3.0 * n - 2.0 * g, 1e-3, 5.0),
        (n - 2.0 * g, 5e-4, 0.5),
        (3.0 * g, 1e-4, 1.5),
        (-2.0 * n, 1e-5, 2.5),
    ];
    for (count, power) in [(3000, 1), (4096, 2), (2500, 3)] {
        let spectrum =
            decompose(&signal(&lines, count, 0.9), 0.9, Search { most: 12, window_power: power }).unwrap();
        assert!(spectrum.lines.len() >= lines.len());
        for (found, (nu, size, phase)) in spectrum.lines.iter().zip(lines) {
            assert!((found.frequency / nu - 1.0).abs() < 1e-9, "{found:?} for {nu}");
            let amplitude = Complex::from_polar(size, phase);
            assert!((found.amplitude - amplitude).norm() < 1e-11, "{found:?} for {amplitude}");
        }
        assert!(spectrum.residual_rms < 1e-13, "{:e}", spectrum.residual_rms);
    }
}

/// Two lines one resolution element 2π/T apart, any phase between them, amplitudes alike or not.
#[test]
fn one_resolution_element_apart() {
    let (count, step) = (2048, 0.5);
    let element = std::f64::consts::TAU / (count as f64 * step);
    for phase in 0..12 {
        for size in [1.0, 0.3] {
            let lines =
                [(0.7, 1.0, 0.0), (0.7 + element, size, std::f64::consts::FRAC_PI_6 * f64::from(phase))];
            let spectrum = decompose(&signal(&lines, count, step), step, Search::default()).unwrap();
            let mut found: Vec<f64> = spectrum.lines.iter().take(2).map(|line| line.frequency).collect();
            found.sort_by(f64::total_cmp);
            for (found, (expected, _, _)) in found.iter().zip(lines) {
                assert!((found / expected - 1.0).abs() < 1e-9, "{phase} {size} {spectrum:?}");
            }
            assert!(spectrum.lines.iter().skip(2).all(|line| line.amplitude.norm() < 1e-9));
        }
    }
}

/// The same pair under noise of 1 %: both are found, within five of the errors that a pair so close can have.
#[test]
fn one_resolution_element_apart_under_noise() {
    let (count, step) = (2048, 0.5);
    let element = std::f64::consts::TAU / (count as f64 * step);
    let mut normal = noise(7);
    for phase in 0..12 {
        let lines = [(0.7, 1.0, 0.0), (0.7 + element, 0.6, std::f64::consts::FRAC_PI_6 * f64::from(phase))];
        let mut samples = signal(&lines, count, step);
        samples.iter_mut().for_each(|z| *z += Complex::new(normal(), normal()) * 0.01);
        let spectrum = decompose(&samples, step, Search::default()).unwrap();
        let mut found: Vec<f64> = spectrum.lines.iter().take(2).map(|line| line.frequency).collect();
        found.sort_by(f64::total_cmp);
        for (found, (expected, _, _)) in found.iter().zip(lines) {
            assert!((found - expected).abs() < 0.05 * element, "{phase} {spectrum:?}");
        }
        assert_eq!(spectrum.ended, Ended::Noise);
        assert_eq!(spectrum.lines.len(), 2);
    }
}

/// White noise of deviation σ per part: the stated errors of a line are its real scatter, what is left has the deviation
/// of the noise, and no line is made of noise (1 in 1000 per search is allowed).
#[test]
fn the_noise_floor() {
    let (count, step, sigma) = (1024, 1.0, 0.1);
    let mut normal = noise(3);
    let (trials, mut extra) = (200, 0);
    let (mut frequency_square, mut amplitude_square, mut left) = (0.0, 0.0, 0.0);
    for _ in 0..trials {
        let mut samples = signal(&[(0.4321, 1.0, 0.7)], count, step);
        samples.iter_mut().for_each(|z| *z += Complex::new(normal(), normal()) * sigma);
        let spectrum = decompose(&samples, step, Search { most: 5, window_power: 1 }).unwrap();
        extra += spectrum.lines.len() - 1;
        let line = spectrum.lines[0];
        frequency_square += ((line.frequency - 0.4321) / line.frequency_error).powi(2);
        // Phase at the first sample is tied to the frequency; the size is not.
        let size_error = line.amplitude_error * std::f64::consts::FRAC_1_SQRT_2;
        amplitude_square += ((line.amplitude.norm() - 1.0) / size_error).powi(2);
        left += spectrum.residual_rms / (sigma * 2f64.sqrt());
    }
    let mean = |sum: f64| sum / f64::from(trials);
    // The mean of 200 squares scatters by 10 %.
    assert!((mean(frequency_square) - 1.0).abs() < 0.35, "{}", mean(frequency_square));
    assert!((mean(amplitude_square) - 1.0).abs() < 0.35, "{}", mean(amplitude_square));
    assert!((mean(left) - 1.0).abs() < 0.01, "{}", mean(left));
    assert!(extra <= 2, "{extra} lines of noise");
}

#[test]
fn a_real_signal_in_waves() {
    let samples: Vec<f64> = (0..2000)
        .map(|k| f64::from(k) * 0.3)
        .map(|t| 0.7 + 1.2 * (0.9 * t + 0.4).cos() + 0.2 * (0.11 * t - 1.0).cos())
        .collect();
    let waves = decompose_real(&samples, 0.3, Search { most: 3, window_power: 1 }).unwrap();
    let expected = [(0.9, 1.2, 0.4), (0.0, 0.7, 0.0), (0.11, 0.2, -1.0)];
    assert_eq!(waves.len(), 3);
    for (wave, (nu, size, phase)) in waves.iter().zip(expected) {
        assert!((wave.frequency - nu).abs() < 1e-11 && (wave.amplitude - size).abs() < 1e-10, "{wave:?}");
        assert!((wave.phase - phase).abs() < 1e-8, "{wave:?}");
    }
}

#[test]
fn a_single_line_at_any_frequency() {
    for k in 0..60 {
        let nu = -3.1 + 0.1037 * f64::from(k);
        let spectrum = decompose(&signal(&[(nu, 2.0, 1.0)], 500, 1.0), 1.0, Search::default()).unwrap();
        assert!((spectrum.lines[0].frequency - nu).abs() < 1e-13, "{nu} {spectrum:?}");
        assert_eq!(spectrum.lines.len(), 1, "{spectrum:?}");
    }
}

#[test]
fn what_cannot_be_analysed() {
    let search = Search::default();
    let fine = signal(&[(0.1, 1.0, 0.0)], 100, 1.0);
    assert_eq!(decompose(&fine[..15], 1.0, search), Err(FourierError::TooFew { found: 15 }));
    assert_eq!(decompose(&fine, 0.0, search), Err(FourierError::Step { found: 0.0 }));
    assert!(decompose(&fine, f64::NAN, search).is_err());
    let mut broken = fine.clone();
    broken[7] = Complex::new(f64::NAN, 0.0);
    assert_eq!(decompose(&broken, 1.0, search), Err(FourierError::NotFinite { index: 7 }));
    let nothing = decompose(&vec![Complex::new(0.0, 0.0); 64], 1.0, search).unwrap();
    assert!(nothing.lines.is_empty() && nothing.ended == Ended::Rounding);
}
