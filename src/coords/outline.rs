//! The statements about one orbit that need no mass: its shape, its plane, and how its phase is counted.

use std::f64::consts::{FRAC_PI_2, PI};

use super::CoordsError;
use crate::kepler;
use crate::num::wrap_half_turn;
use crate::system::{Body, Convention, Key, Pericentre, Transit};

/// The keys that say where on its orbit a planet is, in the order they are looked for.
const PHASES: [Key; 5] =
    [Key::MeanAnomaly, Key::MeanLongitude, Key::TrueAnomaly, Key::PericentreTime, Key::TransitTime];

/// The keys that may give e and ω together.
pub(super) const VECTORS: [(Key, Key); 2] = [(Key::ECosW, Key::ESinW), (Key::SqrtECosW, Key::SqrtESinW)];

/// Shape and plane of an orbit; angles in radians.
///
/// What a file leaves out is 0, except the inclination, which is 90° (seen edge-on).
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Outline {
    pub eccentricity: f64,
    /// As stated: the planet's or the star's, as the convention says.
    pub stated_argument: f64,
    pub inclination: f64,
    pub ascending_node: f64,
}

impl Outline {
    pub(super) fn read(body: &Body) -> Result<Outline, CoordsError> {
        for (key, measured) in body.stated.iter() {
            if !measured.value.is_finite() {
                return Err(CoordsError::NotFinite {
                    planet: body.name.clone(),
                    key: key.word(),
                    found: measured.value,
                });
            }
        }
        let ascending_node = body.stated.value(Key::AscendingNode).unwrap_or(0.0);
        let (eccentricity, argument) = shape(body)?;
        if !(0.0..1.0).contains(&eccentricity) {
            return Err(CoordsError::NotBound { planet: body.name.clone(), found: eccentricity });
        }
        let stated_argument = argument
            .or_else(|| body.stated.value(Key::ArgumentOfPericentre))
            .or_else(|| {
                body.stated.value(Key::LongitudeOfPericentre).map(|longitude| longitude - ascending_node)
            })
            .unwrap_or(0.0);
        let inclination = body.stated.value(Key::Inclination).unwrap_or(FRAC_PI_2);
        Ok(Outline { eccentricity, stated_argument, inclination, ascending_node })
    }

    /// The planet's own argument of pericentre.
    pub(super) fn argument(&self, convention: &Convention) -> f64 {
        self.stated_argument + owner_turn(convention)
    }

    /// Mean anomaly at the epoch from whichever phase was stated (0 when none was).
    ///
    /// λ = Ω + ω + M with ω as stated (the star's when the file states the star's); times t give
    /// M = n (epoch − t) + M(t), with M = 0 at the pericentre and ν = ±90° − ω(planet) at a transit.
    /// `mean_motion` in rad day⁻¹. Errors: `NoEpoch`.
    pub(super) fn mean_anomaly(
        &self,
        body: &Body,
        convention: &Convention,
        epoch_jd: Option<f64>,
        mean_motion: f64,
    ) -> Result<f64, CoordsError> {
        let Some((key, value)) =
            PHASES.into_iter().find_map(|key| body.stated.value(key).map(|value| (key, value)))
        else {
            return Ok(0.0);
        };
        let since = || match epoch_jd {
            Some(epoch) => Ok(mean_motion * (epoch - value)),
            None => Err(CoordsError::NoEpoch { planet: body.name.clone(), key: key.word() }),
        };
        let mean_anomaly = match key {
            Key::MeanLongitude => value - self.ascending_node - self.stated_argument,
            Key::TrueAnomaly => kepler::mean_from_true(value, self.eccentricity),
            Key::PericentreTime => since()?,
            Key::TransitTime => since()? + self.mean_anomaly_at_transit(convention),
            _ => value,
        };
        Ok(wrap_half_turn(mean_anomaly))
    }

    pub(super) fn mean_anomaly_at_transit(&self, convention: &Convention) -> f64 {
        let in_front = match convention.transit {
            Transit::Plus90 => FRAC_PI_2,
            Transit::Minus90 => -FRAC_PI_2,
        };
        kepler::mean_from_true(in_front - self.argument(convention), self.eccentricity)
    }
}

/// What leads from the stated argument of pericentre to the planet's.
pub(super) fn owner_turn(convention: &Convention) -> f64 {
    match convention.pericentre {
        Pericentre::Planet => 0.0,
        Pericentre::Star => PI,
    }
}

/// The eccentricity and, when a vector was stated, its argument.
fn shape(body: &Body) -> Result<(f64, Option<f64>), CoordsError> {
    for (cos_key, sin_key) in VECTORS {
        let pair = (body.stated.value(cos_key), body.stated.value(sin_key));
        let half = |given: Key, missing: Key| CoordsError::HalfVector {
            planet: body.name.clone(),
            given: given.word(),
            missing: missing.word(),
        };
        let (cos, sin) = match pair {
            (None, None) => continue,
            (Some(_), None) => return Err(half(cos_key, sin_key)),
            (None, Some(_)) => return Err(half(sin_key, cos_key)),
            (Some(cos), Some(sin)) => (cos, sin),
        };
        let size = cos.hypot(sin);
        let eccentricity = if cos_key == Key::SqrtECosW { size * size } else { size };
        return Ok((eccentricity, Some(sin.atan2(cos))));
    }
    Ok((body.stated.value(Key::Eccentricity).unwrap_or(0.0), None))
}
