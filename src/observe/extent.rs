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
    /// Of nothing: joined with any other it is that other.
    pub fn empty() -> Range {
        Range { min: f64::INFINITY, max: f64::NEG_INFINITY }
    }

    /// Whether nothing was taken.
    pub fn is_empty(&self) -> bool {
        self.min > self.max
    }

    fn take(&mut self, value: f64) {
        self.min = self.min.min(value);
        self.max = self.max.max(value);
    }
}

/// Ranges of one planet's astrocentric osculating elements.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Extent {
    /// While the planet was bound: the axis of a hyperbola is negative and no size. Empty if it never was.
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
            if (0.0..f64::INFINITY).contains(&orbit.semi_major_axis_au) {
                extent.semi_major_axis_au.take(orbit.semi_major_axis_au);
            }
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

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_axis_of_a_hyperbola_is_no_size() {
        let shape =
            |semi_major_axis_au, eccentricity| Shape { semi_major_axis_au, eccentricity, inclination: 0.1 };
        let mut watch = ExtentWatch::new(2);
        watch.see(&[shape(1.0, 0.2), shape(-3.0, 1.5)]);
        watch.see(&[shape(-8.1, 4.5), shape(f64::INFINITY, 1.0)]);
        watch.see(&[shape(1.2, 0.1), shape(-3.0, 1.4)]);
        let found = watch.finish();
        assert_eq!(found[0].semi_major_axis_au, Range { min: 1.0, max: 1.2 });
        assert_eq!(found[0].eccentricity, Range { min: 0.1, max: 4.5 });
        assert!(found[1].semi_major_axis_au.is_empty() && found[1].eccentricity.max == 1.5);
        let joined = found[1].joined(&found[0]);
        assert_eq!(joined.semi_major_axis_au, found[0].semi_major_axis_au);
    }
}
