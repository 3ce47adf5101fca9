//! From numbers to a verdict: thresholds, each with its paper.

mod thresholds;

pub use thresholds::{
    CHAOTIC_FROM, Evidence, LEAST_OUTER_ORBITS, REGULAR_UP_TO, chaos, is_surely_chaotic, judge,
};

/// What became of a configuration.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Verdict {
    Regular,
    /// Bounded, but the indicator says chaos.
    Chaotic,
    Lost,
    /// The span was too short to tell.
    Undecided,
    /// The energy error target was missed even after refinement.
    Untrusted,
}

/// What the indicator alone says: chaos is not instability, and a cell may be regular until it is lost.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Chaos {
    Regular,
    Chaotic,
    Undecided,
}

impl Chaos {
    /// The word used in tables and output.
    pub fn word(self) -> &'static str {
        match self {
            Chaos::Regular => "regular",
            Chaos::Chaotic => "chaotic",
            Chaos::Undecided => "undecided",
        }
    }
}

/// How a body was lost.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum LostHow {
    Escape,
    Star,
    Encounter,
    Collision,
}

impl Verdict {
    pub const ALL: [Verdict; 5] =
        [Verdict::Regular, Verdict::Chaotic, Verdict::Lost, Verdict::Undecided, Verdict::Untrusted];

    /// The word used in tables and output.
    pub fn word(self) -> &'static str {
        match self {
            Verdict::Regular => "regular",
            Verdict::Chaotic => "chaotic",
            Verdict::Lost => "lost",
            Verdict::Undecided => "undecided",
            Verdict::Untrusted => "untrusted",
        }
    }

    pub fn from_word(word: &str) -> Option<Verdict> {
        Verdict::ALL.into_iter().find(|v| v.word() == word)
    }
}

impl LostHow {
    pub const ALL: [LostHow; 4] = [LostHow::Escape, LostHow::Star, LostHow::Encounter, LostHow::Collision];

    /// The word used in tables and output.
    pub fn word(self) -> &'static str {
        match self {
            LostHow::Escape => "escape",
            LostHow::Star => "star",
            LostHow::Encounter => "encounter",
            LostHow::Collision => "collision",
        }
    }

    pub fn from_word(word: &str) -> Option<LostHow> {
        LostHow::ALL.into_iter().find(|h| h.word() == word)
    }
}
