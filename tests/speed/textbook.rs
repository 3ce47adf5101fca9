//! The integrator as a textbook would have it, for comparison: plain `f64`, one planet after the other.
//!
//! The same leapfrog in democratic heliocentric coordinates with the same tangent map, watch and samples as the
//! engine, but: Kepler's equation in universal variables by Newton steps from s = h/r₀ to 1e-15, Stumpff functions by
//! quartering the argument, no fused operations, a square root and a power wherever the formula has one.

use abide::integrate::{State, Tangent};

type Vector = [f64; 3];

pub struct Textbook {
    state: State,
    tangent: Tangent,
    step: f64,
    nearest: f64,
    logarithms: Vec<f64>,
}

fn dot(a: &Vector, b: &Vector) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

/// c₀ … c₅ of z.
fn stumpff(z: f64) -> [f64; 6] {
    if z.abs() > 0.1 {
        return doubled(stumpff(0.25 * z));
    }
    let mut c = [0.0; 6];
    for (n, cn) in c.iter_mut().enumerate() {
        let mut term = 1.0 / (1..=n).map(|k| k as f64).product::<f64>();
        let mut k = n as f64;
        while term.abs() > 1e-17 {
            *cn += term;
            term *= -z / ((k + 1.0) * (k + 2.0));
            k += 2.0;
        }
    }
    c
}

/// cₙ(4z) from cₙ(z).
fn doubled(c: [f64; 6]) -> [f64; 6] {
    [
        2.0 * c[0] * c[0] - 1.0,
        c[0] * c[1],
        (c[2] + c[1] * c[1] + c[0] * c[2]) / 4.0,
        (c[3] + c[2] + c[1] * c[2] + c[0] * c[3]) / 8.0,
        (c[4] + c[3] + c[2] / 2.0 + c[1] * c[3] + c[0] * c[4]) / 16.0,
        (c[5] + c[4] + c[3] / 2.0 + c[2] / 6.0 + c[1] * c[4] + c[0] * c[5]) / 32.0,
    ]
}

impl Textbook {
    pub fn new(state: State, tangent: Tangent, step: f64) -> Textbook {
        Textbook { state, tangent, step, nearest: f64::MAX, logarithms: Vec::new() }
    }

    pub fn state(&self) -> &State {
        &self.state
    }

    pub fn tangent(&self) -> &Tangent {
        &self.tangent
    }

    #[allow(dead_code, reason = "the benches ask, the test does not")]
    pub fn nearest(&self) -> f64 {
        self.nearest
    }

    /// Advances by whole steps; half drifts of neighbouring steps are merged, as in the engine.
    pub fn steps(&mut self, steps: usize) {
        self.logarithms.clear();
        self.drift(0.5 * self.step);
        for step in 0..steps {
            if step % 4 == 0 {
                self.sample();
            }
            self.kick(self.step);
            self.drift(if step + 1 < steps { self.step } else { 0.5 * self.step });
        }
    }

    fn sample(&mut self) {
        let Tangent { pos, vel } = &self.tangent;
        let length2: f64 = pos.iter().chain(vel).map(|v| dot(v, v)).sum();
        self.logarithms.push(0.5 * length2.ln());
    }

    fn drift(&mut self, h: f64) {
        for planet in 0..self.state.gm.len() {
            self.drift_one(planet, h);
        }
    }

