//! Kepler's equation in universal variables: h = r₀ s + η G₂ + ζ G₃.
//!
//! η = r₀·v₀, β = 2μ/r₀ − v₀², ζ = μ − β r₀; s is the time-like variable with ds = dt/r
//! (Stumpff 1962; Battin 1987). Good for ellipse, parabola and hyperbola alike.

use super::stumpff::{self, Gs, SERIES_REACH};
use crate::lanes::{Mask, Piece, Real};

/// What Kepler's equation needs to know of an orbit.
#[derive(Clone, Copy)]
pub(super) struct Orbit<R> {
    pub mu: R,
    pub r0: R,
    pub eta: R,
    pub beta: R,
    pub zeta: R,
}

/// A solved equation.
#[derive(Clone, Copy)]
pub(super) struct Solved<R> {
    pub s: R,
    pub g: Gs<R>,
    /// ∂h/∂β through the whole periods that the robust branch takes off the time h; 0 where none were.
    pub h_by_beta: R,
}

/// The limit of [`Correction::miss`] below which one correction of order five ends at round-off.
const CLOSE: f64 = 1e-7;

/// Start value: five terms of the reversed series of h(s) about s = 0.
#[inline(always)]
pub(super) fn guess<R: Real>(o: &Orbit<R>, inv_r0: R, h: R) -> R {
    let a = o.eta * inv_r0 * R::splat(0.5);
    let b = o.zeta * inv_r0 * R::splat(1.0 / 6.0);
    let c = -(o.beta * a) * R::splat(1.0 / 12.0);
    let d = -(o.beta * b) * R::splat(1.0 / 20.0);
    let x = h * inv_r0;
    let aa = a * a;
    let k2 = -a;
    let k3 = aa.mul_add(R::splat(2.0), -b);
    let k4 = (a * b).mul_add(R::splat(5.0), (a * aa).neg_mul_add(R::splat(5.0), -c));
    let k5 = (a * c).mul_add(
        R::splat(6.0),
        (b * b).mul_add(
            R::splat(3.0),
            (aa * aa).mul_add(R::splat(14.0), (aa * b).neg_mul_add(R::splat(21.0), -d)),
        ),
    );
    let xx = x * x;
    x * xx.mul_add(xx.mul_add(k5, x.mul_add(k4, k3)), x.mul_add(k2, R::splat(1.0)))
}

/// The correction w at s, and how far from converged it is.
struct Correction<R> {
    w: R,
    miss: R,
    /// f and its first two derivatives, for the robust branch.
    f: R,
    f1: R,
    f2: R,
}

/// One correction of order five: the reversed series of f about s with four derivatives.
///
/// `miss` = (f″y/2f′)² + |f‴/6f′| y² + 0.02 |β| y² with the Newton step y (not w: far off the polynomial w has
/// roots of its own): below [`CLOSE`] the next term is under round-off. The middle
/// term matters where a long step ends near a sharp pericentre: f′ = r is small there while f″ passes through 0.
#[inline(always)]
fn correct<R: Real>(o: &Orbit<R>, s: R, g: &Gs<R>, h: R) -> Correction<R> {
    let g0 = g.g2.neg_mul_add(o.beta, R::splat(1.0));
    let f = o.r0.mul_add(s, o.eta.mul_add(g.g2, o.zeta.mul_add(g.g3, -h)));
    let f1 = o.r0 + o.eta.mul_add(g.g1, o.zeta * g.g2);
    let f2 = o.eta.mul_add(g0, o.zeta * g.g1);
    let f3 = o.zeta.mul_add(g0, -(o.beta * o.eta) * g.g1);
    let inv = R::splat(1.0) / f1;
    let (half_f2, sixth_f3) = (f2 * R::splat(0.5), f3 * R::splat(1.0 / 6.0));
    let y = -(f * inv);
    let a = half_f2 * inv;
    let b = sixth_f3 * inv;
    let c = o.beta * a * R::splat(-1.0 / 12.0);
    let aa = a * a;
    let k3 = aa.mul_add(R::splat(2.0), -b);
    let k4 = a.mul_add(b * R::splat(5.0), (a * aa).neg_mul_add(R::splat(5.0), -c));
    let yy = y * y;
    let w = y * yy.mul_add(y.mul_add(k4, k3), y.neg_mul_add(a, R::splat(1.0)));
    let ay = a * y;
    let miss = ay.mul_add(ay, yy * o.beta.abs().mul_add(R::splat(0.02), b.abs()));
    Correction { w, miss, f, f1, f2 }
}

