//! Draws a page.

use super::RenderError;
use super::border::border;
use super::canvas::{Canvas, FINER, Picture};
use super::page::{Frame, POINT, Page, SAMPLE, sample_width};
use crate::figure::colour::{Rgb, Scale, even};
use crate::figure::model::{Axis, ColourBar, Figure, Legend, Mark, Paint, Panel};

const BLACK: Rgb = Rgb(0, 0, 0);
const GREY: Rgb = Rgb(150, 150, 150);
const WHITE: Rgb = Rgb(255, 255, 255);
/// Thickness of frames and ticks, pt.
const THIN: f64 = 0.5;
const MAJOR: f64 = 3.5;
const MINOR: f64 = 2.0;

pub(super) fn picture(figure: &Figure, page: &Page) -> Result<Picture, RenderError> {
    let pixels = |points: f64| (points / 72.0 * f64::from(page.pixels_per_inch) - 1e-6).ceil() as usize;
    let mut canvas = Canvas::new(pixels(page.width), pixels(page.height), page.pixels_per_inch);
    let share = marker_share(page.width);
    for (panel, frame) in figure.panels.iter().zip(&page.frames) {
        // The stated configuration may stand on the edge, so it comes after the frame.
        let (stated, below): (Vec<&Mark>, Vec<&Mark>) =
            panel.marks.iter().partition(|mark| matches!(mark, Mark::Nominal { .. }));
        for mark in below {
            draw_mark(&mut canvas, mark, panel, frame)?;
        }
        axes(&mut canvas, panel, frame);
        for mark in stated {
            draw_nominal(&mut canvas, mark, panel, frame, share)?;
        }
    }
    if let Some((frame, bar)) = &page.bar {
        colour_bar(&mut canvas, frame, bar)?;
    }
    let bar = has_bar(figure);
    for (entry, x, y) in &page.samples {
        sample(&mut canvas, entry, (*x, *y), (share, bar))?;
    }
    for text in &page.texts {
        canvas.text(&text.label, text.size, (text.x, text.y), text.upwards);
    }
    Ok(canvas.finish())
}

/// Whether a stated value is drawn with an error bar.
fn has_bar(figure: &Figure) -> bool {
    let with_bar = |mark: &Mark| matches!(mark, Mark::Nominal { x_bar, y_bar, .. } if x_bar.is_some() || y_bar.is_some());
    figure.panels.iter().any(|panel| panel.marks.iter().any(with_bar))
}

/// Size of the marker on a page of this width (pt), relative to that on 180 mm: narrow axes have short error bars.
fn marker_share(width: f64) -> f64 {
    (width / (180.0 / 25.4 * 72.0)).clamp(0.6, 1.0)
}

/// Data → points, inside a frame.
struct Places<'a> {
    frame: &'a Frame,
    x: Scale,
    y: Option<Scale>,
}

impl Places<'_> {
    fn across(&self, value: f64) -> Option<f64> {
        let place = self.x.place(value).filter(|p| p.is_finite())?;
        Some(self.frame.left + place * (self.frame.right - self.frame.left))
    }

    fn up(&self, value: f64) -> Option<f64> {
        let place = self.y?.place(value).filter(|p| p.is_finite())?;
        Some(self.frame.bottom - place * (self.frame.bottom - self.frame.top))
    }

    /// Moved to the frame when outside.
    fn inside(&self, (x, y): (f64, f64)) -> (f64, f64) {
        (x.clamp(self.frame.left, self.frame.right), y.clamp(self.frame.top, self.frame.bottom))
    }
}

fn draw_mark(canvas: &mut Canvas, mark: &Mark, panel: &Panel, frame: &Frame) -> Result<(), RenderError> {
    let places = Places { frame, x: panel.x.scale(), y: panel.y.as_ref().map(Axis::scale) };
    match mark {
        Mark::Raster { columns, rows, cells, scale } => {
            raster(canvas, frame, (*columns, *rows), cells, *scale);
            Ok(())
        }
        Mark::Points { points, hollow } => {
            let radius = if points.len() > 120 { 1.0 } else { 1.5 };
            for (x, y, colour) in points {
                if let (Some(x), Some(y)) = (places.across(*x), places.up(*y)) {
                    canvas.disc((x, y), radius, *colour)?;
                    if *hollow {
                        canvas.disc((x, y), 0.55 * radius, WHITE)?;
                    }
                }
            }
            Ok(())
        }
        Mark::Strip { cells, height } => {
            let top = frame.bottom - height * (frame.bottom - frame.top);
            let cells: Vec<Paint> = cells.iter().map(|region| Paint::Flat(*region)).collect();
            raster(canvas, &Frame { top, ..frame.clone() }, (cells.len(), 1), &cells, None);
            if *height < 1.0 {
                canvas.rule((frame.left, top), (frame.right, top), THIN, BLACK);
            }
            Ok(())
        }
        Mark::Curve(curve) => {
            let placed =
                curve.points.iter().map(|(x, y)| Some(places.inside((places.across(*x)?, places.up(*y)?))));
            for part in parts(placed) {
                canvas.path(&part, 0.6, curve.colour)?;
            }
            Ok(())
        }
        Mark::Border { parts: chains, stroke, sided } => {
            for chain in chains {
                let place = |(x, y): &(f64, f64)| Some(places.inside((places.across(*x)?, places.up(*y)?)));
                let line: Vec<(f64, f64)> = chain.iter().filter_map(place).collect();
                border(canvas, &line, *stroke, *sided)?;
            }
            Ok(())
        }
        Mark::Level { at } => match places.up(*at) {
            Some(y) => {
                canvas.rule((frame.left, y), (frame.right, y), THIN, GREY);
                Ok(())
            }
            None => Ok(()),
        },
        Mark::Nominal { .. } => Ok(()),
    }
}

