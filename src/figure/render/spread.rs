//! Ticks spread so that their labels have air between them.

use super::{fit, text};
use crate::figure::colour::Scale;
use crate::figure::label::Label;
use crate::figure::model::{Axis, ColourBar};
use crate::figure::ticks::{self, Tick, Ticks, ticks};

/// Places in 0..1 and labels.
pub(super) fn placed_ticks<'a>(
    scale: &Scale,
    major: &'a [Tick],
) -> impl Iterator<Item = (f64, Label)> + use<'a> {
    let scale = *scale;
    major.iter().filter_map(move |t| Some((scale.place(t.at)?, t.label.clone())))
}

/// Ticks of an upright axis of this height.
pub(super) fn upright_ticks(axis: Option<&Axis>, height: f64, size: f64) -> Ticks {
    let Some(axis) = axis else { return Ticks::default() };
    let wanted = ((height / (3.4 * size)) as usize).clamp(3, 8);
    ticks_apart(axis, wanted, 0.5 * size, |at, _| (at * height, size))
}

/// As many ticks as stand side by side with air between their labels.
pub(super) fn level_ticks(axis: &Axis, width: f64, size: f64) -> Ticks {
    ticks_apart(axis, 9, 1.2 * size, |at, label| (at * width, text::length(label, size)))
}

/// The densest ticks, up to `wanted`, whose labels keep `gap`; when two are too many, or finer steps are needed for three,
/// labels are dropped.
///
/// `extent` gives centre and length of a label along the axis from its place in 0..1.
fn ticks_apart(axis: &Axis, wanted: usize, gap: f64, extent: impl Fn(f64, &Label) -> (f64, f64)) -> Ticks {
    let scale = axis.scale();
    let kept = |found: &Ticks| {
        let along: Vec<(f64, f64)> =
            placed_ticks(&scale, &found.major).map(|(at, label)| extent(at, &label)).collect();
        fit::keep_apart(&along, gap, (f64::NEG_INFINITY, f64::INFINITY))
    };
    let every = |count: usize| ticks(axis.from, axis.to, axis.kind, count);
    let fitting = (2..=wanted).rev().map(every).find(|found| kept(found).len() == found.major.len());
    let found = fitting.unwrap_or_else(|| every(2));
    // Round steps can be too far apart for three labels and the next finer ones too close: then some go without.
    let finer = || (3..=wanted + 4).map(every).find(|finer| kept(finer).len() >= 3);
    let found = if found.major.len() < 3.min(wanted) { finer().unwrap_or(found) } else { found };
    let kept = kept(&found);
    let (major, dropped): (Vec<_>, Vec<_>) =
        found.major.into_iter().enumerate().partition(|(index, _)| kept.contains(index));
    let minor = found.minor.into_iter().chain(dropped.into_iter().map(|(_, tick)| tick.at)).collect();
    Ticks { major: major.into_iter().map(|(_, tick)| tick).collect(), minor }
}

/// Ticks of the colour bar; an end that stands for more than itself says so.
pub(super) fn bar_ticks(bar: &ColourBar, height: f64, size: f64) -> Vec<Tick> {
    let scale = bar.scale;
    let mut found =
        ticks(scale.from, scale.to, scale.kind, ((height / (3.2 * size)) as usize).clamp(2, 7)).major;
    let air = 1.6 * size / height;
    let signs = if scale.to > scale.from { ["≤", "≥"] } else { ["≥", "≤"] };
    for (beyond, end, sign) in [(bar.before, scale.from, signs[0]), (bar.after, scale.to, signs[1])] {
        if !beyond {
            continue;
        }
        let Some(place) = scale.place(end) else { continue };
        found.retain(|t| scale.place(t.at).is_some_and(|p| (p - place).abs() > air));
        let rounded = format!("{end:.2e}").parse().unwrap_or(end);
        let label = Label::plain(format!("{sign}\u{2009}")).join(ticks::bare(rounded));
        found.push(Tick { at: end, label });
    }
    found
}
