//! One configuration through time: stacked panels over one time axis.

use super::FigureError;
use super::colour::{Rgb, ScaleKind};
use super::label::Label;
use super::map::room_around;
use super::model::{Axis, Curve, Figure, Legend, Mark, Panel};
use crate::num::wrap_half_turn;
use crate::units::{DEGREE, YEAR_DAY};

/// One planet through time; every list is as long as the times.
#[derive(Clone, Copy, Debug)]
pub struct PlanetCurves<'a> {
    pub name: &'a str,
    pub eccentricity: &'a [f64],
    pub semi_major_axis_au: &'a [f64],
}

/// An angle that librates.
#[derive(Clone, Copy, Debug)]
pub struct AngleCurve<'a> {
    /// As "3λ_c − 2λ_b − ϖ_b": what follows a low line up to the next blank is an index.
    pub name: &'a str,
    /// Time (day) and angle (rad, any turn).
    pub points: &'a [(f64, f64)],
}

/// What the panels are made from; a list that was not measured is empty.
#[derive(Clone, Copy, Debug)]
pub struct SeriesInput<'a> {
    pub title: &'a str,
    pub time_day: &'a [f64],
    pub planets: &'a [PlanetCurves<'a>],
    /// ⟨Y⟩.
    pub megno_mean: &'a [f64],
    /// Relative.
    pub energy_error: &'a [f64],
    pub angles: &'a [AngleCurve<'a>],
    /// Sentences under the figure.
    pub caption: &'a [String],
}

/// Eight colours that stay apart for each common colour blindness. Source: Okabe & Ito (2008), yellow left out as too
/// faint for lines on white (from memory).
const INKS: [Rgb; 7] = [
    Rgb(0, 114, 178),
    Rgb(213, 94, 0),
    Rgb(0, 158, 115),
    Rgb(204, 121, 167),
    Rgb(86, 180, 233),
    Rgb(230, 159, 0),
    Rgb(0, 0, 0),
];

const BLACK: Rgb = Rgb(0, 0, 0);

/// Panels, top down: eccentricities, relative change of the semi-major axes, angles, MEGNO ⟨Y⟩, energy error (log).
///
/// Errors: no row at all.
pub fn series(input: &SeriesInput<'_>) -> Result<Figure, FigureError> {
    let last = input.time_day.last().copied().ok_or(FigureError::EmptySeries)?;
    let (unit, unit_day) = time_unit(last);
    let time: Vec<f64> = input.time_day.iter().map(|t| t / unit_day).collect();
    let label = Label::plain(format!("time [{unit}]"));
    let to = time.iter().copied().fold(f64::MIN_POSITIVE, f64::max);
    let from = time.iter().copied().fold(0.0, f64::min);
    let x = Axis { short: label.clone(), label, from, to, kind: ScaleKind::Linear };
    let inks = || INKS.iter().copied().cycle();

    let mut panels = Vec::new();
    let shapes = input.planets.iter().map(|p| p.eccentricity.to_vec()).zip(inks()).collect();
    let label = Label::plain("eccentricity");
    panels.extend(panel(&x, &time, shapes, label, None).map(|p| with_short(p, Label::default().italic("e"))));
    let sizes: Vec<Vec<f64>> = input.planets.iter().map(|p| relative(p.semi_major_axis_au)).collect();
    let label = Label::plain("Δ").italic("a").then("/").italic("a").down("0");
    let (sizes, label) = in_tenths(sizes, label);
    panels.extend(panel(&x, &time, sizes.into_iter().zip(inks()).collect(), label, None));
    panels.extend(input.angles.iter().map(|angle| angle_panel(&x, unit_day, angle)));
    let megno = vec![(input.megno_mean.to_vec(), BLACK)];
    let label = Label::plain("MEGNO ⟨").italic("Y").then("⟩");
    panels.extend(panel(&x, &time, megno, label, Some(2.0)));
    let errors = vec![(input.energy_error.iter().map(|e| positive(e.abs())).collect(), BLACK)];
    let label = Label::plain("|Δ").italic("E").then("/").italic("E").then("|");
    panels.extend(panel(&x, &time, errors, label, None).map(as_log));
    if panels.is_empty() {
        return Err(FigureError::EmptySeries);
    }

    let legend =
        input.planets.iter().zip(inks()).map(|(p, ink)| Legend::Curve(Label::plain(p.name), ink)).collect();
    Ok(Figure {
        title: Label::plain(input.title),
        panels,
        colour_bar: None,
        legend,
        caption: input.caption.to_vec(),
    })
}

