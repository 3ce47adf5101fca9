//! The Kepler drift of several bodies at once, with its tangent map.
//!
//! Staged: set-up and guess for all bodies, then the series for all, the correction for all and so on, so that short
//! independent pieces of work overlap instead of one long chain of dependent ones.

use super::stumpff::{self, Gs};
use super::universal::{self, Orbit, Solved};
use crate::lanes::{Mask, Real, add_keeping};

/// A body on its way round a centre. Lengths au, times day, `mu` = G × mass of the centre in au³ day⁻².
#[derive(Clone, Copy)]
pub struct Body<R> {
    pub mu: R,
    pub gm: R,
    pub pos: [R; 3],
    pub vel: [R; 3],
    /// Tangent vector: a small displacement of `pos` and `vel`, up to one common factor.
    pub d_pos: [R; 3],
    pub d_vel: [R; 3],
    /// Smallest and largest distance² from the centre met at the start of a drift, au².
    pub near2: R,
    pub far2: R,
}

impl<R: Real> Body<R> {
    /// All zero but for the watch on distances.
    #[inline(always)]
    pub fn still() -> Body<R> {
        let zero = R::splat(0.0);
        Body {
            mu: zero,
            gm: zero,
            pos: [zero; 3],
            vel: [zero; 3],
            d_pos: [zero; 3],
            d_vel: [zero; 3],
            near2: R::splat(f64::MAX),
            far2: zero,
        }
    }
}

/// What rounding has cut off a body's position and velocity, and room for the change of velocity that a kick gathers.
#[derive(Clone, Copy)]
pub struct Low<R> {
    pub pos: [R; 3],
    pub vel: [R; 3],
    pub gathered: [R; 3],
}

impl<R: Real> Low<R> {
    #[inline(always)]
    pub fn none() -> Low<R> {
        let none = [R::splat(0.0); 3];
        Low { pos: none, vel: none, gathered: none }
    }
}

/// What is kept of a body between the stages.
#[derive(Clone, Copy)]
pub struct Midway<R: Real> {
    orbit: Orbit<R>,
    inv_r0: R,
    solved: Solved<R>,
    /// Correction of `solved.s` that is still to be made.
    w: R,
    good: R::Mask,
}

impl<R: Real> Midway<R> {
    /// Anything; every field is written before it is read.
    #[inline(always)]
    pub fn blank() -> Midway<R> {
        let zero = R::splat(0.0);
        let g = Gs { g1: zero, g2: zero, g3: zero, g4: zero, g5: zero };
        Midway {
            orbit: Orbit { mu: zero, r0: zero, eta: zero, beta: zero, zeta: zero },
            inv_r0: zero,
            solved: Solved { s: zero, g, h_by_beta: zero },
            w: zero,
            good: zero.lt(zero),
        }
    }
}

#[inline(always)]
fn dot<R: Real>(a: &[R; 3], b: &[R; 3]) -> R {
    a[2].mul_add(b[2], a[1].mul_add(b[1], a[0] * b[0]))
}

/// Moves every body along its two-body orbit for the time `h`; with `TANGENT` the tangent vector too.
///
/// r₁ = f r₀ + g v₀, v₁ = ḟ r₀ + ġ v₀ with f = 1 − μG₂/r₀, g = r₀G₁ + ηG₂, ḟ = −μG₁/(r r₀), ġ = 1 − μG₂/r.
/// Any step and any orbit except exactly radial passage through the centre; a step of 0 changes no bit.
/// Lanes outside `active` never cause extra work; what they hold afterwards is of no use unless `h` is 0 there.
/// Source: Stumpff (1962), Battin (1987); tangent map by differentiating these formulas (cf. Mikkola & Innanen 1999).
#[inline(always)]
pub fn drift<R: Real, const TANGENT: bool, const WATCH: bool>(
    bodies: &mut [Body<R>],
    midway: &mut [Midway<R>],
    h: R,
    active: R::Mask,
) {
    drift_keeping::<R, TANGENT, WATCH, false>(bodies, &mut [], midway, &[h], &[active]);
}

