//! [`Real`] for one `f64`.

use super::{Mask, Piece, Real};

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
    fn apart<P: Piece>(piece: P) -> P::Output {
        piece.run()
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
