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
    without(signal, tones, &waves(window, tones))
}

/// exp(iωu) of every tone at every sample.
fn waves(window: &Window, tones: &[Tone]) -> Vec<Vec<Complex>> {
    tones.iter().map(|tone| window.wave(tone.frequency)).collect()
}

fn without(signal: &[Complex], tones: &[Tone], waves: &[Vec<Complex>]) -> Vec<Complex> {
    let mut rest = signal.to_vec();
    for (tone, wave) in tones.iter().zip(waves) {
        for (z, turn) in rest.iter_mut().zip(wave) {
            *z -= tone.amplitude * turn;
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
    let turns = waves(window, &current);
    let rest = without(&target, &current, &turns);
    let mut cost = window.rms(&rest);
    let mut damping = 1e-4;
    let (mut matrix, mut side) = equations(window, &rest, &current, &turns);
    for _ in 0..ROUNDS {
        let Some(next) = step(&matrix, &side, &current, window, damping) else { break };
        let turns = waves(window, &next);
        let rest = without(&target, &next, &turns);
        let next_cost = window.rms(&rest);
        let still = moved(&next, &current, window) < SETTLED;
        if next_cost < cost {
            let settled = still || next_cost > (1.0 - FLAT) * cost;
            (current, cost) = (next, next_cost);
            if settled {
                break;
            }
            (matrix, side) = equations(window, &rest, &current, &turns);
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
fn equations(
    window: &Window,
    rest: &[Complex],
    tones: &[Tone],
    waves: &[Vec<Complex>],
) -> (DMatrix<f64>, DVector<f64>) {
    let size = 3 * tones.len();
    let (mut matrix, mut side) = (DMatrix::zeros(size, size), DVector::zeros(size));
    for j in 0..tones.len() {
        let own = Complex::i() * tones[j].amplitude;
        let [zeroth, first] = sums(window, &waves[j], rest);
        side[3 * j] = zeroth.re;
        side[3 * j + 1] = zeroth.im;
        side[3 * j + 2] = (own.conj() * first).re;
        for k in 0..=j {
            let [zeroth, first, second] = mirrored_sums(window, &waves[j], &waves[k]);
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

/// Σ w z* f and Σ wx z* f over all samples, x from −1 to 1.
fn sums(window: &Window, wave: &[Complex], signal: &[Complex]) -> [Complex; 2] {
    let half = 0.5 * window.weights.len() as f64;
    let mut sums = [Complex::new(0.0, 0.0); 2];
    for (k, ((z, f), weight)) in wave.iter().zip(signal).zip(&window.weights).enumerate() {
        let product = z.conj() * f * weight;
        sums[0] += product;
        sums[1] += product * (window.place(k) / half);
    }
    sums
}

/// Numbers that are added side by side, so that no sum waits for the one before it.
const BESIDE: usize = 4;

/// Σ w z₁* z₂, Σ wx z₁* z₂ and Σ wx² z₁* z₂ of two waves: w is even and z₁* z₂ turns into its conjugate at the mirrored place, so half
/// of the places tell all.
fn mirrored_sums(window: &Window, one: &[Complex], other: &[Complex]) -> [Complex; 3] {
    let from = window.weights.len() / 2;
    let (one, other) = (&one[from..], &other[from..]);
    let mut sums = [[0.0; BESIDE]; 3];
    let triples = one.chunks(BESIDE).zip(other.chunks(BESIDE)).zip(window.mirrored.chunks(BESIDE));
    for ((one, other), weights) in triples {
        for (lane, ((a, b), [w, wx, wxx])) in one.iter().zip(other).zip(weights).enumerate() {
            let even = a.re * b.re + a.im * b.im;
            sums[0][lane] += w * even;
            sums[1][lane] += wx * (a.re * b.im - a.im * b.re);
            sums[2][lane] += wxx * even;
        }
    }
    let [zeroth, first, second] = sums.map(|lanes| lanes.iter().sum());
    [Complex::new(zeroth, 0.0), Complex::new(0.0, first), Complex::new(second, 0.0)]
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
