//! A text and places in it.

use std::ops::Range;

use super::error::{Fault, InputError, Place, Spot, Texts};

/// A named text.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Source<'t> {
    pub name: &'t str,
    pub text: &'t str,
}

/// What is wrong, without its place; the reader that knows the place adds it with [`Source::at`].
#[derive(Clone, Debug)]
pub(crate) struct Complaint {
    fault: Fault,
    texts: Box<Texts>,
}

impl Complaint {
    pub fn new(fault: Fault, found: impl Into<String>) -> Complaint {
        Complaint { fault, texts: Box::new(Texts { found: found.into(), ..Texts::default() }) }
    }

    pub fn about(mut self, about: impl Into<String>) -> Complaint {
        self.texts.about = about.into();
        self
    }

    pub fn allowed(mut self, allowed: impl Into<String>) -> Complaint {
        self.texts.allowed = allowed.into();
        self
    }

    pub fn advice(mut self, advice: impl Into<String>) -> Complaint {
        self.texts.advice = advice.into();
        self
    }

    /// For a text that has no place (a file that cannot be read).
    pub fn of_file(self, file: impl Into<String>) -> InputError {
        self.placed(file.into(), None)
    }

    fn placed(self, file: String, spot: Option<Spot>) -> InputError {
        InputError { fault: self.fault, place: Box::new(Place { file, spot }), texts: self.texts }
    }
}

impl Source<'_> {
    /// The complaint at a range of bytes of this text. A range that leaves its line is cut at the line's end.
    pub fn at(&self, range: Range<usize>, complaint: Complaint) -> InputError {
        let mut start = range.start.min(self.text.len());
        while !self.text.is_char_boundary(start) {
            start -= 1;
        }
        let line_start = self.text[..start].rfind('\n').map_or(0, |at| at + 1);
        let line_end = self.text[start..].find('\n').map_or(self.text.len(), |at| start + at);
        let source_line = self.text[line_start..line_end].trim_end_matches('\r');
        let mut end = range.end.clamp(start, line_end);
        while !self.text.is_char_boundary(end) {
            end += 1;
        }
        let spot = Spot {
            line: self.text[..line_start].matches('\n').count() + 1,
            column: self.text[line_start..start].chars().count() + 1,
            source_line: source_line.to_string(),
            width: self.text[start..end].trim_end().chars().count().max(1),
        };
        complaint.placed(self.name.to_string(), Some(spot))
    }

    /// Where `inner` bytes of the *content* of a string value are in the text: exact for plain strings, the whole
    /// value for strings with escapes or over several lines.
    pub fn inside(&self, value: &Range<usize>, content: &str, inner: Range<usize>) -> Range<usize> {
        let raw = self.text.get(value.clone()).unwrap_or("");
        let plain = raw.len() == content.len() + 2 && raw.get(1..raw.len() - 1) == Some(content);
        if plain { value.start + 1 + inner.start..value.start + 1 + inner.end } else { value.clone() }
    }
}
