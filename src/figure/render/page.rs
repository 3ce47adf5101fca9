//! Where everything goes on the page, in points from the upper left corner.

use super::spread::{bar_ticks, level_ticks, placed_ticks, upright_ticks};
use super::text::{self, BELOW, CAPITAL};
use super::{RenderError, Width, fit};
use crate::figure::label::Label;
use crate::figure::model::{Axis, ColourBar, Figure, Legend, Panel, Pin};
use crate::figure::ticks::{Tick, Ticks, ticks};

/// A page with all its places; values inside frames stay in data units.
#[derive(Clone, Debug, PartialEq)]
pub struct Page {
    pub width: f64,
    pub height: f64,
    pub pixels_per_inch: u32,
    pub frames: Vec<Frame>,
    /// Left, top, right, bottom of the colour bar, with its ticks.
    pub bar: Option<(Frame, ColourBar)>,
    /// Upper left corners of the samples of the legend.
    pub samples: Vec<(Legend, f64, f64)>,
    pub texts: Vec<Placed>,
}

/// A rectangle with ticks at its edges.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Frame {
    pub left: f64,
    pub top: f64,
    pub right: f64,
    pub bottom: f64,
    pub x: Ticks,
    pub y: Ticks,
    /// Places of the pins that found room.
    pub top_pins: Vec<f64>,
    pub right_pins: Vec<f64>,
}

/// A line of text in its place.
#[derive(Clone, Debug, PartialEq)]
pub struct Placed {
    pub label: Label,
    pub size: f64,
    /// Start of the line of writing.
    pub x: f64,
    pub y: f64,
    /// Reads from below to above.
    pub upwards: bool,
    pub length: f64,
}

impl Placed {
    /// Left, top, right, bottom of the letters at their tallest.
    pub fn bounds(&self) -> (f64, f64, f64, f64) {
        let (above, below) = (CAPITAL * self.size, BELOW * self.size);
        if self.upwards {
            (self.x - above, self.y - self.length, self.x + below, self.y)
        } else {
            (self.x, self.y - above, self.x + self.length, self.y + below)
        }
    }
}

/// Type sizes, never below 6 points.
#[derive(Clone, Copy)]
struct Sizes {
    title: f64,
    label: f64,
    tick: f64,
    small: f64,
}

const MARGIN: f64 = 4.0;
const TICK: f64 = 3.5;
/// Width and height of the samples of the legend.
pub(super) const SAMPLE: (f64, f64) = (15.0, 8.0);

/// Width of a sample of the legend: dashes need more than their period.
pub(super) fn sample_width(entry: &Legend) -> f64 {
    if matches!(entry, Legend::Border(..)) { 25.0 } else { SAMPLE.0 }
}

/// Lays a figure out at a physical width.
///
/// Errors: a width that is not allowed.
pub fn page(figure: &Figure, width: Width) -> Result<Page, RenderError> {
    if !Width::ALLOWED_MM.contains(&width.mm) {
        return Err(RenderError::Width { mm: width.mm });
    }
    let narrow = width.mm < 120.0;
    let sizes = if narrow {
        Sizes { title: 8.5, label: 7.5, tick: 6.8, small: 6.0 }
    } else {
        Sizes { title: 9.5, label: 8.5, tick: 7.5, small: 6.5 }
    };
    let mut layout = Layout {
        page: Page {
            width: width.points(),
            height: 0.0,
            pixels_per_inch: width.pixels_per_inch(),
            frames: Vec::new(),
            bar: None,
            samples: Vec::new(),
            texts: Vec::new(),
        },
        sizes,
        at: MARGIN,
    };
    layout.title(figure);
    let stretch = match (narrow, figure.panels.len()) {
        (false, _) => 1.0,
        (true, 1) => 1.12,
        // Stacked panels stay tall enough for the names of their axes.
        (true, _) => 1.4,
    };
    layout.panels(figure, stretch);
    layout.legend(&figure.legend);
    layout.caption(&figure.caption);
    layout.page.height = layout.at + MARGIN;
    Ok(layout.page)
}

struct Layout {
    page: Page,
    sizes: Sizes,
    /// How far down the page is filled.
    at: f64,
}

/// What surrounds the frames.
struct Sides {
    left: f64,
    right: f64,
    /// From the frame to the colour bar.
    bar_gap: f64,
}

impl Layout {
    fn put(&mut self, label: Label, size: f64, x: f64, y: f64) {
        let length = text::length(&label, size);
        // A label that would leave the page is moved in, which only ever concerns the outermost ticks.
        let x = x.min(self.page.width - 1.0 - length).max(1.0);
        self.page.texts.push(Placed { label, size, x, y, upwards: false, length });
    }

    fn put_centred(&mut self, label: Label, size: f64, x: f64, y: f64) {
        let half = 0.5 * text::length(&label, size);
        self.put(label, size, x - half, y);
    }

    fn put_upwards(&mut self, label: Label, size: f64, x: f64, middle: f64) {
        let length = text::length(&label, size);
        self.page.texts.push(Placed { label, size, x, y: middle + 0.5 * length, upwards: true, length });
    }

