//! Whether a configuration can start at all.

use nalgebra::Vector3;

use super::{BodyKind, Configuration, CoordsError, Planet};
use crate::system::COMPANION;

/// Finds bodies that touch before anything moved: a body whose pericentre (of its orbit about what it circles) is
/// below the star's radius, or two bodies closer than the sum of their radii.
///
/// Kept apart from [`super::configure()`], so that a cell of a survey can be judged lost where a single
/// configuration is refused. Errors: `InsideStar`, `Coincident`.
pub fn check_start(configuration: &Configuration) -> Result<(), CoordsError> {
    let planets = &configuration.planets;
    for (planet, orbit) in planets.iter().zip(configuration.orbits()) {
        let pericentre_au = orbit.elements.pericentre_au();
        let distance_au = Vector3::from(planet.position_au).norm();
        // Asked this way round, so that what is not a number counts as inside.
        let outside = pericentre_au.min(distance_au) > configuration.star_radius_au;
        if !outside {
            return Err(CoordsError::InsideStar {
                planet: called(planet),
                pericentre_au,
                star_radius_au: configuration.star_radius_au,
            });
        }
    }
    for (index, first) in planets.iter().enumerate() {
        for second in &planets[index + 1..] {
            let gap_au = (Vector3::from(first.position_au) - Vector3::from(second.position_au)).norm();
            let radii_au = first.radius_au + second.radius_au;
            if gap_au <= radii_au {
                return Err(CoordsError::Coincident {
                    first: called(first),
                    second: called(second),
                    gap_au,
                    radii_au,
                });
            }
        }
    }
    Ok(())
}

/// The name, or the word by which messages call a companion.
fn called(body: &Planet) -> String {
    match body.kind {
        BodyKind::Planet => body.name.clone(),
        BodyKind::Companion => COMPANION.to_string(),
    }
}
