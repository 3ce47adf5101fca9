//! How many cells got which verdict.

use crate::verdict::Verdict;

/// Counts per verdict.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Tally([u64; Verdict::ALL.len()]);

impl Tally {
    pub fn add(&mut self, verdict: Verdict) {
        self.0[place(verdict)] += 1;
    }

    pub fn of(&self, verdict: Verdict) -> u64 {
        self.0[place(verdict)]
    }

    /// All verdicts together.
    pub fn total(&self) -> u64 {
        self.0.iter().sum()
    }
}

fn place(verdict: Verdict) -> usize {
    Verdict::ALL.iter().position(|v| *v == verdict).expect("Verdict::ALL lists every verdict")
}
