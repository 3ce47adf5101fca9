//! Frequency analysis: the lines of an evenly sampled complex signal.
//!
//! A windowed Fourier transform gives a start, the maximum of the windowed amplitude refines it (Laskar 1990, 1993), and
//! lines near each other are then fitted together by least squares, so that two of them one resolution element apart
//! are told apart and no orthogonalisation is needed.

use super::fourier_fit::{Tone, fit, subtract};
use super::fourier_window::{Window, peak};

pub type Complex = rustfft::num_complex::Complex<f64>;

/// Fewest samples that are analysed.
pub const FEWEST_SAMPLES: usize = 16;
/// Chance that noise alone is taken for a line.
const FALSE_ALARM: f64 = 1e-3;
/// Lines fitted together in the last round; beyond that only neighbours are.
const MOST_TOGETHER: usize = 40;

/// Lines² × samples up to which every new line is fitted with all others, not only with its neighbours.
const MOST_WORK: usize = 5_000_000;

/// Resolution elements that two lines must be apart to be fitted together.
const NEAREST: f64 = 0.6;

/// A signal that cannot be analysed.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
pub enum FourierError {
    #[error("frequency analysis needs at least {FEWEST_SAMPLES} samples, not {found}")]
    TooFew { found: usize },
    #[error("sample {index} is not a finite number")]
    NotFinite { index: usize },
    #[error("the time between samples is {found}, but must be positive")]
    Step { found: f64 },
}

/// How to look for lines.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Search {
    pub most: usize,
    /// Power p of the window (1 + cos)^p; 1 is Hann's. Higher powers keep far lines apart better, near ones worse.
    pub window_power: u32,
}

impl Default for Search {
    fn default() -> Search {
        Search { most: 20, window_power: 1 }
    }
}

/// One line, A exp(iνt) with t from the first sample.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Line {
    /// ν, rad per unit of time, within half a turn per sample.
    pub frequency: f64,
    pub amplitude: Complex,
    /// Standard errors if what is left were white noise and no line were near.
    pub frequency_error: f64,
    pub amplitude_error: f64,
    /// False where it stands for what is left of lines nearer to each other than can be told apart: no mode of its own.
    pub resolved: bool,
}

/// Why no further line was looked for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Ended {
    /// As many as asked.
    Asked,
    /// What is left looks like white noise (false alarm 1 in 1000).
    Noise,
    /// What is left is rounding.
    Rounding,
    /// The next line would repeat one that is there: the signal is not a sum of lines.
    Repeats,
}

/// The lines of a signal.
#[derive(Clone, Debug, PartialEq)]
pub struct Spectrum {
    /// By falling amplitude.
    pub lines: Vec<Line>,
    /// Root mean square of signal and of what is left, weighted with the window.
    pub signal_rms: f64,
    pub residual_rms: f64,
    pub ended: Ended,
}

/// Lines of a complex signal.
///
/// f(t) ≈ Σ A_k exp(iν_k t). Start: maximum of the padded transform of the windowed residual; refined to the maximum of
/// |Σ w f exp(−iνt)|; then all lines (of long signals those within a few resolution elements 2π/T) together minimise Σ w |f − Σ|² over
/// frequencies and amplitudes (Levenberg–Marquardt), and in the end all lines do. For a signal of so many lines the
/// frequencies are good to rounding; else the error by lines left out falls as T^{−2p−2} (Laskar 1999).
/// Takes samples at equal times `step` apart. Errors: [`FourierError`]. Source: Laskar (1990, 1993); the joint fit is ours
/// in place of Gram–Schmidt.
pub fn decompose(samples: &[Complex], step: f64, search: Search) -> Result<Spectrum, FourierError> {
    lines(samples, step, search, false)
}

/// Frequency of the strongest line of a signal, alone: cheaper than [`decompose`] and, for one line, the same to rounding.
///
/// The maximum of |Σ w f exp(−iνt)|, which is also the least-squares fit of a single line. Errors: [`FourierError`].
/// Source: Laskar (1990, 1993).
pub fn strongest_line(samples: &[Complex], step: f64, window_power: u32) -> Result<f64, FourierError> {
    check(samples, step)?;
    Ok(peak(&Window::new(samples.len(), window_power), samples).frequency / step)
}

/// One term of a real signal, A cos(νt + φ) with t from the first sample.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Wave {
    /// ν ≥ 0.
    pub frequency: f64,
    pub amplitude: f64,
    pub phase: f64,
}

/// Terms of a real signal by falling amplitude, as [`decompose`]; the mean is a term with frequency near 0.
///
/// Each term is a pair of lines of opposite frequency, fitted as such. Errors: [`FourierError`].
pub fn decompose_real(samples: &[f64], step: f64, search: Search) -> Result<Vec<Wave>, FourierError> {
    let complex: Vec<Complex> = samples.iter().map(|x| Complex::new(*x, 0.0)).collect();
    let spectrum = lines(&complex, step, search, true)?;
    let resolution = std::f64::consts::TAU / (samples.len() as f64 * step);
    let single = |line: &Line| line.frequency.abs() < ALONE * resolution;
    let mut waves: Vec<Wave> = spectrum
        .lines
        .iter()
        .filter(|line| line.frequency >= 0.0 || single(line))
        .map(|line| Wave {
            frequency: line.frequency.abs(),
            amplitude: line.amplitude.norm() * if single(line) { 1.0 } else { 2.0 },
            phase: line.amplitude.arg(),
        })
        .collect();
    waves.sort_by(|one, other| other.amplitude.total_cmp(&one.amplitude));
    Ok(waves)
}