/// [`drift`] of several groups of bodies, as many in each, with a time `h` and a mask `active` for each group.
///
/// With `LOW` positions and velocities are sums of two parts, of which `low` holds the lower.
#[inline(always)]
pub fn drift_keeping<R: Real, const TANGENT: bool, const WATCH: bool, const LOW: bool>(
    bodies: &mut [Body<R>],
    low: &mut [Low<R>],
    midway: &mut [Midway<R>],
    h: &[R],
    active: &[R::Mask],
) {
    let count = bodies.len();
    let midway = &mut midway[..count];
    solve::<R, WATCH>(bodies, midway, h, active);
    for k in 0..count {
        let (to_pos, to_vel) = update::<R, TANGENT>(&mut bodies[k], &midway[k]);
        let b = &mut bodies[k];
        for axis in 0..3 {
            if LOW {
                add_keeping(&mut b.pos[axis], &mut low[k].pos[axis], to_pos[axis]);
                add_keeping(&mut b.vel[axis], &mut low[k].vel[axis], to_vel[axis]);
            } else {
                b.pos[axis] = b.pos[axis] + to_pos[axis];
                b.vel[axis] = b.vel[axis] + to_vel[axis];
            }
        }
    }
}

/// Solves Kepler's equation of every body.
#[inline(always)]
fn solve<R: Real, const WATCH: bool>(
    bodies: &mut [Body<R>],
    midway: &mut [Midway<R>],
    h: &[R],
    active: &[R::Mask],
) {
    let in_group = (bodies.len() / h.len()).max(1);
    for (g, (bodies, midway)) in bodies.chunks_mut(in_group).zip(midway.chunks_mut(in_group)).enumerate() {
        for (b, m) in bodies.iter_mut().zip(midway) {
            set_up::<R, WATCH>(b, m);
            m.solved.s = universal::guess(&m.orbit, m.inv_r0, h[g]);
        }
    }
    for m in midway.iter_mut() {
        m.solved.g = stumpff::series(m.orbit.beta, m.solved.s);
    }
    let mut missed = R::splat(0.0).lt(R::splat(0.0));
    for (g, midway) in midway.chunks_mut(in_group).enumerate() {
        for m in midway {
            (m.w, m.good) = universal::correct_once(&m.orbit, m.solved.s, &m.solved.g, h[g]);
            missed = missed.or(active[g].and(m.good.not()));
        }
    }
    for m in midway.iter_mut() {
        m.solved = universal::corrected(&m.orbit, m.solved.s, &m.solved.g, m.w);
    }
    if missed.any() {
        for (g, midway) in midway.chunks_mut(in_group).enumerate() {
            for m in midway {
                let wanted = active[g].and(m.good.not());
                if wanted.any() {
                    m.solved = universal::mend(&m.orbit, h[g], wanted, &m.solved);
                }
            }
        }
    }
}

#[inline(always)]
fn set_up<R: Real, const WATCH: bool>(b: &mut Body<R>, m: &mut Midway<R>) {
    let r2 = dot(&b.pos, &b.pos);
    if WATCH {
        b.near2 = r2.min(b.near2);
        b.far2 = r2.max(b.far2);
    }
    let r0 = r2.sqrt();
    let inv_r0 = R::splat(1.0) / r0;
    let v2 = dot(&b.vel, &b.vel);
    let eta = dot(&b.pos, &b.vel);
    let beta = (b.mu * inv_r0).mul_add(R::splat(2.0), -v2);
    let zeta = beta.neg_mul_add(r0, b.mu);
    m.orbit = Orbit { mu: b.mu, r0, eta, beta, zeta };
    m.inv_r0 = inv_r0;
}

