//! What a user should know before trusting a description, as values.

use std::fmt;

use serde::Serialize;

use crate::coords::Configuration;
use crate::criteria::{LOW_MASS_LIMIT, Neighbours};

/// A warning with the numbers it rests on.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Caveat {
    /// Closer than the limit for circular orbits of small mass.
    CloseSpacing { inner: String, outer: String, spacing_hill: f64, limit_hill: f64 },
    /// The inner apocentre reaches the outer pericentre.
    CrossingOrbits { inner: String, outer: String },
}

impl fmt::Display for Caveat {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Caveat::CloseSpacing { inner, outer, spacing_hill, limit_hill } => write!(
                f,
                "{inner} and {outer} are {spacing_hill:.2} mutual Hill radii apart; below {limit_hill:.2} even \
                 circular orbits may meet (Gladman 1993), unless a resonance protects them"
            ),
            Caveat::CrossingOrbits { inner, outer } => write!(
                f,
                "the orbits of {inner} and {outer} reach each other's distance from the star; only a resonance or \
                 aligned pericentres can keep the planets apart"
            ),
        }
    }
}

/// Everything worth a warning, from the inside out.
pub fn caveats(configuration: &Configuration, pairs: &[Neighbours]) -> Vec<Caveat> {
    let name = |planet: usize| configuration.planets[planet].name.clone();
    let mut found = Vec::new();
    for pair in pairs {
        let (inner, outer) = (name(pair.inner), name(pair.outer));
        if pair.spacing_hill < LOW_MASS_LIMIT {
            found.push(Caveat::CloseSpacing {
                inner: inner.clone(),
                outer: outer.clone(),
                spacing_hill: pair.spacing_hill,
                limit_hill: LOW_MASS_LIMIT,
            });
        }
        if pair.crossing {
            found.push(Caveat::CrossingOrbits { inner, outer });
        }
    }
    found
}