/// Resolution elements from 0 within which a line of a real signal has no partner.
const ALONE: f64 = 0.25;

fn check(samples: &[Complex], step: f64) -> Result<(), FourierError> {
    if samples.len() < FEWEST_SAMPLES {
        return Err(FourierError::TooFew { found: samples.len() });
    }
    if !(step > 0.0 && step.is_finite()) {
        return Err(FourierError::Step { found: step });
    }
    match samples.iter().position(|z| !(z.re.is_finite() && z.im.is_finite())) {
        Some(index) => Err(FourierError::NotFinite { index }),
        None => Ok(()),
    }
}

fn lines(samples: &[Complex], step: f64, search: Search, paired: bool) -> Result<Spectrum, FourierError> {
    check(samples, step)?;
    let window = Window::new(samples.len(), search.window_power);
    let signal_rms = window.rms(samples);
    let mut tones: Vec<Tone> = Vec::new();
    let mut residual = samples.to_vec();
    let mut ended = Ended::Asked;
    let each = if paired { 2 } else { 1 };
    while tones.len() + each <= each * search.most {
        if let Some(reason) = add_line(&window, samples, &mut residual, &mut tones, paired, signal_rms) {
            ended = reason;
            break;
        }
    }
    if tones.len() <= MOST_TOGETHER {
        let all: Vec<usize> = (0..tones.len()).filter(|k| !tones[*k].held).collect();
        fit(&window, samples, &mut tones, &all);
        residual = subtract(&window, samples, &tones);
    }
    let residual_rms = window.rms(&residual);
    let mut lines: Vec<Line> = tones.iter().map(|tone| line(tone, &window, step, residual_rms)).collect();
    lines.sort_by(|one, other| other.amplitude.norm().total_cmp(&one.amplitude.norm()));
    Ok(Spectrum { lines, signal_rms, residual_rms, ended })
}

/// Finds the strongest line of the residual and fits it with its neighbours; the reason if there is none.
fn add_line(
    window: &Window,
    samples: &[Complex],
    residual: &mut Vec<Complex>,
    tones: &mut Vec<Tone>,
    paired: bool,
    signal_rms: f64,
) -> Option<Ended> {
    let left = window.rms(residual);
    if left <= rounding(tones, samples.len()) * signal_rms {
        return Some(Ended::Rounding);
    }
    let found = peak(window, residual);
    let count = samples.len() as f64;
    // The largest of `count` independent noise amplitudes.
    let chance = (count / FALSE_ALARM).ln().sqrt() * left * window.noise_gain();
    if found.amplitude.norm() < chance {
        return Some(Ended::Noise);
    }
    let element = std::f64::consts::TAU / count;
    if tones.iter().any(|tone| (tone.frequency - found.frequency).abs() < 1e-3 * element) {
        return Some(Ended::Repeats);
    }
    let known = tones.len();
    tones.push(found);
    let alone = found.frequency.abs() < ALONE * element;
    if paired && !alone {
        tones.push(Tone { frequency: -found.frequency, amplitude: found.amplitude.conj(), held: false });
    }
    let reach = window.lobe() + 4.0 * element;
    let everyone = tones.len() * tones.len() * samples.len() <= MOST_WORK;
    let group: Vec<usize> = (0..tones.len())
        .filter(|k| {
            let away = if paired {
                tones[*k].frequency.abs() - found.frequency.abs()
            } else {
                tones[*k].frequency - found.frequency
            };
            !tones[*k].held && (everyone || away.abs() < reach)
        })
        .collect();
    let before = tones.clone();
    fit(window, samples, tones, &group);
    if too_near(tones, &group, element) {
        // Two lines that run into each other have amplitudes without meaning. The fit is undone, and what was found
        // is taken away as it stands, so that the search can go on elsewhere.
        *tones = before;
        tones.iter_mut().skip(known).for_each(|tone| tone.held = true);
    }
    *residual = subtract(window, samples, tones);
    None
}

/// Whether two lines of a group have come nearer to each other than [`NEAREST`].
fn too_near(tones: &[Tone], group: &[usize], element: f64) -> bool {
    let mut frequencies: Vec<f64> = group.iter().map(|k| tones[*k].frequency).collect();
    frequencies.sort_by(f64::total_cmp);
    frequencies.windows(2).any(|pair| pair[1] - pair[0] < NEAREST * element)
}

/// A residual this small against the signal is rounding: of the numbers, and of phases as large as ν T.
fn rounding(tones: &[Tone], count: usize) -> f64 {
    let turns = tones.first().map_or(0.0, |tone| tone.frequency.abs() * count as f64);
    f64::EPSILON * (4.0 + 2.0 * turns)
}

fn line(tone: &Tone, window: &Window, step: f64, residual_rms: f64) -> Line {
    let size = tone.amplitude.norm();
    Line {
        frequency: tone.frequency / step,
        amplitude: tone.amplitude * Complex::from_polar(1.0, tone.frequency * window.place(0)),
        frequency_error: residual_rms * window.slope_gain() / (size * step),
        amplitude_error: residual_rms * window.noise_gain(),
        resolved: !tone.held,
    }
}
