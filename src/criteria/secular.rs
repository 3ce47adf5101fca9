//! Laplace–Lagrange secular theory: the equations, linear in eccentricities and inclinations.

use super::domain::Domain;
use super::invariable::elements_to_pole;
use super::{OutOfDomain, invariable_elements, laplace_coefficient};
use crate::coords::{Configuration, Elements};
use crate::units::LIGHT;
use nalgebra::DMatrix;

/// Largest eccentricity and inclination (rad; 20°) for which the linear theory is used; ours.
const LARGEST_ECCENTRICITY: f64 = 0.3;
const LARGEST_INCLINATION: f64 = 0.349_065_850_398_865_9;

/// A planet as the secular theory sees it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SecularPlanet {
    /// G × mass, au³ day⁻².
    pub gm: f64,
    pub semi_major_axis_au: f64,
    pub mean_motion_rad_day: f64,
    pub eccentricity: f64,
    /// rad, as the three below.
    pub longitude_of_pericentre: f64,
    pub inclination: f64,
    pub ascending_node: f64,
}

/// The star's flattening; the reference plane must then be its equator.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Oblateness {
    pub j2: f64,
    pub radius_au: f64,
}

/// What the star adds to the motion of pericentres and nodes.
#[derive(Clone, Copy, Debug, PartialEq, Default)]
pub struct StarTerms {
    pub relativity: bool,
    pub oblateness: Option<Oblateness>,
}

/// The linear secular equations dz/dt = i A z and dζ/dt = i B ζ, z = e exp(iϖ), ζ = 2 sin(i/2) exp(iΩ).
#[derive(Clone, Debug, PartialEq)]
pub struct SecularSystem {
    pub(super) planets: Vec<SecularPlanet>,
    /// A, rad/day.
    pub pericentres: DMatrix<f64>,
    /// B, rad/day.
    pub nodes: DMatrix<f64>,
    /// Λ of each planet (times G: au⁵ day⁻³): ½ Λ (|z|² + |ζ|²) is the AMD to second order, and Λ^{1/2} makes A and B
    /// symmetric.
    pub(super) weight: Vec<f64>,
}

impl SecularSystem {
    /// The equations of a star and planets, in any order.
    ///
    /// A_jj = ¼ n_j Σ_k m_k/(m₀+m_j) αᾱ b_{3/2}^{(1)}, A_jk = −¼ n_j m_k/(m₀+m_j) αᾱ b_{3/2}^{(2)}, B_jj = −(the sum of A_jj),
    /// B_jk = ¼ n_j m_k/(m₀+m_j) αᾱ b_{3/2}^{(1)}, with αᾱ = (a_j/a_k)² when j is the inner one, else a_k/a_j. The star
    /// adds 3 n G m₀/(a c²) to A_jj, and ±(3/2) n J₂ (R/a)² to A_jj and B_jj.
    /// Errors: [`OutOfDomain`] unless masses are positive, e ≤ 0.3 and i ≤ 20° (linear theory; the bounds are ours) and
    /// no two axes are closer than a Laplace coefficient can be summed. It knows nothing of mean-motion resonances:
    /// near one it can be wrong by tens of percent (Jupiter and Saturn near 5:2: 22.5 for 28.2 arcsec/yr).
    /// Source: Murray & Dermott (1999), eqs. 7.9-7.10 (from memory), after Laplace and Lagrange.
    pub fn new(
        star_gm: f64,
        planets: &[SecularPlanet],
        star: StarTerms,
    ) -> Result<SecularSystem, OutOfDomain> {
        check(star_gm, planets)?;
        let count = planets.len();
        let mut pericentres = DMatrix::zeros(count, count);
        let mut nodes = DMatrix::zeros(count, count);
        for (j, planet) in planets.iter().enumerate() {
            for (k, other) in planets.iter().enumerate().filter(|(k, _)| *k != j) {
                let ratio = planet.semi_major_axis_au / other.semi_major_axis_au;
                let (alpha, square) =
                    if ratio < 1.0 { (ratio, ratio * ratio) } else { (1.0 / ratio, 1.0 / ratio) };
                let strength = 0.25 * planet.mean_motion_rad_day * other.gm / (star_gm + planet.gm) * square;
                let first = strength * laplace_coefficient(1.5, 1, alpha)?;
                pericentres[(j, j)] += first;
                pericentres[(j, k)] = -strength * laplace_coefficient(1.5, 2, alpha)?;
                nodes[(j, j)] -= first;
                nodes[(j, k)] = first;
            }
            pericentres[(j, j)] += relativistic_rad_day(star_gm, planet, star.relativity);
            let flattening = oblate_rad_day(planet, star.oblateness);
            pericentres[(j, j)] += flattening;
            nodes[(j, j)] -= flattening;
        }
        // u_j = n_j a_j/(m₀ + m_j): A_jk = u_j v_jk m_k with v symmetric.
        let weight = planets
            .iter()
            .map(|p| p.gm * (star_gm + p.gm) / (p.mean_motion_rad_day * p.semi_major_axis_au))
            .collect();
        Ok(SecularSystem { planets: planets.to_vec(), pericentres, nodes, weight })
    }