/// An angle as a curve, cut where it never is: at 180 deg or at 0; with room about it as large as its range.
fn angle_panel(x: &Axis, unit_day: f64, angle: &AngleCurve<'_>) -> Panel {
    let signed = |value: f64| wrap_half_turn(value) / DEGREE;
    let sides = angle.points.iter().fold((0u32, 0u32), |(near, far), (_, value)| {
        if signed(*value).abs() < 90.0 { (near + 1, far) } else { (near, far + 1) }
    });
    let upper = sides.1 > sides.0;
    let place = |value: f64| if upper { signed(value).rem_euclid(360.0) } else { signed(value) };
    let mut points: Vec<(f64, f64)> = Vec::new();
    for (day, value) in angle.points {
        let next = (day / unit_day, place(*value));
        if points.last().is_some_and(|last| (last.1 - next.1).abs() > 180.0) {
            points.push((next.0, f64::NAN));
        }
        points.push(next);
    }
    let middle = if upper { 180.0 } else { 0.0 };
    let away = points.iter().map(|(_, y)| (y - middle).abs()).filter(|d| d.is_finite()).fold(0.0, f64::max);
    let reach = [30.0, 60.0, 90.0, 120.0].into_iter().find(|reach| away < 0.95 * reach).unwrap_or(180.0);
    let label = with_indices(angle.name).then(" [deg]");
    let (from, to) = (middle - reach, middle + reach);
    let y = Axis { short: with_indices(angle.name), label, from, to, kind: ScaleKind::Linear };
    let marks = vec![Mark::Level { at: middle }, Mark::Curve(Curve { points, colour: BLACK })];
    Panel { x: x.clone(), y: Some(y), marks, top: Vec::new(), right: Vec::new(), height: 0.2 }
}

/// "3λ_c − 2λ_b": letters italic, what follows a low line lowered.
fn with_indices(words: &str) -> Label {
    let mut label = Label::default();
    for (index, word) in words.split(' ').enumerate() {
        let space = if index > 0 { " " } else { "" };
        label = match word.split_once('_') {
            None => label.then(format!("{space}{word}")),
            Some((symbol, body)) => {
                let count: String = symbol.chars().take_while(|c| !c.is_alphabetic()).collect();
                let letter = symbol[count.len()..].to_owned();
                label.then(format!("{space}{count}")).italic(letter).down(body)
            }
        };
    }
    label
}

/// A zero has no place on a logarithmic axis.
fn positive(value: f64) -> f64 {
    if value > 0.0 { value } else { f64::NAN }
}

fn relative(values: &[f64]) -> Vec<f64> {
    let first = values.first().copied().unwrap_or(f64::NAN);
    values.iter().map(|v| v / first - 1.0).collect()
}

/// Small numbers as multiples of a power of ten, which the label then names.
fn in_tenths(mut curves: Vec<Vec<f64>>, label: Label) -> (Vec<Vec<f64>>, Label) {
    let largest = curves.iter().flatten().map(|v| v.abs()).filter(|v| v.is_finite()).fold(0.0, f64::max);
    if largest == 0.0 || largest >= 0.01 {
        return (curves, label);
    }
    let power = largest.log10().floor() as i32;
    for value in curves.iter_mut().flatten() {
        *value *= 10f64.powi(-power);
    }
    (curves, label.then(" [").join(Label::power_of_ten(power)).then("]"))
}

/// Name and days of the unit in which a span reads best.
fn time_unit(span_day: f64) -> (&'static str, f64) {
    match span_day / YEAR_DAY {
        year if year >= 2e9 => ("Gyr", 1e9 * YEAR_DAY),
        year if year >= 2e6 => ("Myr", 1e6 * YEAR_DAY),
        year if year >= 2e4 => ("kyr", 1e3 * YEAR_DAY),
        year if year >= 2.0 => ("yr", YEAR_DAY),
        _ => ("d", 1.0),
    }
}

