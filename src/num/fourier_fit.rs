//! Several lines fitted to a signal together.

use super::fourier::Complex;
use super::fourier_window::Window;
use nalgebra::{DMatrix, DVector};

const ROUNDS: usize = 100;
/// Change of phase at the ends of the span (rad) below which the fit is done.
const SETTLED: f64 = 1e-14;

/// Relative fall of the root mean square below which the fit is done: far below what noise leaves uncertain.
const FLAT: f64 = 1e-10;

/// A exp(iωu), ω in rad per sample, u from the middle of the span.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Tone {
    pub(super) frequency: f64,
    pub(super) amplitude: Complex,
    /// Not fitted with others any more: it stands for lines too near each other to be told apart.
    pub(super) held: bool,
}

/// The signal without the tones.
pub(super) fn subtract(window: &Window, signal: &[Complex], tones: &[Tone]) -> Vec<Complex> {
    let mut rest = signal.to_vec();
    for tone in tones {
        for (k, z) in rest.iter_mut().enumerate() {
            *z -= tone.amplitude * Complex::from_polar(1.0, tone.frequency * window.place(k));
        }
    }
    rest
}

/// Minimises Σ w |f − Σ A exp(iωu)|² over the tones of `group`, the others held; Levenberg–Marquardt.
pub(super) fn fit(window: &Window, signal: &[Complex], tones: &mut [Tone], group: &[usize]) {
    if group.is_empty() {
        return;
    }
    let others: Vec<Tone> = (0..tones.len()).filter(|k| !group.contains(k)).map(|k| tones[k]).collect();
    let target = subtract(window, signal, &others);
    let mut current: Vec<Tone> = group.iter().map(|k| tones[*k]).collect();
    let mut rest = subtract(window, &target, &current);
    let mut cost = window.rms(&rest);
    let mut damping = 1e-4;
    let (mut matrix, mut side) = equations(window, &rest, &current);
    for _ in 0..ROUNDS {
        let Some(next) = step(&matrix, &side, &current, window, damping) else { break };
        let next_rest = subtract(window, &target, &next);
        let next_cost = window.rms(&next_rest);
        let still = moved(&next, &current, window) < SETTLED;
        if next_cost < cost {
            let settled = still || next_cost > (1.0 - FLAT) * cost;
            (current, rest, cost) = (next, next_rest, next_cost);
            if settled {
                break;
            }
            (matrix, side) = equations(window, &rest, &current);
            damping *= 0.1;
        } else if still || damping > 1e8 {
            break;
        } else {
            damping = (damping * 10.0).max(1e-8);
        }
    }
    for (k, tone) in group.iter().zip(current) {
        tones[*k] = tone;
    }
}

/// Largest change of a phase at the ends of the span, rad.
fn moved(next: &[Tone], current: &[Tone], window: &Window) -> f64 {
    let half = 0.5 * window.weights.len() as f64;
    let changes = next.iter().zip(current).map(|(new, old)| (new.frequency - old.frequency).abs() * half);
    changes.fold(0.0, f64::max)
}

/// Normal equations of a step: per tone the change of Re A, of Im A, and of ω (times half the number of samples).
fn equations(window: &Window, rest: &[Complex], tones: &[Tone]) -> (DMatrix<f64>, DVector<f64>) {
    let count = window.weights.len();
    let half = 0.5 * count as f64;
    let waves: Vec<Vec<Complex>> = tones
        .iter()
        .map(|tone| (0..count).map(|k| Complex::from_polar(1.0, tone.frequency * window.place(k))).collect())
        .collect();
    let scaled: Vec<f64> = (0..count).map(|k| window.place(k) / half).collect();
    let sums = |one: &[Complex], other: &[Complex]| {
        let mut sums = [Complex::new(0.0, 0.0); 3];
        for k in 0..count {
            let product = one[k].conj() * other[k] * window.weights[k];
            sums[0] += product;
            sums[1] += product * scaled[k];
            sums[2] += product * (scaled[k] * scaled[k]);
        }
        sums
    };
    let size = 3 * tones.len();
    let (mut matrix, mut side) = (DMatrix::zeros(size, size), DVector::zeros(size));
    for j in 0..tones.len() {
        let own = Complex::i() * tones[j].amplitude;
        let [zeroth, first, _] = sums(&waves[j], rest);
        side[3 * j] = zeroth.re;
        side[3 * j + 1] = zeroth.im;
        side[3 * j + 2] = (own.conj() * first).re;
        for k in 0..=j {
            let [zeroth, first, second] = sums(&waves[j], &waves[k]);
            let other = Complex::i() * tones[k].amplitude;
            let block = [
                [zeroth.re, -zeroth.im, (other * first).re],
                [zeroth.im, zeroth.re, (other * first).im],
                [(own.conj() * first).re, -(own.conj() * first).im, (own.conj() * other * second).re],
            ];
            for (row, line) in block.iter().enumerate() {
                for (column, value) in line.iter().enumerate() {
                    matrix[(3 * j + row, 3 * k + column)] = *value;
                    matrix[(3 * k + column, 3 * j + row)] = *value;
                }
            }
        }
    }
    (matrix, side)
}

/// The tones after one damped step; none when the equations cannot be solved.
fn step(
    matrix: &DMatrix<f64>,
    side: &DVector<f64>,
    tones: &[Tone],
    window: &Window,
    damping: f64,
) -> Option<Vec<Tone>> {
    let mut damped = matrix.clone();
    for k in 0..damped.nrows() {
        // The floor keeps a tone of vanishing amplitude from making the equations singular.
        damped[(k, k)] += damping * matrix[(k, k)] + f64::MIN_POSITIVE;
    }
    let change = damped.cholesky()?.solve(side);
    let half = 0.5 * window.weights.len() as f64;
    Some(
        tones
            .iter()
            .enumerate()
            .map(|(k, tone)| Tone {
                frequency: tone.frequency + change[3 * k + 2] / half,
                amplitude: tone.amplitude + Complex::new(change[3 * k], change[3 * k + 1]),
                held: false,
            })
            .collect(),
    )
}
