//! What a number is inside the kernels: one `f64`, or eight independent ones.
//!
//! A kernel is written once over [`Real`]. Every operation here is exact to IEEE 754 (add, subtract,
//! multiply, divide, square root, fused multiply-add, comparisons, blends), so a kernel gives the same bits
//! for one number as for any of the eight lanes, on every processor. [`level`] is the one place that asks
//! what the processor can do, [`processor`] the only file with `unsafe`.

mod level;
mod processor;
mod scalar;

pub use level::{Level, groups_at_once};
pub use processor::{run_one, run_wide, run_wide_at};

use std::ops::{Add, Div, Mul, Neg, Sub};

/// The most lanes a number has.
pub const WIDTH: usize = 8;

/// One `f64` or eight of them, lane by lane.
pub trait Real:
    Copy + Add<Output = Self> + Sub<Output = Self> + Mul<Output = Self> + Div<Output = Self> + Neg<Output = Self>
{
    /// One truth value per lane.
    type Mask: Mask;
    /// 1 or [`WIDTH`].
    const LANES: usize;
    /// Whether [`groups_at_once`] groups of lanes are faster than one after the other.
    const IN_GROUPS: bool = false;

    fn splat(value: f64) -> Self;
    /// Reads `LANES` numbers from the front of `from`.
    fn load(from: &[f64]) -> Self;
    /// Writes `LANES` numbers to the front of `to`.
    fn store(self, to: &mut [f64]);
    /// Runs a piece of the kernel that is seldom needed in a function of its own, compiled for the same processor, so
    /// that it does not swell every place that calls it.
    fn apart<P: Piece>(piece: P) -> P::Output;
    fn sqrt(self) -> Self;
    fn abs(self) -> Self;
    /// Nearest integer, halves to even.
    fn round(self) -> Self;
    /// `self * factor + term`, rounded once.
    fn mul_add(self, factor: Self, term: Self) -> Self;
    /// `self > other ? self : other`.
    fn max(self, other: Self) -> Self;
    /// `self < other ? self : other`.
    fn min(self, other: Self) -> Self;
    fn lt(self, other: Self) -> Self::Mask;
    /// `mask ? yes : no`, lane by lane.
    fn select(mask: Self::Mask, yes: Self, no: Self) -> Self;
    /// For positive normal numbers: `(m, e)` with `self = m 2^e`, 1 ≤ m < 2; exact.
    fn mantissa_exponent(self) -> (Self, Self);

    /// `term - self * factor`, rounded once.
    #[inline(always)]
    fn neg_mul_add(self, factor: Self, term: Self) -> Self {
        (-self).mul_add(factor, term)
    }
}

/// Truth values, one per lane.
pub trait Mask: Copy {
    fn and(self, other: Self) -> Self;
    fn or(self, other: Self) -> Self;
    fn not(self) -> Self;
    fn any(self) -> bool;
}

/// A piece of work written over [`Real`]; [`run_one`] and [`run_wide`] give it a number type.
pub trait Job {
    type Output;
    fn run<R: Real>(self) -> Self::Output;
}

/// A part of a [`Job`] whose number type is already known.
pub trait Piece {
    type Output;
    fn run(self) -> Self::Output;
}

/// Adds `term` to the sum `high + low`; `low` keeps what rounding cuts off `high`.
///
/// The two-sum without a condition on sizes, Møller (1965), Knuth (1969); with `term` 0 no bit changes.
#[inline(always)]
pub fn add_keeping<R: Real>(high: &mut R, low: &mut R, term: R) {
    let term = term + *low;
    let sum = *high + term;
    let added = sum - *high;
    *low = (*high - (sum - added)) + (term - added);
    *high = sum;
}

