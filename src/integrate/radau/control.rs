//! How long a step may be.
//!
//! The force over a step is a Taylor series in s whose terms fall like ρᵏ, ρ = step / radius of convergence. The
//! quadrature misses the term of s¹⁵, so a step errs by about ρ¹⁵ ∫ s ∏(s − hᵢ)² ds of the velocity change that the
//! force makes. The two highest coefficients of Newton's form give ρ as their sixth and seventh roots relative to the
//! force; the larger counts, since one of them may pass through 0. The step that makes ρ what the tolerance asks for
//! is step · ρ(wished)/ρ(found): one number without a unit, the same for every body and scale.

use super::nodes::MISSED;
use super::phase::{Phase, dot};
use crate::integrate::forces::Cast;

/// No step grows by more than this from one to the next.
const MOST_GROWTH: f64 = 2.0;
/// No step shrinks by more than this at once.
const MOST_SHRINK: f64 = 0.1;
/// A step whose ρ is above the wish by more than this is done again.
const OVERSHOOT: f64 = 1.25;

/// The longest and shortest ρ a tolerance can ask for: beyond the first the sweeps no longer settle, below the
/// second the highest coefficients are rounding.
const RATIOS: (f64, f64) = (0.02, 0.5);

/// The first step in units of the shortest time in which a pair falls together or passes.
const FIRST: f64 = 0.05;

#[derive(Clone, Copy, Debug)]
pub(super) struct Control {
    ratio: f64,
}

impl Control {
    /// `tolerance`: what a step may err by, relative to the velocity change over it.
    pub fn new(tolerance: f64) -> Control {
        Control { ratio: root(tolerance / MISSED, 15).clamp(RATIOS.0, RATIOS.1) }
    }

    /// Factor for the next step from the tail of this one, and whether this one is good.
    pub fn judge(&self, tail: (f64, f64)) -> (f64, bool) {
        let found = root(tail.0, 6).max(root(tail.1, 7));
        if found == 0.0 {
            return (MOST_GROWTH, true);
        }
        ((self.ratio / found).clamp(MOST_SHRINK, MOST_GROWTH), found <= OVERSHOOT * self.ratio)
    }
}

/// The n-th root of a number ≥ 0 by Newton's iteration from a power of two above it: only exact operations, so the
/// same bits on every machine.
pub(super) fn root(number: f64, n: i32) -> f64 {
    if number == 0.0 || !number.is_finite() {
        return number;
    }
    let exponent = ((number.to_bits() >> 52) & 0x7ff) as i32 - 1022;
    let mut guess = f64::from_bits(((exponent.div_euclid(n) + 1 + 1023) as u64) << 52);
    loop {
        let mut power = 1.0;
        for _ in 1..n {
            power *= guess;
        }
        let better = guess - (guess - number / power) / f64::from(n);
        // From above the iteration falls until rounding stops it.
        if better >= guess {
            return guess;
        }
        guess = better;
    }
}

/// A first step, day: from the shortest time in which a pair falls together or passes: √(d³/(mᵢ + mⱼ)) and d/v.
pub(super) fn first_step(phase: &Phase, cast: &Cast) -> f64 {
    let mut shortest = f64::INFINITY;
    for (i, j) in cast.pairs() {
        let (d, v) = phase.apart(i, j);
        let distance = dot(&d, &d).sqrt();
        let fall = (distance * distance * distance / (cast.gm[i] + cast.gm[j])).sqrt();
        let pass = distance / dot(&v, &v).sqrt();
        shortest = shortest.min(fall).min(pass);
    }
    if shortest.is_finite() { FIRST * shortest } else { 1.0 }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn roots_raised_again_give_the_number() {
        for number in [1e-300, 2.5e-17, 1e-9, 0.3, 1.0, 1.0 + 1e-15, 2.0, 64.0, 1e12, 1e300] {
            for n in [6, 7, 15] {
                let found = root(number, n);
                assert!((found.powi(n) / number - 1.0).abs() < 1e-14, "{number} {n}: {found}");
            }
        }
        assert_eq!(root(0.0, 7), 0.0);
    }

    #[test]
    fn the_wished_ratio_errs_by_the_tolerance() {
        for tolerance in [1e-20, 1e-18, 1e-16] {
            let ratio = Control::new(tolerance).ratio;
            assert!((MISSED * ratio.powi(15) / tolerance - 1.0).abs() < 1e-12, "{tolerance}: {ratio}");
        }
    }

    #[test]
    fn a_geometric_series_is_led_to_the_wish_in_one_step() {
        let control = Control::new(1e-18);
        let ratio = 0.15f64;
        let (factor, good) = control.judge((ratio.powi(6), ratio.powi(7)));
        assert!(good && (factor * ratio / control.ratio - 1.0).abs() < 1e-12);
        let (factor, good) = control.judge((1.0, 1.0));
        assert!(!good && factor < 1.0);
    }
}
