//! Forces beside the mutual pull of point masses, as a file states them.

/// What acts beside Newton's pull of point masses.
#[derive(Clone, Copy, Debug, PartialEq, Default)]
pub struct Physics {
    /// First post-Newtonian term of the star on each planet.
    pub relativity: bool,
    pub oblateness: Option<Oblateness>,
}

/// The star's second zonal harmonic, and how its equator lies.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Oblateness {
    /// J₂, dimensionless; positive for a flattened star.
    pub j2: f64,
    /// The radius that J₂ refers to, au; absent: the star's stated radius.
    pub radius_au: Option<f64>,
    /// Of the star's equator, counted as for an orbit: an orbit with these two angles lies in the equator. rad.
    pub inclination: f64,
    pub ascending_node: f64,
}

impl Oblateness {
    /// Unit vector along the star's pole, in the axes of the stated elements (x north, y east):
    /// (sin i sin Ω, −sin i cos Ω, cos i), the direction of the angular momentum of an orbit in the equator.
    pub fn pole(&self) -> [f64; 3] {
        let (sin_node, cos_node) = self.ascending_node.sin_cos();
        let (sin, cos) = self.inclination.sin_cos();
        [sin * sin_node, -sin * cos_node, cos]
    }
}

/// Strength K of a planet's averaged satellite, au²: the planet with its satellite feels −K GM r/r⁵ beside −GM r/r³.
///
/// K = (3/4) μ′ R² with μ′ = m₁ m₂/(m₁ + m₂)² = q/(1 + q)², q = `mass_ratio` = m₂/m₁ and R the satellite's
/// semi-major axis in au. It is the quadrupole of two points that circle each other in the plane of their common
/// orbit about M, averaged over both motions (⟨P₂⟩ = 1/4). A tilted or disturbed satellite has a little less: for
/// the Moon 0.95 of it (Quinn, Tremaine & Duncan 1991, from memory), which a smaller R expresses.
pub fn satellite_strength_au2(mass_ratio: f64, semi_major_axis_au: f64) -> f64 {
    let share = mass_ratio / ((1.0 + mass_ratio) * (1.0 + mass_ratio));
    0.75 * share * semi_major_axis_au * semi_major_axis_au
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_pole_is_the_angular_momentum_of_an_orbit_in_the_equator() {
        let star = |inclination, ascending_node| Oblateness {
            j2: 1e-7,
            radius_au: None,
            inclination,
            ascending_node,
        };
        // Seen from above: motion from north (x) to east (y) has its pole along z.
        assert_eq!(star(0.0, 0.7).pole(), [0.0, -0.0, 1.0]);
        // Edge-on with the node in the north: the body rises (z) there, x × z = −y.
        let pole = star(std::f64::consts::FRAC_PI_2, 0.0).pole();
        assert!(pole.iter().zip([0.0, -1.0, 0.0]).all(|(found, wanted)| (found - wanted).abs() < 1e-15));
    }

    /// Against the definition: the mean pull of M on two points of a circle, far away (R/r = 1e-3), less the pull on
    /// their centre. Higher orders add (R/r)² ≈ 1e-6 of it.
    #[test]
    fn the_strength_is_the_mean_of_a_slow_sum() {
        let (ratio, size, distance) = (0.3, 1e-3, 1.0_f64);
        let turns = 64;
        let mut mean = 0.0;
        for turn in 0..turns {
            let (sin, cos) = (std::f64::consts::TAU * f64::from(turn) / f64::from(turns)).sin_cos();
            let pull = |offset: f64| {
                let (x, y) = (distance + offset * cos, offset * sin);
                x / (x * x + y * y).powf(1.5)
            };
            let satellite = ratio / (1.0 + ratio);
            let both =
                (1.0 - satellite) * pull(-size * satellite) + satellite * pull(size * (1.0 - satellite));
            mean += (both - pull(0.0)) / f64::from(turns);
        }
        let expected = satellite_strength_au2(ratio, size);
        // The difference of pulls near 1 carries 64 roundings of 1e-16 against 1.3e-7.
        assert!((mean / expected - 1.0).abs() < 1e-5, "{mean} {expected}");
    }
}
