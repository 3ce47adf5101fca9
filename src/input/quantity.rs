//! Quantities as papers write them: `12.40 ± 0.05 d`, `0.12 +0.03 -0.02`, `3.1 Mearth`.

use std::ops::Range;

use super::error::Fault;
use super::nearest::did_you_mean;
use super::source::Complaint;
use crate::system::Measured;
use crate::units::{Dimension, Unit};

/// A complaint about a range of bytes of the text that was read.
pub(crate) type Fail = (Range<usize>, Complaint);

/// A quantity as written: numbers in the unit of the text.
#[derive(Clone, Debug, PartialEq)]
pub struct Written {
    pub value: f64,
    pub plus: Option<f64>,
    pub minus: Option<f64>,
    /// Empty if none is written.
    pub unit: String,
    /// Where the value and the unit stand in the text.
    pub(crate) value_at: Range<usize>,
    pub(crate) unit_at: Range<usize>,
}

pub(crate) const FORMS: &str =
    "\"12.40 d\", \"12.40 ± 0.05 d\", \"12.40 +/- 0.05 d\", \"12.40 +0.05 -0.03 d\"";

/// Reads along a text.
struct Reader<'t> {
    text: &'t str,
    at: usize,
}

impl<'t> Reader<'t> {
    fn rest(&self) -> &'t str {
        &self.text[self.at..]
    }

    fn skip_blanks(&mut self) {
        self.at = self.text.len() - self.rest().trim_start().len();
    }

    fn take(&mut self, word: &str) -> bool {
        let found = self.rest().starts_with(word);
        if found {
            self.at += word.len();
        }
        found
    }

    /// One of `+`, `-`, or the typographic minus.
    fn take_sign(&mut self) -> Option<f64> {
        if self.take("+") {
            Some(1.0)
        } else if self.take("-") || self.take("\u{2212}") {
            Some(-1.0)
        } else {
            None
        }
    }

    /// A decimal number without sign; NaN and infinity are refused under their own name.
    fn take_number(&mut self, what: &str) -> Result<f64, Fail> {
        let rest = self.rest();
        let bytes = rest.as_bytes();
        let digits = |from: usize| bytes[from..].iter().take_while(|b| b.is_ascii_digit()).count();
        let mut end = digits(0);
        let mut count = end;
        if bytes.get(end) == Some(&b'.') {
            let after = digits(end + 1);
            count += after;
            end += 1 + after;
        }
        if count == 0 {
            return Err(self.no_number(what));
        }
        if matches!(bytes.get(end), Some(b'e' | b'E')) {
            let sign = usize::from(matches!(bytes.get(end + 1), Some(b'+' | b'-')));
            let power = digits((end + 1 + sign).min(bytes.len()));
            if power > 0 {
                end += 1 + sign + power;
            }
        }
        let range = self.at..self.at + end;
        self.at = range.end;
        match rest[..end].parse::<f64>() {
            Ok(value) if value.is_finite() => Ok(value),
            _ => {
                let complaint = Complaint::new(Fault::NotFinite, &rest[..end]).allowed("a finite number");
                Err((range, complaint.advice("check the power of ten")))
            }
        }
    }

    fn no_number(&self, what: &str) -> Fail {
        let word: &str = self.rest().split_whitespace().next().unwrap_or("");
        let range = self.at..self.at + word.len();
        let lower = word.to_lowercase();
        if ["nan", "inf", "infinity"].contains(&lower.as_str()) {
            let complaint =
                Complaint::new(Fault::NotFinite, format!("\"{word}\"")).allowed("a finite number");
            return (range, complaint.advice("give the number, or leave the key out"));
        }
        let found = if word.is_empty() { "nothing".to_string() } else { format!("\"{word}\"") };
        let complaint = Complaint::new(Fault::Malformed, format!("{found} where {what} should be"));
        (range, complaint.allowed(FORMS).advice("write the number with a decimal point, then the unit"))
    }
}

/// Reads a quantity; the text may hold blanks around it. Errors carry the range of bytes they are about.
pub(crate) fn read(text: &str) -> Result<Written, Fail> {
    let mut reader = Reader { text, at: 0 };
    reader.skip_blanks();
    let start = reader.at;
    let sign = reader.take_sign().unwrap_or(1.0);
    let value = sign * reader.take_number("the number")?;
    let value_at = start..reader.at;
    let (plus, minus) = read_uncertainty(&mut reader)?;
    reader.skip_blanks();
    let unit = reader.rest().trim_end();
    let unit_at = reader.at..reader.at + unit.len();
    if unit.split_whitespace().count() > 1
        || unit.starts_with(|c: char| !c.is_alphabetic()) && !unit.is_empty()
    {
        let complaint = Complaint::new(Fault::Malformed, format!("\"{unit}\" where one unit should be"));
        return Err((
            unit_at,
            complaint.allowed(FORMS).advice("write number, uncertainty, unit in this order"),
        ));
    }
    Ok(Written { value, plus, minus, unit: unit.to_string(), value_at, unit_at })
}

