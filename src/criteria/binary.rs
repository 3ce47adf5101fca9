//! How far planets must stay from a second star.

use super::OutOfDomain;
use super::domain::Domain;
use super::neighbours::mutual_inclination;
use crate::coords::{Configuration, Orbit};
use crate::units::DEGREE;

/// Tilt of a planet's orbit to the binary's up to which it counts as coplanar for Holman & Wiegert, deg; ours.
const COPLANAR_DEG: f64 = 30.0;

/// Critical semi-major axis and its formal error, in units of the binary's semi-major axis.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct BinaryLimit {
    pub axis_ratio: f64,
    /// From the printed errors of the coefficients as if independent (they are correlated, so it is an upper figure).
    pub error: f64,
}

/// One term of a fitted polynomial: coefficient, its standard error, powers of e and μ.
type Term = (f64, f64, i32, i32);

/// Holman & Wiegert (1999), eq. 1; coefficients seen quoted, errors from memory.
const CIRCUMSTELLAR: [Term; 6] = [
    (0.464, 0.006, 0, 0),
    (-0.380, 0.010, 0, 1),
    (-0.631, 0.034, 1, 0),
    (0.586, 0.061, 1, 1),
    (0.150, 0.041, 2, 0),
    (-0.198, 0.074, 2, 1),
];
/// Holman & Wiegert (1999), eq. 3; coefficients seen quoted, errors from memory.
const CIRCUMBINARY: [Term; 7] = [
    (1.60, 0.04, 0, 0),
    (5.10, 0.05, 1, 0),
    (-2.22, 0.11, 2, 0),
    (4.12, 0.09, 0, 1),
    (-4.27, 0.17, 1, 1),
    (-5.09, 0.11, 0, 2),
    (4.61, 0.36, 2, 2),
];

fn polynomial(terms: &[Term], eccentricity: f64, mu: f64) -> BinaryLimit {
    let basis = |term: &Term| eccentricity.powi(term.2) * mu.powi(term.3);
    BinaryLimit {
        axis_ratio: terms.iter().map(|term| term.0 * basis(term)).sum(),
        error: terms.iter().map(|term| (term.1 * basis(term)).powi(2)).sum::<f64>().sqrt(),
    }
}

/// Largest stable orbit about one star of a binary (S-type), as a/a_binary.
///
/// 0.464 − 0.380 μ − 0.631 e + 0.586 μe + 0.150 e² − 0.198 μe²; μ = m_other/(m_own + m_other). Circular prograde coplanar
/// test particles that lasted 10⁴ binary periods. Errors: [`OutOfDomain`] unless 0.1 ≤ μ ≤ 0.9 and 0 ≤ e ≤ 0.8.
/// Source: Holman & Wiegert (1999), eq. 1.
pub fn circumstellar_limit(mu: f64, eccentricity: f64) -> Result<BinaryLimit, OutOfDomain> {
    let domain = Domain("the S-type limit of Holman & Wiegert (1999)");
    domain.need((0.1..=0.9).contains(&mu), "mu", mu, "0.1 <= mu <= 0.9")?;
    domain.need((0.0..=0.8).contains(&eccentricity), "e of the binary", eccentricity, "0 <= e <= 0.8")?;
    Ok(polynomial(&CIRCUMSTELLAR, eccentricity, mu))
}

/// Smallest stable orbit around both stars of a binary (P-type), as a/a_binary.
///
/// 1.60 + 5.10 e − 2.22 e² + 4.12 μ − 4.27 eμ − 5.09 μ² + 4.61 e²μ²; μ = m₂/(m₁ + m₂) of the lighter star. Islands of
/// instability outside are possible. Errors: [`OutOfDomain`] unless 0.1 ≤ μ ≤ 0.5 and 0 ≤ e ≤ 0.7.
/// Source: Holman & Wiegert (1999), eq. 3.
pub fn circumbinary_limit(mu: f64, eccentricity: f64) -> Result<BinaryLimit, OutOfDomain> {
    let domain = Domain("the P-type limit of Holman & Wiegert (1999)");
    domain.need((0.1..=0.5).contains(&mu), "mu", mu, "0.1 <= mu <= 0.5")?;
    domain.need((0.0..=0.7).contains(&eccentricity), "e of the binary", eccentricity, "0 <= e <= 0.7")?;
    Ok(polynomial(&CIRCUMBINARY, eccentricity, mu))
}