    fn title(&mut self, figure: &Figure) {
        let size = self.sizes.title;
        let room = self.page.width - 2.0 * MARGIN;
        for line in fit::lines(&figure.title.text(), size, room) {
            self.at += CAPITAL * size;
            self.put_centred(Label::plain(line), size, 0.5 * self.page.width, self.at);
            self.at += 0.45 * size;
        }
        self.at += 2.0;
    }

    fn panels(&mut self, figure: &Figure, stretch: f64) {
        let sizes = self.sizes;
        let guess = self.page.width * 0.72;
        let heights: Vec<f64> = figure.panels.iter().map(|p| p.height * stretch * guess).collect();
        let y_ticks: Vec<Ticks> = figure
            .panels
            .iter()
            .zip(&heights)
            .map(|(p, h)| upright_ticks(p.y.as_ref(), *h, sizes.tick))
            .collect();
        let sides = self.sides(figure, &y_ticks, heights.iter().sum());
        let (left, right) = (sides.left, self.page.width - sides.right);
        let last = figure.panels.len().saturating_sub(1);
        if figure.panels.iter().any(|p| !p.top.is_empty()) {
            self.at += sizes.tick * CAPITAL + 5.0;
        }
        for (index, (panel, y)) in figure.panels.iter().zip(y_ticks).enumerate() {
            // Tall enough for the shorter names of its axis and of the colour bar.
            let names = panel.y.iter().map(|y| &y.short).chain(figure.colour_bar.iter().map(|b| &b.short));
            let name = names.map(|n| text::length(n, sizes.label) + 4.0).fold(0.0, f64::max);
            let height = (panel.height * stretch * (right - left)).max(name);
            let mut frame =
                Frame { left, top: self.at, right, bottom: self.at + height, y, ..Frame::default() };
            self.y_side(panel, &frame);
            self.pins(panel, &mut frame);
            self.x_side(panel, &mut frame, index == last);
            self.at = frame.bottom + 0.9 * sizes.tick;
            self.page.frames.push(frame);
        }
        if let (Some(bar), Some(frame)) = (&figure.colour_bar, self.page.frames.first().cloned()) {
            self.bar(bar, &frame, sides.bar_gap);
        }
        self.at = self.at - 0.9 * sizes.tick + TICK + 5.0 + sizes.tick * (CAPITAL + BELOW);
        self.at += sizes.label * (CAPITAL + BELOW) + 6.0;
    }

    fn sides(&self, figure: &Figure, y_ticks: &[Ticks], height: f64) -> Sides {
        let sizes = self.sizes;
        let longest =
            |ticks: &[Tick]| ticks.iter().map(|t| text::length(&t.label, sizes.tick)).fold(0.0, f64::max);
        let numbers = y_ticks.iter().map(|t| longest(&t.major)).fold(0.0, f64::max);
        let names = if figure.panels.iter().any(|p| p.y.is_some()) { 1.45 * sizes.label } else { 0.0 };
        let left = MARGIN + names + numbers + TICK + 2.0;
        let pins = figure.panels.iter().flat_map(|p| &p.right);
        let pins = pins.map(|p| text::length(&p.label, sizes.tick) + 7.0).fold(0.0, f64::max);
        let bar_gap = 8.0 + pins;
        let right = match &figure.colour_bar {
            None => MARGIN + pins.max(10.0),
            Some(bar) => {
                let numbers = longest(&bar_ticks(bar, height, sizes.tick));
                bar_gap + BAR + TICK + 2.0 + numbers + 1.6 * sizes.label + MARGIN
            }
        };
        Sides { left: left.max(14.0), right, bar_gap }
    }

    fn y_side(&mut self, panel: &Panel, frame: &Frame) {
        let Some(axis) = &panel.y else { return };
        let sizes = self.sizes;
        for (at, label) in placed_ticks(&axis.scale(), &frame.y.major) {
            let y = frame.bottom - at * (frame.bottom - frame.top);
            let x = frame.left - TICK - 2.0 - text::length(&label, sizes.tick);
            self.put(label, sizes.tick, x, y + 0.5 * CAPITAL * sizes.tick);
        }
        let label = self.fitting((&axis.label, &axis.short), frame.bottom - frame.top);
        self.put_upwards(
            label,
            sizes.label,
            MARGIN + CAPITAL * sizes.label,
            0.5 * (frame.top + frame.bottom),
        );
    }

    /// The label, or what is left of it when it is longer than the axis.
    fn fitting(&self, (label, short): (&Label, &Label), room: f64) -> Label {
        let fits = text::length(label, self.sizes.label) <= room;
        if fits { label.clone() } else { short.clone() }
    }

