//! Moving a system along an axis.

use super::{Axis, BodyRef, Measured, Quantity, SetError, Spacing, System, Target};
use crate::units::Unit;

/// Why a system cannot be moved to a place of an axis.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum VaryError {
    #[error(transparent)]
    Set(#[from] SetError),
    #[error("{body}.{key} is not stated, so a factor or a ratio has nothing to act on")]
    NotStated { body: String, key: &'static str },
    #[error("{body}.{key} would be {value} (allowed: {allowed})")]
    OutOfRange { body: String, key: &'static str, value: String, allowed: &'static str },
}

impl Axis {
    /// The place of cell `index` on the axis, in the axis' unit: `from` for the first, `to` for the last.
    pub fn at(&self, index: usize) -> f64 {
        if index == 0 || self.cells < 2 {
            return self.from;
        }
        if index + 1 >= self.cells {
            return self.to;
        }
        let part = index as f64 / (self.cells - 1) as f64;
        match self.spacing {
            Spacing::Linear => self.from + (self.to - self.from) * part,
            Spacing::Log => (self.from.ln() + (self.to / self.from).ln() * part).exp(),
        }
    }

    /// The number that `body` (a planet or the star) gets at place `x` of the axis, in inner units.
    ///
    /// A factor acts on the number stated in `stated`; a ratio acts on the other key as it is in `system`, so an
    /// axis that moves that key must be applied first.
    fn number(&self, x: f64, body: &BodyRef, system: &System, stated: &System) -> Result<f64, VaryError> {
        let value_of = |system: &System, target: &Target| {
            let bodies = system.bodies(&target.body);
            bodies.first().and_then(|b| b.stated.value(target.key)).ok_or_else(|| VaryError::NotStated {
                body: system.body_word(&target.body).to_string(),
                key: target.key.word(),
            })
        };
        match &self.quantity {
            Quantity::Value => Ok(x * self.scale),
            Quantity::Factor => {
                let target = Target { body: body.clone(), key: self.target.key };
                Ok(x * value_of(stated, &target)?)
            }
            Quantity::RatioTo(other) => Ok(x * value_of(system, other)?),
        }
    }

    /// Moves `system` to place `x` (in the axis' unit); `stated` is the system as the file states it.
    ///
    /// Errors: `Set` where the shapes do not mix, `NotStated` where a factor or ratio acts on nothing,
    /// `OutOfRange` where the key may not have that number.
    pub fn apply(&self, x: f64, system: &mut System, stated: &System) -> Result<(), VaryError> {
        let bodies: Vec<BodyRef> = match &self.target.body {
            BodyRef::All => (0..system.planets.len()).map(BodyRef::Planet).collect(),
            one => vec![one.clone()],
        };
        for body in bodies {
            let value = self.number(x, &body, system, stated)?;
            self.check(value, &body, stated)?;
            let unit = self.unit_word(&body, stated);
            let target = Target { body, key: self.target.key };
            system.set(&target, Measured::exact(value, unit))?;
        }
        Ok(())
    }

    fn check(&self, value: f64, body: &BodyRef, stated: &System) -> Result<(), VaryError> {
        let allowed = self.target.key.allowed(body.holder());
        if allowed.contains(value) {
            return Ok(());
        }
        let word = self.unit_word(body, stated);
        let unit = Unit::from_word(word).map_or(1.0, |unit| unit.inner);
        Err(VaryError::OutOfRange {
            body: stated.body_word(body).to_string(),
            key: self.target.key.word(),
            value: format!("{} {word}", value / unit).trim_end().to_string(),
            allowed: allowed.words,
        })
    }

    /// The axis' own unit, or for factors and ratios the unit of the statement that moves (else the inner one).
    fn unit_word(&self, body: &BodyRef, stated: &System) -> &'static str {
        if self.quantity == Quantity::Value {
            return self.unit;
        }
        let key = self.target.key;
        let moving = stated.bodies(body).first().and_then(|b| b.stated.get(key)).map(|m| m.unit);
        let inner = || Unit::of(key.dimension()).find(|unit| unit.inner == 1.0).map_or("", |unit| unit.word);
        moving.unwrap_or_else(inner)
    }
}
