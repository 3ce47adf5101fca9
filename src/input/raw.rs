//! A TOML text as a tree of entries with their places, in the order of the file, before anything is checked.

use std::ops::Range;

use toml::Spanned;
use toml::de::{DeTable, DeValue};

use super::error::{Fault, InputError};
use super::nearest::did_you_mean;
use super::quantity::{self, FORMS, Fail, Written};
use super::source::{Complaint, Source};

#[derive(Clone, Debug)]
pub(crate) enum RawValue {
    Text(String),
    /// As written; `nan` and `inf` are still possible here.
    Number(f64),
    Integer(i64),
    Flag(bool),
    List(Vec<(RawValue, Range<usize>)>),
    Table(RawTable),
    Date,
}

impl RawValue {
    fn words(&self) -> &'static str {
        match self {
            RawValue::Text(_) => "text",
            RawValue::Number(_) => "a number",
            RawValue::Integer(_) => "a whole number",
            RawValue::Flag(_) => "true or false",
            RawValue::List(_) => "a list",
            RawValue::Table(_) => "a table",
            RawValue::Date => "a calendar date",
        }
    }
}

#[derive(Clone, Debug)]
pub(crate) struct Entry {
    pub key: String,
    pub key_at: Range<usize>,
    pub value: RawValue,
    pub value_at: Range<usize>,
}

#[derive(Clone, Debug, Default)]
pub(crate) struct RawTable {
    pub entries: Vec<Entry>,
    pub at: Range<usize>,
}

/// Reads a TOML text.
pub(crate) fn parse(source: &Source) -> Result<RawTable, InputError> {
    match DeTable::parse(source.text) {
        Ok(table) => Ok(raw_table(table.get_ref(), 0..0)),
        Err(error) => {
            let complaint = Complaint::new(Fault::Syntax, error.message().replace('\n', "; "))
                .advice("check quotes, brackets and the = sign here; text with a unit needs quotes");
            Err(source.at(error.span().unwrap_or(0..0), complaint))
        }
    }
}

fn raw_table(table: &DeTable, at: Range<usize>) -> RawTable {
    let mut entries: Vec<Entry> = table
        .iter()
        .map(|(key, value)| Entry {
            key: key.get_ref().to_string(),
            key_at: key.span(),
            value: raw_value(value),
            value_at: value.span(),
        })
        .collect();
    entries.sort_by_key(|entry| entry.key_at.start);
    RawTable { entries, at }
}

fn raw_value(value: &Spanned<DeValue>) -> RawValue {
    match value.get_ref() {
        DeValue::String(text) => RawValue::Text(text.to_string()),
        DeValue::Integer(number) => match i64::from_str_radix(number.as_str(), number.radix()) {
            Ok(whole) => RawValue::Integer(whole),
            Err(_) => RawValue::Number(number.as_str().parse().unwrap_or(f64::NAN)),
        },
        DeValue::Float(number) => RawValue::Number(number.as_str().parse().unwrap_or(f64::NAN)),
        DeValue::Boolean(flag) => RawValue::Flag(*flag),
        DeValue::Datetime(_) => RawValue::Date,
        DeValue::Array(list) => {
            RawValue::List(list.iter().map(|item| (raw_value(item), item.span())).collect())
        }
        DeValue::Table(table) => RawValue::Table(raw_table(table, value.span())),
    }
}

impl RawTable {
    pub fn get(&self, key: &str) -> Option<&Entry> {
        self.entries.iter().find(|entry| entry.key == key)
    }

    /// Refuses every key that is not allowed here.
    pub fn check_keys(&self, source: &Source, about: &str, allowed: &[&str]) -> Result<(), InputError> {
        match self.entries.iter().find(|entry| !allowed.contains(&entry.key.as_str())) {
            None => Ok(()),
            Some(entry) => {
                let advice = did_you_mean(&entry.key, allowed.iter().copied(), "take the line out");
                let complaint = Complaint::new(Fault::UnknownKey, format!("\"{}\"", entry.key)).about(about);
                Err(source.at(entry.key_at.clone(), complaint.allowed(allowed.join(", ")).advice(advice)))
            }
        }
    }
}

/// The complaint that a value has the wrong type.
fn wrong_type(value: &RawValue, allowed: &str, advice: &str) -> Complaint {
    Complaint::new(Fault::WrongType, value.words()).allowed(allowed).advice(advice)
}

impl Entry {
    /// Adds the place (within the value) and the key to what is wrong with it.
    pub fn fail(&self, source: &Source, about: &str, fail: Fail) -> InputError {
        let (range, complaint) = fail;
        let at = match &self.value {
            RawValue::Text(text) => source.inside(&self.value_at, text, range),
            _ => self.value_at.clone(),
        };
        source.at(at, complaint.about(about_key(about, &self.key)))
    }

    /// The complaint about the whole value.
    pub fn refuse(&self, source: &Source, about: &str, complaint: Complaint) -> InputError {
        source.at(self.value_at.clone(), complaint.about(about_key(about, &self.key)))
    }

    pub fn text(&self, source: &Source, about: &str, allowed: &str) -> Result<&str, InputError> {
        match &self.value {
            RawValue::Text(text) => Ok(text),
            other => Err(self.refuse(source, about, wrong_type(other, allowed, "write it in quotes"))),
        }
    }

    pub fn table(&self, source: &Source) -> Result<&RawTable, InputError> {
        match &self.value {
            RawValue::Table(table) => Ok(table),
            other => {
                let advice = format!("write [{}] on a line of its own", self.key);
                Err(self.refuse(source, "", wrong_type(other, "a table", &advice)))
            }
        }
    }

