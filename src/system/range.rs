//! Which body may state a key, and which numbers a key may have.

use super::{Group, Key, Stated};

/// What kind of body states a key.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Holder {
    Star,
    Planet,
    Companion,
}

/// The numbers that a key may have, in inner units; `low` and `high` belong to it where they are closed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Allowed {
    pub low: f64,
    pub low_closed: bool,
    pub high: f64,
    pub high_closed: bool,
    /// The range in words, as "0 <= e < 1".
    pub words: &'static str,
}

impl Allowed {
    /// False for NaN and the infinities too.
    pub fn contains(&self, value: f64) -> bool {
        let above = if self.low_closed { value >= self.low } else { value > self.low };
        let below = if self.high_closed { value <= self.high } else { value < self.high };
        value.is_finite() && above && below
    }

    /// The number nearest to `value` that is allowed, seen from the allowed number `inside`.
    ///
    /// A closed end is given itself. An open end cannot be given, so 1/1000 of the way from it to `inside` is.
    pub fn clip(&self, value: f64, inside: f64) -> f64 {
        if self.contains(value) {
            value
        } else if value <= self.low {
            if self.low_closed { self.low } else { self.low + 1e-3 * (inside - self.low) }
        } else if self.high_closed {
            self.high
        } else {
            self.high - 1e-3 * (self.high - inside)
        }
    }
}

const ANY: Allowed = Allowed {
    low: f64::NEG_INFINITY,
    low_closed: false,
    high: f64::INFINITY,
    high_closed: false,
    words: "any finite number",
};

const fn above_zero(words: &'static str) -> Allowed {
    Allowed { low: 0.0, words, ..ANY }
}

const fn from_zero(words: &'static str) -> Allowed {
    Allowed { low: 0.0, low_closed: true, words, ..ANY }
}

impl Key {
    /// The keys that such a body may state, in the order of [`Key::ALL`].
    pub fn stated_by(holder: Holder) -> impl Iterator<Item = Key> {
        Key::ALL.into_iter().filter(move |key| key.may_state(holder))
    }

    pub fn may_state(self, holder: Holder) -> bool {
        match holder {
            Holder::Star => matches!(self, Key::Mass | Key::Radius | Key::Age),
            Holder::Planet => self != Key::Age,
            Holder::Companion => {
                !matches!(self, Key::Age | Key::SatelliteMassRatio | Key::SatelliteSemiMajorAxis)
            }
        }
    }

    /// The numbers that the key may have when such a body states it.
    pub fn allowed(self, holder: Holder) -> Allowed {
        match self {
            Key::Mass if holder == Holder::Star => above_zero("a mass above 0"),
            Key::Mass | Key::MinimumMass => from_zero("a mass of 0 or more"),
            Key::MassRatio => from_zero("0 or more (mass of the body / mass of the star)"),
            Key::RvSemiAmplitude => from_zero("a speed of 0 or more"),
            Key::Radius => from_zero("a radius of 0 or more"),
            Key::Age => above_zero("an age above 0"),
            Key::Period => above_zero("a period above 0"),
            Key::SemiMajorAxis => above_zero("a semi-major axis above 0 (a bound orbit)"),
            Key::Eccentricity => Allowed { high: 1.0, ..from_zero("0 <= eccentricity < 1 (a bound orbit)") },
            Key::ECosW | Key::ESinW | Key::SqrtECosW | Key::SqrtESinW => {
                Allowed { low: -1.0, high: 1.0, words: "-1 < component < 1 (a bound orbit)", ..ANY }
            }
            Key::Inclination => Allowed {
                high: std::f64::consts::PI,
                high_closed: true,
                ..from_zero("0 deg <= inclination <= 180 deg")
            },
            Key::ArgumentOfPericentre
            | Key::LongitudeOfPericentre
            | Key::MeanAnomaly
            | Key::MeanLongitude
            | Key::TrueAnomaly
            | Key::AscendingNode => Allowed { words: "any finite angle", ..ANY },
            Key::SatelliteMassRatio => Allowed {
                high: 1.0,
                high_closed: true,
                ..from_zero("0 <= ratio <= 1 (mass of the satellite / mass of the planet alone)")
            },
            Key::SatelliteSemiMajorAxis => above_zero("a semi-major axis above 0 (of the satellite's orbit)"),
            Key::PericentreTime | Key::TransitTime => Allowed { words: "any finite date", ..ANY },
        }
    }
}

