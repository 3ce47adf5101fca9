//! The run in words and numbers.

use std::fmt::Write;

use serde_json::{Map, Value, json};

use super::{ReportError, VERSION, words};
use crate::assess::{AngleFound, Assessment, Plan};
use crate::survey::Record;
use crate::system::{Study, System};
use crate::units::YEAR_DAY;
use crate::verdict::{LostHow, Verdict};

/// Median, 95 % quantile and largest of a set of numbers; quantiles by nearest rank.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Spread {
    pub median: f64,
    pub q95: f64,
    pub largest: f64,
}

impl Spread {
    /// Absent for an empty set; NaN counts as larger than everything, so that it is never hidden.
    pub fn of(values: impl Iterator<Item = f64>) -> Option<Spread> {
        let mut sorted: Vec<f64> = values.map(f64::abs).collect();
        sorted.sort_by(f64::total_cmp);
        let last = sorted.len().checked_sub(1)?;
        let rank =
            |share: f64| sorted[((share * sorted.len() as f64).ceil() as usize).saturating_sub(1).min(last)];
        Some(Spread { median: rank(0.5), q95: rank(0.95), largest: sorted[last] })
    }
}

/// What the adaptive engine did for the scheme, around close approaches.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Passages {
    /// Cells that had any.
    pub cells: u64,
    /// Blocks of steps in all of them.
    pub blocks: u64,
    /// Relative, over one of them.
    pub largest_energy_error: f64,
}

impl Passages {
    /// Absent where there were none.
    fn of(records: &[Record]) -> Option<Passages> {
        let each =
            records.iter().filter_map(|r| r.assessment.passages.zip(r.assessment.passage_energy_error));
        each.fold(None, |sum, (blocks, error)| {
            let sum = sum.unwrap_or(Passages { cells: 0, blocks: 0, largest_energy_error: 0.0 });
            Some(Passages {
                cells: sum.cells + 1,
                blocks: sum.blocks + blocks,
                largest_energy_error: sum.largest_energy_error.max(error),
            })
        })
    }

    fn words(self) -> String {
        format!(
            "{} in {} done by the adaptive engine; largest relative energy error over one {}",
            words::counted(self.blocks, "block", " of steps"),
            words::counted(self.cells, "cell", ""),
            words::short(self.largest_energy_error)
        )
    }
}

/// The cell nearest to the stated values.
#[derive(Clone, Debug, PartialEq)]
pub struct NominalCell {
    pub cell: u64,
    /// Absent when this cell is not finished.
    pub assessment: Option<Assessment>,
}

/// What a run found, counted.
#[derive(Clone, Debug, PartialEq)]
pub struct Summary {
    pub title: String,
    /// Of the study.
    pub cells: u64,
    pub finished: u64,
    /// Of the finished ones: not integrated, but taken from the cells around.
    pub filled: u64,
    /// In the order of `Verdict::ALL`.
    pub verdicts: Vec<(Verdict, u64)>,
    /// Of the lost ones, in the order of `LostHow::ALL`.
    pub losses: Vec<(LostHow, u64)>,
    /// Cells that ended with a smaller step than the first.
    pub redone: u64,
    /// Cells that ended in the adaptive engine.
    pub adaptive: u64,
    pub energy_error: Option<Spread>,
    pub passages: Option<Passages>,
    /// Absent when the stated values lie outside the axes.
    pub nominal: Option<NominalCell>,
    pub span: String,
    pub span_day: f64,
    pub scheme: &'static str,
    pub scheme_why: String,
    /// Of the splitting, and why.
    pub coordinates: String,
    pub step: String,
    /// What the short runs that settled the step said.
    pub short_runs: Option<String>,
    pub energy_error_target: f64,
    pub held: String,
    pub convention: String,
    /// Of the Lyapunov time of chaotic cells, yr.
    pub lyapunov_time_yr: Option<Spread>,
    /// Of the frequency drift of regular and of chaotic cells: median and largest.
    pub drift: [Option<[f64; 2]>; 2],
    /// The angle in words, and how many cells have it librate, circulate, alternate, and how many do not tell.
    pub angle: Option<(String, [u64; 4])>,
    /// Absent when chaotic cells were followed to the end of the span.
    pub chaotic_ended: Option<&'static str>,
}

