//! The same equations, with the variational ones, for a general-purpose integrator of order eight.
//!
//! H = Σ (vᵢ²/2 − GM/rᵢ) mᵢ + (Σ mᵢvᵢ)²/2M − Σ G mᵢmⱼ/dᵢⱼ: heliocentric positions, barycentric velocities, as in the engine.

use abide::integrate::{State, Tangent};
use ode_solvers::{Dop853, OutputType, SVector, System};

/// Twelve numbers per planet: position, velocity, and their displacements.
pub struct Equations {
    star_gm: f64,
    gm: Vec<f64>,
}

const PER_PLANET: usize = 12;

fn triple<const D: usize>(y: &SVector<f64, D>, planet: usize, part: usize) -> [f64; 3] {
    let at = PER_PLANET * planet + 3 * part;
    [y[at], y[at + 1], y[at + 2]]
}

fn dot(a: &[f64; 3], b: &[f64; 3]) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

impl<const D: usize> System<f64, SVector<f64, D>> for &Equations {
    fn system(&self, _time: f64, y: &SVector<f64, D>, dy: &mut SVector<f64, D>) {
        let n = self.gm.len();
        let mut drag = [[0.0; 3]; 2];
        for p in 0..n {
            let (v, dv) = (triple(y, p, 1), triple(y, p, 3));
            for k in 0..3 {
                drag[0][k] += self.gm[p] * v[k] / self.star_gm;
                drag[1][k] += self.gm[p] * dv[k] / self.star_gm;
            }
        }
        for p in 0..n {
            let [q, v, dq, dv] = [0, 1, 2, 3].map(|part| triple(y, p, part));
            let inv_r2 = 1.0 / dot(&q, &q);
            let pull = self.star_gm * inv_r2 * inv_r2.sqrt();
            let along = 3.0 * dot(&q, &dq) * inv_r2;
            let at = PER_PLANET * p;
            for k in 0..3 {
                dy[at + k] = v[k] + drag[0][k];
                dy[at + 3 + k] = -pull * q[k];
                dy[at + 6 + k] = dv[k] + drag[1][k];
                dy[at + 9 + k] = -pull * (dq[k] - along * q[k]);
            }
        }
        for i in 0..n {
            for j in i + 1..n {
                self.pair(y, dy, i, j);
            }
        }
    }
}

impl Equations {
    fn pair<const D: usize>(&self, y: &SVector<f64, D>, dy: &mut SVector<f64, D>, i: usize, j: usize) {
        let (a, b) = (triple(y, i, 0), triple(y, j, 0));
        let (da, db) = (triple(y, i, 2), triple(y, j, 2));
        let d = [0, 1, 2].map(|k| b[k] - a[k]);
        let dd = [0, 1, 2].map(|k| db[k] - da[k]);
        let inv_d2 = 1.0 / dot(&d, &d);
        let inv_d3 = inv_d2 * inv_d2.sqrt();
        let along = 3.0 * dot(&d, &dd) * inv_d2;
        let (on_i, on_j) = (self.gm[j] * inv_d3, self.gm[i] * inv_d3);
        for k in 0..3 {
            let w = dd[k] - along * d[k];
            dy[PER_PLANET * i + 3 + k] += on_i * d[k];
            dy[PER_PLANET * j + 3 + k] -= on_j * d[k];
            dy[PER_PLANET * i + 9 + k] += on_i * w;
            dy[PER_PLANET * j + 9 + k] -= on_j * w;
        }
    }
}

/// A run in flight.
pub struct General<const D: usize> {
    equations: Equations,
    pub y: SVector<f64, D>,
    pub relative_tolerance: f64,
}

impl<const D: usize> General<D> {
    pub fn new(state: &State, tangent: &Tangent, relative_tolerance: f64) -> General<D> {
        let mut y = SVector::<f64, D>::zeros();
        for p in 0..state.gm.len() {
            let parts = [&state.pos[p], &state.vel[p], &tangent.pos[p], &tangent.vel[p]];
            for (part, numbers) in parts.into_iter().enumerate() {
                (0..3).for_each(|k| y[PER_PLANET * p + 3 * part + k] = numbers[k]);
            }
        }
        General {
            equations: Equations { star_gm: state.star_gm, gm: state.gm.clone() },
            y,
            relative_tolerance,
        }
    }

    /// Goes on for `time`.
    pub fn advance(&mut self, time: f64) {
        let tolerance = self.relative_tolerance;
        let mut run = Dop853::from_param(
            &self.equations,
            0.0,
            time,
            time,
            self.y,
            tolerance,
            tolerance,
            0.9,
            0.0,
            0.333,
            6.0,
            time,
            0.0,
            10_000_000,
            u32::MAX,
            OutputType::Sparse,
        );
        run.integrate().expect("a regular problem");
        self.y = *run.y_out().last().expect("the end is among the outputs");
        // The tangent vector is scaled back so that the tolerance means the same all along.
        let planets = self.equations.gm.len();
        let size =
            (0..planets).map(|p| dot(&triple(&self.y, p, 2), &triple(&self.y, p, 2))).sum::<f64>().sqrt();
        for p in 0..planets {
            (6..12).for_each(|k| self.y[PER_PLANET * p + k] /= size);
        }
    }

    pub fn state(&self) -> State {
        let (n, y) = (self.equations.gm.len(), &self.y);
        State {
            star_gm: self.equations.star_gm,
            gm: self.equations.gm.clone(),
            pos: (0..n).map(|p| triple(y, p, 0)).collect(),
            vel: (0..n).map(|p| triple(y, p, 1)).collect(),
        }
    }
}
