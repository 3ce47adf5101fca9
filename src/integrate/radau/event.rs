//! What can happen between two bodies inside a step, and where.

use super::phase::{Phase, dot};
use super::step::Step;
use crate::integrate::forces::Cast;
use crate::num::bisect;

/// What happened.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum EventKind {
    /// The distance is smallest: d·v changes from negative to positive.
    Approach,
    /// The distance falls to the sum of the radii. Body 0 is the star.
    Collision,
    /// A body's distance from the star rises to the escape distance.
    Escape,
    /// The distance of the watched pair rises to the watched one.
    Apart,
    /// The distance of a pair falls to that of [`Watch::near`].
    Near,
}

/// An event between two bodies, `first` < `second`, where 0 is the star and k the planet k − 1.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Event {
    pub kind: EventKind,
    /// From the start of the run.
    pub day: f64,
    pub first: usize,
    pub second: usize,
    pub distance_au: f64,
    pub speed_au_day: f64,
}

/// What to look for.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Watch {
    /// Closest approaches nearer than this are reported; 0: none, infinite: all.
    pub approach_au: f64,
    /// Radii, the star first; empty: points that never collide.
    pub radii_au: Vec<f64>,
    pub escape_au: Option<f64>,
    /// A pair and the distance at which it counts as apart.
    pub apart: Option<(usize, usize, f64)>,
    /// Pairs and the distance at which each counts as near.
    pub near: Vec<(usize, usize, f64)>,
}

/// An event as the polynomial sees it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Candidate {
    pub kind: EventKind,
    pub s: f64,
    pub first: usize,
    pub second: usize,
    /// The distance that is crossed; 0 for an approach.
    pub level_au: f64,
}

impl Watch {
    /// Whether there is anything to look for.
    pub fn is_blind(&self) -> bool {
        self.approach_au <= 0.0
            && self.radii_au.is_empty()
            && self.escape_au.is_none()
            && self.apart.is_none()
            && self.near.is_empty()
    }

    /// Distances whose crossing counts for a pair: kind, distance and whether it is crossed outward.
    fn levels(&self, i: usize, j: usize) -> [Option<(EventKind, f64, bool)>; 4] {
        let this = |&(a, b, _): &(usize, usize, f64)| (a.min(b), a.max(b)) == (i, j);
        let radii = (!self.radii_au.is_empty()).then(|| self.radii_au[i] + self.radii_au[j]);
        [
            radii.filter(|&sum| sum > 0.0).map(|sum| (EventKind::Collision, sum, false)),
            self.escape_au.filter(|_| i == 0).map(|au| (EventKind::Escape, au, true)),
            self.apart.filter(this).map(|w| (EventKind::Apart, w.2, true)),
            self.near.iter().copied().find(this).map(|w| (EventKind::Near, w.2, false)),
        ]
    }

    /// All that the step's polynomial shows, in the order of time.
    ///
    /// d·v is looked at in both ends and the middle of the step, which the step control keeps short against every
    /// passage that bends a path; where its sign changes an extremum is located, so that between the marks the
    /// distance is monotonous and every crossing is found. At the ends the states themselves are asked, so that
    /// nothing falls between two steps.
    pub(super) fn search(&self, cast: &Cast, step: &mut Step, start: &Phase, end: &Phase) -> Vec<Candidate> {
        let mut found = Vec::new();
        step.place_middle(start);
        let sign = step.length.signum();
        for (i, j) in cast.pairs() {
            let looks = [start, step.node(), end].map(|phase| {
                let (d, v) = phase.apart(i, j);
                Look { square: dot(&d, &d), rate: dot(&d, &v) * sign }
            });
            self.search_pair(&Passing { step, start, i, j, looks }, &mut found);
        }
        found.sort_by(|a, b| a.s.total_cmp(&b.s));
        found
    }

    fn search_pair(&self, passing: &Passing, found: &mut Vec<Candidate>) {
        let Passing { i, j, looks, .. } = *passing;
        let candidate = |kind, s, level_au| Candidate { kind, s, first: i, second: j, level_au };
        let mut marks = [(0.0, looks[0].square); 4];
        let mut count = 1;
        for part in 0..2 {
            let (before, after) = (looks[part].rate, looks[part + 1].rate);
            let nearest = before < 0.0 && after >= 0.0;
            let farthest = before > 0.0 && after < 0.0;
            if !nearest && !farthest {
                continue;
            }
            let (low, high) = (0.5 * part as f64, 0.5 * (part + 1) as f64);
            // No change of sign here means that rounding hides it at an end.
            let s = bisect(|s| passing.look(s).rate, low, high).unwrap_or(high);
            let square = passing.look(s).square;
            marks[count] = (s, square);
            count += 1;
            if nearest && square <= self.approach_au * self.approach_au {
                found.push(candidate(EventKind::Approach, s, 0.0));
            }
        }
        marks[count] = (1.0, looks[2].square);
        for (kind, level_au, outward) in self.levels(i, j).into_iter().flatten() {
            let level = level_au * level_au;
            for pair in marks[..=count].windows(2) {
                let (before, after) = (pair[0].1, pair[1].1);
                let crossed =
                    if outward { before < level && after >= level } else { before > level && after <= level };
                if crossed {
                    let s = bisect(|s| passing.look(s).square - level, pair[0].0, pair[1].0);
                    found.push(candidate(kind, s.unwrap_or(pair[1].0), level_au));
                }
            }
        }
    }
}

/// Distance² of a pair and half its rate of change along the step.
#[derive(Clone, Copy)]
struct Look {
    square: f64,
    rate: f64,
}

/// A pair over a step.
struct Passing<'a> {
    step: &'a Step,
    start: &'a Phase,
    i: usize,
    j: usize,
    looks: [Look; 3],
}

impl Passing<'_> {
    fn look(&self, s: f64) -> Look {
        let (d, v) = self.step.apart(self.start, self.i, self.j, s);
        Look { square: dot(&d, &d), rate: dot(&d, &v) * self.step.length.signum() }
    }
}