impl Summary {
    pub fn of(
        study: &Study,
        system: &System,
        plan: &Plan,
        records: &[Record],
        nominal_cell: Option<u64>,
    ) -> Summary {
        let count = |test: &dyn Fn(&Assessment) -> bool| {
            records.iter().filter(|r| test(&r.assessment)).count() as u64
        };
        let cells: usize = study.axes.iter().map(|a| a.cells).product();
        let (redone, adaptive) = words::second_attempts(records);
        Summary {
            title: study.title.clone().unwrap_or_else(|| system.title.clone()),
            cells: cells as u64,
            finished: records.len() as u64,
            filled: records.iter().filter(|r| r.filled.is_some()).count() as u64,
            verdicts: Verdict::ALL.map(|v| (v, count(&|a| a.verdict == v))).to_vec(),
            losses: LostHow::ALL
                .map(|how| {
                    let lost =
                        |r: &&Record| r.assessment.verdict == Verdict::Lost && r.lost_how() == Some(how);
                    (how, records.iter().filter(lost).count() as u64)
                })
                .to_vec(),
            redone,
            adaptive,
            energy_error: Spread::of(records.iter().filter_map(|r| r.assessment.energy_error)),
            passages: Passages::of(records),
            nominal: nominal_cell.map(|cell| NominalCell {
                cell,
                assessment: records.iter().find(|r| r.cell == cell).map(|r| r.assessment.clone()),
            }),
            span: words::span_words(study, plan, words::short),
            span_day: plan.span_day,
            scheme: plan.scheme,
            scheme_why: plan.scheme_why.to_string(),
            coordinates: format!("{} ({})", plan.coordinates.words(), plan.coordinates_why),
            step: words::step_words(plan, records),
            short_runs: plan.step_why.outcome(),
            energy_error_target: plan.energy_error,
            held: words::held_words(study, system),
            lyapunov_time_yr: Spread::of(chaotic_times_yr(records)),
            drift: [Verdict::Regular, Verdict::Chaotic].map(|verdict| drift_of(records, verdict)),
            angle: plan.angle.as_ref().map(|angle| {
                let names: Vec<String> = system.orbiting().map(|body| body.name.clone()).collect();
                (angle.words(&names), angle_counts(records))
            }),
            convention: words::convention_words(system.convention, system.epoch_jd),
            chaotic_ended: words::early_end_words(plan),
        }
    }

    fn share(&self, count: u64) -> f64 {
        if self.finished == 0 { 0.0 } else { 100.0 * count as f64 / self.finished as f64 }
    }

    /// The run in words, lines ending in a newline.
    pub fn text(&self) -> String {
        let mut lines = vec![self.title.clone(), String::new()];
        lines.push(if self.finished < self.cells {
            format!("cells        {} of {} finished; the rest is missing below", self.finished, self.cells)
        } else {
            format!("cells        {}", self.cells)
        });
        if self.filled > 0 {
            let integrated = self.finished - self.filled;
            lines.push(format!("  integrated {integrated} ({:.1} %)", self.share(integrated)));
            lines.push(format!(
                "  filled     {} ({:.1} %): far from any other verdict, they take that of all cells around them",
                self.filled,
                self.share(self.filled)
            ));
        }
        lines.push(format!("span         {}", self.span));
        for (verdict, count) in &self.verdicts {
            lines.push(format!("{:<12} {count} ({:.1} %)", verdict.word(), self.share(*count)));
            if let Some(ended) = self.chaotic_ended.filter(|_| *verdict == Verdict::Chaotic) {
                lines.push(format!("  {ended}"));
            }
            if *verdict == Verdict::Lost {
                for (how, count) in self.losses.iter().filter(|(_, count)| *count > 0) {
                    lines.push(format!("  {:<10} {count} ({:.1} %)", how.word(), self.share(*count)));
                }
            }
        }
        lines.push(format!("nominal      {}", self.nominal_words()));
        lines.extend(self.indicator_lines());
        lines.push(format!("energy error {}", self.energy_words()));
        lines.extend(self.passages.map(|passages| format!("passages     {}", passages.words())));
        lines.push(format!("scheme       {}", words::scheme_words(self.scheme)));
        lines.push(format!("  why        {}", self.scheme_why));
        lines.push(format!("coordinates  {}", self.coordinates));
        lines.push(format!("step         {}", self.step));
        lines.extend(self.short_runs.iter().map(|words| format!("  why        {words}")));
        lines.push(format!(
            "redone       {} with smaller steps, {} by the adaptive engine",
            words::counted(self.redone, "cell", ""),
            words::counted(self.adaptive, "cell", "")
        ));
        lines.push(format!("axes         {}", self.held));
        lines.push(format!("convention   {}", self.convention));
        lines.push(format!("version      {VERSION}"));
        let mut text = String::new();
        for line in lines {
            writeln!(text, "{}", line.trim_end()).expect("a string takes any text");
        }
        text
    }