fn read_uncertainty(reader: &mut Reader) -> Result<(Option<f64>, Option<f64>), Fail> {
    reader.skip_blanks();
    let start = reader.at;
    let (plus, minus) = if reader.take("±") || reader.take("+/-") || reader.take("+-") {
        reader.skip_blanks();
        let sigma = reader.take_number("the uncertainty")?;
        (sigma, sigma)
    } else if let Some(first_sign) = reader.take_sign() {
        let first = reader.take_number("the uncertainty")?;
        reader.skip_blanks();
        let second_start = reader.at;
        if reader.take_sign() != Some(-first_sign) {
            let wanted = if first_sign > 0.0 { "-" } else { "+" };
            let found = format!("one uncertainty with a sign, but no second one with {wanted}");
            let complaint = Complaint::new(Fault::Malformed, found).allowed(FORMS);
            let end = second_start.min(reader.text.len());
            return Err((start..end, complaint.advice("give both, or write ± for an equal one")));
        }
        let second = reader.take_number("the second uncertainty")?;
        if first_sign > 0.0 { (first, second) } else { (second, first) }
    } else {
        return Ok((None, None));
    };
    if plus > 0.0 && minus > 0.0 {
        return Ok((Some(plus), Some(minus)));
    }
    let complaint = Complaint::new(Fault::Uncertainty, "an uncertainty of 0").allowed("a number above 0");
    Err((start..reader.at, complaint.advice("leave the uncertainty out if there is none")))
}

impl Written {
    /// The unit, if it is one of `dimension`; `None` for plain numbers.
    pub(crate) fn unit_of(&self, dimension: Dimension) -> Result<Option<Unit>, Fail> {
        let allowed = || match dimension {
            Dimension::Number => "a plain number without unit".to_string(),
            _ => format!("{} in one of: {}", dimension.words(), dimension.unit_words()),
        };
        if self.unit.is_empty() {
            if dimension == Dimension::Number {
                return Ok(None);
            }
            let unit = dimension.usual_unit();
            let complaint = Complaint::new(Fault::MissingUnit, format!("{} without unit", self.value));
            let advice = format!("write the unit inside the quotes, as \"{} {unit}\"", self.value);
            return Err((self.value_at.clone(), complaint.allowed(allowed()).advice(advice)));
        }
        let found = format!("\"{}\"", self.unit);
        let Some(unit) = Unit::from_word(&self.unit) else {
            let words: Vec<&str> = Unit::of(dimension).map(|unit| unit.word).collect();
            let advice = did_you_mean(&self.unit, words, "use one of the allowed units");
            let complaint = Complaint::new(Fault::UnknownUnit, found).allowed(allowed()).advice(advice);
            return Err((self.unit_at.clone(), complaint));
        };
        if unit.dimension != dimension {
            let found = format!("{found}, a unit of {}", unit.dimension.noun());
            let advice = match dimension {
                Dimension::Number => "leave the unit out".to_string(),
                Dimension::Date => "write the full Julian date, as \"2460310.5 JD\"".to_string(),
                _ => "convert the number, or use the key that takes this unit".to_string(),
            };
            let complaint = Complaint::new(Fault::WrongUnit, found).allowed(allowed()).advice(advice);
            return Err((self.unit_at.clone(), complaint));
        }
        Ok(Some(unit))
    }

    /// The quantity in the inner unit of `dimension`.
    ///
    /// A date stays a full Julian date: as `f64` it is good to 4.7e-10 d (40 μs), 2e-10 rad in the phase of a ten-day
    /// orbit, below any measured time of transit.
    pub(crate) fn measured(&self, dimension: Dimension) -> Result<Measured, Fail> {
        let (unit, scale) = self.unit_of(dimension)?.map_or(("", 1.0), |unit| (unit.word, unit.inner));
        let scaled = |number: f64| number * scale;
        Ok(Measured {
            value: scaled(self.value),
            plus: self.plus.map(scaled),
            minus: self.minus.map(scaled),
            unit,
        })
    }
}
