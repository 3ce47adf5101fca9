//! B in Jacobi coordinates, and the way between them and the program's states.
//!
//! Bodies stand in a chain from the inside out. The k-th Jacobi position is that of body k relative to the centre of
//! mass of the star and all bodies before it; velocities likewise. The Kepler part of body k has the mass parameter
//! μₖ = G (star + bodies up to and including k); what that leaves of the pair forces is B. Any mass ratios will do.
//! Source: Wisdom & Holman (1991).

use super::State;
use super::kick::Beside;
use crate::kepler::{Body, Low};
use crate::lanes::{Real, add_keeping};

/// What the kick needs of a body beside its Jacobi coordinates.
#[derive(Clone, Copy)]
pub struct Relative<R> {
    /// gm/μ: the share of the body in the mass up to and including it.
    share: R,
    pos: [R; 3],
    vel: [R; 3],
    d_pos: [R; 3],
    pull: [R; 3],
    d_pull: [R; 3],
}

impl<R: Real> Relative<R> {
    #[inline(always)]
    pub fn new() -> Relative<R> {
        let zero = R::splat(0.0);
        let none = [zero; 3];
        Relative { share: zero, pos: none, vel: none, d_pos: none, pull: none, d_pull: none }
    }
}

#[inline(always)]
fn dot<R: Real>(a: &[R; 3], b: &[R; 3]) -> R {
    a[2].mul_add(b[2], a[1].mul_add(b[1], a[0] * b[0]))
}

/// 1/r² and 1/r³.
#[inline(always)]
fn inverse<R: Real>(r2: R) -> (R, R) {
    let inv2 = R::splat(1.0) / r2;
    (inv2, inv2 * inv2.sqrt())
}

/// d(−x/x³) = −(dx − 3 x (x·dx)/x²)/x³, without the factor 1/x³ and with the sign left out.
#[inline(always)]
fn tidal<R: Real>(x: &[R; 3], dx: &[R; 3], inv2: R) -> [R; 3] {
    let along = R::splat(3.0) * dot(x, dx) * inv2;
    let mut out = [along; 3];
    for k in 0..3 {
        out[k] = x[k].neg_mul_add(along, dx[k]);
    }
    out
}

/// Runs B for the time `h`; with `TANGENT` for the tangent vector too; `pairs` and `window` as for the heliocentric kick.
///
/// Pair forces are computed once per pair in star-centred positions, carried to Jacobi accelerations
/// aₖ − A₍ₖ₋₁₎ (A the acceleration of the centre of mass inside), and the Kepler pull is added back. With `LOW` velocities
/// are sums of two parts, of which `low` holds the lower.
#[inline(always)]
pub fn kick<R: Real, const TANGENT: bool, const BESIDE: bool, const LOW: bool>(
    bodies: &mut [Body<R>],
    low: &mut [Low<R>],
    relative: &mut [Relative<R>],
    pairs: &mut [R],
    star_gm: R,
    beside: &Beside<'_, R>,
    h: R,
    window: R,
) {
    let relative = &mut relative[..bodies.len()];
    star_centred::<R, TANGENT>(bodies, relative);
    planet_pairs::<R, TANGENT>(bodies, relative, pairs, window);
    let reaction = if BESIDE && beside.acting {
        star_pull::<R, TANGENT>(bodies, relative, star_gm, beside)
    } else {
        ([R::splat(0.0); 3], [R::splat(0.0); 3])
    };
    apply::<R, TANGENT, LOW>(bodies, low, relative, star_gm, reaction, h);
}

/// Star-centred positions and velocities: the Jacobi ones plus the offsets of the centres of mass inside.
#[inline(always)]
fn star_centred<R: Real, const TANGENT: bool>(bodies: &mut [Body<R>], relative: &mut [Relative<R>]) {
    let zero = R::splat(0.0);
    let (mut pos, mut vel, mut d_pos) = ([zero; 3], [zero; 3], [zero; 3]);
    for (b, r) in bodies.iter_mut().zip(relative.iter_mut()) {
        r.share = b.gm / b.mu;
        for k in 0..3 {
            r.pos[k] = b.pos[k] + pos[k];
            r.vel[k] = b.vel[k] + vel[k];
            pos[k] = r.share.mul_add(b.pos[k], pos[k]);
            vel[k] = r.share.mul_add(b.vel[k], vel[k]);
            r.pull[k] = zero;
            if TANGENT {
                r.d_pos[k] = b.d_pos[k] + d_pos[k];
                d_pos[k] = r.share.mul_add(b.d_pos[k], d_pos[k]);
                r.d_pull[k] = zero;
            }
        }
        let r2 = dot(&r.pos, &r.pos);
        b.near2 = r2.min(b.near2);
        b.far2 = r2.max(b.far2);
    }
}