    fn nominal_words(&self) -> String {
        match &self.nominal {
            None => "the stated values lie outside the axes".to_owned(),
            Some(NominalCell { cell, assessment: None }) => format!("cell {cell} is not finished"),
            Some(NominalCell { cell, assessment: Some(found) }) => {
                let mut text = format!("cell {cell} is {}", found.verdict.word());
                if let Some(loss) = found.loss {
                    let time = words::time_words(loss.time_day);
                    write!(text, " ({} after {time})", loss.how.word()).expect("a string takes any text");
                }
                if let Some(megno) = found.megno {
                    write!(text, ", MEGNO {megno:.3}").expect("a string takes any text");
                }
                if let Some(error) = found.energy_error {
                    write!(text, ", energy error {}", words::short(error)).expect("a string takes any text");
                }
                text
            }
        }
    }

    /// What the indicators say of bounded cells, beside the verdicts.
    fn indicator_lines(&self) -> Vec<String> {
        let mut lines = Vec::new();
        if let Some(spread) = self.lyapunov_time_yr {
            let words = |yr: f64| words::time_words(yr * YEAR_DAY);
            lines.push(format!(
                "Lyapunov     of chaotic cells: median {}, largest {}",
                words(spread.median),
                words(spread.largest)
            ));
        }
        let drift: Vec<String> = ["regular", "chaotic"]
            .iter()
            .zip(self.drift)
            .filter_map(|(word, found)| {
                found.map(|[median, most]| format!("{word} cells median {median:.1}, largest {most:.1}"))
            })
            .collect();
        if !drift.is_empty() {
            lines.push(format!("drift        log10 |1 - n2/n1| of {}", drift.join("; ")));
        }
        if let Some((words, [librates, circulates, alternates, untold])) = &self.angle {
            lines.push(format!(
                "angle        {words}: librates in {librates} cells, circulates in {circulates}, alternates in {alternates}, \
                 cannot be told in {untold}"
            ));
        }
        lines
    }

    fn energy_words(&self) -> String {
        let target = words::short(self.energy_error_target);
        match self.energy_error {
            None => format!("not measured (target {target})"),
            Some(s) => format!(
                "median {}, 95 % of cells below {}, largest {} (target {target})",
                words::short(s.median),
                words::short(s.q95),
                words::short(s.largest)
            ),
        }
    }

