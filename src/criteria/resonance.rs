//! Mean-motion resonances near a period ratio.

use crate::num::greatest_common_divisor;

/// Highest order p − q looked at.
const HIGHEST_ORDER: u32 = 4;
/// Largest q looked at, so that no ratio is near to everything.
const LARGEST_Q: u32 = 12;
/// How far a resonance of first order may be to be named, percent; order k gets a k-th of it.
const REACH_PERCENT: f64 = 5.0;
/// How many are named at most.
const MOST: usize = 3;

/// A resonance p:q with p periods of the inner planet near q of the outer one.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct NearResonance {
    pub p: u32,
    pub q: u32,
    /// The period ratio over p/q, less one, in percent; positive outside the resonance.
    pub offset_percent: f64,
}

impl NearResonance {
    pub fn order(&self) -> u32 {
        self.p - self.q
    }
}

/// The resonances of order 1 to 4 near a period ratio (outer over inner, above 1).
///
/// A resonance of order k is named within 5/k percent, q ≤ 12, at most three: those with the smallest distance times
/// order, since a resonance is the narrower the higher its order. Empty for a ratio that is not above 1.
pub fn near_resonances(period_ratio: f64) -> Vec<NearResonance> {
    let mut found = resonances_to_order(period_ratio, HIGHEST_ORDER);
    found.truncate(MOST);
    found
}

/// The resonances up to `highest_order` near a period ratio, all of them, nearest first as in [`near_resonances`].
///
/// For a look at the angles themselves, where one of high order costs no more than one of low order.
pub fn resonances_to_order(period_ratio: f64, highest_order: u32) -> Vec<NearResonance> {
    if !(period_ratio > 1.0 && period_ratio.is_finite()) {
        return Vec::new();
    }
    let rank = |near: &NearResonance| near.offset_percent.abs() * f64::from(near.order());
    let mut found: Vec<NearResonance> = (1..=highest_order)
        .flat_map(|order| (1..=LARGEST_Q).map(move |q| (q + order, q)))
        .filter(|(p, q)| greatest_common_divisor(*p, *q) == 1)
        .map(|(p, q)| NearResonance {
            p,
            q,
            offset_percent: (period_ratio * f64::from(q) / f64::from(p) - 1.0) * 100.0,
        })
        .filter(|near| rank(near) <= REACH_PERCENT)
        .collect();
    found.sort_by(|one, other| rank(one).total_cmp(&rank(other)));
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    fn names(ratio: f64) -> Vec<(u32, u32)> {
        near_resonances(ratio).iter().map(|near| (near.p, near.q)).collect()
    }

    /// HD 45364, periods 226.93 d and 342.85 d: 3:2 as Correia et al. (2009) found.
    #[test]
    fn the_published_resonance_comes_first() {
        let near = near_resonances(342.85 / 226.93);
        assert_eq!((near[0].p, near[0].q), (3, 2));
        assert!((near[0].offset_percent - (342.85 / 226.93 / 1.5 - 1.0) * 100.0).abs() < 1e-12);
    }

    #[test]
    fn exact_ratios_name_themselves_and_only_in_lowest_terms() {
        for (p, q) in [(2, 1), (3, 2), (5, 3), (7, 5), (3, 1), (4, 1), (5, 1), (7, 4), (11, 7)] {
            let near = near_resonances(f64::from(p) / f64::from(q));
            assert_eq!((near[0].p, near[0].q), (p, q));
            assert!(near[0].offset_percent.abs() < 1e-13);
        }
        assert!(!names(2.0).contains(&(4, 2)));
    }

    #[test]
    fn higher_orders_when_asked() {
        let eighth = resonances_to_order(11.0 / 3.0, 8);
        assert_eq!((eighth[0].p, eighth[0].q), (11, 3));
        assert!(resonances_to_order(11.0 / 3.0, 7).iter().all(|near| near.order() < 8));
    }

    #[test]
    fn far_from_all_there_is_none() {
        assert!(names(2.2).is_empty(), "{:?}", names(2.2));
        assert!(names(40.0).is_empty());
        assert!(names(1.0).is_empty() && names(f64::NAN).is_empty());
    }
}
