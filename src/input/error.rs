//! What can be wrong with a file, and how it is said.

use std::fmt;

/// What kind of thing is wrong.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Fault {
    NoFile,
    NotText,
    Syntax,
    UnknownKey,
    UnknownWord,
    UnknownBody,
    WrongType,
    Malformed,
    MissingUnit,
    UnknownUnit,
    WrongUnit,
    NotFinite,
    OutOfRange,
    Uncertainty,
    MissingKey,
    MissingPartner,
    Conflict,
    Twice,
    Count,
    BadName,
    DuplicateName,
    DateWithoutEpoch,
    BadPath,
    EmptyAxis,
    BadAxis,
    BadAngle,
    NoUncertainty,
    Meaning,
    NotYet,
    StudyFile,
    SystemFile,
    /// What only the bodies together show.
    Unstartable,
}

impl Fault {
    /// The headline.
    pub fn words(self) -> &'static str {
        match self {
            Fault::NoFile => "the file cannot be read",
            Fault::NotText => "the file is not UTF-8 text",
            Fault::Syntax => "this is not valid TOML",
            Fault::UnknownKey => "unknown key",
            Fault::UnknownWord => "unknown word",
            Fault::UnknownBody => "there is no such body",
            Fault::WrongType => "wrong type of value",
            Fault::Malformed => "this quantity cannot be read",
            Fault::MissingUnit => "the unit is missing",
            Fault::UnknownUnit => "unknown unit",
            Fault::WrongUnit => "wrong unit",
            Fault::NotFinite => "the number is not finite",
            Fault::OutOfRange => "the number is out of range",
            Fault::Uncertainty => "the uncertainty is not above 0",
            Fault::MissingKey => "a needed key is missing",
            Fault::MissingPartner => "half of a pair is missing",
            Fault::Conflict => "two keys answer the same question",
            Fault::Twice => "the same word twice",
            Fault::Count => "wrong number of entries",
            Fault::BadName => "this name cannot be used",
            Fault::DuplicateName => "two bodies have the same name",
            Fault::DateWithoutEpoch => "a date needs an epoch",
            Fault::BadPath => "this path does not lead to a key",
            Fault::EmptyAxis => "the axis is empty",
            Fault::BadAxis => "the axis cannot be laid out",
            Fault::BadAngle => "this angle cannot be used",
            Fault::NoUncertainty => "no uncertainty is stated",
            Fault::Meaning => "this has no meaning here",
            Fault::NotYet => "this version does not have this",
            Fault::StudyFile => "this is a study file",
            Fault::SystemFile => "this is a system file",
            Fault::Unstartable => "the system cannot start like this",
        }
    }
}

/// Where in which file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Place {
    pub file: String,
    /// Absent for a file that cannot be read at all.
    pub spot: Option<Spot>,
}

/// Where in a text.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Spot {
    /// From 1.
    pub line: usize,
    /// From 1, in characters.
    pub column: usize,
    /// The offending line, without its end.
    pub source_line: String,
    /// How many characters are marked, at least one.
    pub width: usize,
}

/// What is said beside the headline; each may be empty.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Texts {
    /// What it is about, as "planet c, eccentricity".
    pub about: String,
    pub found: String,
    pub allowed: String,
    pub advice: String,
}

/// One thing that is wrong with a file: where, what was found, what is allowed, what to do.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub struct InputError {
    pub fault: Fault,
    pub place: Box<Place>,
    pub texts: Box<Texts>,
}

impl fmt::Display for InputError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Place { file, spot } = self.place.as_ref();
        let Texts { about, found, allowed, advice } = self.texts.as_ref();
        match spot {
            Some(spot) => write!(f, "{file}:{}:{}: ", spot.line, spot.column)?,
            None => write!(f, "{file}: ")?,
        }
        if !about.is_empty() {
            write!(f, "{about}: ")?;
        }
        f.write_str(self.fault.words())?;
        if let Some(spot) = spot {
            let number = spot.line.to_string();
            let gutter = " ".repeat(number.len());
            let before: String = spot.source_line.chars().take(spot.column - 1).map(blank_for).collect();
            write!(f, "\n  {number} | {}", spot.source_line)?;
            write!(f, "\n  {gutter} | {before}{}", "^".repeat(spot.width))?;
        }
        for (label, text) in [("found:", found), ("allowed:", allowed), ("to do:", advice)] {
            if !text.is_empty() {
                write!(f, "\n  {label:<8} {text}")?;
            }
        }
        Ok(())
    }
}

/// A tab stays, so that the caret stands under its character.
fn blank_for(character: char) -> char {
    if character == '\t' { '\t' } else { ' ' }
}
