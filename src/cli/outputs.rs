//! What a complete run leaves beside its journal.

use std::path::Path;

use crate::assess::Plan;
use crate::cli::CliError;
use crate::disk::{self, DiskError};
use crate::figure::render::{self, Width};
use crate::figure::{self, MapInput};
use crate::report;
use crate::survey::Record;
use crate::system::{Measure, Study, System};

/// What a calibration of the run found, in words; part of the summary once it is there.
pub const CALIBRATION: &str = "calibration.txt";

const CELLS_IN_A_PART: usize = 10_000;

/// A finished study: all that tables and figures are made from.
pub struct Finished<'a> {
    pub study: &'a Study,
    pub system: &'a System,
    pub plan: &'a Plan,
    /// Every cell, in order.
    pub records: &'a [Record],
}

impl Finished<'_> {
    /// Makes the file `name` of the run in `folder`: beside, then renamed.
    pub fn write(&self, folder: &Path, name: &str) -> Result<(), CliError> {
        let path = folder.join(name);
        let bytes = match name {
            "map.png" => self.map()?,
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
        let head = text(&[])?;
        let rows = |records: &[Record]| {
            let text = text(records)?;
            let rows = text.strip_prefix(&head).map(str::to_string);
            rows.ok_or_else(|| {
                CliError::Working("parts of the table of cells differ in their head".to_string())
            })
        };
        let parts = std::iter::once(Ok(head.clone())).chain(self.records.chunks(CELLS_IN_A_PART).map(rows));
        disk::write_parts_then_rename(path, parts)
    }

    fn map(&self) -> Result<Vec<u8>, CliError> {
        let caption = report::caption(self.study, self.system, self.plan, self.records);
        let measured = self.records.iter().any(|record| record.assessment.megno.is_some());
        let input = MapInput {
            study: self.study,
            system: self.system,
            records: self.records,
            reach: 0,
            column: if measured { "megno" } else { "verdict" },
            span_day: self.plan.span_day,
            caption: &caption,
        };
        let figure = figure::map(&input).map_err(CliError::working)?;
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

impl From<DiskError> for CliError {
    fn from(error: DiskError) -> CliError {
        CliError::working(error)
    }
}
