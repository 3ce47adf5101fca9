//! Colours of the figures of benches and validation.

use plotters::prelude::RGBColor;

/// Hues told apart by colour-blind readers (Okabe & Ito 2008, from memory); lines beyond are told apart by their markers.
pub const HUES: [RGBColor; 7] = [
    RGBColor(0, 114, 178),
    RGBColor(213, 94, 0),
    RGBColor(0, 158, 115),
    RGBColor(204, 121, 167),
    RGBColor(86, 180, 233),
    RGBColor(230, 159, 0),
    RGBColor(60, 60, 60),
];
