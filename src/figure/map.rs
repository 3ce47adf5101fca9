//! The stability map of a run.

use super::colour::{Region, Rgb, Scale, ScaleKind, even};
use super::column::{Column, covering};
use super::label::Label;
use super::model::{Axis, ColourBar, Figure, Legend, Mark, Paint, Panel, Pin};
use super::nominal::{Nominal, nominal};
use super::resonance::resonances;
use super::{FigureError, borrow, grid};
use crate::survey::Record;
use crate::system::{Study, System};
use crate::units::YEAR_DAY;

/// What a map is made from.
#[derive(Clone, Copy, Debug)]
pub struct MapInput<'a> {
    pub study: &'a Study,
    pub system: &'a System,
    /// Finished cells.
    pub records: &'a [Record],
    /// So many cells around it a finished cell stands for those that are missing; 0: they stay gaps.
    pub reach: usize,
    /// Name of the column shown as colour (with one axis: as height).
    pub column: &'a str,
    /// How long each cell was to be followed, day.
    pub span_day: f64,
    /// Sentences under the figure.
    pub caption: &'a [String],
}

/// The map of a study with two axes as a raster, with one axis as points over the axis.
///
/// Errors: a column that the records do not have, a record of a cell that the study does not have.
pub fn map(input: &MapInput<'_>) -> Result<Figure, FigureError> {
    let MapInput { study, system, records, .. } = *input;
    if !(1..=2).contains(&study.axes.len()) {
        return Err(FigureError::Axes { found: study.axes.len() });
    }
    let column = Column::find(input.column, system, records)?;
    let cells = borrow::paint(study, records, column, input.reach)?;
    let values: Vec<f64> =
        cells.iter().filter_map(|c| if let Paint::Value(v) = c { Some(*v) } else { None }).collect();
    let two = study.axes.len() == 2;
    let verdicts = borrow::paint(study, records, Column::Verdict, input.reach)?;
    let occurring = regions(if two { &cells } else { &verdicts });
    let (panel, colour_bar) = if two {
        let scale = column.scale(&values, input.span_day / YEAR_DAY);
        (
            raster_panel(input, cells, scale),
            (!values.is_empty()).then(|| colour_bar(column, system, scale, &values)),
        )
    } else {
        (points_panel(input, column, &cells, &verdicts), None)
    };
    let title = study.title.clone().unwrap_or_else(|| system.title.clone());
    let mut legend: Vec<Legend> = occurring.into_iter().map(Legend::Region).collect();
    if let Some(Mark::Nominal { x_bar, y_bar, .. }) =
        panel.marks.iter().find(|m| matches!(m, Mark::Nominal { .. }))
    {
        let words = if x_bar.is_some() || y_bar.is_some() { "as stated, ±1σ" } else { "as stated" };
        legend.push(Legend::Nominal(Label::plain(words)));
    }
    let mut caption: Vec<String> = pin_words(input, &panel).into_iter().collect();
    caption.extend(strip_words(&panel));
    caption.extend_from_slice(input.caption);
    Ok(Figure { title: Label::plain(title), panels: vec![panel], colour_bar, legend, caption })
}

fn regions(cells: &[Paint]) -> Vec<Region> {
    let mut found: Vec<Region> =
        cells.iter().filter_map(|c| if let Paint::Flat(r) = c { Some(*r) } else { None }).collect();
    found.sort_unstable();
    found.dedup();
    found
}

fn colour_bar(column: Column, system: &System, scale: Scale, values: &[f64]) -> ColourBar {
    let places = || values.iter().filter_map(|v| scale.place(*v));
    // The scale of MEGNO is cut by custom, so its ends are named whether or not this map goes beyond them.
    let always = column == Column::Megno;
    // Cells that lived through the span would have lived longer.
    let survivors = column == Column::EndTime && places().any(|p| p < 1e-9);
    // Few decades do not look logarithmic by themselves.
    let named = |label: Label, words: &str| match scale.kind {
        ScaleKind::Log => label.then(words),
        ScaleKind::Linear => label,
    };
    ColourBar {
        label: named(column.label(system), " (logarithmic)"),
        short: named(column.short(system), " (log)"),
        scale,
        before: always || survivors || places().any(|p| p < -1e-9),
        after: always || places().any(|p| p > 1.0 + 1e-9),
    }
}