#[inline(always)]
fn planet_pairs<R: Real, const TANGENT: bool>(
    bodies: &[Body<R>],
    relative: &mut [Relative<R>],
    pairs: &mut [R],
    window: R,
) {
    let zero = R::splat(0.0);
    let mut pair = 0;
    for i in 0..bodies.len() {
        for j in i + 1..bodies.len() {
            let (mut d, mut w) = ([zero; 3], [zero; 3]);
            for k in 0..3 {
                d[k] = relative[j].pos[k] - relative[i].pos[k];
                w[k] = relative[j].vel[k] - relative[i].vel[k];
            }
            let d2 = dot(&d, &d);
            pairs[pair] = super::kick::nearest2(&d, &w, d2, window).min(pairs[pair]);
            pair += 1;
            let (inv2, inv3) = inverse(d2);
            let (on_i, on_j) = (inv3 * bodies[j].gm, inv3 * bodies[i].gm);
            for k in 0..3 {
                relative[i].pull[k] = d[k].mul_add(on_i, relative[i].pull[k]);
                relative[j].pull[k] = d[k].neg_mul_add(on_j, relative[j].pull[k]);
            }
            if TANGENT {
                let mut dd = [zero; 3];
                for k in 0..3 {
                    dd[k] = relative[j].d_pos[k] - relative[i].d_pos[k];
                }
                let t = tidal(&d, &dd, inv2);
                for k in 0..3 {
                    relative[i].d_pull[k] = t[k].mul_add(on_i, relative[i].d_pull[k]);
                    relative[j].d_pull[k] = t[k].neg_mul_add(on_j, relative[j].d_pull[k]);
                }
            }
        }
    }
}

/// The star's terms beside Newton's pull on each body; answers with the star's reaction −Σ(m/M) a and its change.
#[inline(always)]
fn star_pull<R: Real, const TANGENT: bool>(
    bodies: &[Body<R>],
    relative: &mut [Relative<R>],
    star_gm: R,
    beside: &Beside<'_, R>,
) -> ([R; 3], [R; 3]) {
    let zero = R::splat(0.0);
    let (mut star, mut d_star) = ([zero; 3], [zero; 3]);
    for ((b, r), satellite) in bodies.iter().zip(relative.iter_mut()).zip(beside.satellites) {
        let (a, da) = beside.terms.pull::<TANGENT>(*satellite, &r.pos, &r.d_pos);
        let weight = b.gm / star_gm;
        for k in 0..3 {
            r.pull[k] = r.pull[k] + a[k];
            star[k] = weight.neg_mul_add(a[k], star[k]);
            if TANGENT {
                r.d_pull[k] = r.d_pull[k] + da[k];
                d_star[k] = weight.neg_mul_add(da[k], d_star[k]);
            }
        }
    }
    (star, d_star)
}

/// The star's pairs (but for the innermost, which its Kepler motion holds whole), then from accelerations of bodies to
/// those of Jacobi coordinates.
#[inline(always)]
fn apply<R: Real, const TANGENT: bool, const LOW: bool>(
    bodies: &mut [Body<R>],
    low: &mut [Low<R>],
    relative: &mut [Relative<R>],
    star_gm: R,
    reaction: ([R; 3], [R; 3]),
    h: R,
) {
    let zero = R::splat(0.0);
    let (mut inner, mut d_inner) = reaction;
    for i in 1..bodies.len() {
        let r = &mut relative[i];
        let (inv2, inv3) = inverse(dot(&r.pos, &r.pos));
        let (on_star, on_body) = (inv3 * bodies[i].gm, inv3 * star_gm);
        for k in 0..3 {
            inner[k] = r.pos[k].mul_add(on_star, inner[k]);
            r.pull[k] = r.pos[k].neg_mul_add(on_body, r.pull[k]);
        }
        if TANGENT {
            let t = tidal(&r.pos, &r.d_pos, inv2);
            for k in 0..3 {
                d_inner[k] = t[k].mul_add(on_star, d_inner[k]);
                r.d_pull[k] = t[k].neg_mul_add(on_body, r.d_pull[k]);
            }
        }
    }
    for i in 0..bodies.len() {
        let (b, r) = (&mut bodies[i], &relative[i]);
        let mut a = [zero; 3];
        let mut da = [zero; 3];
        for k in 0..3 {
            a[k] = r.pull[k] - inner[k];
            inner[k] = r.share.mul_add(a[k], inner[k]);
            if TANGENT {
                da[k] = r.d_pull[k] - d_inner[k];
                d_inner[k] = r.share.mul_add(da[k], d_inner[k]);
            }
        }
        if i > 0 {
            let (inv2, inv3) = inverse(dot(&b.pos, &b.pos));
            let back = b.mu * inv3;
            for k in 0..3 {
                a[k] = b.pos[k].mul_add(back, a[k]);
            }
            if TANGENT {
                let t = tidal(&b.pos, &b.d_pos, inv2);
                for k in 0..3 {
                    da[k] = t[k].mul_add(back, da[k]);
                }
            }
        }
        for k in 0..3 {
            if LOW {
                add_keeping(&mut b.vel[k], &mut low[i].vel[k], h * a[k]);
            } else {
                b.vel[k] = h.mul_add(a[k], b.vel[k]);
            }
            if TANGENT {
                b.d_vel[k] = h.mul_add(da[k], b.d_vel[k]);
            }
        }
    }
}