/// Absent when nothing finite is there to draw.
fn panel(
    x: &Axis,
    time: &[f64],
    curves: Vec<(Vec<f64>, Rgb)>,
    label: Label,
    level: Option<f64>,
) -> Option<Panel> {
    let finite = curves.iter().flat_map(|(v, _)| v).copied().filter(|v| v.is_finite());
    let mut values: Vec<f64> = finite.collect();
    if values.is_empty() {
        return None;
    }
    values.extend(level);
    let scale = room_around(&values);
    let y = Axis { short: label.clone(), label, from: scale.from, to: scale.to, kind: ScaleKind::Linear };
    let mut y = Some(y);
    if scale.kind == ScaleKind::Log && level.is_some() {
        y = y.map(|y| Axis { kind: ScaleKind::Log, ..y });
    } else if scale.kind == ScaleKind::Log {
        // Curves that only happen to span decades, such as an eccentricity near 0, keep an even axis from 0.
        let high = values.iter().copied().fold(0.0, f64::max);
        y = y.map(|y| Axis { from: -0.04 * high, to: 1.06 * high, ..y });
    }
    let mut marks: Vec<Mark> = level.map(|at| Mark::Level { at }).into_iter().collect();
    let mut curves = curves;
    // Fast curves run together into bands; the narrower one goes on top, or it would be hidden.
    curves.sort_by(|(one, _), (other, _)| spread(other).total_cmp(&spread(one)));
    for (values, colour) in curves {
        let points = time.iter().copied().zip(values).collect();
        marks.push(Mark::Curve(Curve { points, colour }));
    }
    Some(Panel { x: x.clone(), y, marks, top: Vec::new(), right: Vec::new(), height: 0.2 })
}

/// Largest minus smallest of what is finite.
fn spread(values: &[f64]) -> f64 {
    let finite = values.iter().copied().filter(|v| v.is_finite());
    let (low, high) = finite.fold((f64::INFINITY, f64::NEG_INFINITY), |(l, h), v| (l.min(v), h.max(v)));
    high - low
}

fn with_short(mut panel: Panel, short: Label) -> Panel {
    if let Some(y) = panel.y.as_mut() {
        y.short = short;
    }
    panel
}

/// The same panel with a logarithmic height over whole decades.
fn as_log(mut panel: Panel) -> Panel {
    let heights = |mark: &Mark| match mark {
        Mark::Curve(curve) => curve.points.iter().map(|p| p.1).filter(|v| *v > 0.0).collect(),
        _ => Vec::new(),
    };
    let values: Vec<f64> = panel.marks.iter().flat_map(heights).collect();
    let low = values.iter().copied().fold(f64::INFINITY, f64::min);
    let high = values.iter().copied().fold(0.0, f64::max);
    if let Some(y) = panel.y.as_mut() {
        let quantile = lower_end(values, low);
        y.from = 10f64.powf((quantile.log10()).floor());
        y.to = 10f64.powf((high.log10() + 0.1).ceil());
        y.kind = ScaleKind::Log;
    }
    panel
}

/// Errors pass through zero, where their logarithm has no bottom: the axis starts where a hundredth of them lies below.
fn lower_end(mut values: Vec<f64>, low: f64) -> f64 {
    values.sort_by(f64::total_cmp);
    values.get(values.len() / 100).copied().unwrap_or(low)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_narrower_band_lies_on_top() {
        let planets = [
            PlanetCurves { name: "b", eccentricity: &[0.1, 0.11, 0.1], semi_major_axis_au: &[1.0; 3] },
            PlanetCurves { name: "c", eccentricity: &[0.0, 0.3, 0.0], semi_major_axis_au: &[2.0; 3] },
        ];
        let input = SeriesInput {
            title: "",
            time_day: &[0.0, 1.0, 2.0],
            planets: &planets,
            megno_mean: &[],
            energy_error: &[],
            angles: &[],
            caption: &[],
        };
        let figure = series(&input).unwrap();
        let inks: Vec<Rgb> = (figure.panels[0].marks.iter())
            .filter_map(|mark| if let Mark::Curve(curve) = mark { Some(curve.colour) } else { None })
            .collect();
        assert_eq!(inks, [INKS[1], INKS[0]], "c is drawn first");
    }
}
