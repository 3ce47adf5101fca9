//! `abide survey --calibrate`: a sample of the surviving cells followed longer, and the drift that predicts loss.

use std::path::PathBuf;
use std::process::ExitCode;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

use super::{Wish, told};
use crate::assess::{self, Plan};
use crate::cli::CliError;
use crate::cli::args::SurveyArgs;
use crate::cli::outputs::{CALIBRATION, Finished};
use crate::cli::progress::Progress;
use crate::disk;
use crate::report::CalibrationReport;
use crate::survey::{
    self, Chosen, ChosenCells, Desk, Ended, Journal, Layout, Outcome, Policy, Record, Run, sha256,
};
use crate::system::{Measure, Study};
use crate::verdict::Verdict;

const TABLE: &str = "calibration.csv";

/// How many cells are followed longer, and how much longer; checked.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Longer {
    cells: usize,
    factor: f64,
}

impl Longer {
    /// None when no calibration is asked for.
    pub fn check(args: &SurveyArgs, study: &Study) -> Result<Option<Longer>, CliError> {
        let refuse = |words: String| Err(CliError::Input(words));
        if !args.calibrate {
            return Ok(None);
        }
        if !study.measure.contains(&Measure::FrequencyDrift) {
            return refuse(
                "--calibrate asks which frequency drift predicts loss, but the study does not measure it; \
                 add \"frequency_drift\" to its measure list"
                    .to_string(),
            );
        }
        if study.limits.stop_when_chaotic {
            return refuse(
                "--calibrate needs the drift of chaotic cells too, but stop_when_chaotic ends them before it is known; \
                 take it out of [limits]"
                    .to_string(),
            );
        }
        let (cells, factor) = (args.calibrate_cells, args.calibrate_longer);
        if cells < 2 {
            return refuse(format!("--calibrate-cells is {cells}, but a threshold needs 2 cells or more"));
        }
        if !(factor > 1.0 && factor.is_finite()) {
            return refuse(format!(
                "--calibrate-longer is {factor}, but must be above 1: how many times the span"
            ));
        }
        Ok(Some(Longer { cells, factor }))
    }
}

/// Follows the sample (or goes on with it) and writes table and words.
pub fn run(wish: &Wish, run: &Run, longer: Longer, stop: Arc<AtomicBool>) -> Result<ExitCode, CliError> {
    let records = run.records().map_err(told)?;
    let chosen = survey::choose(&records, longer.cells);
    if chosen.is_empty() {
        wish.say(format_args!(
            "no cell survived the span with a known frequency drift: nothing to calibrate"
        ));
        return Ok(ExitCode::SUCCESS);
    }
    let work = Work::new(wish, run, longer, &chosen);
    if work.follow(wish, stop)? == Ended::Interrupted {
        return Ok(wish.say_interrupted());
    }
    let followed = survey::read_journal(&work.path, &work.layout, chosen.len() as u64).map_err(told)?;
    let outcomes = outcomes(&chosen, &followed);
    let report = CalibrationReport {
        span_day: wish.plan.span_day,
        longer_day: work.plan.span_day,
        chosen: &chosen,
        followed: &followed,
        outcomes: &outcomes,
        threshold: survey::fit(&outcomes),
    };
    write(wish, &records, &report)?;
    Ok(ExitCode::SUCCESS)
}

/// A survey of the chosen cells within the run, with a journal of its own.
struct Work {
    plan: Plan,
    source: Arc<ChosenCells>,
    layout: Layout,
    path: PathBuf,
}

impl Work {
    fn new(wish: &Wish, run: &Run, longer: Longer, chosen: &[Chosen]) -> Work {
        // Only whether and when a cell is lost is asked.
        let plan = Plan {
            span_day: longer.factor * wish.plan.span_day,
            megno: false,
            extent: false,
            frequency_drift: false,
            angle: None,
            ..wish.plan.clone()
        };
        let cells: Vec<u64> = chosen.iter().map(|c| c.cell).collect();
        // Other cells, another span or another run: other lines.
        let seal = sha256(&format!("{} {plan:?} {cells:?}", run.manifest.settings_sha256));
        let kept = &run.manifest.layout;
        let layout = Layout { extent: false, frequency_drift: false, angle: false, seal, ..kept.clone() };
        let name = format!("calibration-{}-cells-{}-times.csv", longer.cells, longer.factor);
        let source = Arc::new(ChosenCells { grid: Arc::clone(&wish.grid), cells });
        Work { plan, source, layout, path: wish.folder.join(name) }
    }

    fn follow(&self, wish: &Wish, stop: Arc<AtomicBool>) -> Result<Ended, CliError> {
        let cells = self.source.cells.len() as u64;
        let (mut journal, found) =
            Journal::open(&self.path, &self.layout, cells).map_err(CliError::working)?;
        wish.say(format_args!(
            "calibration: {cells} surviving cells are followed for {:.0} times the span, {} are done; only losses are asked, \
             so all others are undecided",
            self.plan.span_day / wish.plan.span_day,
            found.done.count()
        ));
        // The pool that filled the survey has set it, to send its workers home.
        stop.store(false, Ordering::SeqCst);
        let mut progress = Progress::new(cells, found.tally.clone(), wish.quiet);
        let desk = Desk { journal: &mut journal, stop, watch: &mut |news| progress.note(news) };
        let engine = |plan: &Plan, next: survey::Next<'_>, done: survey::Done<'_>| {
            assess::run_batch(plan, next, done);
        };
        let source = Arc::clone(&self.source);
        let ended = survey::fill(source, engine, &self.plan, Policy::every_cell(), found, wish.threads, desk);
        progress.finish();
        ended.map_err(told)
    }
}

fn outcomes(chosen: &[Chosen], followed: &[Record]) -> Vec<Outcome> {
    let trusted = chosen.iter().zip(followed).filter(|(_, r)| r.assessment.verdict != Verdict::Untrusted);
    trusted
        .map(|(chosen, r)| Outcome { chosen: *chosen, lost: r.assessment.verdict == Verdict::Lost })
        .collect()
}

fn write(wish: &Wish, records: &[Record], report: &CalibrationReport<'_>) -> Result<(), CliError> {
    let text = report.text();
    let put = |name: &str, bytes: &[u8]| {
        disk::write_beside_then_rename(&wish.folder.join(name), bytes).map_err(CliError::working)
    };
    put(TABLE, report.csv().map_err(CliError::working)?.as_bytes())?;
    put(CALIBRATION, text.as_bytes())?;
    let (study, system) = (&wish.file.study, &wish.file.system.system);
    let criteria = wish.file.criteria.as_slice();
    Finished { study, system, plan: &wish.plan, criteria, records }.write(&wish.folder, "summary.txt")?;
    wish.say(format_args!("{}", text.trim_end()));
    for name in [TABLE, "summary.txt"] {
        wish.say(format_args!("wrote {}", wish.folder.join(name).display()));
    }
    Ok(())
}
