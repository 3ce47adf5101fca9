//! `abide survey`: a study → a run with its tables and its map.

mod calibrate;

use std::path::PathBuf;
use std::process::ExitCode;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, AtomicU64, Ordering};

use crate::assess::{self, BatchWork, Plan};
use crate::cli::CliError;
use crate::cli::args::SurveyArgs;
use crate::cli::manners::{INTERRUPTED, print, stop_on_signal};
use crate::cli::outputs::{Finished, MARGINS};
use crate::cli::progress::Progress;
use crate::cli::unfit::unfit;
use crate::cli::vary;
use crate::coords;
use crate::figure;
use crate::input::{self, StudyFile};
use crate::survey::{
    Calm, Desk, Ended, Found, Grid, Identity, LARGE, OUTPUTS, Policy, Recovered, Run, Source, SurveyError,
    cell_count, fill, plan_of,
};
use crate::system::Study;
use calibrate::Longer;

/// More cells than this need `--really`.
const MANY_CELLS: u64 = 10_000_000;
/// Up to so many cells each is looked at before the work for whether it can be followed; of more, so many.
const LOOKED_AT: u64 = 20_000;

pub fn run(args: SurveyArgs) -> Result<ExitCode, CliError> {
    let wish = Wish::check(&args)?;
    let (mut run, found) = Run::open(&wish.folder, &wish.identity()).map_err(told)?;
    wish.say_found(&found);
    let stop = stop_on_signal()?;
    let Found { recovered, .. } = found;
    let complete = wish.is_complete(&recovered);
    if !complete {
        wish.say_settled();
        let ended = wish.fill(&mut run, recovered, Arc::clone(&stop))?;
        if ended == Ended::Interrupted {
            return Ok(wish.say_interrupted());
        }
    }
    let code = wish.finish(&run, if complete { run.missing_outputs() } else { OUTPUTS.to_vec() })?;
    match wish.longer {
        Some(longer) => calibrate::run(&wish, &run, longer, stop),
        None => Ok(code),
    }
}

/// What was asked for, checked.
struct Wish {
    file: StudyFile,
    grid: Arc<Grid>,
    plan: Plan,
    folder: PathBuf,
    threads: usize,
    /// Cells may take the verdict of those around them.
    filling: bool,
    /// A sample of cells is followed longer afterwards.
    longer: Option<Longer>,
    quiet: bool,
    json: bool,
}

impl Wish {
    fn check(args: &SurveyArgs) -> Result<Wish, CliError> {
        let threads = threads(args.threads)?;
        let (file, name) = read(args)?;
        refuse_many(cell_count(&file.study), args.really)?;
        let longer = Longer::check(args, &file.study)?;
        let system = &file.system.system;
        let grid = Grid::new(system.clone(), file.study.clone()).map_err(|error| match error {
            SurveyError::Nominal(cause) => unfit(&file.system, &cause),
            other => told(other),
        })?;
        let nominal = coords::configure(system).map_err(|error| unfit(&file.system, &error))?;
        let plan = plan_of(&file.study, system, &nominal);
        let folder = args.into.clone().unwrap_or_else(|| PathBuf::from("reports/runs").join(name));
        let filling = args.fill || !args.every_cell && is_large(&file.study);
        let grid = Arc::new(grid);
        Ok(Wish { grid, plan, folder, threads, filling, longer, quiet: args.quiet, json: args.json, file })
    }

    /// Filled cells of an earlier command count unless every cell is wanted now.
    fn is_complete(&self, found: &Recovered) -> bool {
        let done = if self.filling { &found.settled } else { &found.done };
        done.count() == self.grid.cells()
    }

    fn policy(&self) -> Policy {
        if !self.filling {
            return Policy::every_cell();
        }
        let nominal = figure::nominal_cell(&self.file.study, &self.file.system.system);
        Policy::filling(Calm::under(&self.plan), nominal.into_iter().collect())
    }

    fn identity(&self) -> Identity {
        let system = &self.file.system.system;
        let mut study = self.file.study.clone();
        // Where the system file lies has no influence on the cells.
        study.system_path = PathBuf::new();
        Identity {
            study_text: self.file.text.clone(),
            system_text: self.file.system.text.clone(),
            settings: format!("{study:?}\n{system:?}\n{:?}", self.plan),
            plan: self.plan.clone(),
            cells: self.grid.cells(),
            axes: study.axes.iter().map(|axis| axis.path.clone()).collect(),
            planets: system.orbiting().map(|body| body.name.clone()).collect(),
        }
    }

    fn fill(&self, run: &mut Run, found: Recovered, stop: Arc<AtomicBool>) -> Result<Ended, CliError> {
        let mut progress = Progress::new(self.grid.cells(), found.tally.clone(), self.quiet);
        let desk = Desk { journal: &mut run.journal, stop, watch: &mut |news| progress.note(news) };
        let lanes = Arc::new(Lanes::default());
        let counted = Arc::clone(&lanes);
        let engine = move |plan: &Plan, next: crate::survey::Next<'_>, done: crate::survey::Done<'_>| {
            counted.add(assess::run_batch(plan, next, done));
        };
        let source = Arc::clone(&self.grid);
        let ended = fill(source, engine, &self.plan, self.policy(), found, self.threads, desk);
        progress.finish();
        if let Some(share) = lanes.share() {
            self.say(format_args!("lanes with a cell: {:.1} % of those worked through", 100.0 * share));
        }
        ended.map_err(told)
    }