    /// The equations of a configuration, with the invariable plane as reference plane (osculating astrocentric elements).
    ///
    /// Errors: as [`SecularSystem::new`]; unbound planets too.
    pub fn of(configuration: &Configuration, relativity: bool) -> Result<SecularSystem, OutOfDomain> {
        let star = StarTerms { relativity, oblateness: None };
        SecularSystem::with(configuration, &invariable_elements(configuration), star)
    }

    /// The equations of a configuration with the star's terms that it states.
    ///
    /// The reference plane is the invariable one, or the equator of a star with J₂: only about its pole do the equations
    /// stay without a constant term, and only along it is the angular momentum kept. Errors: as [`SecularSystem::new`].
    pub fn of_stated(configuration: &Configuration) -> Result<SecularSystem, OutOfDomain> {
        let relativity = configuration.terms.relativity;
        let Some(star) = configuration.terms.oblateness else {
            return SecularSystem::of(configuration, relativity);
        };
        let oblateness = Some(Oblateness { j2: star.j2, radius_au: star.radius_au });
        let orbits = elements_to_pole(configuration, star.pole.into());
        SecularSystem::with(configuration, &orbits, StarTerms { relativity, oblateness })
    }

    fn with(
        configuration: &Configuration,
        orbits: &[Elements],
        star: StarTerms,
    ) -> Result<SecularSystem, OutOfDomain> {
        let planets: Vec<SecularPlanet> = orbits
            .iter()
            .zip(&configuration.planets)
            .map(|(orbit, planet)| SecularPlanet::of(configuration.star_gm, planet.gm, orbit))
            .collect();
        SecularSystem::new(configuration.star_gm, &planets, star)
    }
}

impl SecularPlanet {
    pub fn of(star_gm: f64, gm: f64, orbit: &Elements) -> SecularPlanet {
        SecularPlanet {
            gm,
            semi_major_axis_au: orbit.semi_major_axis_au,
            mean_motion_rad_day: ((star_gm + gm) / orbit.semi_major_axis_au.powi(3)).sqrt(),
            eccentricity: orbit.eccentricity,
            longitude_of_pericentre: orbit.longitude_of_pericentre(),
            inclination: orbit.inclination,
            ascending_node: orbit.ascending_node,
        }
    }
}

fn check(star_gm: f64, planets: &[SecularPlanet]) -> Result<(), OutOfDomain> {
    let domain = Domain("the secular theory of Laplace and Lagrange");
    domain.need(star_gm > 0.0, "the star's mass (G times it)", star_gm, "a star with mass")?;
    domain.need(!planets.is_empty(), "the number of planets", 0.0, "at least one planet")?;
    for planet in planets {
        let (e, i) = (planet.eccentricity, planet.inclination);
        domain.need(planet.gm > 0.0, "a planet's mass (G times it)", planet.gm, "planets with mass")?;
        domain.need((0.0..=LARGEST_ECCENTRICITY).contains(&e), "e", e, "0 <= e <= 0.3")?;
        domain.need((0.0..=LARGEST_INCLINATION).contains(&i), "i (rad)", i, "i <= 20 deg to the plane")?;
        let axis = planet.semi_major_axis_au;
        domain.need(axis > 0.0 && axis.is_finite(), "a (au)", axis, "a > 0")?;
        let motion = planet.mean_motion_rad_day;
        domain.need(motion > 0.0 && motion.is_finite(), "n (rad/day)", motion, "n > 0")?;
    }
    Ok(())
}

/// 3 n G m₀/(a c²): the first post-Newtonian term to lowest order in e. Einstein (1915).
fn relativistic_rad_day(star_gm: f64, planet: &SecularPlanet, on: bool) -> f64 {
    let rate = 3.0 * planet.mean_motion_rad_day * star_gm / (planet.semi_major_axis_au * LIGHT * LIGHT);
    if on { rate } else { 0.0 }
}

/// (3/2) n J₂ (R/a)²: to first order in J₂ and lowest in e and i; pericentres go forward by it, nodes back.
fn oblate_rad_day(planet: &SecularPlanet, oblateness: Option<Oblateness>) -> f64 {
    oblateness.map_or(0.0, |star| {
        1.5 * planet.mean_motion_rad_day * star.j2 * (star.radius_au / planet.semi_major_axis_au).powi(2)
    })
}
