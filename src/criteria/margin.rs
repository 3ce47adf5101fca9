//! How far a configuration is from the border that a criterion draws.

use super::domain::Domain;
use super::neighbours::{COPLANAR, mutual_inclination};
use super::{
    AmdPair, OutOfDomain, amd_budget, chaotic_zone, circumbinary_limit, circumstellar_limit,
    critical_relative_eccentricity, exact_hill_balance, first_order_overlap, hierarchical_limit,
    overlap_critical_amd, relative_eccentricity,
};
use crate::coords::{Configuration, Elements};
use crate::system::{Criterion, Frame};

/// Eccentricity up to which orbits count as circular for the overlap on circular orbits; ours.
const NEARLY_CIRCULAR: f64 = 0.1;
/// Of a planet beside or around two stars: the limits were found with circular coplanar orbits; the bounds are ours.
const CIRCULAR_BESIDE_TWO: f64 = 0.2;
const COPLANAR_BESIDE_TWO: f64 = std::f64::consts::FRAC_PI_6;

/// Signed distance of a configuration from the border of a criterion, dimensionless; positive on the quiet side.
///
/// What it counts is said by [`Criterion::margin_words`]; only its sign has a meaning of its own, and it is continuous where
/// the criterion is. Of several pairs or planets the least margin counts; pairs outside the domain say nothing.
/// Errors: [`OutOfDomain`] where nothing can be said. Besides each criterion's own domain: all but the last two are for
/// planets of one star; overlap of eccentric orbits and intersection need mutual inclinations up to 5°, overlap of circular
/// orbits e ≤ 0.1, the limits of Holman & Wiegert planets with e ≤ 0.2 within 30° of the binary's plane (bounds ours).
pub fn margin(criterion: Criterion, configuration: &Configuration) -> Result<f64, OutOfDomain> {
    match criterion {
        Criterion::Binary => return least(beside_two(configuration)?, |p| holman_wiegert(configuration, p)),
        Criterion::Hierarchy => {
            return least(beside_two(configuration)?, |p| mardling_aarseth(configuration, p));
        }
        _ => {}
    }
    let stars = if configuration.companion_index().is_some() { 2.0 } else { 1.0 };
    Domain(criterion.title()).need(stars < 2.0, "the number of stars", stars, "planets of one star")?;
    match criterion {
        Criterion::Hill => exact_hill_balance(configuration).map(|b| b.found / b.needed - 1.0),
        Criterion::AmdCollision => of_amd(configuration, |pair| Ok(pair.collision)),
        Criterion::AmdHill => of_amd(configuration, |pair| Ok(pair.hill)),
        Criterion::AmdOverlap => amd_overlap(configuration),
        Criterion::Crossing => least(pairs(criterion, configuration)?, |pair| Ok(pair.reach())),
        Criterion::Intersection => least(pairs(criterion, configuration)?, |pair| pair.intersection()),
        Criterion::CircularOverlap => least(pairs(criterion, configuration)?, |p| p.circular_overlap()),
        _ => least(pairs(criterion, configuration)?, |pair| pair.overlap()),
    }
}

/// The least of what is said; the first reason where nothing is.
fn least<T>(all: Vec<T>, each: impl Fn(&T) -> Result<f64, OutOfDomain>) -> Result<f64, OutOfDomain> {
    let mut found: Option<f64> = None;
    let mut reason = None;
    for one in &all {
        match each(one) {
            Ok(margin) => found = Some(found.map_or(margin, |least| least.min(margin))),
            Err(error) => reason = reason.or(Some(error)),
        }
    }
    let nobody = OutOfDomain {
        criterion: "a criterion on pairs",
        quantity: "the number of pairs",
        found: all.len() as f64,
        allowed: "at least one",
    };
    found.ok_or(reason.unwrap_or(nobody))
}

/// Two planets next to each other, inner first.
struct Pair {
    mass_ratio: [f64; 2],
    orbits: [Elements; 2],
}

/// Astrocentric, by semi-major axis.
fn pairs(criterion: Criterion, configuration: &Configuration) -> Result<Vec<Pair>, OutOfDomain> {
    let domain = Domain(criterion.title());
    let orbits = configuration.elements_in(Frame::Astrocentric);
    for orbit in &orbits {
        let bound = (0.0..1.0).contains(&orbit.eccentricity);
        domain.need(bound, "e", orbit.eccentricity, "0 <= e < 1")?;
    }
    let count = orbits.len();
    domain.need(count > 1, "the number of planets", count as f64, "two planets and more")?;
    let mut order: Vec<usize> = (0..count).collect();
    order.sort_by(|a, b| orbits[*a].semi_major_axis_au.total_cmp(&orbits[*b].semi_major_axis_au));
    let mass = |planet: usize| configuration.planets[planet].gm / configuration.star_gm;
    let pair =
        |w: &[usize]| Pair { mass_ratio: [mass(w[0]), mass(w[1])], orbits: [orbits[w[0]], orbits[w[1]]] };
    Ok(order.windows(2).map(pair).collect())
}

impl Pair {
    fn axes(&self) -> [f64; 2] {
        self.orbits.map(|orbit| orbit.semi_major_axis_au)
    }

    fn reach(&self) -> f64 {
        let [inner, outer] = &self.orbits;
        (outer.pericentre_au() - inner.apocentre_au()) / outer.semi_major_axis_au
    }

    fn need_coplanar(&self, criterion: Criterion) -> Result<(), OutOfDomain> {
        let tilt = mutual_inclination(&self.orbits[0], &self.orbits[1]);
        let words = "coplanar orbits (up to 0.0873 rad, 5 deg)";
        Domain(criterion.title()).need(tilt <= COPLANAR, "mutual inclination (rad)", tilt, words)
    }

