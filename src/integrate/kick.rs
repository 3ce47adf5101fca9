//! B: the planets' pull on one another and the jump from the star's motion about the centre of mass.

use super::star_terms::Terms;
use crate::kepler::{Body, Low};
use crate::lanes::{Real, add_keeping};

/// Runs B for the time `h`; with `TANGENT` for the tangent vector too.
///
/// Jump: qᵢ += h Σ mⱼvⱼ / M. Kick: vᵢ += h Σ G mⱼ (qⱼ − qᵢ)/d³, each pair once, and the star's `beside` terms.
/// With `WATCH`, `pairs` keeps the smallest distance² of each pair, taken along the straight relative motion
/// within `window` of now, so that an encounter between two kicks is not missed. Only the first `pulling` bodies
/// have mass: the rest feel them but pull nobody, so their cost is linear in their number.
///
/// Pair forces keep the total momentum, so jump and kick commute and B is exact; the star's terms do not, so with
/// them the jump is split in halves around the kick.
#[inline(always)]
pub fn kick<R: Real, const TANGENT: bool, const WATCH: bool, const BESIDE: bool>(
    bodies: &mut [Body<R>],
    pulling: usize,
    pairs: &mut [R],
    star_gm: R,
    beside: &Beside<'_, R>,
    h: R,
    window: R,
) {
    kick_keeping::<R, TANGENT, WATCH, BESIDE, false>(
        bodies,
        &mut [],
        pulling,
        pairs,
        R::splat(1.0) / star_gm,
        beside,
        h,
        window,
    );
}

/// [`kick`]; with `LOW` positions and velocities are sums of two parts, of which `low` holds the lower. What a body
/// gathers from all others is added once.
#[inline(always)]
pub(super) fn kick_keeping<
    R: Real,
    const TANGENT: bool,
    const WATCH: bool,
    const BESIDE: bool,
    const LOW: bool,
>(
    bodies: &mut [Body<R>],
    low: &mut [Low<R>],
    pulling: usize,
    pairs: &mut [R],
    inv_star_gm: R,
    beside: &Beside<'_, R>,
    h: R,
    window: R,
) {
    if BESIDE {
        let half = h * R::splat(0.5);
        for part in 0..2 {
            jump::<R, TANGENT, LOW>(&mut *bodies, low, pulling, inv_star_gm * half);
            if part == 0 {
                pull_pairs::<R, TANGENT, WATCH, LOW>(bodies, low, pulling, pairs, h, window);
                if beside.acting {
                    star_pull::<R, TANGENT, LOW>(bodies, low, beside, h);
                }
                if LOW {
                    add_gathered(bodies, low);
                }
            }
        }
    } else {
        jump::<R, TANGENT, LOW>(bodies, low, pulling, inv_star_gm * h);
        pull_pairs::<R, TANGENT, WATCH, LOW>(bodies, low, pulling, pairs, h, window);
        if LOW {
            add_gathered(bodies, low);
        }
    }
}

/// Adds what the kick has gathered to the velocities.
#[inline(always)]
fn add_gathered<R: Real>(bodies: &mut [Body<R>], low: &mut [Low<R>]) {
    for (b, low) in bodies.iter_mut().zip(low) {
        for k in 0..3 {
            add_keeping(&mut b.vel[k], &mut low.vel[k], low.gathered[k]);
            low.gathered[k] = R::splat(0.0);
        }
    }
}

/// The star's terms beside Newton's pull, and the satellite constant of each body.
pub struct Beside<'a, R> {
    /// Whether there are any.
    pub(super) acting: bool,
    pub(super) terms: Terms<R>,
    pub(super) satellites: &'a [R],
}

impl<R: Real> Beside<'_, R> {
    /// Newton's pull alone.
    #[inline(always)]
    pub fn none() -> Self {
        let zero = R::splat(0.0);
        let terms = Terms { relativity: zero, oblateness: zero, pole: [zero; 3] };
        Beside { acting: false, terms, satellites: &[] }
    }
}

#[inline(always)]
fn jump<R: Real, const TANGENT: bool, const LOW: bool>(
    bodies: &mut [Body<R>],
    low: &mut [Low<R>],
    pulling: usize,
    share: R,
) {
    let zero = R::splat(0.0);
    let mut shift = [zero; 3];
    let mut d_shift = [zero; 3];
    for b in bodies[..pulling].iter() {
        let weight = share * b.gm;
        for k in 0..3 {
            shift[k] = weight.mul_add(b.vel[k], shift[k]);
            if TANGENT {
                d_shift[k] = weight.mul_add(b.d_vel[k], d_shift[k]);
            }
        }
    }
    for (i, b) in bodies.iter_mut().enumerate() {
        for k in 0..3 {
            if LOW {
                add_keeping(&mut b.pos[k], &mut low[i].pos[k], shift[k]);
            } else {
                b.pos[k] = b.pos[k] + shift[k];
            }
            if TANGENT {
                b.d_pos[k] = b.d_pos[k] + d_shift[k];
            }
        }
    }
}

