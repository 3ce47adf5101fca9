//! Paths such as `c.period`, `all.inclination`, `star.mass`.

use super::{Body, BodyRef, Holder, Key, Measured, SetError, System, Target};

/// Word that names the star in a path.
pub const STAR: &str = "star";
/// Word that names every planet in a path.
pub const ALL: &str = "all";
/// Word that names the second star in a path, whatever its name is.
pub const COMPANION: &str = "companion";

/// Why a path does not lead to a key.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum PathError {
    #[error("\"{path}\" is not of the form body.key")]
    Form { path: String },
    #[error("there is no body \"{found}\"")]
    NoBody { found: String, known: Vec<String> },
    #[error("there is no key \"{found}\"")]
    NoKey { found: String, allowed: Vec<&'static str> },
    #[error("{body} has no key {}", key.word())]
    NotOfBody { body: String, key: Key, allowed: Vec<&'static str> },
}

/// Whether a body may have this name: letters, digits, `_`, `-`, and not a word that paths use.
pub fn is_planet_name(name: &str) -> bool {
    let plain = |c: char| c.is_ascii_alphanumeric() || c == '_' || c == '-';
    !name.is_empty() && name.chars().all(plain) && ![STAR, ALL, COMPANION].contains(&name)
}

impl BodyRef {
    pub fn holder(&self) -> Holder {
        match self {
            BodyRef::Star => Holder::Star,
            BodyRef::Planet(_) | BodyRef::All => Holder::Planet,
            BodyRef::Companion => Holder::Companion,
        }
    }

    /// Whether a change of the one moves the other.
    pub fn overlaps(&self, other: &BodyRef) -> bool {
        match (self, other) {
            (BodyRef::All, BodyRef::Planet(_)) | (BodyRef::Planet(_), BodyRef::All) => true,
            _ => self == other,
        }
    }
}

impl System {
    /// Index into `planets`.
    pub fn planet_index(&self, name: &str) -> Option<usize> {
        self.planets.iter().position(|planet| planet.name == name)
    }

    /// Every body that circles: the planets in the order of the file, then the companion. A configuration and
    /// everything measured on one count bodies in this order.
    pub fn orbiting(&self) -> impl Iterator<Item = &Body> {
        self.planets.iter().chain(&self.companion)
    }

    /// Index into [`System::orbiting`]; the companion answers to its name and to [`COMPANION`].
    pub fn orbiting_index(&self, name: &str) -> Option<usize> {
        if self.is_companion(name) { Some(self.planets.len()) } else { self.planet_index(name) }
    }

    /// The place in [`System::orbiting`] of the one body that a reference names; none for the star and for all.
    pub fn orbiting_place(&self, body: &BodyRef) -> Option<usize> {
        match body {
            BodyRef::Planet(index) => Some(*index),
            BodyRef::Companion => Some(self.planets.len()),
            BodyRef::Star | BodyRef::All => None,
        }
    }

    /// The name of a body by its place in [`System::orbiting`].
    pub fn orbiting_name(&self, index: usize) -> Option<&str> {
        self.orbiting().nth(index).map(|body| body.name.as_str())
    }

    /// The bodies that a reference names: one, or every planet.
    pub fn bodies(&self, body: &BodyRef) -> Vec<&Body> {
        match body {
            BodyRef::Star => vec![&self.star],
            BodyRef::Planet(index) => self.planets.get(*index).into_iter().collect(),
            BodyRef::All => self.planets.iter().collect(),
            BodyRef::Companion => self.companion.iter().collect(),
        }
    }

    /// The word for a body in paths.
    pub fn body_word(&self, body: &BodyRef) -> &str {
        match body {
            BodyRef::Star => STAR,
            BodyRef::All => ALL,
            BodyRef::Companion => self.companion.as_ref().map_or(COMPANION, |body| &body.name),
            BodyRef::Planet(index) => self.planets.get(*index).map_or("", |planet| &planet.name),
        }
    }

    /// Every word that may stand before the dot of a path.
    pub fn body_words(&self) -> Vec<String> {
        let bodies = self.orbiting().map(|body| body.name.clone());
        bodies.chain([STAR.to_string(), ALL.to_string()]).collect()
    }

    fn is_companion(&self, word: &str) -> bool {
        self.companion.as_ref().is_some_and(|body| word == COMPANION || body.name == word)
    }

    /// The key that a path such as `c.period` names; blanks around its words are ignored.
    pub fn target(&self, path: &str) -> Result<Target, PathError> {
        let form = || PathError::Form { path: path.trim().to_string() };
        let (body_word, key_word) = path.split_once('.').ok_or_else(form)?;
        let (body_word, key_word) = (body_word.trim(), key_word.trim());
        let body = match body_word {
            "" => return Err(form()),
            STAR => BodyRef::Star,
            ALL => BodyRef::All,
            name if self.is_companion(name) => BodyRef::Companion,
            name => BodyRef::Planet(
                self.planet_index(name)
                    .ok_or_else(|| PathError::NoBody { found: name.to_string(), known: self.body_words() })?,
            ),
        };
        let allowed = || Key::stated_by(body.holder()).map(Key::word).collect::<Vec<_>>();
        let key = Key::from_word(key_word)
            .ok_or_else(|| PathError::NoKey { found: key_word.to_string(), allowed: allowed() })?;
        if !key.may_state(body.holder()) {
            return Err(PathError::NotOfBody { body: body_word.to_string(), key, allowed: allowed() });
        }
        Ok(Target { body, key })
    }

    /// Replaces the statement of one key of one body, or of every planet (see [`super::Stated::set`]).
    pub fn set(&mut self, target: &Target, measured: Measured) -> Result<(), SetError> {
        match target.body {
            BodyRef::Star => self.star.stated.set(target.key, measured),
            BodyRef::Planet(index) => match self.planets.get_mut(index) {
                Some(planet) => planet.stated.set(target.key, measured),
                None => Ok(()),
            },
            BodyRef::Companion => match self.companion.as_mut() {
                Some(companion) => companion.stated.set(target.key, measured),
                None => Ok(()),
            },
            BodyRef::All => {
                self.planets.iter_mut().try_for_each(|planet| planet.stated.set(target.key, measured))
            }
        }
    }
}
