//! What a complete run leaves beside its journal.

use std::path::Path;

use crate::assess::Plan;
use crate::cli::CliError;
use crate::disk;
use crate::figure::render::{self, Width};
use crate::figure::{self, MapInput};
use crate::report;
use crate::survey::Record;
use crate::system::{Study, System};

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
        let bytes = match name {
            "map.png" => self.map()?,
            "summary.txt" => self.summary().into_bytes(),
            _ => self.cells()?.into_bytes(),
        };
        disk::write_beside_then_rename(&folder.join(name), &bytes).map_err(CliError::working)
    }

    fn cells(&self) -> Result<String, CliError> {
        let planets: Vec<String> = self.system.planets.iter().map(|planet| planet.name.clone()).collect();
        let table = report::cells_table(self.study, &planets, self.plan, self.records);
        table.to_ecsv().map_err(CliError::working)
    }

    fn map(&self) -> Result<Vec<u8>, CliError> {
        let caption = report::caption(self.study, self.system, self.plan, self.records);
        let measured = self.records.iter().any(|record| record.assessment.megno.is_some());
        let input = MapInput {
            study: self.study,
            system: self.system,
            records: self.records,
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
