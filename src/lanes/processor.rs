//! The wide numbers that a [`Level`] of the processor offers: the only file with `unsafe`.
//!
//! The wide types cannot be named outside this file: a [`Job`] meets them only through [`run_wide_at`],
//! below a function that carries the processor features they need. That is what makes the `unsafe` here sound.

use super::{Job, Level};

/// Runs `job` with one number per operation.
pub fn run_one<J: Job>(job: J) -> J::Output {
    #[cfg(target_arch = "x86_64")]
    if Level::chosen() >= Level::Avx2 {
        // SAFETY: `Level::chosen` gives only levels whose features `is_available` has seen.
        return unsafe { x86::one(job) };
    }
    job.run::<f64>()
}

/// Runs `job` with [`Level::width`] numbers per operation, at the level in use.
pub fn run_wide<J: Job>(job: J) -> J::Output {
    run_wide_at(Level::chosen(), job)
}

/// Runs `job` with wide numbers of that level; with single ones where the processor lacks it.
pub fn run_wide_at<J: Job>(level: Level, job: J) -> J::Output {
    #[cfg(target_arch = "x86_64")]
    match level {
        // SAFETY: `is_available` has seen every feature that the function is compiled for.
        Level::Avx512 if level.is_available() => return unsafe { x86::eight_avx512(job) },
        // SAFETY: as above.
        Level::Avx2 if level.is_available() => return unsafe { x86::eight_avx2(job) },
        _ => {}
    }
    let _ = level;
    run_one(job)
}

#[cfg(target_arch = "x86_64")]
mod x86 {
    use crate::lanes::{Job, Mask, Piece, Real, WIDTH};
    use std::arch::x86_64::*;
    use std::ops::{Add, Div, Mul, Neg, Sub};

    #[target_feature(enable = "avx2,fma")]
    pub(super) fn one<J: Job>(job: J) -> J::Output {
        job.run::<f64>()
    }

    #[target_feature(enable = "avx2,fma")]
    pub(super) fn eight_avx2<J: Job>(job: J) -> J::Output {
        job.run::<Pair>()
    }

    #[target_feature(enable = "avx2,fma,avx512f,avx512dq,avx512vl")]
    pub(super) fn eight_avx512<J: Job>(job: J) -> J::Output {
        job.run::<Whole>()
    }

    #[target_feature(enable = "avx2,fma")]
    #[inline(never)]
    fn apart_avx2<P: Piece>(piece: P) -> P::Output {
        piece.run()
    }

    #[target_feature(enable = "avx2,fma,avx512f,avx512dq,avx512vl")]
    #[inline(never)]
    fn apart_avx512<P: Piece>(piece: P) -> P::Output {
        piece.run()
    }

    /// Eight numbers in one AVX-512 register.
    #[derive(Clone, Copy)]
    struct Whole(__m512d);

    #[derive(Clone, Copy)]
    struct WholeMask(__mmask8);

    /// Eight numbers in two AVX registers.
    #[derive(Clone, Copy)]
    #[repr(align(64))]
    struct Pair([__m256d; 2]);

    /// All bits set where true.
    #[derive(Clone, Copy)]
    struct PairMask([__m256d; 2]);

    // SAFETY, for every `unsafe` block below: `Whole` and `Pair` are private to this module and only reach code
    // through `eight_avx512` and `eight_avx2`, which are called after the features were seen to be there.
    // Loads and stores go through slices whose length is checked first.

    macro_rules! binary {
        ($trait:ident, $name:ident, $whole:ident, $pair:ident) => {
            impl $trait for Whole {
                type Output = Whole;
                #[inline(always)]
                fn $name(self, other: Whole) -> Whole {
                    // SAFETY: see above.
                    Whole(unsafe { $whole(self.0, other.0) })
                }
            }
            impl $trait for Pair {
                type Output = Pair;
                #[inline(always)]
                fn $name(self, other: Pair) -> Pair {
                    // SAFETY: see above.
                    unsafe { Pair([$pair(self.0[0], other.0[0]), $pair(self.0[1], other.0[1])]) }
                }
            }
        };
    }
    binary!(Add, add, _mm512_add_pd, _mm256_add_pd);
    binary!(Sub, sub, _mm512_sub_pd, _mm256_sub_pd);
    binary!(Mul, mul, _mm512_mul_pd, _mm256_mul_pd);
    binary!(Div, div, _mm512_div_pd, _mm256_div_pd);

    impl Neg for Whole {
        type Output = Whole;
        #[inline(always)]
        fn neg(self) -> Whole {
            // SAFETY: see above.
            Whole(unsafe { _mm512_xor_pd(self.0, _mm512_set1_pd(-0.0)) })
        }
    }