fn draw_nominal(
    canvas: &mut Canvas,
    mark: &Mark,
    panel: &Panel,
    frame: &Frame,
    share: f64,
) -> Result<(), RenderError> {
    let Mark::Nominal { x, y, x_bar, y_bar } = mark else { return Ok(()) };
    let places = Places { frame, x: panel.x.scale(), y: panel.y.as_ref().map(Axis::scale) };
    let Some(x) = places.across(*x) else { return Ok(()) };
    if y.is_none() {
        canvas.rule((x, frame.top), (x, frame.bottom), THIN, BLACK);
    }
    let Some(y) = y.map_or(Some(frame.top), |y| places.up(y)) else { return Ok(()) };
    let clip_x = |v: f64| places.across(v).map(|p| p.clamp(frame.left, frame.right));
    let clip_y = |v: f64| places.up(v).map(|p| p.clamp(frame.top, frame.bottom));
    let across = x_bar.and_then(|(low, high)| Some((clip_x(low)?, clip_x(high)?)));
    let up = y_bar.and_then(|(low, high)| Some((clip_y(low)?, clip_y(high)?)));
    nominal(canvas, (x, y), (across, up), share)
}

/// Runs of places that are there.
fn parts(points: impl Iterator<Item = Option<(f64, f64)>>) -> Vec<Vec<(f64, f64)>> {
    let mut found = vec![Vec::new()];
    for point in points {
        match (point, found.last_mut()) {
            (Some(point), Some(part)) => part.push(point),
            _ => found.push(Vec::new()),
        }
    }
    found.retain(|p| !p.is_empty());
    found
}

/// Cells on whole pixels: neighbours share an edge, so there are no seams, and nothing is averaged between them.
fn raster(
    canvas: &mut Canvas,
    frame: &Frame,
    (columns, rows): (usize, usize),
    cells: &[Paint],
    scale: Option<Scale>,
) {
    let (left, right) = (canvas.snap(frame.left), canvas.snap(frame.right));
    let (top, bottom) = (canvas.snap(frame.top), canvas.snap(frame.bottom));
    // In kept pixels, so that an edge never lies inside of one.
    let finer = FINER as i64;
    let edge = |from: i64, to: i64, index: usize, count: usize| {
        let kept = (to - from) / finer;
        from + (kept as f64 * index as f64 / count as f64).round() as i64 * finer
    };
    for row in 0..rows {
        let (low, high) = (edge(bottom, top, row, rows), edge(bottom, top, row + 1, rows));
        for column in 0..columns {
            let (from, to) = (edge(left, right, column, columns), edge(left, right, column + 1, columns));
            let Some(paint) = cells.get(row * columns + column) else { continue };
            match paint {
                Paint::Empty => {}
                Paint::Flat(region) => canvas.toned((from, high), (to, low), region.tone()),
                Paint::Value(value) => {
                    let colour = scale.and_then(|s| s.colour(*value)).unwrap_or(WHITE);
                    canvas.block((from, high), (to, low), colour);
                }
            }
        }
    }
}

type Ends = Option<(f64, f64)>;

/// Black on a white edge, so that it stands out on dark and on bright; `share` of the full size.
///
/// The ring gives way to error bars that would hide behind it.
fn nominal(
    canvas: &mut Canvas,
    (x, y): (f64, f64),
    (across, up): (Ends, Ends),
    share: f64,
) -> Result<(), RenderError> {
    let cap = 2.0 * share;
    for (edge, colour) in [(0.7, WHITE), (0.0, BLACK)] {
        let thick = 0.8 + 2.0 * edge;
        if let Some((from, to)) = across {
            let (from, to) = (from.min(to), from.max(to));
            canvas.rule((from - edge, y), (to + edge, y), thick, colour);
            for end in [from, to] {
                canvas.rule((end, y - cap - edge), (end, y + cap + edge), thick, colour);
            }
        }
        if let Some((from, to)) = up {
            let (from, to) = (from.min(to), from.max(to));
            canvas.rule((x, from - edge), (x, to + edge), thick, colour);
            for end in [from, to] {
                canvas.rule((x - cap - edge, end), (x + cap + edge, end), thick, colour);
            }
        }
    }
    let longer = |ends: Ends, at: f64| ends.map(|(from, to)| (from - at).abs().max((to - at).abs()));
    let bars = longer(across, x).into_iter().chain(longer(up, y));
    let size = bars.map(|half| half / 4.2).fold(share, f64::min).max(0.45);
    canvas.disc((x, y), 3.4 * size, WHITE)?;
    canvas.disc((x, y), 2.8 * size, BLACK)?;
    canvas.disc((x, y), 1.7 * size, WHITE)
}

