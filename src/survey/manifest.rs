//! `run.json`: of what program, input and plan a run is, and what its journal holds.

use std::path::Path;
use std::time::{SystemTime, UNIX_EPOCH};

use serde::{Deserialize, Serialize};
use sha2::{Digest, Sha256};

use super::{Layout, SurveyError};
use crate::assess::Plan;
use crate::disk;

/// The version of this program; another one may give other bits.
pub const VERSION: &str = env!("CARGO_PKG_VERSION");

/// What `run.json` holds.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Manifest {
    pub program: String,
    pub version: String,
    pub study_sha256: String,
    pub system_sha256: String,
    /// Of the checked settings: equal for texts that differ in comments and layout only.
    pub settings_sha256: String,
    pub host: String,
    /// When the run was begun, UTC.
    pub started: String,
    pub cells: u64,
    pub plan: PlanWords,
    pub layout: Layout,
    /// The columns of the journal.
    pub journal_columns: Vec<String>,
}

/// The plan as a reader wants it.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct PlanWords {
    pub scheme: String,
    #[serde(default)]
    pub scheme_why: String,
    pub coordinates: String,
    pub coordinates_why: String,
    #[serde(default)]
    pub compensated: bool,
    pub span_day: f64,
    /// Absent: each cell has its own.
    pub step_day: Option<f64>,
    pub step_why: String,
    pub energy_error: f64,
    pub escape_au: Option<f64>,
    pub encounter_hill: Option<f64>,
    pub megno: bool,
    pub extent: bool,
    #[serde(default)]
    pub frequency_drift: bool,
    /// In words; absent when none is watched.
    #[serde(default)]
    pub angle: Option<String>,
    /// Steps between two looks at a cell, at which what is watched over the span is sampled.
    #[serde(default)]
    pub block_steps: usize,
    pub stop_when_chaotic: bool,
}

impl PlanWords {
    /// `planets` are the names of all that circles.
    pub fn of(plan: &Plan, planets: &[String]) -> PlanWords {
        PlanWords {
            scheme: plan.scheme.to_string(),
            scheme_why: plan.scheme_why.to_string(),
            coordinates: plan.coordinates.word().to_string(),
            coordinates_why: plan.coordinates_why.to_string(),
            compensated: plan.compensated,
            span_day: plan.span_day,
            step_day: plan.step_day,
            step_why: plan.step_why.to_string(),
            energy_error: plan.energy_error,
            escape_au: plan.escape_au,
            encounter_hill: plan.encounter_hill,
            megno: plan.megno,
            extent: plan.extent,
            frequency_drift: plan.frequency_drift,
            angle: plan.angle.as_ref().map(|angle| angle.words(planets)),
            block_steps: plan.block_steps,
            stop_when_chaotic: plan.stop_when_chaotic,
        }
    }
}

/// What identifies a run, before it is begun.
#[derive(Clone, Debug)]
pub struct Identity {
    /// The study and the system file as read.
    pub study_text: String,
    pub system_text: String,
    /// Everything checked that decides the bits of a cell, as text.
    pub settings: String,
    pub plan: Plan,
    pub cells: u64,
    pub axes: Vec<String>,
    pub planets: Vec<String>,
}

impl Identity {
    /// Of a run begun here and now.
    pub fn manifest(&self) -> Manifest {
        let settings_sha256 = sha256(&self.settings);
        let layout = Layout {
            axes: self.axes.clone(),
            planets: self.planets.clone(),
            extent: self.plan.extent,
            frequency_drift: self.plan.frequency_drift,
            angle: self.plan.angle.is_some(),
            passages: self.plan.resolve,
            seal: settings_sha256.clone(),
        };
        Manifest {
            program: "abide".to_string(),
            version: VERSION.to_string(),
            study_sha256: sha256(&self.study_text),
            system_sha256: sha256(&self.system_text),
            settings_sha256,
            host: host(),
            started: utc(SystemTime::now()),
            cells: self.cells,
            plan: PlanWords::of(&self.plan, &self.planets),
            journal_columns: layout.columns(),
            layout,
        }
    }
}

impl Manifest {
    pub fn read(path: &Path) -> Result<Manifest, SurveyError> {
        let text = disk::read_text(path)?;
        serde_json::from_str(&text)
            .map_err(|error| SurveyError::Manifest { path: path.to_path_buf(), what: error.to_string() })
    }

    pub fn write(&self, path: &Path) -> Result<(), SurveyError> {
        let text =
            serde_json::to_string_pretty(self).expect("a manifest has only string keys and finite numbers");
        Ok(disk::write_beside_then_rename(path, format!("{text}\n").as_bytes())?)
    }
}

/// Lower-case hexadecimal SHA-256 (FIPS 180-4) of a text.
pub fn sha256(text: &str) -> String {
    Sha256::digest(text.as_bytes()).iter().map(|byte| format!("{byte:02x}")).collect()
}

/// The name of this machine, or "unknown host".
pub fn host() -> String {
    let from_kernel = std::fs::read_to_string("/proc/sys/kernel/hostname").ok();
    let name = from_kernel.or_else(|| std::env::var("HOSTNAME").ok());
    name.map(|n| n.trim().to_string()).filter(|n| !n.is_empty()).unwrap_or_else(|| "unknown host".to_string())
}

/// Date and time, UTC, as ISO 8601 writes them.
pub fn utc(time: SystemTime) -> String {
    let seconds = time.duration_since(UNIX_EPOCH).map_or(0, |since| since.as_secs());
    let (mut year, mut day) = (1970, seconds / 86_400);
    while day >= days_in_year(year) {
        day -= days_in_year(year);
        year += 1;
    }
    let mut month = 1;
    while day >= days_in_month(year, month) {
        day -= days_in_month(year, month);
        month += 1;
    }
    let (hour, minute, second) = (seconds / 3600 % 24, seconds / 60 % 60, seconds % 60);
    format!("{year:04}-{month:02}-{:02}T{hour:02}:{minute:02}:{second:02}Z", day + 1)
}

fn is_leap(year: u64) -> bool {
    year.is_multiple_of(4) && (!year.is_multiple_of(100) || year.is_multiple_of(400))
}

fn days_in_year(year: u64) -> u64 {
    365 + u64::from(is_leap(year))
}

fn days_in_month(year: u64, month: u64) -> u64 {
    match month {
        2 => 28 + u64::from(is_leap(year)),
        4 | 6 | 9 | 11 => 30,
        _ => 31,
    }
}

#[cfg(test)]
mod tests {
    use std::time::Duration;

    use super::*;

    #[test]
    fn sha256_gives_the_digest_of_the_standard() {
        // FIPS 180-4 example "abc", as published by NIST.
        assert_eq!(sha256("abc"), "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
    }

    #[test]
    fn utc_meets_known_dates() {
        // From `date -u -d @N`.
        for (seconds, text) in [
            (0, "1970-01-01T00:00:00Z"),
            (951_782_400, "2000-02-29T00:00:00Z"),
            (1_709_251_199, "2024-02-29T23:59:59Z"),
            (4_107_542_400, "2100-03-01T00:00:00Z"),
        ] {
            assert_eq!(utc(UNIX_EPOCH + Duration::from_secs(seconds)), text);
        }
    }
}