fn raster_panel(input: &MapInput<'_>, cells: Vec<Paint>, scale: Scale) -> Panel {
    let MapInput { study, system, .. } = *input;
    let (x, y) = (grid::panel_axis(&study.axes[0], system), grid::panel_axis(&study.axes[1], system));
    let raster =
        Mark::Raster { columns: study.axes[0].cells, rows: study.axes[1].cells, cells, scale: Some(scale) };
    let mut marks = vec![raster];
    let stated = (nominal(&study.axes[0], system), nominal(&study.axes[1], system));
    if let (Some(across), Some(up)) = stated
        && inside(&x, across.value)
        && inside(&y, up.value)
    {
        marks.push(Mark::Nominal { x: across.value, y: Some(up.value), x_bar: bar(across), y_bar: bar(up) });
    }
    Panel { x, y: Some(y), marks, top: pins(input, 0), right: pins(input, 1), height: 0.74 }
}

/// Height of the strip of verdicts below points, as a share of the panel, and of the room that is left for it.
const STRIP: f64 = 0.05;
const ROOM_FOR_STRIP: f64 = 0.07;

/// With one axis: points over a strip of verdicts; hollow where a cell has a number but is undecided.
fn points_panel(input: &MapInput<'_>, column: Column, cells: &[Paint], verdicts: &[Paint]) -> Panel {
    let MapInput { study, system, records, .. } = *input;
    let x = grid::panel_axis(&study.axes[0], system);
    let ink = even(0.05);
    let centre = |index: usize| grid::centre(&x, cells.len(), index);
    let number = |(index, cell): (usize, &Paint)| match cell {
        Paint::Value(value) => Some((centre(index), *value, ink)),
        _ => None,
    };
    let points: Vec<(f64, f64, Rgb)> = cells.iter().enumerate().filter_map(number).collect();
    let undecided = records.iter().filter(|r| cells[r.cell as usize] == Paint::Flat(Region::Undecided));
    let open = |r: &Record| Some((centre(r.cell as usize), column.value(&r.assessment)?, ink));
    let hollow: Vec<(f64, f64, Rgb)> = undecided.filter_map(open).collect();
    let values: Vec<f64> = points.iter().chain(&hollow).map(|p| p.1).collect();
    let y = (!values.is_empty()).then(|| {
        let scale = room_around(&values);
        let label = column.label(system);
        Axis {
            short: column.short(system),
            label,
            from: scale.value(-ROOM_FOR_STRIP),
            to: scale.to,
            kind: scale.kind,
        }
    });
    let region = |paint: &Paint| if let Paint::Flat(region) = paint { *region } else { Region::NoValue };
    let strip = verdicts.iter().map(region).collect();
    let mut marks = vec![Mark::Strip { cells: strip, height: if y.is_some() { STRIP } else { 1.0 } }];
    if column == Column::Megno && y.as_ref().is_some_and(|y| inside(y, 2.0)) {
        marks.push(Mark::Level { at: 2.0 });
    }
    let height = if y.is_some() { 0.5 } else { 0.15 };
    marks.push(Mark::Points { points: hollow, hollow: true });
    marks.push(Mark::Points { points, hollow: false });
    if let Some(found) = nominal(&study.axes[0], system).filter(|n| inside(&x, n.value)) {
        marks.push(Mark::Nominal { x: found.value, y: None, x_bar: bar(found), y_bar: None });
    }
    Panel { x, y, marks, top: pins(input, 0), right: Vec::new(), height }
}

