//! Threads that fill a run: cells are drawn as the schedule wants them, answered in any order, written by one
//! thread.

use std::any::Any;
use std::cell::RefCell;
use std::collections::BTreeSet;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::mpsc::{Receiver, RecvTimeoutError, SyncSender, sync_channel};
use std::sync::{Arc, Condvar, Mutex, MutexGuard};
use std::time::Duration;

use super::error::Failure;
use super::refine::Policy;
use super::schedule::{Schedule, Stage};
use super::view::View;
use super::{Journal, Record, Recovered, SurveyError};
use crate::assess::{Assessment, Plan};
use crate::coords::Configuration;
use crate::disk::DiskError;
use crate::verdict::Verdict;

/// How long the writer waits for a record before it looks whether to stop and lets the progress be shown.
const LOOK_EVERY: Duration = Duration::from_millis(100);
/// Finished records that may wait for the writer; beyond it workers wait.
const WAITING_RECORDS: usize = 1024;
/// How long a worker without work waits for it before it looks whether to stop.
const IDLE: Duration = Duration::from_millis(20);

/// Where cells come from.
pub trait Source: Send + Sync + 'static {
    fn cells(&self) -> u64;
    /// Cells along each axis; the first runs fastest. One row if there is no grid.
    fn shape(&self) -> [usize; 2] {
        [usize::try_from(self.cells()).unwrap_or(usize::MAX), 1]
    }
    /// What a cell may cost, in any unit: only the order of the work follows from it.
    fn price(&self, _cell: u64) -> f64 {
        0.0
    }
    /// The value on each axis.
    fn values(&self, cell: u64) -> Vec<f64>;
    fn make(&self, cell: u64) -> Made;
}

/// A cell, ready.
pub enum Made {
    ToFollow(Configuration),
    /// Its outcome is known without following it.
    Settled(Assessment),
}

/// Gives the engine its next cell.
pub type Next<'a> = &'a mut dyn FnMut() -> Option<(u64, Configuration)>;
/// Takes an answer; at `false` the engine drops what it has in flight.
pub type Done<'a> = &'a mut dyn FnMut(u64, Assessment) -> bool;

/// What follows cells: [`crate::assess::run_batch`], or a simpler one in tests.
pub trait Engine: Fn(&Plan, Next<'_>, Done<'_>) + Send + Sync + 'static {}
impl<F: Fn(&Plan, Next<'_>, Done<'_>) + Send + Sync + 'static> Engine for F {}

/// How the filling ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Ended {
    Complete,
    /// Asked to stop; what was finished is in the journal.
    Interrupted,
}

/// Where the pool puts what it has and asks what to do.
pub struct Desk<'a> {
    pub journal: &'a mut Journal,
    /// Set from outside to stop.
    pub stop: Arc<AtomicBool>,
    pub watch: &'a mut dyn FnMut(News),
}

/// What the pool tells while it works.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum News {
    /// A cell was integrated.
    Integrated(Verdict),
    /// About ten times a second.
    Passing(Stage),
    /// So many cells took the verdict of those around them; at the end.
    Filled(u64),
}

/// Integrates what `policy` wants and is not in `found`, with `threads` workers, and fills the rest.
///
/// When stopped it returns at once: workers end with the process, or at their next answer; what they had in
/// flight is dropped. A panic costs its own cell only: the others in the same batch are done again alone.
/// Errors: `Failed` naming the cells that broke off, after all others are written; the journal's.
pub fn fill<S: Source, E: Engine>(
    source: Arc<S>,
    engine: E,
    plan: &Plan,
    policy: Policy,
    found: Recovered,
    threads: usize,
    mut desk: Desk<'_>,
) -> Result<Ended, SurveyError> {
    let Recovered { settled, views, .. } = found;
    let (send, receive) = sync_channel(WAITING_RECORDS);
    let work = Arc::new(Work {
        schedule: Mutex::new(Schedule::new(source.shape(), policy, views)),
        news: Condvar::new(),
        source,
        engine,
        plan: plan.clone(),
        stop: Arc::clone(&desk.stop),
    });
    let pool = rayon::ThreadPoolBuilder::new()
        .num_threads(threads)
        .thread_name(|index| format!("worker {index}"))
        .build()?;
    for _ in 0..threads {
        let (work, send) = (Arc::clone(&work), send.clone());
        pool.spawn(move || work.run(&send));
    }
    // Only the workers hold senders now, so the channel ends when they do.
    drop(send);
    let ended = write_down(receive, &mut desk, work.source.cells(), || work.schedule().stage())?;
    if ended == Ended::Complete {
        let schedule = work.schedule();
        let mut filled = 0;
        for record in schedule.filled(&settled, |cell| work.source.values(cell)) {
            desk.journal.append(&record)?;
            filled += 1;
        }
        desk.journal.close()?;
        (desk.watch)(News::Filled(filled));
    }
    Ok(ended)
}

enum Message {
    Finished(Box<Record>),
    Failed(Failure),
}

/// The writer: records go to the journal as they come.
fn write_down(
    receive: Receiver<Message>,
    desk: &mut Desk<'_>,
    total: u64,
    stage: impl Fn() -> Stage,
) -> Result<Ended, SurveyError> {
    let mut failed = Vec::new();
    let written = write_until_end(&receive, desk, stage, &mut failed);
    // Workers must not go on for a writer that has left.
    desk.stop.store(true, Ordering::SeqCst);
    let ended = written?;
    desk.journal.close()?;
    if !failed.is_empty() {
        failed.sort_by_key(|failure: &Failure| failure.cell);
        return Err(SurveyError::Failed { total, failed });
    }
    Ok(ended)
}