/// The correction w of s after one evaluation of the series there; the mask tells the lanes where that is enough.
#[inline(always)]
pub(super) fn correct_once<R: Real>(o: &Orbit<R>, s: R, g: &Gs<R>, h: R) -> (R, R::Mask) {
    let c = correct(o, s, g, h);
    let z = (o.beta * s * s).abs();
    (c.w, c.miss.lt(R::splat(CLOSE)).and(z.lt(R::splat(SERIES_REACH))))
}

/// The solution s + w.
#[inline(always)]
pub(super) fn corrected<R: Real>(o: &Orbit<R>, s: R, g: &Gs<R>, w: R) -> Solved<R> {
    Solved { s: s + w, g: stumpff::at_small_sum(o.beta, s, g, w), h_by_beta: R::splat(0.0) }
}

/// Solves in the lanes of `wanted`, whatever the orbit and the step; the other lanes hold nothing of use.
///
/// Whole periods are taken off; then Laguerre steps (Conway 1986, n = 5) inside a shrinking bracket. A lane that
/// has converged is frozen, so no lane's bits depend on its neighbours.
#[inline(always)]
fn solve_robust<R: Real>(o: &Orbit<R>, h: R, wanted: R::Mask) -> Solved<R> {
    let zero = R::splat(0.0);
    let less = less_whole_periods(o, h);
    // Time runs forward from here on; a backward step is the mirror image.
    let backward = less.left.lt(zero);
    let forward = Orbit { eta: R::select(backward, -o.eta, o.eta), ..*o };
    let time = less.left.abs();
    let mut bracket = Bracket { low: zero, high: R::select(less.bound, less.turn, R::splat(f64::MAX)) };
    let mut s = R::select(less.bound, time * less.safe_beta / o.mu, time / o.r0);
    let mut done_s = s;
    let mut done_w = zero;
    let mut done_g = stumpff::full_range(o.beta, s, wanted);
    let mut open = wanted;
    for _ in 0..100 {
        let g = stumpff::full_range(o.beta, s, open);
        let c = correct(&forward, s, &g, time);
        let w_fits = c.miss.lt(R::splat(CLOSE));
        done_s = R::select(open, s, done_s);
        done_w = R::select(open, R::select(w_fits, c.w, zero), done_w);
        done_g = stumpff::blend::<R>(open, &g, &done_g);
        open = open.and(w_fits.not());
        if !open.any() {
            break;
        }
        let next = bracket.next(s, &c, open);
        let stuck = (next - s).abs().lt(R::splat(1e-16) * s);
        open = open.and(stuck.not());
        s = R::select(open, next, s);
        if !open.any() {
            break;
        }
    }
    let g = stumpff::at_small_sum(o.beta, done_s, &done_g, done_w);
    let s = done_s + done_w;
    mirrored(backward, Solved { s, g, h_by_beta: less.h_by_beta })
}

/// A step without its whole periods.
struct Less<R: Real> {
    bound: R::Mask,
    /// β where the orbit is bound, else 1.
    safe_beta: R,
    /// s of one period.
    turn: R,
    left: R,
    h_by_beta: R,
}