/// Moves the tangent vector and gives what is to be added to position and velocity.
#[inline(always)]
fn update<R: Real, const TANGENT: bool>(b: &mut Body<R>, m: &Midway<R>) -> ([R; 3], [R; 3]) {
    let Orbit { mu, r0, eta, beta, zeta } = m.orbit;
    let Solved { s, g, h_by_beta } = m.solved;
    let inv_r0 = m.inv_r0;
    let r = r0 + eta.mul_add(g.g1, zeta * g.g2);
    let inv_r = R::splat(1.0) / r;
    let (mu_by_r0, mu_by_r) = (mu * inv_r0, mu * inv_r);
    let mu_by_both = mu_by_r0 * inv_r;
    let f_less_1 = -(mu_by_r0 * g.g2);
    // Not h − μG₃, the same if s solved Kepler's equation exactly: the little it is off is one-sided round an orbit. This
    // way it is a slip in time along the orbit; that way it would be a step off the orbit, and the energy drifts.
    let g_time = r0.mul_add(g.g1, eta * g.g2);
    let f_dot = -(mu_by_both * g.g1);
    let g_dot_less_1 = -(mu_by_r * g.g2);
    let (pos, vel) = (b.pos, b.vel);
    let (mut to_pos, mut to_vel) = (pos, vel);
    for k in 0..3 {
        to_pos[k] = f_less_1.mul_add(pos[k], g_time * vel[k]);
        to_vel[k] = f_dot.mul_add(pos[k], g_dot_less_1 * vel[k]);
    }
    if !TANGENT {
        return (to_pos, to_vel);
    }
    let half = R::splat(0.5);
    let (d_pos, d_vel) = (b.d_pos, b.d_vel);
    let d_r0 = dot(&pos, &d_pos) * inv_r0;
    let d_eta = dot(&d_pos, &vel) + dot(&pos, &d_vel);
    let r0_change = d_r0 * inv_r0;
    let d_beta = R::splat(-2.0) * mu_by_r0.mul_add(r0_change, dot(&vel, &d_vel));
    // ∂Gₙ/∂β at fixed s = (n Gₙ₊₂ − s Gₙ₊₁)/2.
    let half_s = half * s;
    let g1_beta = half_s.neg_mul_add(g.g2, half * g.g3);
    let g2_beta = half_s.neg_mul_add(g.g3, g.g4);
    let g3_beta = half_s.neg_mul_add(g.g4, R::splat(1.5) * g.g5);
    let g0 = g.g2.neg_mul_add(beta, R::splat(1.0));
    let at_fixed_s = r0.mul_add(g1_beta, eta.mul_add(g2_beta, mu * g3_beta));
    let d_h = h_by_beta * d_beta;
    let d_s = (d_r0.neg_mul_add(g.g1, d_eta.neg_mul_add(g.g2, at_fixed_s.neg_mul_add(d_beta, d_h)))) * inv_r;
    let d_g1 = g1_beta.mul_add(d_beta, g0 * d_s);
    let d_g2 = g2_beta.mul_add(d_beta, g.g1 * d_s);
    let d_g3 = g3_beta.mul_add(d_beta, g.g2 * d_s);
    let d_g0 = -beta.mul_add(d_g2, d_beta * g.g2);
    let d_r = d_r0.mul_add(g0, r0.mul_add(d_g0, d_eta.mul_add(g.g1, eta.mul_add(d_g1, mu * d_g2))));
    let d_f = -mu_by_r0.mul_add(d_g2, f_less_1 * r0_change);
    let d_g = mu.neg_mul_add(d_g3, d_h);
    let r_change = d_r * inv_r;
    let d_f_dot = -mu_by_both.mul_add(d_g1, f_dot * (r_change + r0_change));
    let d_g_dot = -mu_by_r.mul_add(d_g2, g_dot_less_1 * r_change);
    for k in 0..3 {
        let of_coefficients = d_f.mul_add(pos[k], d_g * vel[k]);
        b.d_pos[k] = d_pos[k] + f_less_1.mul_add(d_pos[k], g_time.mul_add(d_vel[k], of_coefficients));
        let of_coefficients = d_f_dot.mul_add(pos[k], d_g_dot * vel[k]);
        b.d_vel[k] = d_vel[k] + f_dot.mul_add(d_pos[k], g_dot_less_1.mul_add(d_vel[k], of_coefficients));
    }
    (to_pos, to_vel)
}