/// Smallest stable pericentre of the outer orbit of a hierarchical triple, in units of the inner semi-major axis.
///
/// 2.8 [(1 + q)(1 + e)/√(1 − e)]^{2/5} (1 − 0.3 i/180°), q = m_outer/(total mass of the inner pair), e of the outer orbit,
/// i the mutual inclination in rad. Errors: [`OutOfDomain`] unless 0 < q ≤ 5, 0 ≤ e < 1 and 0 ≤ i ≤ π.
/// Source: Mardling & Aarseth (2001); the formula and its range of q from memory.
pub fn hierarchical_limit(q: f64, eccentricity: f64, mutual_inclination: f64) -> Result<f64, OutOfDomain> {
    let domain = Domain("the limit of Mardling & Aarseth (2001)");
    domain.need(q > 0.0 && q <= 5.0, "q", q, "0 < q <= 5")?;
    domain.need((0.0..1.0).contains(&eccentricity), "e of the outer orbit", eccentricity, "0 <= e < 1")?;
    let half_turn = std::f64::consts::PI;
    let tilt = (0.0..=half_turn).contains(&mutual_inclination);
    domain.need(tilt, "mutual inclination (rad)", mutual_inclination, "0 <= i <= pi")?;
    let strength = (1.0 + q) * (1.0 + eccentricity) / (1.0 - eccentricity).sqrt();
    Ok(2.8 * strength.powf(0.4) * (1.0 - 0.3 * mutual_inclination / half_turn))
}

/// A critical semi-major axis of one planet beside a second star.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CriticalAxis {
    pub au: f64,
    /// Formal error of the fit, where one is published.
    pub error_au: Option<f64>,
    /// How far on the stable side the planet is, as a ratio of semi-major axes: above 1 stable.
    pub margin: f64,
}

/// What both fits say about one planet; each refuses outside its domain.
#[derive(Clone, Debug, PartialEq)]
pub struct PlanetLimits {
    /// Index into `Configuration::planets`.
    pub planet: usize,
    /// Around both stars (P-type) or around the star (S-type).
    pub circles_pair: bool,
    pub semi_major_axis_au: f64,
    pub holman_wiegert: Result<CriticalAxis, OutOfDomain>,
    pub mardling_aarseth: Result<CriticalAxis, OutOfDomain>,
}

/// The limits of every planet beside a companion, in the order of the planets; empty without one.
///
/// From osculating orbits about what each body circles ([`Configuration::orbits`]). S-type: the planet is stable inside
/// a_c = f a_binary (Holman & Wiegert) and inside a_c = a_binary (1 − e_binary)/f with star and planet as the inner pair
/// (Mardling & Aarseth). P-type: outside a_c = f a_binary and outside a_c = f a_binary/(1 − e_planet) with the stars as
/// the inner pair. Holman & Wiegert's planets were coplanar with the binary: refused beyond 30° (ours).
pub fn binary_limits(configuration: &Configuration) -> Vec<PlanetLimits> {
    let Some(companion) = configuration.companion_index() else { return Vec::new() };
    let orbits = configuration.orbits();
    let of = |planet: usize| {
        let beside = Beside {
            star_gm: configuration.star_gm,
            companion_gm: configuration.planets[companion].gm,
            planet_gm: configuration.planets[planet].gm,
            binary: orbits[companion],
            own: orbits[planet],
        };
        let circles_pair = configuration.circles_pair(planet);
        let (holman_wiegert, mardling_aarseth) =
            if circles_pair { beside.outside() } else { beside.inside() };
        let semi_major_axis_au = orbits[planet].elements.semi_major_axis_au;
        PlanetLimits { planet, circles_pair, semi_major_axis_au, holman_wiegert, mardling_aarseth }
    };
    configuration.planet_indices().map(of).collect()
}

type Said = Result<CriticalAxis, OutOfDomain>;

/// A planet, a star and its companion.
struct Beside {
    star_gm: f64,
    companion_gm: f64,
    planet_gm: f64,
    binary: Orbit,
    own: Orbit,
}

impl Beside {
    fn tilt(&self) -> f64 {
        mutual_inclination(&self.own.elements, &self.binary.elements)
    }

