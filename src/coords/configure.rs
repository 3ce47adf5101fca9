//! Statements → masses and orbits → a state at the epoch.

use super::convert::{mass_parameters, settled_order, star_centred_in_order};
use super::masses::{self, Solved};
use super::outline::Outline;
use super::{BodyKind, Configuration, CoordsError, Elements, Planet, StarOblateness, Terms, elements_in};
use crate::system::{Body, COMPANION, Frame, Key, System, satellite_strength_au2};
use crate::units;

/// One concrete set of masses and orbits from what was stated.
///
/// Masses from `mass`, `minimum_mass` (over sin i), `mass_ratio` (times the star's mass) or
/// `rv_semi_amplitude`; sizes by n² a³ = μ with the mass parameter of the file's frame; angles and phases
/// as [`crate::system::Convention`] says. Left out: eccentricity, argument, node and phase are 0, the
/// inclination is 90°. A radius not stated is that of a body with Jupiter's mean density, that of the star and of
/// a companion with the Sun's (both from the nominal values of IAU 2015 Resolution B3).
///
/// Whether planets touch each other or a star is not asked here: see [`super::check_start`].
/// Errors: [`CoordsError`], naming the body (a companion by [`COMPANION`]).
pub fn configure(system: &System) -> Result<Configuration, CoordsError> {
    let cast = Cast::of(system);
    let bodies = cast.bodies(system);
    let outlines = bodies.iter().map(|body| Outline::read(body)).collect::<Result<Vec<_>, _>>()?;
    let solved = masses::solve(system, &bodies, &outlines)?;
    let frame = system.convention.elements;
    check_frame(system)?;
    let elements = stated_elements(system, &bodies, &outlines, &solved)?;
    let star_gm = masses::star_gm(system)?;
    let (pos, vel) = star_centred_in_order(frame, &solved.order, star_gm, &solved.gm, &elements);
    let planet = |(index, body): (usize, &Body)| {
        let is_planet = index < system.planets.len();
        let gm = solved.gm[index];
        let density = if is_planet { planet_radius_au } else { star_radius_au };
        Ok(Planet {
            name: body.name.clone(),
            kind: if is_planet { BodyKind::Planet } else { BodyKind::Companion },
            gm,
            radius_au: body.stated.value(Key::Radius).unwrap_or_else(|| density(gm)),
            position_au: pos[index],
            velocity_au_day: vel[index],
            elements: elements[index],
            satellite_k_au2: satellite(body)?,
        })
    };
    let planets = system.orbiting().enumerate().map(planet).collect::<Result<Vec<_>, CoordsError>>()?;
    let star_radius_au = system.star.stated.value(Key::Radius).unwrap_or_else(|| star_radius_au(star_gm));
    Ok(Configuration { star_gm, star_radius_au, frame, planets, terms: terms(system, star_radius_au) })
}

/// The companion under the word that messages call it by, whatever its name.
pub(super) struct Cast(Option<Body>);

impl Cast {
    pub(super) fn of(system: &System) -> Cast {
        Cast(system.companion.as_ref().map(|body| Body { name: COMPANION.to_string(), ..body.clone() }))
    }

    /// In the order of [`System::orbiting`].
    pub(super) fn bodies<'a>(&'a self, system: &'a System) -> Vec<&'a Body> {
        system.planets.iter().chain(&self.0).collect()
    }
}

/// Elements about the star have no meaning for planets that circle a pair, barycentric ones none for the pair.
fn check_frame(system: &System) -> Result<(), CoordsError> {
    let frame = system.convention.elements;
    if system.companion.is_none() || frame == Frame::Jacobi {
        return Ok(());
    }
    if frame == Frame::Barycentric {
        return Err(CoordsError::BarycentricCompanion);
    }
    match system.planets_around_pair().first() {
        Some(planet) => Err(CoordsError::CirclesPair { planet: system.planets[*planet].name.clone() }),
        None => Ok(()),
    }
}

fn satellite(body: &Body) -> Result<Option<f64>, CoordsError> {
    let (mass, size) = (Key::SatelliteMassRatio, Key::SatelliteSemiMajorAxis);
    let half = |given: Key, missing: Key| {
        let planet = body.name.clone();
        Err(CoordsError::HalfSatellite { planet, given: given.word(), missing: missing.word() })
    };
    match (body.stated.value(mass), body.stated.value(size)) {
        (None, None) => Ok(None),
        (Some(_), None) => half(mass, size),
        (None, Some(_)) => half(size, mass),
        (Some(ratio), Some(axis_au)) => Ok(Some(satellite_strength_au2(ratio, axis_au))),
    }
}

