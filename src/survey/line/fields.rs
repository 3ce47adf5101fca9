//! The fields of a line, written and read.

use std::collections::BTreeSet;
use std::sync::Mutex;

use crate::assess::Range;

/// A line being written.
pub(super) struct Line(pub String);

impl Line {
    pub(super) fn put(&mut self, field: impl AsRef<str>) {
        self.0.push(',');
        self.0.push_str(field.as_ref());
    }
}

/// The shortest text that reads back to the same bits.
pub(super) fn number(value: f64) -> String {
    format!("{value:?}")
}

pub(super) fn optional(value: Option<f64>) -> String {
    value.map(number).unwrap_or_default()
}

pub(super) fn whole(value: Option<usize>) -> String {
    value.map(|v| v.to_string()).unwrap_or_default()
}

/// In double quotes when it has a comma or a quote, as RFC 4180 does.
pub(super) fn quoted(word: &str) -> String {
    if word.contains([',', '"']) { format!("\"{}\"", word.replace('"', "\"\"")) } else { word.to_string() }
}

/// What is left of a line: fields with a comma before each but the first; empty after the last.
pub(super) struct Fields<'a>(pub &'a str);

impl Fields<'_> {
    pub(super) fn next(&mut self) -> Option<String> {
        let rest = self.0.strip_prefix(',').unwrap_or(self.0);
        if self.0.is_empty() {
            return None;
        }
        let mut open = false;
        let end = rest
            .find(|c| {
                open ^= c == '"';
                c == ',' && !open
            })
            .unwrap_or(rest.len());
        self.0 = &rest[end..];
        let field = &rest[..end];
        Some(match field.strip_prefix('"').and_then(|f| f.strip_suffix('"')) {
            Some(inner) => inner.replace("\"\"", "\""),
            None => field.to_string(),
        })
    }

    /// Nothing where nothing must be.
    pub(super) fn empty(&mut self) -> Option<()> {
        self.next()?.is_empty().then_some(())
    }

    /// Outer `None`: no number; inner `None`: absent.
    pub(super) fn number(&mut self) -> Option<Option<f64>> {
        let field = self.next()?;
        if field.is_empty() { Some(None) } else { field.parse().ok().map(Some) }
    }

    pub(super) fn whole(&mut self) -> Option<Option<u64>> {
        let field = self.next()?;
        if field.is_empty() { Some(None) } else { field.parse().ok().map(Some) }
    }

    pub(super) fn range(&mut self) -> Option<Option<Range>> {
        let (min, max) = (self.number()?, self.number()?);
        Some(min.zip(max).map(|(min, max)| Range { min, max }))
    }
}

/// A word that lives as long as the program; each different one is stored once (there are a handful of schemes).
pub(super) fn kept(word: &str) -> &'static str {
    static WORDS: Mutex<BTreeSet<&'static str>> = Mutex::new(BTreeSet::new());
    let mut words = WORDS.lock().unwrap_or_else(|poisoned| poisoned.into_inner());
    if let Some(known) = words.get(word) {
        return known;
    }
    let new: &'static str = Box::leak(word.to_string().into_boxed_str());
    words.insert(new);
    new
}
