//! A number that counts what is done with it, so that the work of a step is measured and not believed.

#![allow(dead_code, reason = "each user its own part")]

use abide::integrate::{Advance, Scheme};
use abide::lanes::{Job, Piece, Real};
use std::cell::Cell;
use std::ops::{Add, Div, Mul, Neg, Sub};

use super::systems;

/// Operations done.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Work {
    pub add: usize,
    pub mul: usize,
    pub fused: usize,
    pub div: usize,
    pub sqrt: usize,
}

impl Work {
    /// A fused multiply-add counts two, everything else one.
    pub fn flops(&self) -> usize {
        self.add + self.mul + 2 * self.fused + self.div + self.sqrt
    }
}

thread_local!(static WORK: Cell<Work> = const { Cell::new(Work { add: 0, mul: 0, fused: 0, div: 0, sqrt: 0 }) });

fn count(what: impl FnOnce(&mut Work)) {
    let mut work = WORK.get();
    what(&mut work);
    WORK.set(work);
}

/// What `job` does.
pub fn work_of(job: impl FnOnce()) -> Work {
    WORK.set(Work::default());
    job();
    WORK.get()
}

/// An `f64` that counts; sign changes, comparisons and blends are free.
#[derive(Clone, Copy)]
pub struct Counted(pub f64);

macro_rules! counted {
    ($($trait:ident $name:ident $field:ident),*) => {$(
        impl $trait for Counted {
            type Output = Self;
            fn $name(self, other: Self) -> Self {
                count(|w| w.$field += 1);
                Counted($trait::$name(self.0, other.0))
            }
        }
    )*};
}
counted!(Add add add, Sub sub add, Mul mul mul, Div div div);

impl Neg for Counted {
    type Output = Self;
    fn neg(self) -> Self {
        Counted(-self.0)
    }
}

impl Real for Counted {
    type Mask = bool;
    const LANES: usize = 1;
    fn splat(value: f64) -> Self {
        Counted(value)
    }
    fn load(from: &[f64]) -> Self {
        Counted(from[0])
    }
    fn store(self, to: &mut [f64]) {
        to[0] = self.0;
    }
    fn apart<P: Piece>(piece: P) -> P::Output {
        piece.run()
    }
    fn sqrt(self) -> Self {
        count(|w| w.sqrt += 1);
        Counted(self.0.sqrt())
    }
    fn abs(self) -> Self {
        Counted(self.0.abs())
    }
    fn round(self) -> Self {
        Counted(self.0.round_ties_even())
    }
    fn mul_add(self, factor: Self, term: Self) -> Self {
        count(|w| w.fused += 1);
        Counted(self.0.mul_add(factor.0, term.0))
    }
    fn max(self, other: Self) -> Self {
        Counted(Real::max(self.0, other.0))
    }
    fn min(self, other: Self) -> Self {
        Counted(Real::min(self.0, other.0))
    }
    fn lt(self, other: Self) -> bool {
        self.0 < other.0
    }
    fn select(mask: bool, yes: Self, no: Self) -> Self {
        if mask { yes } else { no }
    }
    fn mantissa_exponent(self) -> (Self, Self) {
        let (m, e) = self.0.mantissa_exponent();
        (Counted(m), Counted(e))
    }
}

/// Floating-point operations of one planet-step of the leapfrog, its share of sampling and watch included.
pub fn flops_per_planet_step(n: usize, tangent: bool) -> f64 {
    const STEPS: usize = 400;
    let mut block = systems::block(n, 1, 20.0);
    let scheme = Scheme::leapfrog();
    let work = work_of(|| Advance { block: &mut block, scheme, steps: STEPS, tangent }.run::<Counted>());
    work.flops() as f64 / (STEPS * n) as f64
}
