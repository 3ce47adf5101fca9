//! Distances at which a configuration ends, or at which the adaptive engine takes over.

use crate::assess::plan::Plan;
use crate::coords::{BodyKind, Configuration};
use crate::criteria::mutual_hill_radius_au;
use crate::system::Frame;
use crate::verdict::LostHow;

/// With `encounter = "resolve"` the adaptive engine does what happens within so many mutual Hill radii.
///
/// The kick's error grows like (Hill radius / distance)³ times the square of the step; at three Hill radii the planets'
/// pull on each other is still a few percent of the star's tide, and the splitting holds.
pub(in crate::assess) const RESOLVE_HILL: f64 = 3.0;

#[derive(Clone, Debug)]
pub(super) struct Limits {
    pub star_radius_au: f64,
    pub escape_au: f64,
    /// i < j, in order; pairs of massless planets are left out.
    pub pairs: Vec<Pair>,
    /// Radii, the star first.
    pub radii_au: Vec<f64>,
    /// Whether a planet bound for the star can be told from its orbit (not where it circles a pair).
    pub orbits_tell: bool,
}

#[derive(Clone, Copy, Debug)]
pub(super) struct Pair {
    pub i: usize,
    pub j: usize,
    /// Where the configuration ends.
    pub end_au: f64,
    /// Where the symplectic scheme must not go on.
    pub leave_au: f64,
    pub contact_au: f64,
    pub hill_au: f64,
}

impl Pair {
    pub fn is(&self, other: &Pair) -> bool {
        (self.i, self.j) == (other.i, other.j)
    }

    /// Of a pair that is met so near.
    pub fn how(&self, distance_au: f64) -> LostHow {
        if distance_au < self.contact_au { LostHow::Collision } else { LostHow::Encounter }
    }

    /// Whether the configuration ends before the two touch.
    pub fn ends_apart(&self) -> bool {
        self.end_au > self.contact_au
    }

    /// Of a pair that comes in from outside: it ends where the first limit is crossed, whatever would come then.
    pub fn how_on_crossing(&self) -> LostHow {
        if self.ends_apart() { LostHow::Encounter } else { LostHow::Collision }
    }
}

impl Limits {
    pub fn new(configuration: &Configuration, plan: &Plan) -> Limits {
        let planets = &configuration.planets;
        let axes: Vec<f64> = configuration
            .elements_in(configuration.own_frame())
            .iter()
            .map(|o| o.semi_major_axis_au)
            .collect();
        let mut pairs = Vec::new();
        for i in 0..planets.len() {
            for j in i + 1..planets.len() {
                if planets[i].gm == 0.0 && planets[j].gm == 0.0 {
                    continue;
                }
                // A second star has no Hill radius to share: take the planet's own, and end at contact only.
                let gm = |k: usize| if planets[k].kind == BodyKind::Companion { 0.0 } else { planets[k].gm };
                let stars = [i, j].iter().any(|k| planets[*k].kind == BodyKind::Companion);
                let own = [axes[i], axes[j]].into_iter().fold(f64::INFINITY, f64::min);
                let size = if stars { [own, own] } else { [axes[i], axes[j]] };
                let hill_au = mutual_hill_radius_au(configuration.star_gm, [gm(i), gm(j)], size);
                let contact_au = planets[i].radius_au + planets[j].radius_au;
                let end_au = match plan.encounter_hill {
                    Some(hill) if !stars => contact_au.max(hill * hill_au),
                    _ => contact_au,
                };
                let leave_au = if plan.resolve { end_au.max(RESOLVE_HILL * hill_au) } else { end_au };
                pairs.push(Pair { i, j, end_au, leave_au, contact_au, hill_au });
            }
        }
        let radii = planets.iter().map(|p| p.radius_au);
        Limits {
            star_radius_au: configuration.star_radius_au,
            escape_au: plan.escape_limit_au(configuration),
            pairs,
            radii_au: std::iter::once(configuration.star_radius_au).chain(radii).collect(),
            orbits_tell: configuration.own_frame() == Frame::Astrocentric,
        }
    }
}
