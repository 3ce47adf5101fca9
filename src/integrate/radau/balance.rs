//! Energy of a phase: kinetic and Newtonian, times G.

use super::super::forces::Cast;
use super::phase::{Phase, dot, two_sum};

/// A sum that loses no more than one rounding (Kahan 1965, in the form of Neumaier 1974).
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Sum {
    high: f64,
    low: f64,
}

impl Sum {
    pub fn add(&mut self, term: f64) {
        let (high, rest) = two_sum(self.high, term);
        self.high = high;
        self.low += rest;
    }

    pub fn from(number: f64) -> Sum {
        Sum { high: number, low: 0.0 }
    }

    pub fn value(self) -> f64 {
        self.high + self.low
    }
}

/// Σ mv²/2, au⁵ day⁻⁴.
pub(super) fn kinetic(phase: &Phase, cast: &Cast) -> Sum {
    let mut total = Sum::default();
    for (body, gm) in cast.gm.iter().enumerate() {
        let v = [0, 1, 2].map(|k| phase.vel[3 * body + k]);
        total.add(0.5 * gm * dot(&v, &v));
    }
    total
}

/// Σ mv²/2 − Σ mm/d over the massive bodies, au⁵ day⁻⁴, as a sum that can be continued.
pub(super) fn energy(phase: &Phase, cast: &Cast) -> Sum {
    let mut total = kinetic(phase, cast);
    for (i, j) in cast.pairs() {
        let product = cast.gm[i] * cast.gm[j];
        if product != 0.0 {
            let (d, _) = phase.apart(i, j);
            total.add(-product / dot(&d, &d).sqrt());
        }
    }
    total
}
