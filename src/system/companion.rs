//! Where a second star stands among the planets, as far as statements tell without solving for masses.

use std::f64::consts::TAU;

use super::{Body, Key, System};

/// Where a companion's orbit lies.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum CompanionPlace {
    /// Outside every planet's orbit: the planets circle the star (S-type).
    Outside,
    /// Inside every planet's orbit: the planets circle the pair (P-type).
    Inside,
    /// Some planets circle the star, others the pair.
    Between,
}

impl CompanionPlace {
    /// From how many planets circle the pair, and how many there are.
    pub fn of(circling_pair: usize, planets: usize) -> CompanionPlace {
        match circling_pair {
            0 => CompanionPlace::Outside,
            all if all == planets => CompanionPlace::Inside,
            _ => CompanionPlace::Between,
        }
    }

    /// Whether some planet circles the pair.
    pub fn has_circumbinary(self) -> bool {
        self != CompanionPlace::Outside
    }
}

impl System {
    /// Where the companion stands, by stated periods; a stated semi-major axis counts with the period it would have
    /// around star and companion together. None without a companion.
    pub fn companion_place(&self) -> Option<CompanionPlace> {
        self.companion.as_ref()?;
        Some(CompanionPlace::of(self.planets_around_pair().len(), self.planets.len()))
    }

    /// Indices of the planets that circle star and companion together, told as in [`System::companion_place`].
    pub fn planets_around_pair(&self) -> Vec<usize> {
        let (Some(companion), Some(star_gm)) = (&self.companion, self.star.stated.value(Key::Mass)) else {
            return Vec::new();
        };
        let pair_gm = star_gm + stated_gm(companion, star_gm);
        let Some(companion_day) = period_day(companion, pair_gm) else { return Vec::new() };
        let slower = |planet: &Body| period_day(planet, pair_gm).is_some_and(|period| period > companion_day);
        (0..self.planets.len()).filter(|&planet| slower(&self.planets[planet])).collect()
    }
}

fn period_day(body: &Body, mass_parameter: f64) -> Option<f64> {
    let from_axis = |axis_au: f64| TAU * (axis_au.powi(3) / mass_parameter).sqrt();
    body.stated.value(Key::Period).or_else(|| body.stated.value(Key::SemiMajorAxis).map(from_axis))
}

/// G × mass where a key gives it by itself; 0 for a velocity semi-amplitude, which needs the orbit.
fn stated_gm(body: &Body, star_gm: f64) -> f64 {
    let stated = &body.stated;
    let projected = || {
        let sine = stated.value(Key::Inclination).map_or(1.0, f64::sin).abs();
        stated.value(Key::MinimumMass).filter(|_| sine > 0.0).map(|mass| mass / sine)
    };
    stated
        .value(Key::Mass)
        .or_else(|| stated.value(Key::MassRatio).map(|ratio| ratio * star_gm))
        .or_else(projected)
        .unwrap_or(0.0)
}