    /// The same for scripts; counts are numbers, what is absent is null.
    pub fn json(&self) -> Value {
        let verdicts: Map<String, Value> =
            self.verdicts.iter().map(|(v, count)| (v.word().to_owned(), json!(count))).collect();
        let losses: Map<String, Value> =
            self.losses.iter().map(|(how, count)| (how.word().to_owned(), json!(count))).collect();
        json!({
            "title": self.title,
            "version": VERSION,
            "cells": self.cells,
            "finished": self.finished,
            "integrated": self.finished - self.filled,
            "filled": self.filled,
            "verdicts": verdicts,
            "lost_how": losses,
            "redone_with_smaller_steps": self.redone,
            "adaptive": self.adaptive,
            "nominal": self.nominal.as_ref().map(|n| json!({
                "cell": n.cell,
                "verdict": n.assessment.as_ref().map(|a| a.verdict.word()),
                "end_time_yr": n.assessment.as_ref().map(|a| a.end_time_day / YEAR_DAY),
                "megno": n.assessment.as_ref().and_then(|a| a.megno),
                "energy_error": n.assessment.as_ref().and_then(|a| a.energy_error),
            })),
            "energy_error": self.energy_error.map(|s| json!({
                "median": s.median, "q95": s.q95, "largest": s.largest,
            })),
            "energy_error_target": self.energy_error_target,
            "passages": self.passages.map(|p| json!({
                "cells": p.cells, "blocks": p.blocks, "largest_energy_error": p.largest_energy_error,
            })),
            "span": self.span,
            "span_d": self.span_day,
            "scheme": self.scheme,
            "scheme_why": self.scheme_why,
            "coordinates": self.coordinates,
            "step": self.step,
            "short_runs": self.short_runs,
            "lyapunov_time_yr": self.lyapunov_time_yr.map(|s| json!({ "median": s.median, "largest": s.largest })),
            "frequency_drift": self.drift.iter().any(Option::is_some).then(|| json!({
                "regular": self.drift[0].map(|[median, largest]| json!({ "median": median, "largest": largest })),
                "chaotic": self.drift[1].map(|[median, largest]| json!({ "median": median, "largest": largest })),
            })),
            "angle": self.angle.as_ref().map(|(words, counts)| json!({
                "angle": words,
                "librates": counts[0], "circulates": counts[1], "alternates": counts[2], "cannot_tell": counts[3],
            })),
            "axes": self.held,
            "convention": self.convention,
            "chaotic_ended": self.chaotic_ended,
        })
    }
}

fn chaotic_times_yr(records: &[Record]) -> impl Iterator<Item = f64> {
    let chaotic = records.iter().filter(|r| r.assessment.verdict == Verdict::Chaotic);
    let rates = chaotic.filter_map(|r| r.assessment.lyapunov.map(|l| l.per_day));
    rates.filter(|per_day| *per_day > 0.0).map(|per_day| 1.0 / (per_day * YEAR_DAY))
}

/// Median (by nearest rank) and largest frequency drift of the cells of one verdict.
fn drift_of(records: &[Record], verdict: Verdict) -> Option<[f64; 2]> {
    let mine = records.iter().filter(|r| r.assessment.verdict == verdict);
    let mut drift: Vec<f64> = mine.filter_map(|r| r.assessment.worst_drift()).collect();
    drift.sort_by(f64::total_cmp);
    let last = drift.last()?;
    Some([drift[(drift.len() - 1) / 2], *last])
}

/// Librates, circulates, alternates, cannot be told.
fn angle_counts(records: &[Record]) -> [u64; 4] {
    let mut counts = [0; 4];
    for found in records.iter().filter_map(|r| r.assessment.angle) {
        counts[match found {
            AngleFound::Librates { .. } => 0,
            AngleFound::Circulates => 1,
            AngleFound::Alternates => 2,
            AngleFound::CannotTell => 3,
        }] += 1;
    }
    counts
}

/// [`Summary::text`] in one call.
pub fn summary_text(
    study: &Study,
    system: &System,
    plan: &Plan,
    records: &[Record],
    nominal_cell: Option<u64>,
) -> String {
    Summary::of(study, system, plan, records, nominal_cell).text()
}

/// [`Summary::json`] in one call, indented, ending in a newline.
pub fn summary_json(
    study: &Study,
    system: &System,
    plan: &Plan,
    records: &[Record],
    nominal_cell: Option<u64>,
) -> Result<String, ReportError> {
    let value = Summary::of(study, system, plan, records, nominal_cell).json();
    Ok(serde_json::to_string_pretty(&value)? + "\n")
}