/// Says what the strip is, and what the rings are where there are any.
fn strip_words(panel: &Panel) -> Option<String> {
    panel.y.as_ref()?;
    panel.marks.iter().find(|m| matches!(m, Mark::Strip { .. }))?;
    let rings =
        panel.marks.iter().any(|m| matches!(m, Mark::Points { points, hollow: true } if !points.is_empty()));
    let rings = if rings { "; hollow points: undecided cells" } else { "" };
    Some(format!("Strip along the bottom edge: verdicts{rings}."))
}

/// A scale over all values with some room at both ends.
pub(crate) fn room_around(values: &[f64]) -> Scale {
    let low = values.iter().copied().fold(f64::INFINITY, f64::min);
    let high = values.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    let kind = covering(values).kind;
    match kind {
        ScaleKind::Log => {
            let room = (high / low).powf(0.06);
            Scale { from: low / room, to: high * room, kind }
        }
        ScaleKind::Linear => {
            let size = if low <= high { low.abs().max(high.abs()) } else { 0.0 };
            let width = if high > low { high - low } else { 0.0 };
            let room = if width > 1e-12 * size { 0.06 * width } else { (0.05 * size).max(1e-12) };
            let (low, high) = if low <= high { (low, high) } else { (0.0, 1.0) };
            Scale { from: low - room, to: high + room, kind }
        }
    }
}

fn inside(axis: &Axis, value: f64) -> bool {
    axis.scale().place(value).is_some_and(|p| (0.0..=1.0).contains(&p))
}

fn bar(found: Nominal) -> Option<(f64, f64)> {
    (found.plus.is_some() || found.minus.is_some())
        .then(|| (found.value - found.minus.unwrap_or(0.0), found.value + found.plus.unwrap_or(0.0)))
}

/// The resonances of an axis as pins; they name the other planet when there are two.
fn pins(input: &MapInput<'_>, axis: usize) -> Vec<Pin> {
    let found = resonances(input.study, axis, input.system);
    let several = found.iter().any(|(_, r)| Some(r.other) != found.first().map(|(_, first)| first.other));
    let label = |r: &super::Resonance| {
        let label = Label::plain(format!("{}:{}", r.p, r.q));
        match input.system.planets.get(r.other) {
            Some(planet) if several => label.then(format!("\u{2009}{}", planet.name)),
            _ => label,
        }
    };
    found.iter().map(|(at, r)| Pin { at: *at, label: label(r), resonance: *r }).collect()
}

/// Says what the pins at the edges are.
fn pin_words(input: &MapInput<'_>, panel: &Panel) -> Option<String> {
    let words = |axis: usize, pins: &[Pin]| -> Option<String> {
        let crate::system::BodyRef::Planet(planet) = input.study.axes.get(axis)?.target.body else {
            return None;
        };
        let mut others: Vec<usize> = pins.iter().map(|p| p.resonance.other).collect();
        others.sort_unstable();
        others.dedup();
        let name = |i: &usize| input.system.orbiting_name(*i).map(str::to_owned);
        let names: Vec<String> = others.iter().filter_map(name).collect();
        // Those with planets farther away, or that move as well, are left out.
        let all = names.len() + 1 >= input.system.planets.len();
        let with = if all { " with" } else { ", only those with" };
        (!names.is_empty())
            .then(|| format!("of {}{with} {}", name(&planet).unwrap_or_default(), names.join(" and ")))
    };
    let top = words(0, &panel.top).map(|w| format!("top edge: mean-motion resonances {w}"));
    let right = words(1, &panel.right).map(|w| format!("right edge: mean-motion resonances {w}"));
    let all: Vec<String> = top.into_iter().chain(right).collect();
    if all.is_empty() {
        return None;
    }
    let text = all.join("; ");
    Some(format!("{}{} (longer : shorter period).", text[..1].to_uppercase(), &text[1..]))
}