    /// The tables of a `[[key]]` list.
    pub fn tables(&self, source: &Source) -> Result<Vec<&RawTable>, InputError> {
        let advice = format!("write [[{}]] on a line of its own for each", self.key);
        let RawValue::List(list) = &self.value else {
            return Err(self.refuse(source, "", wrong_type(&self.value, "a list of tables", &advice)));
        };
        let table = |(value, at): &'_ (RawValue, Range<usize>)| match value {
            RawValue::Table(_) => Ok(()),
            other => {
                Err(source.at(at.clone(), wrong_type(other, "a table", &advice).about(self.key.clone())))
            }
        };
        list.iter().try_for_each(table)?;
        Ok(list
            .iter()
            .filter_map(|(value, _)| if let RawValue::Table(t) = value { Some(t) } else { None })
            .collect())
    }

    /// The words of a list of texts, each with its place.
    pub fn words(&self, source: &Source) -> Result<Vec<(&str, Range<usize>)>, InputError> {
        let advice = format!("write {} = [\"…\", \"…\"]", self.key);
        let RawValue::List(list) = &self.value else {
            return Err(self.refuse(
                source,
                "",
                wrong_type(&self.value, "a list of words in quotes", &advice),
            ));
        };
        list.iter()
            .map(|(value, at)| match value {
                RawValue::Text(text) => Ok((text.as_str(), at.clone())),
                other => {
                    let complaint = wrong_type(other, "a word in quotes", &advice).about(self.key.clone());
                    Err(source.at(at.clone(), complaint))
                }
            })
            .collect()
    }

    pub fn flag(&self, source: &Source, about: &str) -> Result<bool, InputError> {
        match self.value {
            RawValue::Flag(flag) => Ok(flag),
            ref other => {
                let complaint = wrong_type(other, "true or false", "write it without quotes");
                Err(self.refuse(source, about, complaint))
            }
        }
    }

    /// One of a few words.
    pub fn choice<T: Copy>(
        &self,
        source: &Source,
        about: &str,
        choices: &[(&str, T)],
    ) -> Result<T, InputError> {
        let quoted: Vec<String> = choices.iter().map(|(word, _)| format!("\"{word}\"")).collect();
        let allowed = quoted.join(", ");
        let text = self.text(source, about, &allowed)?;
        if let Some((_, choice)) = choices.iter().find(|(word, _)| *word == text) {
            return Ok(*choice);
        }
        let advice =
            did_you_mean(text, choices.iter().map(|(word, _)| *word), "use one of the allowed words");
        let complaint = Complaint::new(Fault::UnknownWord, format!("\"{text}\"")).allowed(allowed);
        Err(self.refuse(source, about, complaint.advice(advice)))
    }

    /// A quantity: text in the forms of papers, or a plain TOML number for what has no unit.
    pub fn quantity(&self, source: &Source, about: &str) -> Result<Written, InputError> {
        let value = match &self.value {
            RawValue::Text(text) => {
                return quantity::read(text).map_err(|fail| self.fail(source, about, fail));
            }
            RawValue::Number(value) => *value,
            RawValue::Integer(value) => *value as f64,
            other => {
                let allowed = format!("a quantity such as {FORMS}");
                let complaint = wrong_type(other, &allowed, "write number and unit in quotes");
                return Err(self.refuse(source, about, complaint));
            }
        };
        if !value.is_finite() {
            let found = source.text.get(self.value_at.clone()).unwrap_or("no number");
            let complaint = Complaint::new(Fault::NotFinite, found).allowed("a finite number");
            return Err(self.refuse(
                source,
                about,
                complaint.advice("give the number, or leave the key out"),
            ));
        }
        let unit = String::new();
        Ok(Written { value, plus: None, minus: None, unit, value_at: 0..0, unit_at: 0..0 })
    }

    /// A quantity of something that is chosen, not measured: no uncertainty.
    pub fn exact(&self, source: &Source, about: &str) -> Result<Written, InputError> {
        let written = self.quantity(source, about)?;
        if written.plus.is_none() {
            return Ok(written);
        }
        let complaint =
            Complaint::new(Fault::Malformed, "an uncertainty").allowed("one exact number with its unit");
        Err(self.refuse(
            source,
            about,
            complaint.advice("leave the uncertainty out; this is chosen, not measured"),
        ))
    }

    /// A count of 1 or more.
    pub fn count(&self, source: &Source, about: &str, zero: Fault) -> Result<usize, InputError> {
        let allowed = "a whole number of 1 or more";
        let refuse = |fault, found: String| {
            let advice = match self.value {
                RawValue::Integer(..1) => "give 1 or more",
                RawValue::Integer(_) => "give fewer",
                RawValue::Text(_) => "write it without quotes",
                _ => "write a whole number, without quotes",
            };
            let complaint = Complaint::new(fault, found).allowed(allowed).advice(advice);
            Err(self.refuse(source, about, complaint))
        };
        match self.value {
            RawValue::Integer(count) if count >= 1 => match usize::try_from(count) {
                Ok(count) => Ok(count),
                Err(_) => refuse(Fault::OutOfRange, count.to_string()),
            },
            RawValue::Integer(0) => refuse(zero, "0".to_string()),
            RawValue::Integer(count) => refuse(Fault::OutOfRange, count.to_string()),
            ref other => refuse(Fault::WrongType, other.words().to_string()),
        }
    }
}

/// "planet c, eccentricity", or the one of the two that there is.
fn about_key(about: &str, key: &str) -> String {
    if about.is_empty() { key.to_string() } else { format!("{about}, {key}") }
}