/// What is wrong with a set of statements of which each alone is allowed.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
pub enum Unsound {
    #[error("the components of the pair give the eccentricity {eccentricity}")]
    PairUnbound { key: Key, eccentricity: f64 },
    #[error("{} at inclination 0 or 180 deg would need an infinite mass", key.word())]
    FaceOn { key: Key },
    #[error("{} without {} describes no satellite", key.word(), absent.word())]
    HalfSatellite { key: Key, absent: Key },
}

impl Unsound {
    /// The key to point at.
    pub fn key(&self) -> Key {
        match *self {
            Unsound::PairUnbound { key, .. }
            | Unsound::FaceOn { key }
            | Unsound::HalfSatellite { key, .. } => key,
        }
    }
}

/// Below this sine of the inclination an orbit counts as face-on.
const FACE_ON_SINE: f64 = 1e-9;

impl Stated {
    /// Whether statements that are allowed one by one also go together.
    ///
    /// Errors: a pair of shape components of 1 or more; a minimum mass or velocity semi-amplitude of an
    /// orbit seen face-on; one of the two keys of a satellite without the other.
    pub fn check_together(&self) -> Result<(), Unsound> {
        let eccentricity = self.eccentricity();
        if let Some(pair) = self.pair()
            && !Key::Eccentricity.allowed(Holder::Planet).contains(eccentricity)
        {
            return Err(Unsound::PairUnbound { key: pair.keys().0, eccentricity });
        }
        self.check_satellite()?;
        let sine = self.value(Key::Inclination).map_or(1.0, f64::sin);
        let masses = self.iter().find(|(key, _)| {
            key.group() == Group::Mass && matches!(key, Key::MinimumMass | Key::RvSemiAmplitude)
        });
        match masses {
            Some((key, measured)) if sine.abs() < FACE_ON_SINE && measured.value > 0.0 => {
                Err(Unsound::FaceOn { key })
            }
            _ => Ok(()),
        }
    }

    fn check_satellite(&self) -> Result<(), Unsound> {
        let (mass, size) = (Key::SatelliteMassRatio, Key::SatelliteSemiMajorAxis);
        match (self.get(mass), self.get(size)) {
            (Some(_), None) => Err(Unsound::HalfSatellite { key: mass, absent: size }),
            (None, Some(_)) => Err(Unsound::HalfSatellite { key: size, absent: mass }),
            _ => Ok(()),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ranges_refuse_what_is_no_number() {
        for key in Key::ALL {
            for holder in [Holder::Star, Holder::Planet, Holder::Companion] {
                let allowed = key.allowed(holder);
                for bad in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
                    assert!(!allowed.contains(bad), "{key:?} takes {bad}");
                }
                assert!(!allowed.words.is_empty());
            }
        }
        assert!(!Key::Eccentricity.allowed(Holder::Planet).contains(1.0));
        assert!(Key::Eccentricity.allowed(Holder::Planet).contains(0.0));
        assert!(!Key::Period.allowed(Holder::Planet).contains(0.0));
        assert!(Key::Mass.allowed(Holder::Planet).contains(0.0));
        assert!(!Key::Mass.allowed(Holder::Star).contains(0.0));
    }

    #[test]
    fn clip_stays_inside() {
        let e = Key::Eccentricity.allowed(Holder::Planet);
        assert_eq!(e.clip(-0.04, 0.05), 0.0);
        assert!(e.contains(e.clip(1.4, 0.9)));
        let period = Key::Period.allowed(Holder::Planet);
        assert!(period.contains(period.clip(-3.0, 12.0)));
        assert_eq!(period.clip(9.0, 12.0), 9.0);
    }
}
