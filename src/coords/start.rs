//! Whether a configuration can start at all.

use nalgebra::Vector3;

use super::{Configuration, CoordsError};
use crate::system::Frame;

/// Finds bodies that touch before anything moved: a planet whose astrocentric pericentre is below the star's
/// radius, or two planets closer than the sum of their radii.
///
/// Kept apart from [`super::configure()`], so that a cell of a survey can be judged lost where a single
/// configuration is refused. Errors: `InsideStar`, `Coincident`.
pub fn check_start(configuration: &Configuration) -> Result<(), CoordsError> {
    let planets = &configuration.planets;
    for (planet, elements) in planets.iter().zip(configuration.elements_in(Frame::Astrocentric)) {
        let pericentre_au = elements.pericentre_au();
        let distance_au = Vector3::from(planet.position_au).norm();
        // Asked this way round, so that what is not a number counts as inside.
        let outside = pericentre_au.min(distance_au) > configuration.star_radius_au;
        if !outside {
            return Err(CoordsError::InsideStar {
                planet: planet.name.clone(),
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
                    first: first.name.clone(),
                    second: second.name.clone(),
                    gap_au,
                    radii_au,
                });
            }
        }
    }
    Ok(())
}
