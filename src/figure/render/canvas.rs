//! A grid of pixels with the few strokes a figure needs.
//!
//! It is drawn [`FINER`] times finer than it is kept; the average over each block gives smooth slanted lines, while whatever
//! ends on whole kept pixels stays sharp.

use plotters::backend::{BitMapBackend, DrawingBackend};
use plotters::style::{RGBColor, ShapeStyle};

use super::{RenderError, text};
use crate::figure::colour::{Pattern, Rgb, Tone};
use crate::figure::label::Label;

/// Fine pixels per kept pixel, each way.
pub(super) const FINER: usize = 2;

/// Finished pixels, rows from the top, three bytes each.
#[derive(Debug)]
pub(super) struct Picture {
    pub width: usize,
    pub height: usize,
    pub rgb: Vec<u8>,
}

/// A grid of fine pixels, addressed in points.
pub(super) struct Canvas {
    fine: Picture,
    /// Fine pixels per point.
    pub per_point: f64,
}

type Point = (f64, f64);

impl Canvas {
    pub(super) fn new(width: usize, height: usize, pixels_per_inch: u32) -> Canvas {
        let (width, height) = (width * FINER, height * FINER);
        let per_point = f64::from(pixels_per_inch) / 72.0 * FINER as f64;
        Canvas { fine: Picture { width, height, rgb: vec![255; width * height * 3] }, per_point }
    }

    /// Average of each block of fine pixels.
    pub(super) fn finish(self) -> Picture {
        let (width, height) = (self.fine.width / FINER, self.fine.height / FINER);
        let mut rgb = Vec::with_capacity(width * height * 3);
        let block = (FINER * FINER) as u32;
        for row in 0..height {
            for column in 0..width {
                for part in 0..3 {
                    let mut sum = 0;
                    for (down, across) in (0..FINER).flat_map(|d| (0..FINER).map(move |a| (d, a))) {
                        let (y, x) = (row * FINER + down, column * FINER + across);
                        sum += u32::from(self.fine.rgb[(y * self.fine.width + x) * 3 + part]);
                    }
                    rgb.push(((sum + block / 2) / block) as u8);
                }
            }
        }
        Picture { width, height, rgb }
    }

    /// The nearest edge between kept pixels, as a fine pixel.
    pub(super) fn snap(&self, points: f64) -> i64 {
        let finer = FINER as f64;
        ((points * self.per_point / finer).round() * finer) as i64
    }

    /// A thickness of whole kept pixels, at least one, in fine pixels.
    fn thickness(&self, points: f64) -> i64 {
        self.snap(points).max(FINER as i64)
    }