    /// As in [`super::coplanar_orbits_cross`], which is its sign.
    fn intersection(&self) -> Result<f64, OutOfDomain> {
        self.need_coplanar(Criterion::Intersection)?;
        let [one, other] = &self.orbits;
        let width = |o: &Elements| o.semi_major_axis_au * (1.0 - o.eccentricity) * (1.0 + o.eccentricity);
        let (first, second) = (width(one), width(other));
        let (sin_one, cos_one) = one.longitude_of_pericentre().sin_cos();
        let (sin_other, cos_other) = other.longitude_of_pericentre().sin_cos();
        let along = second * one.eccentricity * cos_one - first * other.eccentricity * cos_other;
        let across = second * one.eccentricity * sin_one - first * other.eccentricity * sin_other;
        Ok(((first - second).abs() - along.hypot(across)) / (first + second))
    }

    /// Deck et al. (2013) for two planets; Wisdom (1980) where one of them has no mass.
    fn circular_overlap(&self) -> Result<f64, OutOfDomain> {
        let domain = Domain(Criterion::CircularOverlap.title());
        for orbit in &self.orbits {
            let e = orbit.eccentricity;
            domain.need(e <= NEARLY_CIRCULAR, "e", e, "nearly circular orbits (e <= 0.1)")?;
        }
        let [inner, outer] = self.axes();
        match self.mass_ratio {
            [mass, 0.0] => Ok((outer - inner) / inner - chaotic_zone(mass)?),
            [0.0, mass] => Ok((outer - inner) / outer - chaotic_zone(mass)?),
            [one, other] => Ok((outer - inner) / inner - first_order_overlap(one + other)?),
        }
    }

    fn overlap(&self) -> Result<f64, OutOfDomain> {
        self.need_coplanar(Criterion::Overlap)?;
        let critical = critical_relative_eccentricity(self.mass_ratio.iter().sum(), self.axes())?;
        Ok(critical - relative_eccentricity(&self.orbits[0], &self.orbits[1]))
    }
}

/// √ keeps the sign, so that a margin is as even in e as the AMD is in e².
fn signed_root(value: f64) -> f64 {
    value.signum() * value.abs().sqrt()
}

fn of_amd(
    configuration: &Configuration,
    critical: impl Fn(&AmdPair) -> Result<f64, OutOfDomain>,
) -> Result<f64, OutOfDomain> {
    let budget = amd_budget(configuration)?;
    least(budget.pairs, |(_, _, pair)| Ok(signed_root(critical(pair)?) - pair.relative.sqrt()))
}

fn amd_overlap(configuration: &Configuration) -> Result<f64, OutOfDomain> {
    let mass = |planet: usize| configuration.planets[planet].gm / configuration.star_gm;
    let budget = amd_budget(configuration)?;
    least(budget.pairs, |(inner, outer, pair)| {
        let total = mass(*inner) + mass(*outer);
        // Outside the domain the criterion itself says why.
        let overlap = pair.overlap.map_or_else(|| overlap_critical_amd(0.5, 1.0, total), Ok)?;
        Ok(signed_root(overlap.min(pair.collision)) - pair.relative.sqrt())
    })
}

/// The planets of a system with a second star.
fn beside_two(configuration: &Configuration) -> Result<Vec<usize>, OutOfDomain> {
    let stars = if configuration.companion_index().is_some() { 2.0 } else { 1.0 };
    Domain("a limit beside two stars").need(stars > 1.0, "the number of stars", stars, "two stars")?;
    Ok(configuration.planet_indices().collect())
}

/// The orbits of a planet and of the second star, in the frame where both are nearly ellipses, with the star's G × mass.
fn with_companion(configuration: &Configuration, planet: usize) -> (Elements, Elements, f64) {
    let orbits = configuration.orbits();
    let companion = configuration.companion_index().unwrap_or(planet);
    (orbits[planet].elements, orbits[companion].elements, configuration.planets[companion].gm)
}

fn holman_wiegert(configuration: &Configuration, planet: &usize) -> Result<f64, OutOfDomain> {
    let domain = Domain("the limits of Holman & Wiegert (1999)");
    let (own, binary, companion_gm) = with_companion(configuration, *planet);
    let e = own.eccentricity;
    domain.need(e <= CIRCULAR_BESIDE_TWO, "e of the planet", e, "nearly circular planets (e <= 0.2)")?;
    let tilt = mutual_inclination(&own, &binary);
    let words = "nearly coplanar planets (up to 0.524 rad, 30 deg)";
    domain.need(tilt <= COPLANAR_BESIDE_TWO, "mutual inclination (rad)", tilt, words)?;
    let ratio = own.semi_major_axis_au / binary.semi_major_axis_au;
    let share = companion_gm / (configuration.star_gm + companion_gm);
    if configuration.circles_pair(*planet) {
        let limit = circumbinary_limit(share.min(1.0 - share), binary.eccentricity)?;
        Ok(ratio - limit.axis_ratio)
    } else {
        Ok(circumstellar_limit(share, binary.eccentricity)?.axis_ratio - ratio)
    }
}

fn mardling_aarseth(configuration: &Configuration, planet: &usize) -> Result<f64, OutOfDomain> {
    let (own, binary, companion_gm) = with_companion(configuration, *planet);
    let (star, mass) = (configuration.star_gm, configuration.planets[*planet].gm);
    let tilt = mutual_inclination(&own, &binary);
    let (inner, outer, q) = if configuration.circles_pair(*planet) {
        (binary, own, mass / (star + companion_gm))
    } else {
        (own, binary, companion_gm / (star + mass))
    };
    let limit = hierarchical_limit(q, outer.eccentricity, tilt)?;
    Ok(outer.pericentre_au() / inner.semi_major_axis_au - limit)
}
