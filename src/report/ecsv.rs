//! Enhanced CSV 1.0 (APE 6, the Astropy project's open format): a commented YAML header, then plain CSV.

use std::collections::HashSet;
use std::fmt::Write;

use super::table::{Entry, Meta, Table};
use super::{Column, ReportError};

impl Table {
    /// The table as Enhanced CSV, comma-delimited, lines ending in `\n`.
    ///
    /// Floats are the shortest decimals that read back to the same bits; absent entries are empty. The bytes
    /// depend on the table alone.
    /// Errors: a row of the wrong length, an entry that is not of its column's datatype, a name used twice.
    pub fn to_ecsv(&self) -> Result<String, ReportError> {
        self.check()?;
        let mut text = header(self)?;
        let mut writer = csv::WriterBuilder::new().from_writer(Vec::new());
        writer.write_record(self.columns.iter().map(|c| c.name.as_str()))?;
        for row in &self.rows {
            writer.write_record(row.iter().map(plain))?;
        }
        let bytes = writer.into_inner().map_err(|e| csv::Error::from(e.into_error()))?;
        text.push_str(&String::from_utf8_lossy(&bytes));
        Ok(text)
    }

    fn check(&self) -> Result<(), ReportError> {
        let mut seen = HashSet::new();
        if let Some(twice) = self.columns.iter().find(|c| !seen.insert(c.name.as_str())) {
            return Err(ReportError::Twice { name: twice.name.clone() });
        }
        for (row, entries) in self.rows.iter().enumerate() {
            if entries.len() != self.columns.len() {
                return Err(ReportError::Ragged { row, found: entries.len(), columns: self.columns.len() });
            }
            for (entry, column) in entries.iter().zip(&self.columns) {
                if let Some(found) = entry.datatype().filter(|d| *d != column.datatype) {
                    return Err(ReportError::Datatype {
                        row,
                        column: column.name.clone(),
                        found: found.word(),
                        declared: column.datatype.word(),
                    });
                }
            }
        }
        Ok(())
    }
}

fn header(table: &Table) -> Result<String, ReportError> {
    let mut text = String::from("# %ECSV 1.0\n# ---\n# delimiter: ','\n# datatype:\n");
    for column in &table.columns {
        text.push_str(&column_line(column)?);
    }
    if !table.meta.is_empty() {
        text.push_str("# meta: !!omap\n");
        for (name, meta) in &table.meta {
            let value = match meta {
                Meta::Text(value) => quoted(value)?,
                Meta::Float(value) => yaml_float(*value),
                Meta::Count(value) => value.to_string(),
            };
            writeln!(text, "# - {{{}: {value}}}", quoted(name)?).expect("a string takes any text");
        }
    }
    text.push_str("# schema: astropy-2.0\n");
    Ok(text)
}

fn column_line(column: &Column) -> Result<String, ReportError> {
    let mut line = format!("# - {{name: {}", quoted(&column.name)?);
    let unit = standard_unit(column.unit);
    if !unit.is_empty() {
        write!(line, ", unit: {}", quoted(unit)?).expect("a string takes any text");
    }
    write!(line, ", datatype: {}", column.datatype.word()).expect("a string takes any text");
    if !column.description.is_empty() {
        write!(line, ", description: {}", quoted(&column.description)?).expect("a string takes any text");
    }
    line.push_str("}\n");
    Ok(line)
}

/// A JSON string is a YAML double-quoted string.
fn quoted(text: &str) -> Result<String, ReportError> {
    Ok(serde_json::to_string(text)?)
}

fn plain(entry: &Entry) -> String {
    match entry {
        Entry::Absent => String::new(),
        Entry::Float(value) => float(*value),
        Entry::Count(value) => value.to_string(),
        Entry::Text(value) => value.clone(),
    }
}

/// Shortest decimal that reads back to the same bits; YAML and CSV readers know these words for the rest.
fn float(value: f64) -> String {
    if value.is_nan() {
        "nan".to_owned()
    } else if value.is_infinite() {
        if value > 0.0 { "inf".to_owned() } else { "-inf".to_owned() }
    } else {
        format!("{value:?}")
    }
}

/// YAML takes a number for a float only with a point in it and a sign at its exponent.
fn yaml_float(value: f64) -> String {
    if !value.is_finite() {
        return float(value).replace("nan", ".nan").replace("inf", ".inf");
    }
    let text = float(value);
    let Some((digits, power)) = text.split_once('e') else { return text };
    let point = if digits.contains('.') { "" } else { ".0" };
    let sign = if power.starts_with('-') { "" } else { "+" };
    format!("{digits}{point}e{sign}{power}")
}

/// The word of the header for a unit word of system files.
fn standard_unit(word: &'static str) -> &'static str {
    match word {
        "au" => "AU",
        "Rsun" => "solRad",
        "Rjup" => "jupiterRad",
        "Rearth" => "earthRad",
        "Msun" => "solMass",
        "Mjup" => "jupiterMass",
        "Mearth" => "earthMass",
        "JD" => "d",
        "kyr" => "kyr",
        other => other,
    }
}