fn axes(canvas: &mut Canvas, panel: &Panel, frame: &Frame) {
    let places = Places { frame, x: panel.x.scale(), y: panel.y.as_ref().map(Axis::scale) };
    canvas.frame((frame.left, frame.top), (frame.right, frame.bottom), THIN);
    let both = |ticks: &crate::figure::Ticks| {
        let major: Vec<(f64, f64)> = ticks.major.iter().map(|t| (t.at, MAJOR)).collect();
        major.into_iter().chain(ticks.minor.iter().map(|m| (*m, MINOR))).collect::<Vec<_>>()
    };
    for (at, length) in both(&frame.x) {
        if let Some(x) = places.across(at) {
            canvas.rule((x, frame.bottom), (x, frame.bottom + length), THIN, BLACK);
        }
    }
    for (at, length) in both(&frame.y) {
        if let Some(y) = places.up(at) {
            canvas.rule((frame.left - length, y), (frame.left, y), THIN, BLACK);
        }
    }
    for x in frame.top_pins.iter().filter_map(|at| places.across(*at)) {
        canvas.rule((x, frame.top - MAJOR), (x, frame.top), THIN, BLACK);
    }
    for y in frame.right_pins.iter().filter_map(|at| places.up(*at)) {
        canvas.rule((frame.right, y), (frame.right + MAJOR, y), THIN, BLACK);
    }
}

fn colour_bar(canvas: &mut Canvas, frame: &Frame, bar: &ColourBar) -> Result<(), RenderError> {
    let (left, right) = (frame.left, frame.right);
    let (top, bottom) = (frame.top, frame.bottom);
    let (x0, x1) = (canvas.snap(left), canvas.snap(right));
    let (y0, y1) = (canvas.snap(top), canvas.snap(bottom));
    for row in (y0..y1).step_by(FINER) {
        let place = 1.0 - (row as f64 + 0.5 * FINER as f64 - y0 as f64) / (y1 - y0) as f64;
        canvas.block((x0, row), (x1, row + FINER as i64), even(place));
    }
    let middle = 0.5 * (left + right);
    let ends = [(bar.after, top, -POINT, even(1.0)), (bar.before, bottom, POINT, even(0.0))];
    canvas.rule((left, top), (left, bottom), THIN, BLACK);
    canvas.rule((right, top), (right, bottom), THIN, BLACK);
    for (beyond, edge, out, colour) in ends {
        if beyond {
            let corners = [(left, edge), (middle, edge + out), (right, edge)];
            // Filled from a little inside, so that no light line is left between the point and the body.
            let inside = edge - 0.05 * out;
            canvas.polygon(&[(left, inside), corners[0], corners[1], corners[2], (right, inside)], colour)?;
            canvas.path(&corners, THIN, BLACK)?;
        } else {
            canvas.rule((left, edge), (right, edge), THIN, BLACK);
        }
    }
    let place = |at: f64| bar.scale.place(at).map(|p| bottom - p * (bottom - top));
    let major = frame.y.major.iter().map(|t| (t.at, MAJOR));
    for (at, length) in major.chain(frame.y.minor.iter().map(|m| (*m, MINOR))) {
        if let Some(y) = place(at) {
            canvas.rule((right, y), (right + length, y), THIN, BLACK);
        }
    }
    Ok(())
}

/// An entry of the legend; the marker of the stated values has a bar only where one is in the picture.
fn sample(
    canvas: &mut Canvas,
    entry: &Legend,
    (x, y): (f64, f64),
    (share, bar): (f64, bool),
) -> Result<(), RenderError> {
    let (right, bottom) = (x + sample_width(entry), y + SAMPLE.1);
    let (middle_x, middle_y) = (0.5 * (x + right), 0.5 * (y + bottom));
    match entry {
        Legend::Region(region) => {
            let corner = |x: f64, y: f64| (canvas.snap(x), canvas.snap(y));
            let (from, to) = (corner(x, y), corner(right, bottom));
            canvas.toned(from, to, region.tone());
            canvas.frame((x, y), (right, bottom), THIN);
            Ok(())
        }
        Legend::Nominal(_) => {
            let ends = bar.then_some((middle_x - 7.5, middle_x + 7.5));
            nominal(canvas, (middle_x, middle_y), (ends, None), share)
        }
        Legend::Curve(_, colour) => canvas.path(&[(x, middle_y), (right, middle_y)], 1.2, *colour),
        Legend::Border(_, stroke) => border(canvas, &[(x, middle_y), (right, middle_y)], *stroke, false),
    }
}
