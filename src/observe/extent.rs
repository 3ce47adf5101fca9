//! Ranges of a, e and i over the moments seen.

use crate::coords::Elements;

/// Smallest and largest value seen.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Range {
    pub min: f64,
    pub max: f64,
}

impl Range {
    fn empty() -> Range {
        Range { min: f64::INFINITY, max: f64::NEG_INFINITY }
    }

    fn take(&mut self, value: f64) {
        self.min = self.min.min(value);
        self.max = self.max.max(value);
    }
}

/// Ranges of one planet's astrocentric osculating elements.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Extent {
    pub semi_major_axis_au: Range,
    pub eccentricity: Range,
    /// To the reference plane, rad.
    pub inclination: Range,
}

/// Widens the extents at every moment seen.
#[derive(Clone, Debug, PartialEq)]
pub struct ExtentWatch(Vec<Extent>);

impl ExtentWatch {
    pub fn new(planets: usize) -> ExtentWatch {
        let empty = Range::empty();
        let extent = Extent { semi_major_axis_au: empty, eccentricity: empty, inclination: empty };
        ExtentWatch(vec![extent; planets])
    }

    /// Takes the osculating astrocentric elements of every planet at a moment.
    pub fn see(&mut self, orbits: &[Elements]) {
        for (extent, elements) in self.0.iter_mut().zip(orbits) {
            extent.semi_major_axis_au.take(elements.semi_major_axis_au);
            extent.eccentricity.take(elements.eccentricity);
            extent.inclination.take(elements.inclination);
        }
    }

    /// The extents; empty when nothing was seen.
    pub fn finish(&self) -> Vec<Extent> {
        if self.0.iter().any(|e| e.eccentricity.min > e.eccentricity.max) {
            return Vec::new();
        }
        self.0.clone()
    }
}