#[inline(always)]
fn less_whole_periods<R: Real>(o: &Orbit<R>, h: R) -> Less<R> {
    let (zero, one) = (R::splat(0.0), R::splat(1.0));
    let two_pi = R::splat(2.0 * std::f64::consts::PI);
    let bound = zero.lt(o.beta);
    let safe_beta = R::select(bound, o.beta, one);
    let turn = two_pi / safe_beta.sqrt();
    let period = turn * o.mu / safe_beta;
    let turns = (h / period).round();
    let taken = bound.and(turns.lt(zero).or(zero.lt(turns)));
    let turns = R::select(taken, turns, zero);
    // The part of 2π that a double misses matters once many periods are taken off.
    const TWO_PI_LOW: f64 = 2.449_293_598_294_706_4e-16;
    let low = period * R::splat(TWO_PI_LOW / (2.0 * std::f64::consts::PI));
    let left = turns.neg_mul_add(low, turns.neg_mul_add(period, h));
    let left = R::select(taken, left, h);
    let h_by_beta = R::select(taken, R::splat(1.5) * turns * period / safe_beta, zero);
    Less { bound, safe_beta, turn, left, h_by_beta }
}

/// Between which s the solution lies; `high` is the largest number there is while nothing is known.
struct Bracket<R> {
    low: R,
    high: R,
}

impl<R: Real> Bracket<R> {
    /// Draws the bracket in by what was found at s, in the lanes still open, and gives the next s.
    #[inline(always)]
    fn next(&mut self, s: R, c: &Correction<R>, open: R::Mask) -> R {
        let (zero, half) = (R::splat(0.0), R::splat(0.5));
        let below = c.f.lt(zero);
        self.low = R::select(open.and(below), s, self.low);
        self.high = R::select(open.and(below.not()), s, self.high);
        let under_root = (R::splat(16.0) * c.f1).mul_add(c.f1, -(R::splat(20.0) * c.f * c.f2));
        let laguerre = s - R::splat(5.0) * c.f / (c.f1 + under_root.sqrt());
        let unbounded = self.high.lt(R::splat(f64::MAX)).not();
        let middle = R::select(unbounded, s + s, half * (self.low + self.high));
        // Far out on a hyperbola time grows like an exponential of s, where Laguerre steps are short (or overflow
        // to no step at all) and halving the bracket is the faster way; one step at most quadruples s.
        let inside = zero
            .lt(under_root)
            .and(self.low.lt(laguerre))
            .and(laguerre.lt(self.high))
            .and(laguerre.lt(R::splat(4.0) * s));
        R::select(inside, laguerre, middle)
    }
}

/// The solution of the forward step turned back in the lanes of `backward`: s, G₁, G₃ and G₅ are odd.
#[inline(always)]
fn mirrored<R: Real>(backward: R::Mask, forward: Solved<R>) -> Solved<R> {
    let Solved { s, g, h_by_beta } = forward;
    Solved {
        s: R::select(backward, -s, s),
        g: Gs {
            g1: R::select(backward, -g.g1, g.g1),
            g2: g.g2,
            g3: R::select(backward, -g.g3, g.g3),
            g4: g.g4,
            g5: R::select(backward, -g.g5, g.g5),
        },
        h_by_beta,
    }
}

/// [`solve_robust`] in the lanes of `wanted`, in a function of its own; `fast` is kept in the others.
#[inline(always)]
pub(super) fn mend<R: Real>(o: &Orbit<R>, h: R, wanted: R::Mask, fast: &Solved<R>) -> Solved<R> {
    let robust = R::apart(Robust { orbit: *o, h, wanted });
    merge::<R>(wanted.not(), fast, &robust)
}

struct Robust<R: Real> {
    orbit: Orbit<R>,
    h: R,
    wanted: R::Mask,
}

impl<R: Real> Piece for Robust<R> {
    type Output = Solved<R>;
    #[inline(always)]
    fn run(self) -> Solved<R> {
        solve_robust(&self.orbit, self.h, self.wanted)
    }
}

/// Takes `robust` where `fast` was not good enough.
#[inline(always)]
fn merge<R: Real>(good: R::Mask, fast: &Solved<R>, robust: &Solved<R>) -> Solved<R> {
    Solved {
        s: R::select(good, fast.s, robust.s),
        g: stumpff::blend::<R>(good, &fast.g, &robust.g),
        h_by_beta: R::select(good, fast.h_by_beta, robust.h_by_beta),
    }
}