/// Positions and velocities of bodies in one chain.
type Chain = (Vec<[f64; 3]>, Vec<[f64; 3]>);

/// From heliocentric positions and barycentric velocities, bodies in the order of the chain. Linear, so it serves
/// displacements too.
pub(super) fn to_jacobi(star_gm: f64, gm: &[f64], pos: &[[f64; 3]], vel: &[[f64; 3]]) -> Chain {
    let star_vel = star_velocity(star_gm, gm, vel);
    let (mut out_pos, mut out_vel) = (Vec::new(), Vec::new());
    let (mut centre, mut motion, mut mass) = ([0.0; 3], [0.0; 3], star_gm);
    for (i, gm) in gm.iter().enumerate() {
        let relative = [0, 1, 2].map(|k| vel[i][k] - star_vel[k]);
        let (jacobi_pos, jacobi_vel) =
            ([0, 1, 2].map(|k| pos[i][k] - centre[k]), [0, 1, 2].map(|k| relative[k] - motion[k]));
        mass += gm;
        for k in 0..3 {
            centre[k] += gm / mass * jacobi_pos[k];
            motion[k] += gm / mass * jacobi_vel[k];
        }
        out_pos.push(jacobi_pos);
        out_vel.push(jacobi_vel);
    }
    (out_pos, out_vel)
}

/// The way back from [`to_jacobi`].
pub(super) fn from_jacobi(star_gm: f64, gm: &[f64], pos: &[[f64; 3]], vel: &[[f64; 3]]) -> Chain {
    let (mut out_pos, mut out_vel) = (Vec::new(), Vec::new());
    let (mut centre, mut motion, mut mass) = ([0.0; 3], [0.0; 3], star_gm);
    for (i, gm) in gm.iter().enumerate() {
        out_pos.push([0, 1, 2].map(|k| pos[i][k] + centre[k]));
        out_vel.push([0, 1, 2].map(|k| vel[i][k] + motion[k]));
        mass += gm;
        for k in 0..3 {
            centre[k] += gm / mass * pos[i][k];
            motion[k] += gm / mass * vel[i][k];
        }
    }
    // The motion of the centre of mass of all relative to the star is now known; barycentric velocities follow.
    for v in &mut out_vel {
        for k in 0..3 {
            v[k] -= motion[k];
        }
    }
    (out_pos, out_vel)
}

/// Velocity (or its displacement) of the star when the total momentum is zero.
fn star_velocity(star_gm: f64, gm: &[f64], vel: &[[f64; 3]]) -> [f64; 3] {
    let mut star = [0.0; 3];
    for (gm, vel) in gm.iter().zip(vel) {
        for k in 0..3 {
            star[k] -= gm * vel[k] / star_gm;
        }
    }
    star
}

/// The chain of a state from the inside out: by semi-major axis about the star alone, unbound bodies last by distance.
pub(super) fn chain_order(state: &State) -> Vec<usize> {
    let star_vel = star_velocity(state.star_gm, &state.gm, &state.vel);
    let size = |i: usize| {
        let r = state.pos[i].iter().map(|x| x * x).sum::<f64>().sqrt();
        let v2: f64 = (0..3).map(|k| (state.vel[i][k] - star_vel[k]).powi(2)).sum();
        let inverse_axis = 2.0 / r - v2 / (state.star_gm + state.gm[i]);
        if inverse_axis > 0.0 { 1.0 / inverse_axis } else { 1e300 * r }
    };
    let sizes: Vec<f64> = (0..state.gm.len()).map(size).collect();
    let mut order: Vec<usize> = (0..state.gm.len()).collect();
    order.sort_by(|a, b| sizes[*a].total_cmp(&sizes[*b]));
    order
}

/// Picks entries in the order given.
pub(super) fn pick<T: Copy>(order: &[usize], from: &[T]) -> Vec<T> {
    order.iter().map(|i| from[*i]).collect()
}