#[inline(always)]
fn star_pull<R: Real, const TANGENT: bool, const LOW: bool>(
    bodies: &mut [Body<R>],
    low: &mut [Low<R>],
    beside: &Beside<'_, R>,
    h: R,
) {
    for (i, (b, satellite)) in bodies.iter_mut().zip(beside.satellites).enumerate() {
        let (a, da) = beside.terms.pull::<TANGENT>(*satellite, &b.pos, &b.d_pos);
        for k in 0..3 {
            if LOW {
                low[i].gathered[k] = h.mul_add(a[k], low[i].gathered[k]);
            } else {
                b.vel[k] = h.mul_add(a[k], b.vel[k]);
            }
            if TANGENT {
                b.d_vel[k] = h.mul_add(da[k], b.d_vel[k]);
            }
        }
    }
}

#[inline(always)]
fn pull_pairs<R: Real, const TANGENT: bool, const WATCH: bool, const LOW: bool>(
    bodies: &mut [Body<R>],
    low: &mut [Low<R>],
    pulling: usize,
    pairs: &mut [R],
    h: R,
    window: R,
) {
    let zero = R::splat(0.0);
    let mut pair = 0;
    for i in 0..pulling {
        // What body i gathers stays out of memory until its last pair.
        let (front, others) = bodies.split_at_mut(i + 1);
        let me = &mut front[i];
        let (mut vel, mut d_vel) = (me.vel, me.d_vel);
        let mut gathered = if LOW { low[i].gathered } else { vel };
        for (j, b) in others.iter_mut().enumerate() {
            let mut d = [zero; 3];
            for k in 0..3 {
                d[k] = b.pos[k] - me.pos[k];
            }
            let d2 = d[2].mul_add(d[2], d[1].mul_add(d[1], d[0] * d[0]));
            if WATCH {
                let mut w = [zero; 3];
                for k in 0..3 {
                    w[k] = b.vel[k] - vel[k];
                }
                let nearest = nearest2(&d, &w, d2, window);
                pairs[pair] = nearest.min(pairs[pair]);
                pair += 1;
            }
            let inv_d2 = R::splat(1.0) / d2;
            let inv_d3 = inv_d2 * inv_d2.sqrt();
            let strength = h * inv_d3;
            let on_me = strength * b.gm;
            let on_b = strength * me.gm;
            for k in 0..3 {
                if LOW {
                    let theirs = &mut low[i + 1 + j].gathered[k];
                    gathered[k] = d[k].mul_add(on_me, gathered[k]);
                    *theirs = d[k].neg_mul_add(on_b, *theirs);
                } else {
                    vel[k] = d[k].mul_add(on_me, vel[k]);
                    b.vel[k] = d[k].neg_mul_add(on_b, b.vel[k]);
                }
            }
            if TANGENT {
                let mut dd = [zero; 3];
                for k in 0..3 {
                    dd[k] = b.d_pos[k] - me.d_pos[k];
                }
                let along = dd[2].mul_add(d[2], dd[1].mul_add(d[1], dd[0] * d[0]));
                let pull = R::splat(3.0) * along * inv_d2;
                for k in 0..3 {
                    let w = d[k].neg_mul_add(pull, dd[k]);
                    d_vel[k] = w.mul_add(on_me, d_vel[k]);
                    b.d_vel[k] = w.neg_mul_add(on_b, b.d_vel[k]);
                }
            }
        }
        (me.vel, me.d_vel) = (vel, d_vel);
        if LOW {
            low[i].gathered = gathered;
        }
    }
}

/// Smallest distance² within `window` of now if the relative motion `w` were straight.
#[inline(always)]
pub(super) fn nearest2<R: Real>(d: &[R; 3], w: &[R; 3], d2: R, window: R) -> R {
    let w2 = w[2].mul_add(w[2], w[1].mul_add(w[1], w[0] * w[0]));
    let dw = d[2].mul_add(w[2], d[1].mul_add(w[1], d[0] * w[0]));
    // Two planets at rest relative to each other: the tiny term keeps 0/0 away.
    let when = -(dw / (w2 + R::splat(1e-300)));
    let when = when.min(window).max(-window);
    d2 + when * when.mul_add(w2, dw + dw)
}