    /// The outputs named, and the summary where it was asked for.
    fn finish(&self, run: &Run, names: Vec<&str>) -> Result<ExitCode, CliError> {
        if names.is_empty() && !self.json {
            return Ok(ExitCode::SUCCESS);
        }
        let records = run.records().map_err(told)?;
        let (study, system) = (&self.file.study, &self.file.system.system);
        let criteria = self.file.criteria.as_slice();
        let finished = Finished { study, system, plan: &self.plan, criteria, records: &records };
        for name in names {
            finished.write(&self.folder, name)?;
            if name == "map.png" && !criteria.is_empty() {
                self.say(format_args!("wrote {}", self.folder.join(MARGINS).display()));
            }
            self.say(format_args!("wrote {}", self.folder.join(name).display()));
        }
        if self.json {
            print(&finished.summary_json()?)?;
        }
        Ok(ExitCode::SUCCESS)
    }

    fn say(&self, words: std::fmt::Arguments<'_>) {
        if !self.quiet {
            eprintln!("{words}");
        }
    }

    fn say_found(&self, found: &Found) {
        let (folder, cells) = (self.folder.display(), self.grid.cells());
        let (done, settled) = (found.recovered.done.count(), found.recovered.settled.count());
        if found.recovered.dropped > 0 {
            let lines = found.recovered.dropped;
            self.say(format_args!(
                "{lines} torn or damaged and dropped; the cells are done again",
                lines = damaged(lines)
            ));
        }
        if found.only_layout {
            self.say(format_args!("the files differ from those of the run in comments and layout only"));
        }
        if found.resumed && self.is_complete(&found.recovered) {
            let filled = settled - done;
            let among = if filled > 0 { format!(", {filled} of them filled") } else { String::new() };
            self.say(format_args!("{folder} is finished: all {cells} cells are done{among}"));
        } else if found.resumed {
            self.say(format_args!("{folder}: goes on, {done} of {cells} cells are done"));
        } else {
            self.say(format_args!("{folder}: {cells} cells on {} threads", self.threads));
        }
        if self.filling && !self.is_complete(&found.recovered) {
            self.say(format_args!(
                "coarse grid first; cells far from any other verdict take that of all cells around them and are marked as \
                 filled (--every-cell integrates them too)"
            ));
        }
    }

    /// Cells that cannot be followed are told before the long part, not found after it.
    fn say_settled(&self) {
        if self.quiet {
            return;
        }
        let cells = self.grid.cells();
        let apart = cells.div_ceil(LOOKED_AT).max(1);
        let looked = cells.div_ceil(apart);
        let step = usize::try_from(apart).unwrap_or(usize::MAX);
        if let Some((count, first, reason)) = self.grid.settled((0..cells).step_by(step)) {
            eprintln!(
                "note: {count} of {looked} cells looked at cannot start and are recorded at time 0; \
                 the first is cell {first}: {reason}"
            );
        }
    }

    fn say_interrupted(&self) -> ExitCode {
        self.say(format_args!(
            "stopped; what was finished is kept in {}. The same command goes on from there",
            self.folder.display()
        ));
        ExitCode::from(INTERRUPTED)
    }
}

/// Lane-blocks of all workers.
#[derive(Default)]
struct Lanes {
    offered: AtomicU64,
    used: AtomicU64,
}

impl Lanes {
    fn add(&self, work: BatchWork) {
        self.offered.fetch_add(work.offered, Ordering::Relaxed);
        self.used.fetch_add(work.used, Ordering::Relaxed);
    }

    fn share(&self) -> Option<f64> {
        let offered = self.offered.load(Ordering::Relaxed);
        (offered > 0).then(|| self.used.load(Ordering::Relaxed) as f64 / offered as f64)
    }
}

fn damaged(lines: u64) -> String {
    match lines {
        1 => "1 line of the journal was".to_string(),
        _ => format!("{lines} lines of the journal were"),
    }
}

/// The study with the name of its run.
fn read(args: &SurveyArgs) -> Result<(StudyFile, String), CliError> {
    if !args.vary.is_empty() {
        if input::is_study(&args.study).map_err(CliError::input)? {
            return Err(CliError::Input(format!(
                "{} is a study, which says itself what varies; leave --vary out, or give a system file",
                args.study.display()
            )));
        }
        return Ok((vary::study_of(args)?, vary::run_name(args)));
    }
    let unused = [("--span", args.span.is_some()), ("--cells", args.cells.is_some())];
    if let Some((flag, _)) = unused.iter().find(|(_, given)| *given) {
        return Err(CliError::Input(format!(
            "{flag} goes with --vary; a study says it itself, so change it in {}",
            args.study.display()
        )));
    }
    let file = input::read_study(&args.study).map_err(CliError::input)?;
    let name = args.study.file_stem().unwrap_or_default().to_string_lossy().into_owned();
    Ok((file, name))
}

/// Whether cells are filled when nothing is said: a map of two axes whose cells are small against its features.
fn is_large(study: &Study) -> bool {
    study.axes.len() == 2 && cell_count(study) >= LARGE
}

fn threads(wished: Option<usize>) -> Result<usize, CliError> {
    match wished {
        Some(0) => Err(CliError::Input("--threads is 0, but work needs 1 or more".to_string())),
        Some(threads) => Ok(threads),
        None => Ok(std::thread::available_parallelism().map_or(1, usize::from)),
    }
}

fn refuse_many(cells: u64, really: bool) -> Result<(), CliError> {
    if cells <= MANY_CELLS || really {
        return Ok(());
    }
    Err(CliError::Input(format!(
        "the study has {cells} cells, more than {MANY_CELLS}; \
         if that is meant, confirm it with --really, else give its axes fewer cells"
    )))
}

fn told(error: SurveyError) -> CliError {
    if error.is_input() { CliError::input(error) } else { CliError::working(error) }
}
