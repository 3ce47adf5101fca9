//! A table: named columns with units, rows that may have gaps, and remarks on the whole.

/// What a column holds.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Datatype {
    Float,
    Count,
    Text,
}

impl Datatype {
    /// The word of Enhanced CSV.
    pub fn word(self) -> &'static str {
        match self {
            Datatype::Float => "float64",
            Datatype::Count => "uint64",
            Datatype::Text => "string",
        }
    }
}

/// One entry of a row. Absent is written as nothing, never as 0.
#[derive(Clone, Debug, PartialEq)]
pub enum Entry {
    Absent,
    Float(f64),
    Count(u64),
    Text(String),
}

impl Entry {
    pub(crate) fn datatype(&self) -> Option<Datatype> {
        match self {
            Entry::Absent => None,
            Entry::Float(_) => Some(Datatype::Float),
            Entry::Count(_) => Some(Datatype::Count),
            Entry::Text(_) => Some(Datatype::Text),
        }
    }
}

impl From<f64> for Entry {
    fn from(value: f64) -> Entry {
        Entry::Float(value)
    }
}

impl From<u64> for Entry {
    fn from(value: u64) -> Entry {
        Entry::Count(value)
    }
}

impl From<&str> for Entry {
    fn from(value: &str) -> Entry {
        Entry::Text(value.to_owned())
    }
}

impl<T: Into<Entry>> From<Option<T>> for Entry {
    fn from(value: Option<T>) -> Entry {
        value.map_or(Entry::Absent, Into::into)
    }
}

/// A column: its name, unit (a word of system files, empty for plain numbers and text), datatype and meaning.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Column {
    pub name: String,
    pub unit: &'static str,
    pub datatype: Datatype,
    pub description: String,
}

impl Column {
    pub fn new(
        name: impl Into<String>,
        unit: &'static str,
        datatype: Datatype,
        description: impl Into<String>,
    ) -> Column {
        Column { name: name.into(), unit, datatype, description: description.into() }
    }
}

/// A remark on the whole table.
#[derive(Clone, Debug, PartialEq)]
pub enum Meta {
    Text(String),
    Float(f64),
    Count(u64),
}

/// A table.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Table {
    /// Name → remark, in the order of writing.
    pub meta: Vec<(String, Meta)>,
    pub columns: Vec<Column>,
    /// Each row has one entry per column.
    pub rows: Vec<Vec<Entry>>,
}

impl Table {
    /// The entries of the column with this name, top down.
    pub fn column(&self, name: &str) -> Option<Vec<&Entry>> {
        let index = self.columns.iter().position(|c| c.name == name)?;
        Some(self.rows.iter().filter_map(|row| row.get(index)).collect())
    }
}