    impl Neg for Pair {
        type Output = Pair;
        #[inline(always)]
        fn neg(self) -> Pair {
            // SAFETY: see above.
            unsafe {
                let sign = _mm256_set1_pd(-0.0);
                Pair([_mm256_xor_pd(self.0[0], sign), _mm256_xor_pd(self.0[1], sign)])
            }
        }
    }

    impl Mask for WholeMask {
        #[inline(always)]
        fn and(self, other: Self) -> Self {
            WholeMask(self.0 & other.0)
        }
        #[inline(always)]
        fn or(self, other: Self) -> Self {
            WholeMask(self.0 | other.0)
        }
        #[inline(always)]
        fn not(self) -> Self {
            WholeMask(!self.0)
        }
        #[inline(always)]
        fn any(self) -> bool {
            self.0 != 0
        }
    }

    impl Mask for PairMask {
        #[inline(always)]
        fn and(self, other: Self) -> Self {
            // SAFETY: see above.
            unsafe { PairMask([_mm256_and_pd(self.0[0], other.0[0]), _mm256_and_pd(self.0[1], other.0[1])]) }
        }
        #[inline(always)]
        fn or(self, other: Self) -> Self {
            // SAFETY: see above.
            unsafe { PairMask([_mm256_or_pd(self.0[0], other.0[0]), _mm256_or_pd(self.0[1], other.0[1])]) }
        }
        #[inline(always)]
        fn not(self) -> Self {
            // SAFETY: see above.
            unsafe {
                let ones = _mm256_castsi256_pd(_mm256_set1_epi64x(-1));
                PairMask([_mm256_xor_pd(self.0[0], ones), _mm256_xor_pd(self.0[1], ones)])
            }
        }
        #[inline(always)]
        fn any(self) -> bool {
            // SAFETY: see above.
            unsafe { (_mm256_movemask_pd(self.0[0]) | _mm256_movemask_pd(self.0[1])) != 0 }
        }
    }

    impl Real for Whole {
        type Mask = WholeMask;
        const LANES: usize = WIDTH;
        const IN_GROUPS: bool = true;
        #[inline(always)]
        fn splat(value: f64) -> Self {
            // SAFETY: see above.
            Whole(unsafe { _mm512_set1_pd(value) })
        }
        #[inline(always)]
        fn load(from: &[f64]) -> Self {
            let from = &from[..WIDTH];
            // SAFETY: see above; the slice holds WIDTH numbers.
            Whole(unsafe { _mm512_loadu_pd(from.as_ptr()) })
        }
        #[inline(always)]
        fn store(self, to: &mut [f64]) {
            let to = &mut to[..WIDTH];
            // SAFETY: see above; the slice holds WIDTH numbers.
            unsafe { _mm512_storeu_pd(to.as_mut_ptr(), self.0) }
        }
        #[inline(always)]
        fn apart<P: Piece>(piece: P) -> P::Output {
            // SAFETY: see above.
            unsafe { apart_avx512(piece) }
        }
        #[inline(always)]
        fn sqrt(self) -> Self {
            // SAFETY: see above.
            Whole(unsafe { _mm512_sqrt_pd(self.0) })
        }
        #[inline(always)]
        fn abs(self) -> Self {
            // SAFETY: see above.
            Whole(unsafe { _mm512_abs_pd(self.0) })
        }
        #[inline(always)]
        fn round(self) -> Self {
            const NEAREST: i32 = _MM_FROUND_TO_NEAREST_INT | _MM_FROUND_NO_EXC;
            // SAFETY: see above.
            Whole(unsafe { _mm512_roundscale_pd::<NEAREST>(self.0) })
        }
        #[inline(always)]
        fn mul_add(self, factor: Self, term: Self) -> Self {
            // SAFETY: see above.
            Whole(unsafe { _mm512_fmadd_pd(self.0, factor.0, term.0) })
        }
        #[inline(always)]
        fn neg_mul_add(self, factor: Self, term: Self) -> Self {
            // SAFETY: see above.
            Whole(unsafe { _mm512_fnmadd_pd(self.0, factor.0, term.0) })
        }
        #[inline(always)]
        fn max(self, other: Self) -> Self {
            // SAFETY: see above.
            Whole(unsafe { _mm512_max_pd(self.0, other.0) })
        }
        #[inline(always)]
        fn min(self, other: Self) -> Self {
            // SAFETY: see above.
            Whole(unsafe { _mm512_min_pd(self.0, other.0) })
        }
        #[inline(always)]
        fn lt(self, other: Self) -> WholeMask {
            // SAFETY: see above.
            WholeMask(unsafe { _mm512_cmp_pd_mask::<_CMP_LT_OQ>(self.0, other.0) })
        }
        #[inline(always)]
        fn select(mask: WholeMask, yes: Self, no: Self) -> Self {
            // SAFETY: see above.
            Whole(unsafe { _mm512_mask_blend_pd(mask.0, no.0, yes.0) })
        }
        #[inline(always)]
        fn mantissa_exponent(self) -> (Self, Self) {
            // SAFETY: see above.
            unsafe {
                let mantissa = _mm512_getmant_pd::<_MM_MANT_NORM_1_2, _MM_MANT_SIGN_SRC>(self.0);
                (Whole(mantissa), Whole(_mm512_getexp_pd(self.0)))
            }
        }
    }

