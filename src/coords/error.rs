//! What can go wrong between statements and states.

use crate::system::COMPANION;

/// "planet b", or "the companion".
fn told(name: &str) -> String {
    if name == COMPANION { format!("the {COMPANION}") } else { format!("planet {name}") }
}

/// "planets b and c", or "planet b and the companion".
fn both(first: &str, second: &str) -> String {
    if [first, second].contains(&COMPANION) {
        format!("{} and {}", told(first), told(second))
    } else {
        format!("planets {first} and {second}")
    }
}

/// A length with its unit: four digits, with an exponent only where plain decimals would be long.
fn length(length_au: f64) -> String {
    let decade = length_au.abs().log10().floor();
    if length_au == 0.0 {
        "0 au".to_string()
    } else if (-3.0..4.0).contains(&decade) {
        format!("{length_au:.*} au", (3.0 - decade) as usize)
    } else {
        format!("{length_au:.3e} au")
    }
}

/// Why a description is not a configuration, or not one that can start.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum CoordsError {
    #[error(
        "{} are at one place: {} apart, but their radii add up to \
         {}; change the phase or the size of one of them",
        both(first, second), length(*gap_au), length(*radii_au)
    )]
    Coincident { first: String, second: String, gap_au: f64, radii_au: f64 },
    #[error(
        "{} is inside the star: its pericentre is {}, but the star's radius is {}; lower the \
         eccentricity or enlarge the orbit",
        told(planet), length(*pericentre_au), length(*star_radius_au)
    )]
    InsideStar { planet: String, pericentre_au: f64, star_radius_au: f64 },
    #[error("the star's mass is not stated; give [star] mass, such as \"0.9 Msun\"")]
    StarMassMissing,
    #[error("the star's mass comes out as {found:e} au^3/day^2 (G × mass); it must be positive")]
    StarMass { found: f64 },
    #[error("{} states no mass; give one of mass, minimum_mass, mass_ratio, rv_semi_amplitude", told(planet))]
    MassMissing { planet: String },
    #[error(
        "{}: the mass comes out as {found:e} au^3/day^2 (G × mass) from {key}; it must be zero or \
         positive and finite",
        told(planet)
    )]
    Mass { planet: String, key: &'static str, found: f64 },
    #[error(
        "{}: no mass fits {key} together with the size of the orbit (after {rounds} rounds the \
         masses still change by {change:e}); state mass or minimum_mass instead",
        told(planet)
    )]
    MassNotSolvable { planet: String, key: &'static str, rounds: usize, change: f64 },
    #[error(
        "{}: {key} says nothing about the mass of an orbit seen face-on (inclination \
         {inclination_deg} deg, sin i = 0); state mass, or an inclination between 0 and 180 deg",
        told(planet)
    )]
    FaceOn { planet: String, key: &'static str, inclination_deg: f64 },
    #[error("{} states no size of its orbit; give period or semi_major_axis", told(planet))]
    SizeMissing { planet: String },
    #[error("{}: {key} is {found:e} (inner units); it must be positive and finite", told(planet))]
    Size { planet: String, key: &'static str, found: f64 },
    #[error(
        "{}: the eccentricity comes out as {found}, but a bound orbit needs 0 <= e < 1; if it is a \
         percentage, divide by 100",
        told(planet)
    )]
    NotBound { planet: String, found: f64 },
    #[error(
        "{} states {given} without {missing}; the two are one vector, give both or use \
         eccentricity and argument_of_pericentre",
        told(planet)
    )]
    HalfVector { planet: String, given: &'static str, missing: &'static str },
    #[error("{}: {key} is {found}; it must be a finite number", told(planet))]
    NotFinite { planet: String, key: &'static str, found: f64 },
    #[error(
        "{} states {key}, but the system has no epoch to count it from; give epoch, such as \
         \"2460310.5 JD\", or use mean_anomaly",
        told(planet)
    )]
    NoEpoch { planet: String, key: &'static str },
    #[error(
        "{} is outside the companion's orbit and circles both stars, where astrocentric elements have no meaning; \
         state Jacobi elements and write elements = \"jacobi\"",
        told(planet)
    )]
    CirclesPair { planet: String },
    #[error(
        "barycentric elements have no meaning with a companion; state Jacobi elements and write \
         elements = \"jacobi\""
    )]
    BarycentricCompanion,
    #[error("{} states {given} without {missing}; give both or none", told(planet))]
    HalfSatellite { planet: String, given: &'static str, missing: &'static str },
    #[error(
        "no order of the orbits by period fits their stated sizes and masses; state every size as a period"
    )]
    OrderNotSolvable,
}

impl CoordsError {
    /// The body it is about: its name, "companion" or "star"; of two the second; none for the whole system.
    pub fn body(&self) -> Option<&str> {
        match self {
            CoordsError::Coincident { second, .. } => Some(second),
            CoordsError::StarMassMissing | CoordsError::StarMass { .. } => Some("star"),
            CoordsError::BarycentricCompanion => Some(COMPANION),
            CoordsError::OrderNotSolvable => None,
            CoordsError::InsideStar { planet, .. }
            | CoordsError::MassMissing { planet }
            | CoordsError::Mass { planet, .. }
            | CoordsError::MassNotSolvable { planet, .. }
            | CoordsError::FaceOn { planet, .. }
            | CoordsError::SizeMissing { planet }
            | CoordsError::Size { planet, .. }
            | CoordsError::NotBound { planet, .. }
            | CoordsError::HalfVector { planet, .. }
            | CoordsError::NotFinite { planet, .. }
            | CoordsError::NoEpoch { planet, .. }
            | CoordsError::CirclesPair { planet }
            | CoordsError::HalfSatellite { planet, .. } => Some(planet),
        }
    }

    /// What is allowed instead.
    pub fn allowed(&self) -> &'static str {
        match self {
            CoordsError::Coincident { .. } => "bodies farther apart than the sum of their radii",
            CoordsError::InsideStar { .. } => "a pericentre outside the star",
            CoordsError::StarMassMissing => "a star with its mass",
            CoordsError::StarMass { .. } => "a mass above 0",
            CoordsError::Mass { .. } => "a mass of 0 or more",
            CoordsError::MassMissing { .. } => "one statement of the mass",
            CoordsError::MassNotSolvable { .. } => "statements that some mass fits",
            CoordsError::FaceOn { .. } => "an orbit that is not seen face-on, or the mass itself",
            CoordsError::SizeMissing { .. } => "one statement of the size",
            CoordsError::Size { .. } => "a size above 0",
            CoordsError::NotBound { .. } => "0 <= e < 1",
            CoordsError::HalfVector { .. } | CoordsError::HalfSatellite { .. } => "both keys of a pair",
            CoordsError::NotFinite { .. } => "a finite number",
            CoordsError::NoEpoch { .. } => "dates together with an epoch",
            CoordsError::CirclesPair { .. } | CoordsError::BarycentricCompanion => "Jacobi elements",
            CoordsError::OrderNotSolvable => "sizes and masses from which the periods follow",
        }
    }
}

#[cfg(test)]
mod tests {
    use super::length;

    #[test]
    fn lengths_are_plain_where_they_are_short() {
        for (length_au, words) in [
            (0.0, "0 au"),
            (0.00465047, "0.004650 au"),
            (1.25, "1.250 au"),
            (2.5e-5, "2.500e-5 au"),
            (f64::NAN, "NaN au"),
        ] {
            assert_eq!(length(length_au), words);
        }
    }
}
