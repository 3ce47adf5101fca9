//! Physics as data: which terms act, with which parameters; and their evaluation for the adaptive integrator.
//!
//! Newton's pull of every massive pair, each pair once; massless bodies feel the massive ones and do not pull, so
//! their cost is linear in their number. Terms of the star on each planet ([`StarTerm`]) come on top; the star takes
//! the opposite reaction −(m/M) a, so that the total momentum is kept.

mod cast;
mod star;

pub use cast::Cast;
pub use star::{Acting, StarTerm, rate_matched, rate_unmatched};

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
    /// only where [`Forces::needs_velocity`]. Panics when a length differs.
    pub fn evaluate(&self, cast: &Cast, at: &[f64], low: &[f64], vel: &[f64], out: &mut [f64]) -> u64 {
        out.fill(0.0);
        let (at, low, vel) = (at.as_chunks().0, low.as_chunks().0, vel.as_chunks().0);
        let out = out.as_chunks_mut().0;
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
        let (at, vel) = (at.as_chunks().0, vel.as_chunks().0);
        let mut total = 0.0;
        for acting in &self.star {
            for body in acting.bodies(cast).filter(|&body| cast.gm[body] != 0.0) {
                let (r, v) = (apart(at, 0, body), apart(vel, 0, body));
                total += cast.gm[body] * dot(&acting.term.pull(cast.gm[0], &r, &v), &v);
            }
        }
        total
    }
}

/// Newton's pulls and their variations.
fn newton(cast: &Cast, at: &[[f64; 3]], low: &[[f64; 3]], out: &mut [[f64; 3]]) -> u64 {
    let mut pairs = 0;
    for (index, &i) in cast.massive.iter().enumerate() {
        for &j in &cast.massive[index + 1..] {
            pull(cast, i, j, at, low, out);
        }
        for &j in &cast.massless {
            feel(cast, i, j, at, low, out);
        }
        pairs += cast.massive.len() - index - 1 + cast.massless.len();
    }
    pairs as u64
}

/// Both bodies of a massive pair. δ(d/d³) = (δd − 3 d (d·δd)/d²)/d³.
#[inline(always)]
fn pull(cast: &Cast, i: usize, j: usize, at: &[[f64; 3]], low: &[[f64; 3]], out: &mut [[f64; 3]]) {
    let (gm_i, gm_j) = (cast.gm[i], cast.gm[j]);
    let d = close_apart(at, low, i, j);
    let square = dot(&d, &d);
    let cube = 1.0 / (square * square.sqrt());
    draw(&mut out[i], gm_j * cube, &d);
    draw(&mut out[j], -gm_i * cube, &d);
    for base in (cast.bodies()..at.len()).step_by(cast.bodies()) {
        let (i, j) = (base + i, base + j);
        let change = varied(&d, square, &apart(at, i, j));
        draw(&mut out[i], gm_j * cube, &change);
        draw(&mut out[j], -gm_i * cube, &change);
    }
}

/// A massless body `j` under a massive body `i`.
#[inline(always)]
fn feel(cast: &Cast, i: usize, j: usize, at: &[[f64; 3]], low: &[[f64; 3]], out: &mut [[f64; 3]]) {
    let d = close_apart(at, low, i, j);
    let square = dot(&d, &d);
    let strength = -cast.gm[i] / (square * square.sqrt());
    draw(&mut out[j], strength, &d);
    for base in (cast.bodies()..at.len()).step_by(cast.bodies()) {
        let change = varied(&d, square, &apart(at, base + i, base + j));
        draw(&mut out[base + j], strength, &change);
    }
}

#[inline(always)]
fn varied(d: &[f64; 3], square: f64, change: &[f64; 3]) -> [f64; 3] {
    let along = 3.0 * dot(d, change) / square;
    [change[0] - along * d[0], change[1] - along * d[1], change[2] - along * d[2]]
}

/// One term of the star on one body, with the reaction on the star.
fn star_on(
    cast: &Cast,
    term: &StarTerm,
    body: usize,
    at: &[[f64; 3]],
    vel: &[[f64; 3]],
    out: &mut [[f64; 3]],
) {
    let star_gm = cast.gm[0];
    let share = cast.gm[body] / star_gm;
    let (r, v) = (apart(at, 0, body), apart(vel, 0, body));
    let pull = term.pull(star_gm, &r, &v);
    draw(&mut out[body], 1.0, &pull);
    draw(&mut out[0], -share, &pull);
    for star in (cast.bodies()..at.len()).step_by(cast.bodies()) {
        let planet = star + body;
        let change = term.vary(star_gm, &r, &v, &apart(at, star, planet), &apart(vel, star, planet));
        draw(&mut out[planet], 1.0, &change);
        draw(&mut out[star], -share, &change);
    }
}

#[inline(always)]
fn draw(out: &mut [f64; 3], strength: f64, along: &[f64; 3]) {
    out[0] += strength * along[0];
    out[1] += strength * along[1];
    out[2] += strength * along[2];
}

/// Separation from positions and what rounding left of them; the first difference is exact where the pair is close.
#[inline(always)]
fn close_apart(at: &[[f64; 3]], low: &[[f64; 3]], i: usize, j: usize) -> [f64; 3] {
    let (d, rest) = (apart(at, i, j), apart(low, i, j));
    [d[0] + rest[0], d[1] + rest[1], d[2] + rest[2]]
}

#[inline(always)]
fn apart(at: &[[f64; 3]], i: usize, j: usize) -> [f64; 3] {
    let (a, b) = (&at[i], &at[j]);
    [b[0] - a[0], b[1] - a[1], b[2] - a[2]]
}

#[inline(always)]
fn dot(a: &[f64; 3], b: &[f64; 3]) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}
