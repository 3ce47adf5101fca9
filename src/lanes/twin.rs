//! Two numbers of a kind as one, so that two long chains of dependent operations advance side by side.

use std::ops::{Add, Div, Mul, Neg, Sub};

use super::{Mask, Piece, Real};

/// Two of `R`; every operation is done on both, one after the other.
#[derive(Clone, Copy)]
pub struct Twin<R>(pub R, pub R);

macro_rules! both {
    ($($trait:ident $name:ident),*) => {$(
        impl<R: Real> $trait for Twin<R> {
            type Output = Self;
            #[inline(always)]
            fn $name(self, other: Self) -> Self {
                Twin($trait::$name(self.0, other.0), $trait::$name(self.1, other.1))
            }
        }
    )*};
}
both!(Add add, Sub sub, Mul mul, Div div);

impl<R: Real> Neg for Twin<R> {
    type Output = Self;
    #[inline(always)]
    fn neg(self) -> Self {
        Twin(-self.0, -self.1)
    }
}

impl<M: Mask> Mask for Twin<M> {
    #[inline(always)]
    fn and(self, other: Self) -> Self {
        Twin(self.0.and(other.0), self.1.and(other.1))
    }
    #[inline(always)]
    fn or(self, other: Self) -> Self {
        Twin(self.0.or(other.0), self.1.or(other.1))
    }
    #[inline(always)]
    fn not(self) -> Self {
        Twin(self.0.not(), self.1.not())
    }
    #[inline(always)]
    fn any(self) -> bool {
        self.0.any() | self.1.any()
    }
}

impl<R: Real> Real for Twin<R> {
    type Mask = Twin<R::Mask>;
    const LANES: usize = 2 * R::LANES;
    const SIDE_BY_SIDE: bool = false;
    #[inline(always)]
    fn splat(value: f64) -> Self {
        Twin(R::splat(value), R::splat(value))
    }
    #[inline(always)]
    fn load(from: &[f64]) -> Self {
        Twin(R::load(from), R::load(&from[R::LANES..]))
    }
    #[inline(always)]
    fn store(self, to: &mut [f64]) {
        let (front, back) = to.split_at_mut(R::LANES);
        self.0.store(front);
        self.1.store(back);
    }
    #[inline(always)]
    fn apart<P: Piece>(piece: P) -> P::Output {
        R::apart(piece)
    }
    #[inline(always)]
    fn sqrt(self) -> Self {
        Twin(self.0.sqrt(), self.1.sqrt())
    }
    #[inline(always)]
    fn abs(self) -> Self {
        Twin(self.0.abs(), self.1.abs())
    }
    #[inline(always)]
    fn round(self) -> Self {
        Twin(self.0.round(), self.1.round())
    }
    #[inline(always)]
    fn mul_add(self, factor: Self, term: Self) -> Self {
        Twin(self.0.mul_add(factor.0, term.0), self.1.mul_add(factor.1, term.1))
    }
    #[inline(always)]
    fn neg_mul_add(self, factor: Self, term: Self) -> Self {
        Twin(self.0.neg_mul_add(factor.0, term.0), self.1.neg_mul_add(factor.1, term.1))
    }
    #[inline(always)]
    fn max(self, other: Self) -> Self {
        Twin(self.0.max(other.0), self.1.max(other.1))
    }
    #[inline(always)]
    fn min(self, other: Self) -> Self {
        Twin(self.0.min(other.0), self.1.min(other.1))
    }
    #[inline(always)]
    fn lt(self, other: Self) -> Self::Mask {
        Twin(self.0.lt(other.0), self.1.lt(other.1))
    }
    #[inline(always)]
    fn select(mask: Self::Mask, yes: Self, no: Self) -> Self {
        Twin(R::select(mask.0, yes.0, no.0), R::select(mask.1, yes.1, no.1))
    }
    #[inline(always)]
    fn mantissa_exponent(self) -> (Self, Self) {
        let ((m0, e0), (m1, e1)) = (self.0.mantissa_exponent(), self.1.mantissa_exponent());
        (Twin(m0, m1), Twin(e0, e1))
    }
}
