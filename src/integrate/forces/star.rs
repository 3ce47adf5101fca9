//! Terms of the star on a planet beside Newton's: relativity, oblateness, an averaged satellite orbit.

use super::super::State;
use super::{Cast, dot};

/// One term, M = G × mass of the star, r and v of the planet relative to the star.
#[derive(Clone, Debug, PartialEq)]
pub enum StarTerm {
    /// First post-Newtonian field of the star alone, harmonic coordinates:
    /// a = M/(c² r³) [ (4M/r − v²) r + 4 (r·v) v ]. Source: Damour & Deruelle (1985), limit of a light planet.
    Relativity { light_au_day: f64 },
    /// The potential −3 M²/(c² r²) per unit mass, a = −6 M²/(c² r⁴) r: the precession of [`StarTerm::Relativity`],
    /// but another mean motion ([`rate_matched`]). Source: Nobili & Roxburgh (1986).
    PrecessionPotential { light_au_day: f64 },
    /// Second zonal harmonic of the star about its pole (a unit vector), with its equatorial radius:
    /// potential M J₂ R² (3 (n·r)²/r² − 1)/(2 r³) per unit mass.
    Oblateness { j2: f64, radius_au: f64, pole: [f64; 3] },
    /// A planet with a satellite as one body, the satellite's orbit averaged: a = −K M/r⁵ r, K in au².
    Satellite { k_au2: f64 },
}

/// A term and the planet on which it acts, counted from 0; all planets when absent.
#[derive(Clone, Debug, PartialEq)]
pub struct Acting {
    pub term: StarTerm,
    pub only: Option<usize>,
}

impl Acting {
    /// The bodies on which it acts, the star being body 0.
    pub(super) fn bodies(&self, cast: &Cast) -> std::ops::Range<usize> {
        match self.only {
            Some(planet) => planet + 1..planet + 2,
            None => 1..cast.bodies(),
        }
    }
}

impl StarTerm {
    /// Whether the term depends on the velocity.
    pub(super) fn needs_velocity(&self) -> bool {
        matches!(self, StarTerm::Relativity { .. })
    }

    /// Acceleration of the planet, au/day².
    pub(super) fn pull(&self, star_gm: f64, r: &[f64; 3], v: &[f64; 3]) -> [f64; 3] {
        let square = dot(r, r);
        match self {
            StarTerm::Relativity { light_au_day } => {
                let distance = square.sqrt();
                let factor = star_gm / (light_au_day * light_au_day * square * distance);
                let along_r = factor * (4.0 * star_gm / distance - dot(v, v));
                let along_v = 4.0 * factor * dot(r, v);
                [0, 1, 2].map(|k| along_r * r[k] + along_v * v[k])
            }
            StarTerm::Oblateness { j2, radius_au, pole } => {
                let factor = oblateness_factor(star_gm, *j2, *radius_au, square);
                let height = dot(pole, r);
                let along_r = factor * (1.0 - 5.0 * height * height / square);
                [0, 1, 2].map(|k| along_r * r[k] + 2.0 * factor * height * pole[k])
            }
            StarTerm::PrecessionPotential { .. } | StarTerm::Satellite { .. } => {
                let (factor, _) = self.central(star_gm, square);
                r.map(|x| factor * x)
            }
        }
    }

    /// Change of [`StarTerm::pull`] for a small displacement `dr`, `dv`.
    pub(super) fn vary(
        &self,
        star_gm: f64,
        r: &[f64; 3],
        v: &[f64; 3],
        dr: &[f64; 3],
        dv: &[f64; 3],
    ) -> [f64; 3] {
        let square = dot(r, r);
        let closer = dot(r, dr) / square;
        match self {
            StarTerm::Relativity { light_au_day } => {
                let distance = square.sqrt();
                let factor = star_gm / (light_au_day * light_au_day * square * distance);
                let a = 4.0 * star_gm / distance - dot(v, v);
                let b = dot(r, v);
                let da = -4.0 * star_gm / distance * closer - 2.0 * dot(v, dv);
                let db = dot(dr, v) + dot(r, dv);
                [0, 1, 2].map(|k| {
                    let bracket = a * r[k] + 4.0 * b * v[k];
                    let change = da * r[k] + a * dr[k] + 4.0 * (db * v[k] + b * dv[k]);
                    factor * (change - 3.0 * closer * bracket)
                })
            }
            StarTerm::Oblateness { j2, radius_au, pole } => {
                let factor = oblateness_factor(star_gm, *j2, *radius_au, square);
                let (height, rise) = (dot(pole, r), dot(pole, dr));
                let along_r = 1.0 - 5.0 * height * height / square;
                let change = 10.0 * height / square * (height * closer - rise);
                [0, 1, 2].map(|k| {
                    let bracket = along_r * r[k] + 2.0 * height * pole[k];
                    let varied = change * r[k] + along_r * dr[k] + 2.0 * rise * pole[k];
                    factor * (varied - 5.0 * closer * bracket)
                })
            }
            StarTerm::PrecessionPotential { .. } | StarTerm::Satellite { .. } => {
                let (factor, power) = self.central(star_gm, square);
                [0, 1, 2].map(|k| factor * (dr[k] - power * closer * r[k]))
            }
        }
    }

