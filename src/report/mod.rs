//! What a run found, as tables and in words.
//!
//! [`Table`] is the one shape of every table; it is written as Enhanced CSV. [`cells_table`], [`series_table`] and those of
//! the motion fill it, [`Summary`] counts and says it in words or JSON, [`caption()`] is what stands under a figure.

mod calibration;
mod caption;
mod cells;
mod criteria;
mod ecsv;
mod error;
mod motion;
mod series;
mod summary;
mod table;
mod words;

pub use calibration::CalibrationReport;
pub use caption::caption;
pub use cells::cells_table;
pub use criteria::criteria_table;
pub use error::ReportError;
pub use motion::{
    AngleWords, DEGREE_YEAR, MotionInput, forced, frequencies_table, is_unturned, lines_table,
    relation_words, resonances_table,
};
pub use series::{PlanetSeries, Series, series_table};
pub use summary::{NominalCell, Spread, Summary, summary_json, summary_text};
pub use table::{Column, Datatype, Entry, Meta, Table};

pub(crate) use words::{printed, short, time_words};

/// The version that tables, summaries and figures name.
pub const VERSION: &str = concat!("abide ", env!("CARGO_PKG_VERSION"));
