//! A table as CSV and as Markdown.

use std::fs;
use std::path::PathBuf;
use std::time::{SystemTime, UNIX_EPOCH};

/// A table on its way to reports/validation.
pub struct Report {
    pub name: &'static str,
    pub title: &'static str,
    /// What was compared with what, and how the limits come about; Markdown paragraphs.
    pub words: String,
    pub columns: Vec<&'static str>,
    pub rows: Vec<Vec<String>>,
}

/// reports/validation and below.
pub fn folder() -> PathBuf {
    let folder = PathBuf::from(concat!(env!("CARGO_MANIFEST_DIR"), "/reports/validation"));
    fs::create_dir_all(&folder).unwrap();
    folder
}

impl Report {
    /// Made by the table's own name.
    pub fn write(&self) {
        self.write_by(self.name);
    }

    /// Made by a name that makes several.
    pub fn write_by(&self, command: &str) {
        let stem = folder().join(self.name);
        let mut csv = csv::Writer::from_path(stem.with_extension("csv")).unwrap();
        csv.write_record(&self.columns).unwrap();
        self.rows.iter().for_each(|row| csv.write_record(row).unwrap());
        csv.flush().unwrap();
        fs::write(stem.with_extension("md"), self.markdown(command)).unwrap();
    }

    fn markdown(&self, command: &str) -> String {
        let line = |cells: &[String]| format!("| {} |\n", cells.join(" | "));
        let names: Vec<String> = self.columns.iter().map(|c| c.to_string()).collect();
        let rule: Vec<String> = self.columns.iter().map(|_| "---".to_string()).collect();
        let rows: String = self.rows.iter().map(|row| line(row)).collect();
        format!(
            "# {}\n\n{}\n\nMade on {} by abide {} with `cargo bench --bench validation -- {}`.\n\n{}{}{rows}",
            self.title,
            self.words.trim(),
            today(),
            env!("CARGO_PKG_VERSION"),
            command,
            line(&names),
            line(&rule),
        )
    }
}

/// A number with three digits.
pub fn short(value: f64) -> String {
    if value == 0.0 {
        "0".to_string()
    } else if (1e-3..1e5).contains(&value.abs()) {
        format!("{value:.4}")
    } else {
        format!("{value:.2e}")
    }
}

/// Whether a departure is within its limit, as a word.
pub fn met(found: f64, limit: f64) -> String {
    if found.abs() <= limit { "yes" } else { "NO" }.to_string()
}

/// Today as year-month-day, UTC.
pub fn today() -> String {
    let days = SystemTime::now().duration_since(UNIX_EPOCH).unwrap().as_secs() as i64 / 86_400;
    // Years counted from March, in eras of 400 years, so that leap days come last.
    let day = days + 719_468;
    let (era, of_era) = (day.div_euclid(146_097), day.rem_euclid(146_097));
    let year_of_era = (of_era - of_era / 1460 + of_era / 36_524 - of_era / 146_096) / 365;
    let of_year = of_era - (365 * year_of_era + year_of_era / 4 - year_of_era / 100);
    let march = (5 * of_year + 2) / 153;
    let month = if march < 10 { march + 3 } else { march - 9 };
    let year = 400 * era + year_of_era + i64::from(month <= 2);
    format!("{year}-{month:02}-{:02}", of_year - (153 * march + 2) / 5 + 1)
}