    /// For a = factor · r with factor ∝ |r|^−power: both, at |r|² = `square`.
    fn central(&self, star_gm: f64, square: f64) -> (f64, f64) {
        match self {
            StarTerm::PrecessionPotential { light_au_day } => {
                (-6.0 * star_gm * star_gm / (light_au_day * light_au_day * square * square), 4.0)
            }
            StarTerm::Satellite { k_au2 } => (-k_au2 * star_gm / (square * square * square.sqrt()), 5.0),
            StarTerm::Relativity { .. } | StarTerm::Oblateness { .. } => (0.0, 0.0),
        }
    }
}

fn oblateness_factor(star_gm: f64, j2: f64, radius_au: f64, square: f64) -> f64 {
    -1.5 * star_gm * j2 * radius_au * radius_au / (square * square * square.sqrt())
}

/// Start velocities that give [`StarTerm::PrecessionPotential`] the mean motion of [`StarTerm::Relativity`].
///
/// Heliocentric velocities times 1 + δ, δ = [ (3/8) v⁴ + (3/2) M v²/r + (7/2) M²/r² + (5/2) (v²/2 − M/r)² ] / (c² v²).
/// The two fields have the same precession, so the radial frequencies are equated: (−2E')^{3/2}/M with
/// E' = v'²/2 − M/r − 3M²/(c²r²), and (−2E)^{3/2}/M · (1 + 15 E/(4c²)) with the conserved energy of the first
/// post-Newtonian motion (Damour & Deruelle 1985). First order in 1/c².
pub fn rate_matched(state: &State, light_au_day: f64) -> State {
    with_heliocentric(state, |r, v| {
        let factor = 1.0 + rate_shift(state.star_gm, r, &v, light_au_day);
        v.map(|x| x * factor)
    })
}

/// The state that [`rate_matched`] makes into this one, to rounding.
///
/// v/(1 + δ(v)) with δ at the velocity found so far: each round is nearer by a factor of about δ.
pub fn rate_unmatched(state: &State, light_au_day: f64) -> State {
    with_heliocentric(state, |r, matched| {
        let mut v = matched;
        for _ in 0..UNMATCHINGS {
            let factor = 1.0 + rate_shift(state.star_gm, r, &v, light_au_day);
            v = matched.map(|x| x / factor);
        }
        v
    })
}

/// δ is 1e-5 at 0.006 au from the Sun, so that the last round changes nothing.
const UNMATCHINGS: usize = 4;

/// The state with other heliocentric velocities, given position and velocity of each planet; barycentric again.
fn with_heliocentric(state: &State, change: impl Fn(&[f64; 3], [f64; 3]) -> [f64; 3]) -> State {
    let star = star_velocity(state);
    let each = state.pos.iter().zip(&state.vel);
    let helio: Vec<[f64; 3]> = each.map(|(r, u)| change(r, [0, 1, 2].map(|k| u[k] - star[k]))).collect();
    let total = state.star_gm + state.gm.iter().sum::<f64>();
    let mut star = [0.0; 3];
    for (gm, v) in state.gm.iter().zip(&helio) {
        for k in 0..3 {
            star[k] -= gm * v[k] / total;
        }
    }
    let vel = helio.iter().map(|v| [0, 1, 2].map(|k| v[k] + star[k])).collect();
    State { vel, ..state.clone() }
}

/// δ of [`rate_matched`] for one heliocentric position and velocity.
fn rate_shift(star_gm: f64, r: &[f64; 3], v: &[f64; 3], light_au_day: f64) -> f64 {
    let fast = dot(v, v);
    let depth = star_gm / dot(r, r).sqrt();
    let energy = 0.5 * fast - depth;
    let sum = 0.375 * fast * fast + 1.5 * depth * fast + 3.5 * depth * depth + 2.5 * energy * energy;
    sum / (light_au_day * light_au_day * fast)
}

/// Barycentric velocity of the star of a [`State`], au/day.
fn star_velocity(state: &State) -> [f64; 3] {
    let mut star = [0.0; 3];
    for (gm, v) in state.gm.iter().zip(&state.vel) {
        for k in 0..3 {
            star[k] -= gm * v[k] / state.star_gm;
        }
    }
    star
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn matched_rates_are_taken_back_to_rounding() {
        let light = 173.144_632_674;
        let gm = 2.959_122_08e-4;
        // Between a fall and a hyperbola, at the surface of a star like the Sun and further out.
        for (distance, speed) in [(0.0047_f64, 0.3_f64), (0.0047, 1.2), (0.04, 0.9), (1.0, 1.0), (1.0, 3.0)] {
            let v = speed * (gm / distance).sqrt();
            let state = State {
                star_gm: gm,
                gm: vec![1e-3 * gm, 0.1 * gm],
                pos: vec![[distance, 0.0, 0.0], [0.0, 3.0 * distance, 0.0]],
                vel: vec![[0.2 * v, v, 0.1 * v], [-0.5 * v, 0.0, 0.0]],
            };
            let matched = rate_matched(&state, light);
            let back = rate_unmatched(&matched, light);
            for (one, (other, moved)) in state.vel.iter().zip(back.vel.iter().zip(&matched.vel)) {
                for k in 0..3 {
                    assert!((one[k] - other[k]).abs() < 4e-16 * v, "{distance} {speed}: {one:?} {other:?}");
                }
                assert!((one[0] - moved[0]).abs() > 1e-9 * v, "{distance} {speed}: nothing to take back");
            }
        }
    }
}
