//! Ranges of a, e and i over the moments seen.

use crate::coords::Shape;
use crate::num::{Kept, KeptReader};

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

impl Extent {
    /// Holds everything that either holds.
    #[must_use]
    pub fn joined(&self, other: &Extent) -> Extent {
        let join = |a: Range, b: Range| Range { min: a.min.min(b.min), max: a.max.max(b.max) };
        Extent {
            semi_major_axis_au: join(self.semi_major_axis_au, other.semi_major_axis_au),
            eccentricity: join(self.eccentricity, other.eccentricity),
            inclination: join(self.inclination, other.inclination),
        }
    }

    pub fn keep(&self, kept: &mut Kept) {
        for range in [self.semi_major_axis_au, self.eccentricity, self.inclination] {
            kept.floats(&[range.min, range.max]);
        }
    }

    pub fn restored(kept: &mut KeptReader<'_>) -> Option<Extent> {
        let mut range = || Some(Range { min: kept.float()?, max: kept.float()? });
        Some(Extent { semi_major_axis_au: range()?, eccentricity: range()?, inclination: range()? })
    }
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

    pub fn keep(&self, kept: &mut Kept) {
        self.0.iter().for_each(|extent| extent.keep(kept));
    }

    /// Takes up what was put down for as many planets.
    pub fn restore(&mut self, kept: &mut KeptReader<'_>) -> Option<()> {
        for extent in &mut self.0 {
            *extent = Extent::restored(kept)?;
        }
        Some(())
    }

    /// Takes the osculating orbit of every planet at a moment.
    pub fn see(&mut self, orbits: &[Shape]) {
        for (extent, orbit) in self.0.iter_mut().zip(orbits) {
            extent.semi_major_axis_au.take(orbit.semi_major_axis_au);
            extent.eccentricity.take(orbit.eccentricity);
            extent.inclination.take(orbit.inclination);
        }
    }

    /// Takes in what was seen elsewhere, one per planet.
    pub fn join(&mut self, seen: &[Extent]) {
        for (extent, seen) in self.0.iter_mut().zip(seen) {
            *extent = extent.joined(seen);
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
