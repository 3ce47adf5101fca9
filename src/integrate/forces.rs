//! Physics as data: which terms act, with which parameters; and their evaluation for the adaptive integrator.
//!
//! Newton's pull of every massive pair, each pair once; massless bodies feel the massive ones and do not pull, so
//! their cost is linear in their number. Terms of the star on each planet ([`StarTerm`]) come on top; the star takes
//! the opposite reaction −(m/M) a, so that the total momentum is kept.

mod cast;
mod star;

pub use cast::Cast;
pub use star::{Acting, StarTerm, rate_matched};

/// The terms beside Newton's.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Forces {
    pub star: Vec<Acting>,
}

impl Forces {
    /// Newton alone.
    pub fn newton() -> Forces {
        Forces::default()
    }

    /// Adds a term that acts on every planet.
    pub fn with(mut self, term: StarTerm) -> Forces {
        self.star.push(Acting { term, only: None });
        self
    }

    /// Adds a term that acts on one planet, counted from 0.
    pub fn with_on(mut self, term: StarTerm, planet: usize) -> Forces {
        self.star.push(Acting { term, only: Some(planet) });
        self
    }

    /// Whether any term needs the velocities.
    pub fn needs_velocity(&self) -> bool {
        self.star.iter().any(|acting| acting.term.needs_velocity())
    }

    /// Accelerations of all bodies and of any number of displacements of them; returns the pairs computed.
    ///
    /// `at`, `vel` and `out` hold x, y, z of the bodies one after another (au, au/day, au/day²), the star first,
    /// then in the same order each tangent vector; all of the same length 3 · bodies · (1 + tangent vectors).
    /// `low` is what rounding left of `at`: the distance of a close pair keeps all its digits with it. `vel` is read
    /// only where [`Forces::needs_velocity`].
    pub fn evaluate(&self, cast: &Cast, at: &[f64], low: &[f64], vel: &[f64], out: &mut [f64]) -> u64 {
        out.fill(0.0);
        let pairs = newton(cast, at, low, out);
        for acting in &self.star {
            for body in acting.bodies(cast) {
                star_on(cast, &acting.term, body, at, vel, out);
            }
        }
        pairs
    }

    /// What the terms beside Newton's do to the energy per unit of time: Σ m a·v, star included; times G, au⁵ day⁻⁵.
    pub fn power(&self, cast: &Cast, at: &[f64], vel: &[f64]) -> f64 {
        let mut total = 0.0;
        for acting in &self.star {
            for body in acting.bodies(cast) {
                if cast.gm[body] == 0.0 {
                    continue;
                }
                let (r, v) = (apart(at, 0, 3 * body), apart(vel, 0, 3 * body));
                total += cast.gm[body] * dot(&acting.term.pull(cast.gm[0], &r, &v), &v);
            }
        }
        total
    }
}

/// Newton's pulls and their variations.
fn newton(cast: &Cast, at: &[f64], low: &[f64], out: &mut [f64]) -> u64 {
    let block = 3 * cast.gm.len();
    let mut pairs = 0;
    for (index, &i) in cast.massive.iter().enumerate() {
        for &j in &cast.massive[index + 1..] {
            let d = close_apart(at, low, 3 * i, 3 * j);
            pull(cast.gm[i], cast.gm[j], 3 * i, 3 * j, block, &d, at, out);
            pairs += 1;
        }
        for &j in &cast.massless {
            let d = close_apart(at, low, 3 * i, 3 * j);
            feel(cast.gm[i], 3 * i, 3 * j, block, &d, at, out);
            pairs += 1;
        }
    }
    pairs
}

/// Both bodies of a massive pair. δ(d/d³) = (δd − 3 d (d·δd)/d²)/d³.
#[inline(always)]
fn pull(gm_i: f64, gm_j: f64, i: usize, j: usize, block: usize, d: &[f64; 3], at: &[f64], out: &mut [f64]) {
    let square = dot(d, d);
    let cube = 1.0 / (square * square.sqrt());
    for k in 0..3 {
        out[i + k] += gm_j * cube * d[k];
        out[j + k] -= gm_i * cube * d[k];
    }
    for base in (block..at.len()).step_by(block) {
        let (i, j) = (base + i, base + j);
        let change = varied(d, square, cube, &apart(at, i, j));
        for k in 0..3 {
            out[i + k] += gm_j * change[k];
            out[j + k] -= gm_i * change[k];
        }
    }
}

/// A massless body `j` under a massive body `i`.
#[inline(always)]
fn feel(gm_i: f64, i: usize, j: usize, block: usize, d: &[f64; 3], at: &[f64], out: &mut [f64]) {
    let square = dot(d, d);
    let cube = 1.0 / (square * square.sqrt());
    for k in 0..3 {
        out[j + k] -= gm_i * cube * d[k];
    }
    for base in (block..at.len()).step_by(block) {
        let change = varied(d, square, cube, &apart(at, base + i, base + j));
        for k in 0..3 {
            out[base + j + k] -= gm_i * change[k];
        }
    }
}

#[inline(always)]
fn varied(d: &[f64; 3], square: f64, cube: f64, change: &[f64; 3]) -> [f64; 3] {
    let along = 3.0 * dot(d, change) / square;
    [0, 1, 2].map(|k| cube * (change[k] - along * d[k]))
}

/// One term of the star on one body, with the reaction on the star.
fn star_on(cast: &Cast, term: &StarTerm, body: usize, at: &[f64], vel: &[f64], out: &mut [f64]) {
    let star_gm = cast.gm[0];
    let share = cast.gm[body] / star_gm;
    let block = 3 * cast.gm.len();
    let (r, v) = (apart(at, 0, 3 * body), apart(vel, 0, 3 * body));
    add(out, 0, 3 * body, share, &term.pull(star_gm, &r, &v));
    for base in (block..at.len()).step_by(block) {
        let (star, planet) = (base, base + 3 * body);
        let change = term.vary(star_gm, &r, &v, &apart(at, star, planet), &apart(vel, star, planet));
        add(out, star, planet, share, &change);
    }
}

fn add(out: &mut [f64], star: usize, planet: usize, share: f64, pull: &[f64; 3]) {
    for k in 0..3 {
        out[planet + k] += pull[k];
        out[star + k] -= share * pull[k];
    }
}

/// Separation from positions and what rounding left of them; the first difference is exact where the pair is close.
#[inline(always)]
fn close_apart(at: &[f64], low: &[f64], i: usize, j: usize) -> [f64; 3] {
    [0, 1, 2].map(|k| (at[j + k] - at[i + k]) + (low[j + k] - low[i + k]))
}

#[inline(always)]
fn apart(at: &[f64], i: usize, j: usize) -> [f64; 3] {
    [at[j] - at[i], at[j + 1] - at[i + 1], at[j + 2] - at[i + 2]]
}

#[inline(always)]
fn dot(a: &[f64; 3], b: &[f64; 3]) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}