/// Natural logarithm of a positive normal number from exact operations only, within 2 units in the last place.
///
/// ln x = e ln 2 + 2 artanh((m − 1)/(m + 1)), x = m 2^e with 1/√2 ≤ m < √2; ten terms of the series.
#[inline(always)]
pub fn ln<R: Real>(x: R) -> R {
    // ln 2 in two parts; the high part has 21 trailing zero bits, so e × high is exact.
    const LN2_HIGH: f64 = 0.693_147_180_369_123_8;
    const LN2_LOW: f64 = 1.908_214_929_270_587_7e-10;
    let one = R::splat(1.0);
    let (m, e) = x.mantissa_exponent();
    let large = R::splat(std::f64::consts::SQRT_2).lt(m);
    let m = R::select(large, m * R::splat(0.5), m);
    let e = R::select(large, e + one, e);
    let t = (m - one) / (m + one);
    let tt = t * t;
    let mut series = R::splat(1.0 / 21.0);
    for k in [19.0, 17.0, 15.0, 13.0, 11.0, 9.0, 7.0, 5.0, 3.0] {
        series = series.mul_add(tt, R::splat(1.0 / k));
    }
    let tail = (t * tt).mul_add(series, e * R::splat(0.5 * LN2_LOW));
    (t + tail).mul_add(R::splat(2.0), e * R::splat(LN2_HIGH))
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    struct Everything<'a> {
        inputs: &'a [f64],
        outputs: &'a mut [f64],
    }

    const OPERATIONS: usize = 12;

    impl Job for Everything<'_> {
        type Output = ();
        #[inline(always)]
        fn run<R: Real>(self) {
            let width = R::LANES;
            for (group, x) in self.inputs.chunks_exact(3 * width).enumerate() {
                let a = R::load(&x[..width]);
                let b = R::load(&x[width..2 * width]);
                let c = R::load(&x[2 * width..]);
                let (m, e) = a.abs().mantissa_exponent();
                let nearest = (a * R::splat(1e-3)).round();
                let mask = a.lt(b).and(b.lt(c).not()).or(c.lt(a));
                let results = [
                    a + b * c - a / b,
                    a.abs().sqrt(),
                    a.mul_add(b, c),
                    a.neg_mul_add(b, c),
                    a.max(b),
                    a.min(b),
                    R::select(mask, a, -c),
                    m,
                    e,
                    nearest,
                    ln(a.abs()),
                    ln(b.abs()),
                ];
                for (k, r) in results.into_iter().enumerate() {
                    r.store(&mut self.outputs[(group * OPERATIONS + k) * width..]);
                }
            }
        }
    }

    fn scalar(abc: [f64; 3]) -> Vec<f64> {
        let mut out = vec![0.0; OPERATIONS];
        run_one(Everything { inputs: &abc, outputs: &mut out });
        out
    }

    fn number() -> impl Strategy<Value = f64> {
        (-1.0f64..1.0, -60i32..60).prop_map(|(m, e)| if m == 0.0 { 0.5 } else { m * 2f64.powi(e) })
    }

    proptest! {
        #[test]
        fn eight_lanes_give_the_bits_of_one(numbers in prop::collection::vec(number(), 24)) {
            for level in Level::available().into_iter().filter(|l| l.width() == WIDTH) {
                let mut wide = vec![0.0; OPERATIONS * WIDTH];
                run_wide_at(level, Everything { inputs: &numbers, outputs: &mut wide });
                for lane in 0..WIDTH {
                    let one = scalar([numbers[lane], numbers[8 + lane], numbers[16 + lane]]);
                    for k in 0..OPERATIONS {
                        prop_assert_eq!(wide[k * WIDTH + lane].to_bits(), one[k].to_bits(), "{:?} operation {}", level, k);
                    }
                }
            }
        }

        #[test]
        fn logarithm_agrees_with_the_library(m in 1.0f64..2.0, e in -300i32..300) {
            let x = m * 2f64.powi(e);
            let ours = scalar([x, x, x])[10];
            prop_assert!((ours - x.ln()).abs() <= 2.0 * f64::EPSILON * x.ln().abs(), "{ours} {}", x.ln());
        }
    }
}
