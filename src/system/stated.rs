//! What was stated about one body.

use std::collections::BTreeMap;

use super::{Group, Key};

/// A number with its stated uncertainties, in the inner unit of its key.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Measured {
    pub value: f64,
    /// Upward and downward 1σ, both positive; absent when the file gives none.
    pub plus: Option<f64>,
    pub minus: Option<f64>,
    /// The unit the file used, for axes and tables (empty for plain numbers).
    pub unit: &'static str,
}

impl Measured {
    /// A value without uncertainty.
    pub fn exact(value: f64, unit: &'static str) -> Measured {
        Measured { value, plus: None, minus: None, unit }
    }
}

/// The two ways to state an eccentricity and an argument of pericentre as a vector.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Pair {
    /// (e cos ω, e sin ω)
    Plain,
    /// (√e cos ω, √e sin ω)
    Sqrt,
}

impl Pair {
    /// The cosine and the sine component.
    pub fn keys(self) -> (Key, Key) {
        match self {
            Pair::Plain => (Key::ECosW, Key::ESinW),
            Pair::Sqrt => (Key::SqrtECosW, Key::SqrtESinW),
        }
    }

    /// The pair that the key is a component of.
    pub fn of(key: Key) -> Option<Pair> {
        match key {
            Key::ECosW | Key::ESinW => Some(Pair::Plain),
            Key::SqrtECosW | Key::SqrtESinW => Some(Pair::Sqrt),
            _ => None,
        }
    }
}

/// Why a statement cannot be replaced.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
pub enum SetError {
    #[error("{} cannot vary while {} and {} are stated", asked.word(), stated.keys().0.word(), stated.keys().1.word())]
    MixedPair { asked: Key, stated: Pair },
}

/// The statements about one body.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Stated(BTreeMap<Key, Measured>);

impl Stated {
    pub fn get(&self, key: Key) -> Option<Measured> {
        self.0.get(&key).copied()
    }

    pub fn value(&self, key: Key) -> Option<f64> {
        self.get(key).map(|m| m.value)
    }

    pub fn insert(&mut self, key: Key, measured: Measured) {
        self.0.insert(key, measured);
    }

    pub fn remove(&mut self, key: Key) {
        self.0.remove(&key);
    }

    pub fn iter(&self) -> impl Iterator<Item = (Key, Measured)> + '_ {
        self.0.iter().map(|(k, m)| (*k, *m))
    }

    /// The pair of shape components that is stated, if one is.
    pub fn pair(&self) -> Option<Pair> {
        self.0.keys().find_map(|key| Pair::of(*key))
    }

    /// The stated eccentricity, from whichever keys state it; 0 if none does.
    pub fn eccentricity(&self) -> f64 {
        let Some(pair) = self.pair() else {
            return self.value(Key::Eccentricity).unwrap_or(0.0);
        };
        let (cosine, sine) = self.components(pair);
        match pair {
            Pair::Plain => cosine.hypot(sine),
            Pair::Sqrt => cosine * cosine + sine * sine,
        }
    }

    /// The stated argument of pericentre, rad, in the convention of the file (the star's where the file says
    /// so), from whichever keys state it; 0 if none does and for a pair that is zero.
    ///
    /// A longitude gives the argument longitude − ascending node.
    pub fn argument_of_pericentre(&self) -> f64 {
        if let Some(pair) = self.pair() {
            let (cosine, sine) = self.components(pair);
            return sine.atan2(cosine);
        }
        if let Some(longitude) = self.value(Key::LongitudeOfPericentre) {
            return longitude - self.value(Key::AscendingNode).unwrap_or(0.0);
        }
        self.value(Key::ArgumentOfPericentre).unwrap_or(0.0)
    }

    /// Replaces the answer to the question of `key` (its [`Group`]); every other statement stays.
    ///
    /// The components of a pair answer two questions, so they need care: setting the eccentricity of a body that
    /// states a pair keeps the argument (and states it from then on as `argument_of_pericentre`), setting the
    /// argument keeps the eccentricity, and setting a component of a body that states an eccentricity turns the
    /// statements into that pair. Angles stay in the convention of the file. A number that had to be rewritten
    /// carries no uncertainty.
    ///
    /// Errors: `MixedPair` for a component of the one pair while the other pair is stated.
    pub fn set(&mut self, key: Key, measured: Measured) -> Result<(), SetError> {
        match (key.group(), Pair::of(key)) {
            (Group::Shape, Some(pair)) => self.become_pair(pair, key)?,
            (Group::Shape, None) => self.leave_pair_for_argument(),
            (Group::Pericentre, _) => self.leave_pair_for_eccentricity(),
            _ => self.remove_group(key.group()),
        }
        self.insert(key, measured);
        Ok(())
    }

    fn components(&self, pair: Pair) -> (f64, f64) {
        let (cosine, sine) = pair.keys();
        (self.value(cosine).unwrap_or(0.0), self.value(sine).unwrap_or(0.0))
    }

    fn remove_group(&mut self, group: Group) {
        self.0.retain(|key, _| key.group() != group);
    }

    fn leave_pair_for_argument(&mut self) {
        let argument = self.argument_of_pericentre();
        let had_pair = self.pair().is_some();
        self.remove_group(Group::Shape);
        if had_pair {
            self.insert(Key::ArgumentOfPericentre, Measured::exact(argument, "deg"));
        }
    }

    fn leave_pair_for_eccentricity(&mut self) {
        let eccentricity = self.eccentricity();
        self.remove_group(Group::Pericentre);
        if self.pair().is_some() {
            self.remove_group(Group::Shape);
            self.insert(Key::Eccentricity, Measured::exact(eccentricity, ""));
        }
    }

    fn become_pair(&mut self, pair: Pair, asked: Key) -> Result<(), SetError> {
        match self.pair() {
            Some(stated) if stated == pair => return Ok(()),
            Some(stated) => return Err(SetError::MixedPair { asked, stated }),
            None => {}
        }
        let (eccentricity, argument) = (self.eccentricity(), self.argument_of_pericentre());
        let length = match pair {
            Pair::Plain => eccentricity,
            Pair::Sqrt => eccentricity.sqrt(),
        };
        self.remove_group(Group::Shape);
        self.remove_group(Group::Pericentre);
        let (cosine, sine) = pair.keys();
        self.insert(cosine, Measured::exact(length * argument.cos(), ""));
        self.insert(sine, Measured::exact(length * argument.sin(), ""));
        Ok(())
    }
}

/// A body and what was stated about it.
#[derive(Clone, Debug, PartialEq)]
pub struct Body {
    pub name: String,
    pub stated: Stated,
}
