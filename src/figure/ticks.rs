//! Round ticks for linear and logarithmic axes.

use super::colour::ScaleKind;
use super::label::Label;

/// A labelled tick.
#[derive(Clone, Debug, PartialEq)]
pub struct Tick {
    pub at: f64,
    pub label: Label,
}

/// Labelled and unlabelled ticks inside a range, rising.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Ticks {
    pub major: Vec<Tick>,
    pub minor: Vec<f64>,
}

/// Ticks for the range `from`..`to`, about `wanted` labelled ones, never more than `wanted` + 1 unless three (or
/// `wanted`, when that is less) could not be had.
///
/// Linear steps are 1, 2 or 5 times a power of ten with 4 or 5 parts between labels. A logarithmic axis labels
/// decades, thinned when there are many; below 1.3 decades it takes round digits, and below a factor of 4.5
/// the ticks of a linear axis.
pub fn ticks(from: f64, to: f64, kind: ScaleKind, wanted: usize) -> Ticks {
    let (low, high) = (from.min(to), from.max(to));
    if !(low.is_finite() && high.is_finite()) || low == high {
        return Ticks { major: vec![Tick { at: low, label: bare(low) }], minor: Vec::new() };
    }
    let wanted = wanted.max(2);
    match kind {
        ScaleKind::Log if low > 0.0 && high / low > 20.0 => decades(low, high, wanted),
        ScaleKind::Log if low > 0.0 && high / low > 4.5 => digits(low, high, wanted),
        // A step that is too round can leave a short axis with one or two labels; a finer one is tried then.
        _ => (wanted..wanted + 4)
            .map(|w| linear(low, high, w))
            .find(|t| t.major.len() >= wanted.min(3))
            .unwrap_or_else(|| linear(low, high, wanted)),
    }
}

/// The shortest decimal of a number.
pub(crate) fn bare(value: f64) -> Label {
    if value != 0.0 && !(1e-4..1e6).contains(&value.abs()) {
        return mantissa_power(value);
    }
    Label::plain(format!("{value}").replace('-', "\u{2212}"))
}

fn mantissa_power(value: f64) -> Label {
    let text = format!("{value:e}");
    let (digits, power) = text.split_once('e').unwrap_or((&text, "0"));
    let power = power.parse().unwrap_or(0);
    if digits == "1" {
        return Label::power_of_ten(power);
    }
    Label::plain(format!("{}×", digits.replace('-', "\u{2212}"))).join(Label::power_of_ten(power))
}

fn linear(low: f64, high: f64, wanted: usize) -> Ticks {
    let (digit, power) = round_step((high - low) / wanted as f64);
    let step = times_ten(digit, power);
    let parts = if digit == 2.0 { 4 } else { 5 };
    let slack = 1e-9 * (high - low);
    let minor_step = step / parts as f64;
    let first = ((low - slack) / minor_step).ceil() as i64;
    let last = ((high + slack) / minor_step).floor() as i64;
    let decimals = (-power).max(0) as usize;
    // Dates are large and keep their digits; large steps and tiny ones are better as powers of ten.
    let big = !(1e-5..1e5).contains(&step);
    let mut found = Ticks::default();
    for count in first..=last {
        if count % parts != 0 {
            found.minor.push(count as f64 * minor_step);
            continue;
        }
        // Multiplying the whole digits first gives 0.3 for 3 tenths and not 0.30000000000000004.
        let at = times_ten((count / parts) as f64 * digit, power);
        let label = if big { bare(at) } else { Label::number(at, decimals) };
        found.major.push(Tick { at, label });
    }
    found
}

/// The smallest of 1, 2, 5 × 10^k that is not below `least`, as digit and power.
fn round_step(least: f64) -> (f64, i32) {
    let power = least.log10().floor() as i32;
    let scaled = least / times_ten(1.0, power);
    for digit in [1.0, 2.0, 5.0] {
        if scaled <= digit * (1.0 + 1e-9) {
            return (digit, power);
        }
    }
    (1.0, power + 1)
}

/// `digits` × 10^`power`, correctly rounded for the powers that axes have.
fn times_ten(digits: f64, power: i32) -> f64 {
    if power >= 0 { digits * 10f64.powi(power) } else { digits / 10f64.powi(-power) }
}

fn decades(low: f64, high: f64, wanted: usize) -> Ticks {
    let slack = 1e-9;
    let first = (low.log10() - slack).ceil() as i32;
    let last = (high.log10() + slack).floor() as i32;
    let count = (last - first + 1).max(1) as usize;
    let widest = count.div_ceil(wanted + 1).max(1) as i32;
    let labelled = |every: i32| (first..=last).filter(|p| p.rem_euclid(every) == 0).count();
    let every = (1..=widest).rev().find(|every| labelled(*every) >= wanted.min(3)).unwrap_or(1);
    let few = last - first <= 6;
    let plain = first >= -2 && last <= 3;
    let mut found = Ticks::default();
    for power in first - 1..=last {
        let at = times_ten(1.0, power);
        if power >= first {
            if power.rem_euclid(every) == 0 {
                let label = if plain { bare(at) } else { Label::power_of_ten(power) };
                found.major.push(Tick { at, label });
            } else {
                found.minor.push(at);
            }
        }
        if few {
            let parts = (2..10).map(|digit| times_ten(f64::from(digit), power));
            found.minor.extend(parts.filter(|v| (low..=high).contains(v)));
        }
    }
    found
}

/// Round digits for an axis of about one decade: the densest of three sets that is not too dense.
fn digits(low: f64, high: f64, wanted: usize) -> Ticks {
    let sets: [&[u32]; 4] = [&[1, 2, 3, 4, 5, 6, 8], &[1, 2, 3, 5], &[1, 2, 5], &[1]];
    let first = low.log10().floor() as i32;
    let last = high.log10().ceil() as i32;
    let inside = |v: &f64| (low * (1.0 - 1e-12)..=high * (1.0 + 1e-12)).contains(v);
    let spread = |set: &[u32]| -> Vec<f64> {
        let all = (first..=last).flat_map(|p| set.iter().map(move |d| times_ten(f64::from(*d), p)));
        all.filter(inside).collect()
    };
    let chosen = sets.iter().map(|s| spread(s)).find(|v| v.len() <= wanted + 1);
    let major = chosen.unwrap_or_else(|| vec![low, high]);
    let all = spread(&[1, 2, 3, 4, 5, 6, 7, 8, 9]);
    let minor = all.into_iter().filter(|v| !major.contains(v)).collect();
    Ticks { major: major.into_iter().map(|at| Tick { at, label: bare(at) }).collect(), minor }
}
