//! [`Real`] for one `f64`, and for eight of them in a plain array where the processor has nothing wider.

use super::{Mask, Real, WIDTH};
use std::ops::{Add, Div, Mul, Neg, Sub};

impl Mask for bool {
    #[inline(always)]
    fn and(self, other: Self) -> Self {
        self & other
    }
    #[inline(always)]
    fn or(self, other: Self) -> Self {
        self | other
    }
    #[inline(always)]
    fn not(self) -> Self {
        !self
    }
    #[inline(always)]
    fn any(self) -> bool {
        self
    }
}

impl Real for f64 {
    type Mask = bool;
    const LANES: usize = 1;
    #[inline(always)]
    fn splat(value: f64) -> Self {
        value
    }
    #[inline(always)]
    fn load(from: &[f64]) -> Self {
        from[0]
    }
    #[inline(always)]
    fn store(self, to: &mut [f64]) {
        to[0] = self;
    }
    #[inline(always)]
    fn sqrt(self) -> Self {
        f64::sqrt(self)
    }
    #[inline(always)]
    fn abs(self) -> Self {
        f64::abs(self)
    }
    #[inline(always)]
    fn round(self) -> Self {
        self.round_ties_even()
    }
    #[inline(always)]
    fn mul_add(self, factor: Self, term: Self) -> Self {
        f64::mul_add(self, factor, term)
    }
    #[inline(always)]
    fn max(self, other: Self) -> Self {
        if self > other { self } else { other }
    }
    #[inline(always)]
    fn min(self, other: Self) -> Self {
        if self < other { self } else { other }
    }
    #[inline(always)]
    fn lt(self, other: Self) -> bool {
        self < other
    }
    #[inline(always)]
    fn select(mask: bool, yes: Self, no: Self) -> Self {
        if mask { yes } else { no }
    }
    #[inline(always)]
    fn mantissa_exponent(self) -> (Self, Self) {
        const MANTISSA: u64 = (1 << 52) - 1;
        let bits = self.to_bits();
        let mantissa = f64::from_bits((bits & MANTISSA) | 1.0f64.to_bits());
        (mantissa, ((bits >> 52) as i64 - 1023) as f64)
    }
}

/// Eight numbers in an array.
#[derive(Clone, Copy)]
#[repr(align(64))]
pub(super) struct Plain([f64; WIDTH]);

#[derive(Clone, Copy)]
pub(super) struct PlainMask([bool; WIDTH]);

macro_rules! lane_by_lane {
    ($lane:ident => $value:expr) => {{
        let mut out = [Default::default(); WIDTH];
        for $lane in 0..WIDTH {
            out[$lane] = $value;
        }
        out
    }};
}

macro_rules! binary {
    ($trait:ident, $name:ident) => {
        impl $trait for Plain {
            type Output = Plain;
            #[inline(always)]
            fn $name(self, other: Plain) -> Plain {
                Plain(lane_by_lane!(k => $trait::$name(self.0[k], other.0[k])))
            }
        }
    };
}
binary!(Add, add);
binary!(Sub, sub);
binary!(Mul, mul);
binary!(Div, div);

impl Neg for Plain {
    type Output = Plain;
    #[inline(always)]
    fn neg(self) -> Plain {
        Plain(lane_by_lane!(k => -self.0[k]))
    }
}

impl Mask for PlainMask {
    #[inline(always)]
    fn and(self, other: Self) -> Self {
        PlainMask(lane_by_lane!(k => self.0[k] & other.0[k]))
    }
    #[inline(always)]
    fn or(self, other: Self) -> Self {
        PlainMask(lane_by_lane!(k => self.0[k] | other.0[k]))
    }
    #[inline(always)]
    fn not(self) -> Self {
        PlainMask(lane_by_lane!(k => !self.0[k]))
    }
    #[inline(always)]
    fn any(self) -> bool {
        self.0.iter().any(|b| *b)
    }
}

impl Real for Plain {
    type Mask = PlainMask;
    const LANES: usize = WIDTH;
    #[inline(always)]
    fn splat(value: f64) -> Self {
        Plain([value; WIDTH])
    }
    #[inline(always)]
    fn load(from: &[f64]) -> Self {
        Plain(lane_by_lane!(k => from[k]))
    }
    #[inline(always)]
    fn store(self, to: &mut [f64]) {
        to[..WIDTH].copy_from_slice(&self.0);
    }
    #[inline(always)]
    fn sqrt(self) -> Self {
        Plain(lane_by_lane!(k => self.0[k].sqrt()))
    }
    #[inline(always)]
    fn abs(self) -> Self {
        Plain(lane_by_lane!(k => self.0[k].abs()))
    }
    #[inline(always)]
    fn round(self) -> Self {
        Plain(lane_by_lane!(k => self.0[k].round_ties_even()))
    }
    #[inline(always)]
    fn mul_add(self, factor: Self, term: Self) -> Self {
        Plain(lane_by_lane!(k => self.0[k].mul_add(factor.0[k], term.0[k])))
    }
    #[inline(always)]
    fn max(self, other: Self) -> Self {
        Plain(lane_by_lane!(k => Real::max(self.0[k], other.0[k])))
    }
    #[inline(always)]
    fn min(self, other: Self) -> Self {
        Plain(lane_by_lane!(k => Real::min(self.0[k], other.0[k])))
    }
    #[inline(always)]
    fn lt(self, other: Self) -> PlainMask {
        PlainMask(lane_by_lane!(k => self.0[k] < other.0[k]))
    }
    #[inline(always)]
    fn select(mask: PlainMask, yes: Self, no: Self) -> Self {
        Plain(lane_by_lane!(k => if mask.0[k] { yes.0[k] } else { no.0[k] }))
    }
    #[inline(always)]
    fn mantissa_exponent(self) -> (Self, Self) {
        (
            Plain(lane_by_lane!(k => self.0[k].mantissa_exponent().0)),
            Plain(lane_by_lane!(k => self.0[k].mantissa_exponent().1)),
        )
    }
}