    /// Orbits that are not ellipses have no axis to compare, tilted ones are not those of Holman & Wiegert.
    fn coplanar(&self) -> Result<(), OutOfDomain> {
        let domain = Domain("the limit of Holman & Wiegert (1999)");
        let eccentricity = self.own.elements.eccentricity;
        domain.need((0.0..1.0).contains(&eccentricity), "e of the planet", eccentricity, "bound planets")?;
        let tilt_deg = self.tilt() / DEGREE;
        let allowed = "nearly coplanar prograde orbits, here up to 30 deg";
        domain.need(tilt_deg <= COPLANAR_DEG, "mutual inclination (deg)", tilt_deg, allowed)
    }

    /// S-type: the critical axis is an upper limit.
    fn inside(&self) -> (Said, Said) {
        let (binary, own) = (&self.binary.elements, &self.own.elements);
        let critical = |au: f64, error_au| CriticalAxis { au, error_au, margin: au / own.semi_major_axis_au };
        let mu = self.companion_gm / (self.star_gm + self.companion_gm);
        let fit = self.coplanar().and_then(|()| circumstellar_limit(mu, binary.eccentricity)).map(|limit| {
            let size = binary.semi_major_axis_au;
            critical(limit.axis_ratio * size, Some(limit.error * size))
        });
        let q = self.companion_gm / (self.star_gm + self.planet_gm);
        let triple = hierarchical_limit(q, binary.eccentricity, self.tilt())
            .map(|limit| critical(binary.pericentre_au() / limit, None));
        (fit, triple)
    }

    /// P-type: the critical axis is a lower limit.
    fn outside(&self) -> (Said, Said) {
        let (binary, own) = (&self.binary.elements, &self.own.elements);
        let critical = |au: f64, error_au| CriticalAxis { au, error_au, margin: own.semi_major_axis_au / au };
        let stars = self.star_gm + self.companion_gm;
        let mu = self.companion_gm.min(self.star_gm) / stars;
        let fit = self.coplanar().and_then(|()| circumbinary_limit(mu, binary.eccentricity)).map(|limit| {
            let size = binary.semi_major_axis_au;
            critical(limit.axis_ratio * size, Some(limit.error * size))
        });
        let triple = hierarchical_limit(self.planet_gm / stars, own.eccentricity, self.tilt())
            .map(|limit| critical(limit * binary.semi_major_axis_au / (1.0 - own.eccentricity), None));
        (fit, triple)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// By hand at corners where the polynomial is short: e = 0; μ = 0.5: 0.464 − 0.19; 1.6 + 2.06 − 1.2725.
    #[test]
    fn by_hand() {
        assert!((circumstellar_limit(0.5, 0.0).unwrap().axis_ratio - 0.274).abs() < 1e-15);
        assert!((circumbinary_limit(0.5, 0.0).unwrap().axis_ratio - 2.3875).abs() < 1e-15);
        let error = circumstellar_limit(0.5, 0.0).unwrap().error;
        assert!((error - 0.006f64.hypot(0.005)).abs() < 1e-15);
        assert!((hierarchical_limit(1e-300, 0.0, 0.0).unwrap() - 2.8).abs() < 1e-15);
        let retrograde = hierarchical_limit(1.0, 0.3, std::f64::consts::PI).unwrap();
        assert!((retrograde / hierarchical_limit(1.0, 0.3, 0.0).unwrap() - 0.7).abs() < 1e-15);
    }

    #[test]
    fn outside_its_domain_it_refuses() {
        assert!(circumstellar_limit(0.05, 0.1).is_err() && circumstellar_limit(0.5, 0.81).is_err());
        assert!(circumbinary_limit(0.6, 0.1).is_err() && circumbinary_limit(0.5, 0.71).is_err());
        assert!(hierarchical_limit(0.0, 0.0, 0.0).is_err() && hierarchical_limit(1.0, 1.0, 0.0).is_err());
        assert!(hierarchical_limit(1.0, 0.0, 4.0).is_err() && circumbinary_limit(f64::NAN, 0.0).is_err());
        let words = circumstellar_limit(0.05, 0.1).unwrap_err().to_string();
        assert_eq!(
            words,
            "the S-type limit of Holman & Wiegert (1999) says nothing for mu = 0.05; it holds for 0.1 <= mu <= 0.9"
        );
    }
}