fn write_until_end(
    receive: &Receiver<Message>,
    desk: &mut Desk<'_>,
    stage: impl Fn() -> Stage,
    failed: &mut Vec<Failure>,
) -> Result<Ended, DiskError> {
    loop {
        let mut message = match receive.recv_timeout(LOOK_EVERY) {
            Ok(message) => Some(message),
            Err(RecvTimeoutError::Timeout) => None,
            Err(RecvTimeoutError::Disconnected) => {
                let ended =
                    if desk.stop.load(Ordering::SeqCst) { Ended::Interrupted } else { Ended::Complete };
                return Ok(ended);
            }
        };
        while let Some(now) = message.take() {
            match now {
                Message::Finished(record) => {
                    desk.journal.append(&record)?;
                    (desk.watch)(News::Integrated(record.assessment.verdict));
                }
                Message::Failed(failure) => failed.push(failure),
            }
            message = receive.try_recv().ok();
        }
        desk.journal.flush()?;
        (desk.watch)(News::Passing(stage()));
        if desk.stop.load(Ordering::SeqCst) {
            return Ok(Ended::Interrupted);
        }
    }
}

/// What the workers share.
struct Work<S, E> {
    source: Arc<S>,
    engine: E,
    plan: Plan,
    schedule: Mutex<Schedule>,
    /// There may be cells to draw again.
    news: Condvar,
    stop: Arc<AtomicBool>,
}

impl<S: Source, E: Engine> Work<S, E> {
    /// One worker: batches until no cell is left. A batch that panics is picked up cell by cell.
    ///
    /// A batch ends when no cell can be drawn for any of its lanes; then the worker waits for the answers of the
    /// others, which may let cells be wanted.
    fn run(&self, send: &SyncSender<Message>) {
        let flight = RefCell::new(BTreeSet::new());
        loop {
            let mut draw = || self.draw();
            let broken = self.batch(&mut draw, &flight, send).err();
            if self.stopped() {
                return;
            }
            let cells = flight.take();
            let none_left = broken.is_none() && cells.is_empty();
            cells.into_iter().for_each(|cell| self.alone(cell, send));
            if none_left && !self.wait() {
                return;
            }
        }
    }

    /// Waits until there may be cells to draw again; false when there will be none.
    fn wait(&self) -> bool {
        let schedule = self.schedule();
        if schedule.is_complete() {
            return false;
        }
        // The others may have answered since this worker found nothing, so the wait is short.
        let waited = self.news.wait_timeout(schedule, IDLE);
        drop(waited);
        true
    }

    /// A cell of a broken batch by itself: either it was a neighbour's fault, or now its own is certain.
    fn alone(&self, cell: u64, send: &SyncSender<Message>) {
        let flight = RefCell::new(BTreeSet::from([cell]));
        let mut once = Some(cell);
        let broken = self.batch(&mut || once.take(), &flight, send).err();
        if !self.stopped() && !flight.borrow().is_empty() {
            let what = broken
                .map_or_else(|| "the engine gave no answer".to_string(), |payload| panic_text(&payload));
            let what = format!("at {:?} on the axes: {what}", self.source.values(cell));
            self.post(send, Message::Failed(Failure { cell, what }));
            self.tell(cell, View::broken());
        }
    }

    /// Runs the engine on the cells that `draw` gives; `flight` holds those not yet answered.
    fn batch(
        &self,
        draw: &mut dyn FnMut() -> Option<u64>,
        flight: &RefCell<BTreeSet<u64>>,
        send: &SyncSender<Message>,
    ) -> Result<(), Box<dyn Any + Send>> {
        let mut next = || {
            loop {
                let cell = draw()?;
                flight.borrow_mut().insert(cell);
                match self.source.make(cell) {
                    Made::ToFollow(configuration) => return Some((cell, configuration)),
                    Made::Settled(assessment) => self.answer(cell, assessment, flight, send),
                };
            }
        };
        let mut done = |cell, assessment| self.answer(cell, assessment, flight, send);
        catch_unwind(AssertUnwindSafe(|| (self.engine)(&self.plan, &mut next, &mut done)))
    }

    fn answer(
        &self,
        cell: u64,
        assessment: Assessment,
        flight: &RefCell<BTreeSet<u64>>,
        send: &SyncSender<Message>,
    ) -> bool {
        flight.borrow_mut().remove(&cell);
        let view = View::of(&assessment);
        let record = Record::integrated(cell, self.source.values(cell), assessment);
        let posted = self.post(send, Message::Finished(Box::new(record)));
        self.tell(cell, view);
        posted && !self.stopped()
    }

    fn tell(&self, cell: u64, view: View) {
        self.schedule().answer(cell, view);
        self.news.notify_all();
    }

    /// Whether the writer is still there.
    fn post(&self, send: &SyncSender<Message>, message: Message) -> bool {
        send.send(message).is_ok()
    }

    /// The next cell to be integrated, if there is one now.
    fn draw(&self) -> Option<u64> {
        if self.stopped() { None } else { self.schedule().draw(|cell| self.source.price(cell)) }
    }

    fn schedule(&self) -> MutexGuard<'_, Schedule> {
        // A panic comes from the engine, never from under the lock; what it guards is whole.
        self.schedule.lock().unwrap_or_else(|poisoned| poisoned.into_inner())
    }

    fn stopped(&self) -> bool {
        self.stop.load(Ordering::SeqCst)
    }
}

fn panic_text(payload: &Box<dyn Any + Send>) -> String {
    let text = payload.downcast_ref::<String>().map(String::as_str);
    let text = text.or_else(|| payload.downcast_ref::<&str>().copied());
    format!("panic: {}", text.unwrap_or("without a message"))
}
