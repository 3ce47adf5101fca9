//! A figure as data: no pixels, no fonts, only values in the units of its axes.

use super::colour::{Region, Rgb, Scale, ScaleKind};
use super::label::Label;
use super::resonance::Resonance;
use crate::system::Criterion;

/// A whole figure.
#[derive(Clone, Debug, PartialEq)]
pub struct Figure {
    pub title: Label,
    /// Stacked, top down; they share the horizontal axis, which the last one labels.
    pub panels: Vec<Panel>,
    pub colour_bar: Option<ColourBar>,
    /// Only what occurs.
    pub legend: Vec<Legend>,
    /// Sentences below; broken into lines where the width asks for it.
    pub caption: Vec<String>,
}

/// An axis in data units.
#[derive(Clone, Debug, PartialEq)]
pub struct Axis {
    pub label: Label,
    /// Taken where the label is too long.
    pub short: Label,
    pub from: f64,
    pub to: f64,
    pub kind: ScaleKind,
}

impl Axis {
    pub fn scale(&self) -> Scale {
        Scale { from: self.from, to: self.to, kind: self.kind }
    }
}

/// A frame with its axes.
#[derive(Clone, Debug, PartialEq)]
pub struct Panel {
    pub x: Axis,
    /// Absent: nothing is read off vertically.
    pub y: Option<Axis>,
    pub marks: Vec<Mark>,
    /// Pins on the top edge, best first.
    pub top: Vec<Pin>,
    /// Pins on the right edge, best first.
    pub right: Vec<Pin>,
    /// Height over width; of stacked panels only the proportions count.
    pub height: f64,
}

/// A short tick at the edge with a name.
#[derive(Clone, Debug, PartialEq)]
pub struct Pin {
    pub at: f64,
    pub label: Label,
    pub resonance: Resonance,
}

/// One cell of a raster.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Paint {
    /// A value on the colour bar's scale.
    Value(f64),
    Flat(Region),
    /// Nothing is painted.
    Empty,
}

/// What a panel shows, lowest first.
#[derive(Clone, Debug, PartialEq)]
pub enum Mark {
    /// A raster over the whole panel, first row at the bottom, `columns` cells per row, even on the panel's axes.
    Raster {
        columns: usize,
        rows: usize,
        cells: Vec<Paint>,
        scale: Option<Scale>,
    },
    /// Points with colours of their own, as rings when hollow.
    Points {
        points: Vec<(f64, f64, Rgb)>,
        hollow: bool,
    },
    /// Even cells along the bottom edge, up to this share of the panel's height.
    Strip {
        cells: Vec<Region>,
        height: f64,
    },
    Curve(Curve),
    /// Where a criterion changes its answer: chains of points, ticks to their left when `sided`.
    Border {
        parts: Vec<Vec<(f64, f64)>>,
        stroke: Stroke,
        sided: bool,
    },
    /// A level line over the whole panel.
    Level {
        at: f64,
    },
    /// The stated configuration; low and high ends of its error bars where it has any. Without `y` an upright line,
    /// with marker and bar on the top edge, where no height can be read.
    Nominal {
        x: f64,
        y: Option<f64>,
        x_bar: Option<(f64, f64)>,
        y_bar: Option<(f64, f64)>,
    },
}

/// A line through points; it is interrupted where a value is not finite.
#[derive(Clone, Debug, PartialEq)]
pub struct Curve {
    pub points: Vec<(f64, f64)>,
    pub colour: Rgb,
}

/// How borders are told apart without colour.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Stroke {
    Full,
    Long,
    Dots,
    LongDot,
    Short,
    LongTwoDots,
}

impl Stroke {
    /// In the order in which they are given to the borders of a figure.
    pub const ALL: [Stroke; Criterion::MOST_ON_A_MAP] =
        [Stroke::Full, Stroke::Long, Stroke::Dots, Stroke::LongDot, Stroke::Short, Stroke::LongTwoDots];
}

/// The key to the colours of a raster.
#[derive(Clone, Debug, PartialEq)]
pub struct ColourBar {
    pub label: Label,
    /// Taken where the label is too long.
    pub short: Label,
    pub scale: Scale,
    /// Whether values lie beyond the first or the last end of the scale, so that this end stands for them too.
    pub before: bool,
    pub after: bool,
}

/// An entry of the legend.
#[derive(Clone, Debug, PartialEq)]
pub enum Legend {
    Region(Region),
    Nominal(Label),
    Curve(Label, Rgb),
    Border(Label, Stroke),
}