    fn x_side(&mut self, panel: &Panel, frame: &mut Frame, labelled: bool) {
        let sizes = self.sizes;
        frame.x = level_ticks(&panel.x, frame.right - frame.left, sizes.tick);
        if !labelled {
            return;
        }
        let line = frame.bottom + TICK + 2.0 + CAPITAL * sizes.tick;
        for (at, label) in placed_ticks(&panel.x.scale(), &frame.x.major) {
            self.put_centred(label, sizes.tick, frame.left + at * (frame.right - frame.left), line);
        }
        let label = self.fitting((&panel.x.label, &panel.x.short), self.page.width - 2.0 * MARGIN);
        let line = line + BELOW * sizes.tick + 3.0 + CAPITAL * sizes.label;
        self.put_centred(label, sizes.label, 0.5 * (frame.left + frame.right), line);
    }

    fn pins(&mut self, panel: &Panel, frame: &mut Frame) {
        let size = self.sizes.tick;
        let length = |p: &Pin| text::length(&p.label, size);
        let place = |axis: &Axis, at: f64| axis.scale().place(at);
        let width = frame.right - frame.left;
        let along: Vec<(f64, f64)> = panel
            .top
            .iter()
            .filter_map(|p| Some((frame.left + place(&panel.x, p.at)? * width, length(p))))
            .collect();
        for index in fit::keep_apart(&along, 0.45 * size, (frame.left - 8.0, self.page.width - 2.0)) {
            frame.top_pins.push(panel.top[index].at);
            self.put_centred(panel.top[index].label.clone(), size, along[index].0, frame.top - 5.0);
        }
        let Some(y) = &panel.y else { return };
        let height = frame.bottom - frame.top;
        let up: Vec<(f64, f64)> = panel
            .right
            .iter()
            .filter_map(|p| Some((frame.bottom - place(y, p.at)? * height, CAPITAL * size)))
            .collect();
        for index in fit::keep_apart(&up, 0.45 * size, (frame.top - 2.0, frame.bottom + 2.0)) {
            frame.right_pins.push(panel.right[index].at);
            let line = up[index].0 + 0.5 * CAPITAL * size;
            self.put(panel.right[index].label.clone(), size, frame.right + 5.5, line);
        }
    }

    fn bar(&mut self, bar: &ColourBar, frame: &Frame, gap: f64) {
        let sizes = self.sizes;
        let left = frame.right + gap;
        let (top, bottom) = (frame.top, frame.bottom);
        let body = body(bar, top, bottom);
        let major = bar_ticks(bar, body.1 - body.0, sizes.tick);
        let minor = ticks(bar.scale.from, bar.scale.to, bar.scale.kind, 6).minor;
        let widest = major.iter().map(|t| text::length(&t.label, sizes.tick)).fold(0.0, f64::max);
        for (at, label) in placed_ticks(&bar.scale, &major) {
            let y = body.1 - at * (body.1 - body.0) + 0.5 * CAPITAL * sizes.tick;
            self.put(label, sizes.tick, left + BAR + TICK + 2.0, y);
        }
        let x = left + BAR + TICK + 2.0 + widest + 4.0 + CAPITAL * sizes.label;
        let label = self.fitting((&bar.label, &bar.short), bottom - top);
        self.put_upwards(label, sizes.label, x, 0.5 * (top + bottom));
        let y = Ticks { major, minor };
        let frame = Frame { left, right: left + BAR, top: body.0, bottom: body.1, y, ..Frame::default() };
        self.page.bar = Some((frame, bar.clone()));
    }

    fn legend(&mut self, legend: &[Legend]) {
        let size = self.sizes.small;
        let (mut x, gap) = (MARGIN + 2.0, 3.5);
        let right = self.page.width - MARGIN;
        let mut any = false;
        for entry in legend {
            let label = match entry {
                Legend::Region(region) => Label::plain(region.words()),
                Legend::Nominal(label) | Legend::Curve(label, _) | Legend::Border(label, _) => label.clone(),
            };
            let sample = sample_width(entry);
            let length = sample + gap + text::length(&label, size);
            if any && x + length > right {
                x = MARGIN + 2.0;
                self.at += SAMPLE.1 + 4.0;
            }
            let line = self.at + 0.5 * (SAMPLE.1 + CAPITAL * size);
            self.put(label, size, x + sample + gap, line);
            self.page.samples.push((entry.clone(), x, self.at));
            x += length + 9.0;
            any = true;
        }
        if any {
            self.at += SAMPLE.1 + 5.0;
        }
    }

    fn caption(&mut self, caption: &[String]) {
        let size = self.sizes.small;
        let room = self.page.width - 2.0 * MARGIN - 4.0;
        for line in fit::lines(&caption.join(" "), size, room) {
            self.at += CAPITAL * size + 0.2 * size;
            self.put(Label::plain(line), size, MARGIN + 2.0, self.at);
            self.at += BELOW * size + 0.2 * size;
        }
    }
}

/// Width of the colour bar and length of its points.
const BAR: f64 = 10.0;
pub(super) const POINT: f64 = 8.0;

/// Top and bottom of the even part of a colour bar; its points stand for what lies beyond.
fn body(bar: &ColourBar, top: f64, bottom: f64) -> (f64, f64) {
    let room = |beyond: bool| if beyond { POINT } else { 0.0 };
    (top + room(bar.after), bottom - room(bar.before))
}
