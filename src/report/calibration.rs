//! The calibration of the frequency drift, as a table and in words.

use super::words::{short, time_words};
use super::{Column, Datatype, Entry, Meta, ReportError, Table, VERSION};
use crate::survey::{Calls, Chosen, Outcome, Record, Threshold};
use crate::units::YEAR_DAY;
use crate::verdict::Verdict;

/// What a calibration did.
#[derive(Clone, Debug, PartialEq)]
pub struct CalibrationReport<'a> {
    /// Of the survey and of the longer runs, day.
    pub span_day: f64,
    pub longer_day: f64,
    pub chosen: &'a [Chosen],
    /// Of the longer runs, one for each chosen cell.
    pub followed: &'a [Record],
    /// Without the cells whose longer run cannot be trusted.
    pub outcomes: &'a [Outcome],
    /// Absent when none was lost, or all were.
    pub threshold: Option<Threshold>,
}

impl CalibrationReport<'_> {
    /// One row per chosen cell, as Enhanced CSV.
    pub fn csv(&self) -> Result<String, ReportError> {
        let float = |name: &str, unit, meaning: &str| Column::new(name, unit, Datatype::Float, meaning);
        let text = |name: &str, meaning: &str| Column::new(name, "", Datatype::Text, meaning);
        let columns = vec![
            Column::new("cell", "", Datatype::Count, "index of the cell in the survey"),
            float("frequency_drift", "", "of the worst planet, over the span of the survey"),
            float("weight", "", "surviving cells of the survey that this one stands for"),
            text("outcome", "of the longer run: lost, survived or untrusted"),
            float("end_time", "yr", "time reached by the longer run"),
            text("lost_how", "escape, star, encounter or collision"),
        ];
        let row = |(chosen, record): (&Chosen, &Record)| {
            let found = &record.assessment;
            let outcome = match found.verdict {
                Verdict::Lost => "lost",
                Verdict::Untrusted => "untrusted",
                _ => "survived",
            };
            vec![
                Entry::Count(chosen.cell),
                Entry::Float(chosen.drift),
                Entry::Float(chosen.weight),
                Entry::from(outcome),
                Entry::Float(found.end_time_day / YEAR_DAY),
                Entry::from(record.lost_how().map(|how| how.word())),
            ]
        };
        let rows = self.chosen.iter().zip(self.followed).map(row).collect();
        let mut meta = vec![
            ("version".to_owned(), Meta::Text(VERSION.to_owned())),
            ("span_d".to_owned(), Meta::Float(self.span_day)),
            ("longer_span_d".to_owned(), Meta::Float(self.longer_day)),
        ];
        meta.extend(self.threshold.map(|t| ("threshold".to_owned(), Meta::Float(t.drift))));
        Table { meta, columns, rows }.to_ecsv()
    }

    /// Lines for the summary, each ending in a newline.
    pub fn text(&self) -> String {
        let lost = self.outcomes.iter().filter(|o| o.lost).count();
        let mut lines = vec![format!(
            "calibration  {} surviving cells followed {} times as long ({}): {lost} lost, {} survived, {} untrusted and left out",
            self.chosen.len(),
            short(self.longer_day / self.span_day),
            time_words(self.longer_day),
            self.outcomes.len() - lost,
            self.chosen.len() - self.outcomes.len(),
        )];
        match &self.threshold {
            None => lines.push(
                "  threshold  none: it takes cells that were lost and cells that survived, of different drift".to_owned(),
            ),
            Some(found) => {
                lines.push(format!(
                    "  threshold  a frequency drift above {:.2} predicts loss (95 %: {:.2} to {:.2})",
                    found.drift, found.interval[0], found.interval[1]
                ));
                lines.push(format!("  lost       {}", calls("above it", &found.lost)));
                lines.push(format!("  survived   {}", calls("not above it", &found.surviving)));
                if let Some([lost, survived]) = found.unseen {
                    lines.push(format!(
                        "  unseen     {:.0} % and {:.0} % of cells that the threshold was not fitted to (bootstrap)",
                        100.0 * lost,
                        100.0 * survived
                    ));
                }
            }
        }
        let rarer = lost.min(self.outcomes.len() - lost);
        if self.threshold.is_some() && rarer < FEW {
            lines.push(format!(
                "  few        only {rarer} {}: take the interval, not the threshold, or calibrate with more cells or for longer",
                if lost == rarer { "lost" } else { "survived" }
            ));
        }
        lines.push("  used       for reporting only; no verdict depends on it".to_owned());
        lines.iter().map(|line| format!("{line}\n")).collect()
    }
}

/// With fewer of either end a threshold hangs on single cells.
const FEW: usize = 10;

fn calls(what: &str, calls: &Calls) -> String {
    let [low, high] = calls.interval();
    format!(
        "{} of {} {what} (95 %: {:.0} to {:.0} %); {:.0} % when each stands for its share of the map",
        calls.right,
        calls.of,
        100.0 * low,
        100.0 * high,
        100.0 * calls.share
    )
}
