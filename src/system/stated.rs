//! What was stated about one body.

use std::collections::BTreeMap;

use super::Key;

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
}

/// A body and what was stated about it.
#[derive(Clone, Debug, PartialEq)]
pub struct Body {
    pub name: String,
    pub stated: Stated,
}
