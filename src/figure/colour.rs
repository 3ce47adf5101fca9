//! Colours: an even scale for indicators, flat tones with patterns for what is not a number.

use crate::verdict::{LostHow, Verdict};

/// Red, green, blue as on a screen (sRGB).
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Rgb(pub u8, pub u8, pub u8);

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ScaleKind {
    Linear,
    Log,
}

/// Maps a value to a place between 0 and 1, and that to a colour.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Scale {
    pub from: f64,
    pub to: f64,
    pub kind: ScaleKind,
}

impl Scale {
    /// 0 at `from`, 1 at `to`, beyond them outside 0..1; absent for NaN and for what has no logarithm on a log scale.
    pub fn place(&self, value: f64) -> Option<f64> {
        let share = match self.kind {
            ScaleKind::Linear => (value - self.from) / (self.to - self.from),
            ScaleKind::Log => (value / self.from).ln() / (self.to / self.from).ln(),
        };
        (!share.is_nan()).then_some(share)
    }

    /// The value at a place.
    pub fn value(&self, place: f64) -> f64 {
        match self.kind {
            ScaleKind::Linear => self.from + place * (self.to - self.from),
            ScaleKind::Log => self.from * (place * (self.to / self.from).ln()).exp(),
        }
    }

    /// Colour of a value; beyond the ends the colour of the end.
    ///
    /// Dark blue over magenta to yellow, lightness rising evenly: also in grey and for each common colour blindness the
    /// order is kept.
    pub fn colour(&self, value: f64) -> Option<Rgb> {
        self.place(value).map(|p| even(p.clamp(0.0, 1.0)))
    }
}

/// The colour at a place of the scale.
pub(crate) fn even(place: f64) -> Rgb {
    let colour = colorous::PLASMA.eval_continuous(place);
    Rgb(colour.r, colour.g, colour.b)
}

/// What a cell is when no number is shown for it.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Region {
    Regular,
    Chaotic,
    Escape,
    Star,
    Encounter,
    Collision,
    /// Lost, but how is not known.
    Lost,
    Undecided,
    Untrusted,
    /// The angle does not librate.
    NoLibration,
    /// Finished, but this column has no value.
    NoValue,
    /// Not finished.
    Missing,
}

/// How a tone is drawn over.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Pattern {
    Plain,
    /// Lines rising to the right.
    Rising,
    /// Lines falling to the right.
    Falling,
    Crossed,
    Dots,
    Level,
    Upright,
}

/// A flat tone: ground, pattern and the colour of its strokes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Tone {
    pub ground: Rgb,
    pub pattern: Pattern,
    pub stroke: Rgb,
}

impl Region {
    pub const ALL: [Region; 12] = [
        Region::Regular,
        Region::Chaotic,
        Region::Escape,
        Region::Star,
        Region::Encounter,
        Region::Collision,
        Region::Lost,
        Region::Undecided,
        Region::Untrusted,
        Region::NoLibration,
        Region::NoValue,
        Region::Missing,
    ];

    pub fn of(verdict: Verdict, how: Option<LostHow>) -> Region {
        match (verdict, how) {
            (Verdict::Regular, _) => Region::Regular,
            (Verdict::Chaotic, _) => Region::Chaotic,
            (Verdict::Undecided, _) => Region::Undecided,
            (Verdict::Untrusted, _) => Region::Untrusted,
            (Verdict::Lost, Some(LostHow::Escape)) => Region::Escape,
            (Verdict::Lost, Some(LostHow::Star)) => Region::Star,
            (Verdict::Lost, Some(LostHow::Encounter)) => Region::Encounter,
            (Verdict::Lost, Some(LostHow::Collision)) => Region::Collision,
            (Verdict::Lost, None) => Region::Lost,
        }
    }

    /// The words of the legend.
    pub fn words(self) -> &'static str {
        match self {
            Region::Regular => "regular",
            Region::Chaotic => "chaotic",
            Region::Escape => "lost: escape",
            Region::Star => "lost: into the star",
            Region::Encounter => "lost: encounter",
            Region::Collision => "lost: collision",
            Region::Lost => "lost",
            Region::Undecided => "undecided",
            Region::Untrusted => "untrusted",
            Region::NoLibration => "no libration",
            Region::NoValue => "no value",
            Region::Missing => "not computed",
        }
    }

    /// Greys for what is lost, blue-green and green for what is not known: the scale takes none of them. Each has a pattern
    /// of its own. The verdicts of bounded cells take two colours of the scale.
    pub fn tone(self) -> Tone {
        let tone = |ground, pattern, stroke| Tone { ground, pattern, stroke };
        let grey = |level| Rgb(level, level, level);
        match self {
            Region::Regular => tone(even(0.05), Pattern::Plain, grey(0)),
            Region::Chaotic => tone(even(0.80), Pattern::Plain, grey(0)),
            Region::Escape => tone(grey(236), Pattern::Upright, grey(178)),
            Region::Star => tone(grey(226), Pattern::Dots, grey(70)),
            Region::Encounter => tone(grey(205), Pattern::Rising, grey(130)),
            Region::Collision => tone(grey(120), Pattern::Falling, grey(225)),
            Region::Lost => tone(grey(205), Pattern::Plain, grey(0)),
            Region::Undecided => tone(Rgb(196, 234, 242), Pattern::Level, Rgb(40, 110, 130)),
            Region::Untrusted => tone(Rgb(84, 196, 128), Pattern::Crossed, Rgb(0, 70, 40)),
            Region::NoLibration => tone(Rgb(226, 220, 200), Pattern::Plain, grey(0)),
            Region::NoValue => tone(grey(255), Pattern::Dots, grey(170)),
            Region::Missing => tone(grey(255), Pattern::Plain, grey(0)),
        }
    }
}