    impl Real for Pair {
        type Mask = PairMask;
        const LANES: usize = WIDTH;
        #[inline(always)]
        fn splat(value: f64) -> Self {
            // SAFETY: see above.
            unsafe { Pair([_mm256_set1_pd(value); 2]) }
        }
        #[inline(always)]
        fn load(from: &[f64]) -> Self {
            let (low, high) = from[..WIDTH].split_at(WIDTH / 2);
            // SAFETY: see above; each half holds four numbers.
            unsafe { Pair([_mm256_loadu_pd(low.as_ptr()), _mm256_loadu_pd(high.as_ptr())]) }
        }
        #[inline(always)]
        fn store(self, to: &mut [f64]) {
            let (low, high) = to[..WIDTH].split_at_mut(WIDTH / 2);
            // SAFETY: see above; each half holds four numbers.
            unsafe {
                _mm256_storeu_pd(low.as_mut_ptr(), self.0[0]);
                _mm256_storeu_pd(high.as_mut_ptr(), self.0[1]);
            }
        }
        #[inline(always)]
        fn apart<P: Piece>(piece: P) -> P::Output {
            // SAFETY: see above.
            unsafe { apart_avx2(piece) }
        }
        #[inline(always)]
        fn sqrt(self) -> Self {
            // SAFETY: see above.
            unsafe { Pair([_mm256_sqrt_pd(self.0[0]), _mm256_sqrt_pd(self.0[1])]) }
        }
        #[inline(always)]
        fn abs(self) -> Self {
            // SAFETY: see above.
            unsafe {
                let sign = _mm256_set1_pd(-0.0);
                Pair([_mm256_andnot_pd(sign, self.0[0]), _mm256_andnot_pd(sign, self.0[1])])
            }
        }
        #[inline(always)]
        fn round(self) -> Self {
            const NEAREST: i32 = _MM_FROUND_TO_NEAREST_INT | _MM_FROUND_NO_EXC;
            // SAFETY: see above.
            unsafe { Pair([_mm256_round_pd::<NEAREST>(self.0[0]), _mm256_round_pd::<NEAREST>(self.0[1])]) }
        }
        #[inline(always)]
        fn mul_add(self, factor: Self, term: Self) -> Self {
            // SAFETY: see above.
            unsafe {
                Pair([
                    _mm256_fmadd_pd(self.0[0], factor.0[0], term.0[0]),
                    _mm256_fmadd_pd(self.0[1], factor.0[1], term.0[1]),
                ])
            }
        }
        #[inline(always)]
        fn neg_mul_add(self, factor: Self, term: Self) -> Self {
            // SAFETY: see above.
            unsafe {
                Pair([
                    _mm256_fnmadd_pd(self.0[0], factor.0[0], term.0[0]),
                    _mm256_fnmadd_pd(self.0[1], factor.0[1], term.0[1]),
                ])
            }
        }
        #[inline(always)]
        fn max(self, other: Self) -> Self {
            // SAFETY: see above.
            unsafe { Pair([_mm256_max_pd(self.0[0], other.0[0]), _mm256_max_pd(self.0[1], other.0[1])]) }
        }
        #[inline(always)]
        fn min(self, other: Self) -> Self {
            // SAFETY: see above.
            unsafe { Pair([_mm256_min_pd(self.0[0], other.0[0]), _mm256_min_pd(self.0[1], other.0[1])]) }
        }
        #[inline(always)]
        fn lt(self, other: Self) -> PairMask {
            // SAFETY: see above.
            unsafe {
                PairMask([
                    _mm256_cmp_pd::<_CMP_LT_OQ>(self.0[0], other.0[0]),
                    _mm256_cmp_pd::<_CMP_LT_OQ>(self.0[1], other.0[1]),
                ])
            }
        }
        #[inline(always)]
        fn select(mask: PairMask, yes: Self, no: Self) -> Self {
            // SAFETY: see above.
            unsafe {
                Pair([
                    _mm256_blendv_pd(no.0[0], yes.0[0], mask.0[0]),
                    _mm256_blendv_pd(no.0[1], yes.0[1], mask.0[1]),
                ])
            }
        }
        #[inline(always)]
        fn mantissa_exponent(self) -> (Self, Self) {
            let mut numbers = [0.0; WIDTH];
            self.store(&mut numbers);
            let mut exponents = [0.0; WIDTH];
            for k in 0..WIDTH {
                (numbers[k], exponents[k]) = numbers[k].mantissa_exponent();
            }
            (Pair::load(&numbers), Pair::load(&exponents))
        }
    }
}
