//! Statements → masses and orbits → a state at the epoch.

use super::convert::{mass_parameters, settled_order, star_centred_in_order};
use super::masses::{self, Solved};
use super::outline::Outline;
use super::{Configuration, CoordsError, Elements, Planet, elements_in};
use crate::system::{Frame, Key, System};
use crate::units;

/// One concrete set of masses and orbits from what was stated.
///
/// Masses from `mass`, `minimum_mass` (over sin i), `mass_ratio` (times the star's mass) or
/// `rv_semi_amplitude`; sizes by n² a³ = μ with the mass parameter of the file's frame; angles and phases
/// as [`crate::system::Convention`] says. Left out: eccentricity, argument, node and phase are 0, the
/// inclination is 90°. A radius not stated is that of a body with Jupiter's mean density, the star's that
/// of one with the Sun's (both from the nominal values of IAU 2015 Resolution B3).
///
/// Whether planets touch each other or the star is not asked here: see [`super::check_start`].
/// Errors: [`CoordsError`], naming the planet.
pub fn configure(system: &System) -> Result<Configuration, CoordsError> {
    let outlines = system.planets.iter().map(Outline::read).collect::<Result<Vec<_>, _>>()?;
    let solved = masses::solve(system, &outlines)?;
    let elements = stated_elements(system, &outlines, &solved)?;
    let star_gm = masses::star_gm(system)?;
    let frame = system.convention.elements;
    let (pos, vel) = star_centred_in_order(frame, &solved.order, star_gm, &solved.gm, &elements);
    let planets = system
        .planets
        .iter()
        .enumerate()
        .map(|(index, body)| Planet {
            name: body.name.clone(),
            gm: solved.gm[index],
            radius_au: body.stated.value(Key::Radius).unwrap_or_else(|| planet_radius_au(solved.gm[index])),
            position_au: pos[index],
            velocity_au_day: vel[index],
            elements: elements[index],
        })
        .collect();
    let star_radius_au = system.star.stated.value(Key::Radius).unwrap_or_else(|| star_radius_au(star_gm));
    Ok(Configuration { star_gm, star_radius_au, frame, planets })
}

fn stated_elements(
    system: &System,
    outlines: &[Outline],
    solved: &Solved,
) -> Result<Vec<Elements>, CoordsError> {
    let convention = &system.convention;
    system
        .planets
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
                gm: body.gm,
                radius_au: body.radius_au,
                position_au: body.position_au,
                velocity_au_day: body.velocity_au_day,
                elements,
            })
            .collect();
        Configuration { star_gm, star_radius_au, frame: Frame::Astrocentric, planets }
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
