//! What a complete run leaves beside its journal.

use std::ops::Range;
use std::path::Path;

use crate::assess::Plan;
use crate::cli::CliError;
use crate::disk::{self, DiskError};
use crate::figure::render::{self, Width};
use crate::figure::{self, MapInput};
use crate::report;
use crate::survey::{Record, cell_count};
use crate::system::{Criterion, Measure, Study, System};

/// Table of the margins of criteria.
pub const MARGINS: &str = "criteria.ecsv";
/// What a calibration of the run found, in words; part of the summary once it is there.
pub const CALIBRATION: &str = "calibration.txt";

const CELLS_IN_A_PART: usize = 10_000;

/// A finished study: all that tables and figures are made from.
pub struct Finished<'a> {
    pub study: &'a Study,
    pub system: &'a System,
    pub plan: &'a Plan,
    /// Whose borders the map shows.
    pub criteria: &'a [Criterion],
    /// Every cell, in order.
    pub records: &'a [Record],
}

impl Finished<'_> {
    /// Makes the file `name` of the run in `folder`: beside, then renamed.
    pub fn write(&self, folder: &Path, name: &str) -> Result<(), CliError> {
        let path = folder.join(name);
        let bytes = match name {
            "map.png" => {
                write_margins(folder, self.study, self.system, self.criteria)?;
                self.map()?
            }
            "summary.txt" => {
                // Absent when the run was not calibrated.
                let calibration = std::fs::read_to_string(folder.join(CALIBRATION)).unwrap_or_default();
                (self.summary() + &calibration).into_bytes()
            }
            _ => return self.write_cells(&path),
        };
        disk::write_beside_then_rename(&path, &bytes).map_err(CliError::working)
    }

    /// Part by part: the table of a million cells as a whole would take more memory than the records themselves.
    fn write_cells(&self, path: &Path) -> Result<(), CliError> {
        // Every part must have the columns of the whole, also one in which no cell has a Lyapunov exponent.
        let mut study = self.study.clone();
        let some = self.records.iter().any(|record| record.assessment.lyapunov.is_some());
        if some && !study.measure.contains(&Measure::Lyapunov) {
            study.measure.push(Measure::Lyapunov);
        }
        let planets: Vec<String> = self.system.orbiting().map(|body| body.name.clone()).collect();
        let text = |records: &[Record]| {
            let table = report::cells_table(&study, &planets, self.plan, records).to_ecsv();
            table.map_err(CliError::working)
        };
        write_parts(path, text(&[])?, self.records.chunks(CELLS_IN_A_PART).map(text))
    }

    fn map(&self) -> Result<Vec<u8>, CliError> {
        let measured = self.records.iter().any(|record| record.assessment.megno.is_some());
        let column = if measured { "megno" } else { "verdict" };
        let caption = report::caption(self.study, self.system, self.plan, self.records, column);
        let input = MapInput {
            study: self.study,
            system: self.system,
            records: self.records,
            reach: 0,
            column,
            span_day: self.plan.span_day,
            caption: &caption,
        };
        let mut figure = figure::map(&input).map_err(CliError::working)?;
        figure::add_criteria(&mut figure, self.study, self.system, self.criteria)
            .map_err(CliError::working)?;
        render::png(&figure, Width::PAGE).map_err(CliError::working)
    }

    pub fn summary(&self) -> String {
        let nominal = figure::nominal_cell(self.study, self.system);
        report::summary_text(self.study, self.system, self.plan, self.records, nominal)
    }

    pub fn summary_json(&self) -> Result<String, CliError> {
        let nominal = figure::nominal_cell(self.study, self.system);
        report::summary_json(self.study, self.system, self.plan, self.records, nominal)
            .map_err(CliError::working)
    }
}

/// The margins of criteria in every cell, beside the cells themselves; no file without criteria.
pub fn write_margins(
    folder: &Path,
    study: &Study,
    system: &System,
    criteria: &[Criterion],
) -> Result<(), CliError> {
    if criteria.is_empty() {
        return Ok(());
    }
    let text = |cells: Range<u64>| {
        report::criteria_table(study, system, criteria, cells).to_ecsv().map_err(CliError::working)
    };
    let (cells, part) = (cell_count(study), CELLS_IN_A_PART as u64);
    let parts = (0..cells.div_ceil(part)).map(|k| text(k * part..cells.min((k + 1) * part)));
    write_parts(&folder.join(MARGINS), text(0..0)?, parts)
}

/// A table from its head and parts that have the same head each.
fn write_parts(
    path: &Path,
    head: String,
    parts: impl Iterator<Item = Result<String, CliError>>,
) -> Result<(), CliError> {
    let rows = |part: Result<String, CliError>| {
        let part = part?;
        let rows = part.strip_prefix(&head).map(str::to_string);
        rows.ok_or_else(|| CliError::Working("parts of a table differ in their head".to_string()))
    };
    let parts = std::iter::once(Ok(head.clone())).chain(parts.map(rows));
    disk::write_parts_then_rename(path, parts)
}

impl From<DiskError> for CliError {
    fn from(error: DiskError) -> CliError {
        CliError::working(error)
    }
}
