//! Readings followed, a worker per core.

use std::io::IsTerminal;
use std::sync::Mutex;
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};
use std::sync::mpsc::{self, RecvTimeoutError};
use std::time::{Duration, Instant};

use indicatif::{ProgressBar, ProgressStyle};

use super::Work;
use super::angles::{candidates, motions};
use super::cases::Case;
use crate::assess::{Assessment, Follower};
use crate::coords::Configuration;
use crate::observe::{AngleReport, Candidate};

/// The flag that stops the work is asked once in so many blocks.
const BLOCKS_PER_LOOK: u32 = 16;
/// Between two looks at how far the work is.
const PAUSE: Duration = Duration::from_millis(100);
/// Between two lines where there is no terminal.
const LINE_PAUSE: Duration = Duration::from_secs(10);
const BAR_LENGTH: f64 = 1000.0;

/// What became of one reading.
#[derive(Clone)]
pub struct Outcome {
    pub assessment: Assessment,
    /// Every angle looked at, in the order of the candidates; empty where the motion ended early.
    pub angles: Vec<AngleReport>,
}

/// Follows every case that can start; none when stopped. A case that cannot start has no outcome.
pub fn integrate(cases: &[Case], work: &Work, stop: &AtomicBool) -> Option<Vec<Option<Outcome>>> {
    let starts: Vec<&Configuration> = cases.iter().filter_map(|case| case.start.as_ref().ok()).collect();
    let wanted = candidates(&starts);
    let shares: Vec<AtomicUsize> = starts.iter().map(|_| AtomicUsize::new(0)).collect();
    let found: Vec<Mutex<Option<Outcome>>> = starts.iter().map(|_| Mutex::new(None)).collect();
    let next = AtomicUsize::new(0);
    let workers = std::thread::available_parallelism().map_or(1, usize::from).min(starts.len().max(1));
    std::thread::scope(|scope| {
        let (ended, wait) = mpsc::channel::<()>();
        for _ in 0..workers {
            let ended = ended.clone();
            let (starts, wanted, shares, found, next) = (&starts, &wanted, &shares, &found, &next);
            scope.spawn(move || {
                loop {
                    let index = next.fetch_add(1, Ordering::Relaxed);
                    let Some(start) = starts.get(index) else { break };
                    let outcome = one(start, work, wanted, stop, &shares[index]);
                    if let Ok(mut place) = found[index].lock() {
                        *place = outcome;
                    }
                }
                drop(ended);
            });
        }
        drop(ended);
        watch(&wait, &shares);
    });
    if stop.load(Ordering::Relaxed) {
        return None;
    }
    let mut outcomes = found.into_iter().map(|place| place.into_inner().ok().flatten());
    Some(cases.iter().map(|case| case.start.as_ref().ok().and_then(|_| outcomes.next().flatten())).collect())
}

fn one(
    start: &Configuration,
    work: &Work,
    wanted: &[Candidate],
    stop: &AtomicBool,
    share: &AtomicUsize,
) -> Option<Outcome> {
    let mut follower = Follower::new(start, &work.plan, work.rows);
    while follower.assessment().is_none() {
        for _ in 0..BLOCKS_PER_LOOK {
            follower.one_block();
        }
        share.store((BAR_LENGTH * follower.progress().share) as usize, Ordering::Relaxed);
        if stop.load(Ordering::Relaxed) {
            return None;
        }
    }
    let (assessment, rows) = follower.finish()?;
    let whole = assessment.loss.is_none();
    let angles = if whole { motions(start, &rows, wanted, stop) } else { Vec::new() };
    share.store(BAR_LENGTH as usize, Ordering::Relaxed);
    Some(Outcome { assessment, angles })
}

/// Shows how far the work is until every worker has left.
fn watch(wait: &mpsc::Receiver<()>, shares: &[AtomicUsize]) {
    let length = BAR_LENGTH as u64 * shares.len() as u64;
    let bar = std::io::stderr().is_terminal().then(|| bar(length));
    let mut said = Instant::now();
    while let Err(RecvTimeoutError::Timeout) = wait.recv_timeout(PAUSE) {
        let done: usize = shares.iter().map(|share| share.load(Ordering::Relaxed)).sum();
        match &bar {
            Some(bar) => bar.set_position(done as u64),
            None if said.elapsed() >= LINE_PAUSE => {
                said = Instant::now();
                let share = 100.0 * done as f64 / length as f64;
                let s = if shares.len() == 1 { "" } else { "s" };
                eprintln!("{} reading{s}, {share:.0} % done", shares.len());
            }
            None => {}
        }
    }
    if let Some(bar) = bar {
        bar.finish_and_clear();
    }
}

fn bar(length: u64) -> ProgressBar {
    let style = ProgressStyle::with_template("{bar:20} {percent:>3}% of all readings ({eta} left)")
        .unwrap_or_else(|_| ProgressStyle::default_bar());
    ProgressBar::new(length).with_style(style)
}
