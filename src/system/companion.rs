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
    /// around star and companion together. None without a companion, or where a size is missing.
    pub fn companion_place(&self) -> Option<CompanionPlace> {
        let companion = self.companion.as_ref()?;
        let star_gm = self.star.stated.value(Key::Mass)?;
        let pair_gm = star_gm + stated_gm(companion, star_gm);
        let companion_day = period_day(companion, pair_gm)?;
        let mut circling_pair = 0;
        for planet in &self.planets {
            circling_pair += usize::from(period_day(planet, pair_gm)? > companion_day);
        }
        Some(CompanionPlace::of(circling_pair, self.planets.len()))
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