fn terms(system: &System, star_radius_au: f64) -> Terms {
    let oblateness = system.physics.oblateness.map(|star| StarOblateness {
        j2: star.j2,
        radius_au: star.radius_au.unwrap_or(star_radius_au),
        pole: star.pole(),
    });
    Terms { relativity: system.physics.relativity, oblateness }
}

fn stated_elements(
    system: &System,
    bodies: &[&Body],
    outlines: &[Outline],
    solved: &Solved,
) -> Result<Vec<Elements>, CoordsError> {
    let convention = &system.convention;
    bodies
        .iter()
        .zip(outlines)
        .enumerate()
        .map(|(index, (body, outline))| {
            let semi_major_axis_au = solved.semi_major_axis_au[index];
            let mean_motion = (solved.mass_parameter[index] / semi_major_axis_au.powi(3)).sqrt();
            Ok(Elements {
                semi_major_axis_au,
                eccentricity: outline.eccentricity,
                inclination: outline.inclination,
                ascending_node: outline.ascending_node,
                argument_of_pericentre: outline.argument(convention),
                mean_anomaly: outline.mean_anomaly(body, convention, system.epoch_jd, mean_motion)?,
            })
        })
        .collect()
}

/// Radius of a planet of Jupiter's mean density, au.
fn planet_radius_au(gm: f64) -> f64 {
    units::JUPITER_RADIUS_M / units::AU_M * (gm / units::GM_JUPITER).cbrt()
}

/// Radius of a star of the Sun's mean density, au.
fn star_radius_au(gm: f64) -> f64 {
    units::SUN_RADIUS_M / units::AU_M * (gm / units::GM_SUN).cbrt()
}

/// One planet given by its state, for [`Configuration::from_states`].
#[derive(Clone, Debug, PartialEq)]
pub struct StatedState {
    pub name: String,
    /// G × mass, au³ day⁻².
    pub gm: f64,
    pub radius_au: f64,
    /// Relative to the star.
    pub position_au: [f64; 3],
    pub velocity_au_day: [f64; 3],
}

impl Configuration {
    /// A configuration that starts from Cartesian data; its elements are astrocentric.
    pub fn from_states(star_gm: f64, star_radius_au: f64, bodies: Vec<StatedState>) -> Configuration {
        let gm: Vec<f64> = bodies.iter().map(|body| body.gm).collect();
        let pos: Vec<[f64; 3]> = bodies.iter().map(|body| body.position_au).collect();
        let vel: Vec<[f64; 3]> = bodies.iter().map(|body| body.velocity_au_day).collect();
        let elements = elements_in(Frame::Astrocentric, star_gm, &gm, &pos, &vel);
        let planets = bodies
            .into_iter()
            .zip(elements)
            .map(|(body, elements)| Planet {
                name: body.name,
                kind: BodyKind::Planet,
                gm: body.gm,
                radius_au: body.radius_au,
                position_au: body.position_au,
                velocity_au_day: body.velocity_au_day,
                elements,
                satellite_k_au2: None,
            })
            .collect();
        Configuration {
            star_gm,
            star_radius_au,
            frame: Frame::Astrocentric,
            planets,
            terms: Terms::default(),
        }
    }

    /// Periods of the elements in the configuration's own frame, day; none for unbound planets.
    pub fn periods_day(&self) -> Vec<Option<f64>> {
        self.periods_of(self.frame, &self.planets.iter().map(|planet| planet.elements).collect::<Vec<_>>())
    }

    /// Periods of elements of these planets in `frame`, day; none for unbound planets.
    pub fn periods_of(&self, frame: Frame, elements: &[Elements]) -> Vec<Option<f64>> {
        let gm: Vec<f64> = self.planets.iter().map(|planet| planet.gm).collect();
        let order = settled_order(frame, self.star_gm, &gm, elements);
        mass_parameters(frame, &order, self.star_gm, &gm)
            .into_iter()
            .zip(elements)
            .map(|(parameter, elements)| elements.period_day(parameter))
            .collect()
    }

    /// Osculating elements of every planet in a frame, from the states.
    pub fn elements_in(&self, frame: Frame) -> Vec<Elements> {
        let gm: Vec<f64> = self.planets.iter().map(|planet| planet.gm).collect();
        let pos: Vec<[f64; 3]> = self.planets.iter().map(|planet| planet.position_au).collect();
        let vel: Vec<[f64; 3]> = self.planets.iter().map(|planet| planet.velocity_au_day).collect();
        elements_in(frame, self.star_gm, &gm, &pos, &vel)
    }
}