    fn with_backend(
        &mut self,
        draw: impl FnOnce(&mut BitMapBackend<'_>) -> Result<(), String>,
    ) -> Result<(), RenderError> {
        let size = (self.fine.width as u32, self.fine.height as u32);
        let mut backend = BitMapBackend::with_buffer(&mut self.fine.rgb, size);
        draw(&mut backend).map_err(RenderError::Drawing)
    }

    /// Fills fine pixels `x0..x1` × `y0..y1`, by hand: the library leaves out the last row and column, which shows as seams.
    pub(super) fn block(&mut self, (x0, y0): (i64, i64), (x1, y1): (i64, i64), colour: Rgb) {
        let (width, height) = (self.fine.width as i64, self.fine.height as i64);
        let (x0, x1) = (x0.clamp(0, width), x1.clamp(0, width));
        for row in y0.clamp(0, height)..y1.clamp(0, height) {
            for column in x0..x1 {
                let start = (row * width + column) as usize * 3;
                self.fine.rgb[start..start + 3].copy_from_slice(&[colour.0, colour.1, colour.2]);
            }
        }
    }

    /// A level or upright line of a thickness in points, on whole pixels, centred on its place.
    pub(super) fn rule(&mut self, from: Point, to: Point, thickness: f64, colour: Rgb) {
        let thick = self.thickness(thickness);
        let half = thick / 2 / FINER as i64 * FINER as i64;
        let (x0, y0) = (self.snap(from.0.min(to.0)), self.snap(from.1.min(to.1)));
        let (x1, y1) = (self.snap(from.0.max(to.0)), self.snap(from.1.max(to.1)));
        if y0 == y1 {
            self.block((x0, y0 - half), (x1, y0 - half + thick), colour);
        } else {
            self.block((x0 - half, y0), (x0 - half + thick, y1), colour);
        }
    }

    /// A frame around a rectangle, outside of it.
    pub(super) fn frame(&mut self, (left, top): Point, (right, bottom): Point, thickness: f64) {
        let black = Rgb(0, 0, 0);
        let thick = self.thickness(thickness);
        let (x0, y0, x1, y1) = (self.snap(left), self.snap(top), self.snap(right), self.snap(bottom));
        self.block((x0 - thick, y0 - thick), (x1 + thick, y0), black);
        self.block((x0 - thick, y1), (x1 + thick, y1 + thick), black);
        self.block((x0 - thick, y0), (x0, y1), black);
        self.block((x1, y0), (x1 + thick, y1), black);
    }

    pub(super) fn polygon(&mut self, corners: &[Point], colour: Rgb) -> Result<(), RenderError> {
        let scale = self.per_point;
        let place = |p: &Point| ((p.0 * scale).round() as i32, (p.1 * scale).round() as i32);
        let corners: Vec<(i32, i32)> = corners.iter().map(place).collect();
        self.with_backend(|b| b.fill_polygon(corners, &ink(colour)).map_err(|e| e.to_string()))
    }

    /// A line through points.
    pub(super) fn path(&mut self, points: &[Point], thickness: f64, colour: Rgb) -> Result<(), RenderError> {
        let scale = self.per_point;
        let stroke = ShapeStyle {
            color: ink(colour).into(),
            filled: false,
            stroke_width: (thickness * scale).round().max(1.0) as u32,
        };
        let mut last = None;
        for point in points {
            let place = ((point.0 * scale).round() as i32, (point.1 * scale).round() as i32);
            if let Some(before) = last.filter(|b| *b != place) {
                self.with_backend(|b| b.draw_line(before, place, &stroke).map_err(|e| e.to_string()))?;
            }
            last = Some(place);
        }
        Ok(())
    }

    pub(super) fn disc(&mut self, centre: Point, radius: f64, colour: Rgb) -> Result<(), RenderError> {
        let scale = self.per_point;
        let place = ((centre.0 * scale).round() as i32, (centre.1 * scale).round() as i32);
        let radius = (radius * scale).round() as u32;
        self.with_backend(|b| b.draw_circle(place, radius, &ink(colour), true).map_err(|e| e.to_string()))
    }

    /// A line of text from its start on the line of writing.
    pub(super) fn text(&mut self, label: &Label, size: f64, (x, y): Point, upwards: bool) {
        let scale = self.per_point;
        let fine = &mut self.fine;
        text::cover(label, size * scale, (x * scale, y * scale), upwards, |column, row, share| {
            fine.mix(column, row, Rgb(0, 0, 0), share.clamp(0.0, 1.0));
        });
    }

    /// Fills fine pixels with a tone; patterns belong to the page, so that those of neighbours join.
    pub(super) fn toned(&mut self, (x0, y0): (i64, i64), (x1, y1): (i64, i64), tone: Tone) {
        let point = 1.0 / self.per_point;
        for row in y0..y1 {
            for column in x0..x1 {
                self.fine.mix(column, row, tone.ground, 1.0);
                let centre = ((column as f64 + 0.5) * point, (row as f64 + 0.5) * point);
                let share = covered(tone.pattern, centre, point);
                if share > 0.0 {
                    self.fine.mix(column, row, tone.stroke, share as f32);
                }
            }
        }
    }
}

impl Picture {
    fn mix(&mut self, column: i64, row: i64, colour: Rgb, share: f32) {
        if column < 0 || row < 0 || column >= self.width as i64 || row >= self.height as i64 {
            return;
        }
        let start = (row as usize * self.width + column as usize) * 3;
        for (part, new) in [colour.0, colour.1, colour.2].into_iter().enumerate() {
            let old = f32::from(self.rgb[start + part]);
            self.rgb[start + part] = (old + (f32::from(new) - old) * share).round() as u8;
        }
    }
}

fn ink(colour: Rgb) -> RGBColor {
    RGBColor(colour.0, colour.1, colour.2)
}

/// How much of a fine pixel (of this size, all in points) the strokes of a pattern cover.
fn covered(pattern: Pattern, (x, y): Point, pixel: f64) -> f64 {
    let lines = |along: f64, period: f64, stroke: f64| {
        let off = (along.rem_euclid(period) - 0.5 * period).abs();
        ((0.5 * stroke - off) / pixel + 0.5).clamp(0.0, 1.0)
    };
    let slant = std::f64::consts::FRAC_1_SQRT_2;
    match pattern {
        Pattern::Plain => 0.0,
        Pattern::Rising => lines((x + y) * slant, 3.2, 0.55),
        Pattern::Falling => lines((x - y) * slant, 3.2, 0.55),
        Pattern::Crossed => lines((x + y) * slant, 4.2, 0.5).max(lines((x - y) * slant, 4.2, 0.5)),
        Pattern::Level => lines(y, 2.8, 0.5),
        Pattern::Upright => lines(x, 3.2, 0.5),
        Pattern::Dots => {
            let period = 3.4;
            let odd = (y / period).floor().rem_euclid(2.0) * 0.5;
            let across = ((x / period + odd).rem_euclid(1.0) - 0.5) * period;
            let down = ((y / period).rem_euclid(1.0) - 0.5) * period;
            ((0.75 - across.hypot(down)) / pixel + 0.5).clamp(0.0, 1.0)
        }
    }
}