    fn drift_one(&mut self, planet: usize, h: f64) {
        let mu = self.state.star_gm;
        let (q, v) = (self.state.pos[planet], self.state.vel[planet]);
        let (dq, dv) = (self.tangent.pos[planet], self.tangent.vel[planet]);
        let r0 = dot(&q, &q).sqrt();
        let eta = dot(&q, &v);
        let beta = 2.0 * mu / r0 - dot(&v, &v);
        let (s, g) = solve(mu, r0, eta, beta, h);
        let r = r0 * g[0] + eta * g[1] + mu * g[2];
        let f = 1.0 - mu * g[2] / r0;
        let t = h - mu * g[3];
        let f_dot = -mu * g[1] / (r * r0);
        let t_dot = 1.0 - mu * g[2] / r;
        let d_r0 = dot(&q, &dq) / r0;
        let d_eta = dot(&dq, &v) + dot(&q, &dv);
        let d_beta = -2.0 * mu * d_r0 / (r0 * r0) - 2.0 * dot(&v, &dv);
        let by_beta = |n: usize| (n as f64 * g[n + 2] - s * g[n + 1]) / 2.0;
        let at_s =
            d_r0 * g[1] + d_eta * g[2] + d_beta * (r0 * by_beta(1) + eta * by_beta(2) + mu * by_beta(3));
        let d_s = -at_s / r;
        let d_g = |n: usize| by_beta(n) * d_beta + g[n - 1] * d_s;
        let d_g0 = -d_beta * g[2] - beta * d_g(2);
        let d_r = d_r0 * g[0] + r0 * d_g0 + d_eta * g[1] + eta * d_g(1) + mu * d_g(2);
        let d_f = -mu * d_g(2) / r0 + mu * g[2] * d_r0 / (r0 * r0);
        let d_t = -mu * d_g(3);
        let d_f_dot = -mu * d_g(1) / (r * r0) + mu * g[1] * (d_r / r + d_r0 / r0) / (r * r0);
        let d_t_dot = -mu * d_g(2) / r + mu * g[2] * d_r / (r * r);
        for k in 0..3 {
            self.state.pos[planet][k] = f * q[k] + t * v[k];
            self.state.vel[planet][k] = f_dot * q[k] + t_dot * v[k];
            self.tangent.pos[planet][k] = f * dq[k] + t * dv[k] + d_f * q[k] + d_t * v[k];
            self.tangent.vel[planet][k] = f_dot * dq[k] + t_dot * dv[k] + d_f_dot * q[k] + d_t_dot * v[k];
        }
    }

    fn kick(&mut self, h: f64) {
        let State { star_gm, gm, pos, vel } = &mut self.state;
        let Tangent { pos: d_pos, vel: d_vel } = &mut self.tangent;
        for k in 0..3 {
            let shift: f64 = gm.iter().zip(vel.iter()).map(|(m, v)| m * v[k]).sum::<f64>() / *star_gm;
            let d_shift: f64 = gm.iter().zip(d_vel.iter()).map(|(m, v)| m * v[k]).sum::<f64>() / *star_gm;
            pos.iter_mut().for_each(|q| q[k] += h * shift);
            d_pos.iter_mut().for_each(|q| q[k] += h * d_shift);
        }
        for i in 0..gm.len() {
            for j in i + 1..gm.len() {
                let d = [0, 1, 2].map(|k| pos[j][k] - pos[i][k]);
                let dd = [0, 1, 2].map(|k| d_pos[j][k] - d_pos[i][k]);
                let distance = dot(&d, &d).sqrt();
                self.nearest = self.nearest.min(distance);
                let pull = h / distance.powi(3);
                let along = 3.0 * dot(&d, &dd) / (distance * distance);
                for k in 0..3 {
                    vel[i][k] += gm[j] * pull * d[k];
                    vel[j][k] -= gm[i] * pull * d[k];
                    d_vel[i][k] += gm[j] * pull * (dd[k] - along * d[k]);
                    d_vel[j][k] -= gm[i] * pull * (dd[k] - along * d[k]);
                }
            }
        }
    }
}

/// s and G₀ … G₅ at the end of a drift.
fn solve(mu: f64, r0: f64, eta: f64, beta: f64, h: f64) -> (f64, [f64; 6]) {
    let functions = |s: f64| {
        let mut g = stumpff(beta * s * s);
        let mut power = 1.0;
        for gn in &mut g {
            *gn *= power;
            power *= s;
        }
        g
    };
    let mut s = h / r0;
    for _ in 0..50 {
        let g = functions(s);
        let late = r0 * g[1] + eta * g[2] + mu * g[3] - h;
        let change = late / (r0 * g[0] + eta * g[1] + mu * g[2]);
        s -= change;
        if change.abs() < 1e-15 * s.abs() {
            break;
        }
    }
    (s, functions(s))
}
