//! Secular modes: the eigenvectors of the secular equations with the amplitudes that the orbits give them.

use super::SecularSystem;
use nalgebra::{Complex, DMatrix, DVector, SymmetricEigen};

/// One mode: all its planets' vectors turn together.
#[derive(Clone, Debug, PartialEq)]
pub struct SecularMode {
    /// g (pericentres, positive) or s (nodes, negative or 0), rad/day.
    pub frequency_rad_day: f64,
    /// Part of each planet's e (or of 2 sin(i/2)) in this mode; negative where it points the other way.
    pub amplitude: Vec<f64>,
    /// Direction at the epoch, rad.
    pub phase: f64,
    /// Share of this mode in the AMD of all modes of its kind.
    pub amd_share: f64,
    /// Share of each planet in the energy of the mode, Λ_j V_j²; sums to 1 and does not depend on the present orbits.
    pub participation: Vec<f64>,
}

/// All modes of a system, in the order of the planets they belong to most.
#[derive(Clone, Debug, PartialEq)]
pub struct SecularModes {
    /// Mode k is the one in which planet k takes part most, as far as each can have its own.
    pub pericentres: Vec<SecularMode>,
    pub nodes: Vec<SecularMode>,
    /// AMD to second order per planet, share of the total: eccentricity and inclination.
    pub amd_of_planets: Vec<(f64, f64)>,
    /// AMD to second order over Σ Λ, the angular momentum of circular orbits.
    pub amd_relative: f64,
}

impl SecularModes {
    /// Upper limit of a planet's eccentricity in the linear theory: all modes in line.
    pub fn largest_eccentricity(&self, planet: usize) -> f64 {
        self.pericentres.iter().map(|mode| mode.amplitude[planet].abs()).sum()
    }

    /// z = e exp(iϖ) of a planet at a time (day).
    pub fn eccentricity_vector(&self, planet: usize, time_day: f64) -> Complex<f64> {
        self.pericentres
            .iter()
            .map(|mode| {
                let angle = mode.phase + mode.frequency_rad_day * time_day;
                Complex::from_polar(1.0, angle) * mode.amplitude[planet]
            })
            .sum()
    }
}

impl SecularSystem {
    /// Modes with their amplitudes.
    ///
    /// With D = Λ^{1/2} the matrix D A D⁻¹ is symmetric; its eigenvectors V (orthonormal) and c = Vᵀ D z(0) give
    /// z_j(t) = Σ_i V_ji c_i exp(i g_i t)/D_j, and the AMD of mode i is ½ |c_i|².
    pub fn modes(&self) -> SecularModes {
        let shape = |e: f64, angle: f64| Complex::from_polar(e, angle);
        let z: Vec<Complex<f64>> =
            self.planets.iter().map(|p| shape(p.eccentricity, p.longitude_of_pericentre)).collect();
        let zeta: Vec<Complex<f64>> =
            self.planets.iter().map(|p| shape(2.0 * (0.5 * p.inclination).sin(), p.ascending_node)).collect();
        let energy = |v: &[Complex<f64>]| -> Vec<f64> {
            v.iter().zip(&self.weight).map(|(z, w)| 0.5 * w * z.norm_sqr()).collect()
        };
        let (of_z, of_zeta) = (energy(&z), energy(&zeta));
        let total: f64 = of_z.iter().chain(&of_zeta).sum();
        let share = |part: f64| if total > 0.0 { part / total } else { 0.0 };
        SecularModes {
            pericentres: self.solve(&self.pericentres, &z),
            nodes: self.solve(&self.nodes, &zeta),
            amd_relative: total / self.weight.iter().sum::<f64>(),
            amd_of_planets: of_z.iter().zip(&of_zeta).map(|(a, b)| (share(*a), share(*b))).collect(),
        }
    }

    fn solve(&self, matrix: &DMatrix<f64>, start: &[Complex<f64>]) -> Vec<SecularMode> {
        let count = self.weight.len();
        let root = DVector::from_iterator(count, self.weight.iter().map(|w| w.sqrt()));
        let symmetric = DMatrix::from_fn(count, count, |j, k| {
            0.5 * (matrix[(j, k)] * root[j] / root[k] + matrix[(k, j)] * root[k] / root[j])
        });
        let eigen = SymmetricEigen::new(symmetric);
        let projected: Vec<Complex<f64>> = (0..count)
            .map(|i| (0..count).map(|j| start[j] * (eigen.eigenvectors[(j, i)] * root[j])).sum())
            .collect();
        let total: f64 = projected.iter().map(Complex::norm_sqr).sum();
        owners(&eigen.eigenvectors)
            .into_iter()
            .map(|i| SecularMode {
                frequency_rad_day: eigen.eigenvalues[i],
                amplitude: (0..count)
                    .map(|j| eigen.eigenvectors[(j, i)] * projected[i].norm() / root[j])
                    .collect(),
                phase: projected[i].arg(),
                amd_share: if total > 0.0 { projected[i].norm_sqr() / total } else { 0.0 },
                participation: (0..count).map(|j| eigen.eigenvectors[(j, i)].powi(2)).collect(),
            })
            .collect()
    }
}

/// For each planet the mode it takes part in most, each mode once: the largest participations choose first.
fn owners(vectors: &DMatrix<f64>) -> Vec<usize> {
    let count = vectors.nrows();
    let mut all: Vec<(usize, usize)> = (0..count).flat_map(|j| (0..count).map(move |i| (j, i))).collect();
    all.sort_by(|one, other| vectors[*other].abs().total_cmp(&vectors[*one].abs()));
    let mut mode_of = vec![None; count];
    let mut taken = vec![false; count];
    for (planet, mode) in all {
        if mode_of[planet].is_none() && !taken[mode] {
            mode_of[planet] = Some(mode);
            taken[mode] = true;
        }
    }
    mode_of.into_iter().flatten().collect()
}
