//! Figures as plain data in data units (panels, axes, marks), and [`render`], which alone knows pixels.
//!
//! [`map()`] makes the stability map of a run, [`series()`] the panels of one configuration through time; both
//! return a [`Figure`], and [`render::png`] draws it at a physical width.

mod borrow;
mod colour;
mod column;
mod contour;
mod criteria;
mod error;
mod grid;
mod label;
mod map;
mod model;
mod names;
mod nominal;
pub mod render;
mod resonance;
mod series;
mod ticks;

pub use colour::{Region, Rgb, Scale, ScaleKind};
pub use column::{Column, columns};
pub use criteria::{Border, add_criteria, border};
pub use error::FigureError;
pub use label::{Label, Piece, Raise};
pub use map::{MapInput, map};
pub use model::{Axis, ColourBar, Curve, Figure, Legend, Mark, Paint, Panel, Pin, Stroke};
pub use nominal::{Nominal, nominal, nominal_cell};
pub use resonance::{Resonance, resonances};
pub use series::{AngleCurve, PlanetCurves, SeriesInput, series};
pub use ticks::{Tick, Ticks, ticks};
