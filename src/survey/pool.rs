//! Threads that fill a run: cells are drawn in order, answered in any order, written by one thread.

use std::any::Any;
use std::cell::RefCell;
use std::collections::BTreeSet;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, AtomicU64, Ordering};
use std::sync::mpsc::{Receiver, RecvTimeoutError, SyncSender, sync_channel};
use std::time::Duration;

use super::bitmap::Bitmap;
use super::error::Failure;
use super::{Journal, Record, SurveyError};
use crate::assess::{Assessment, Plan};
use crate::coords::Configuration;
use crate::disk::DiskError;
use crate::verdict::Verdict;

/// How long the writer waits for a record before it looks whether to stop and lets the progress be shown.
const LOOK_EVERY: Duration = Duration::from_millis(100);
/// Finished records that may wait for the writer; beyond it workers wait.
const WAITING_RECORDS: usize = 1024;

/// Where cells come from.
pub trait Source: Send + Sync + 'static {
    fn cells(&self) -> u64;
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
    /// Called with each verdict written, and without one about ten times a second.
    pub watch: &'a mut dyn FnMut(Option<Verdict>),
}

/// Fills the cells that are not in `done` with `threads` workers.
///
/// When stopped it returns at once: workers end with the process, or at their next answer; what they had in
/// flight is dropped. A panic costs its own cell only: the others in the same batch are done again alone.
/// Errors: `Failed` naming the cells that broke off, after all others are written; the journal's.
pub fn fill<S: Source, E: Engine>(
    source: Arc<S>,
    engine: E,
    plan: &Plan,
    done: Bitmap,
    threads: usize,
    desk: Desk<'_>,
) -> Result<Ended, SurveyError> {
    let total = source.cells();
    let (send, receive) = sync_channel(WAITING_RECORDS);
    let work = Arc::new(Work {
        source,
        engine,
        plan: plan.clone(),
        next: AtomicU64::new(0),
        done,
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
    write_down(receive, desk, total)
}

enum Message {
    Finished(Box<Record>),
    Failed(Failure),
}

/// The writer: records go to the journal as they come.
fn write_down(receive: Receiver<Message>, desk: Desk<'_>, total: u64) -> Result<Ended, SurveyError> {
    let mut failed = Vec::new();
    let written = write_until_end(&receive, desk.journal, &desk.stop, desk.watch, &mut failed);
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
    journal: &mut Journal,
    stop: &AtomicBool,
    watch: &mut dyn FnMut(Option<Verdict>),
    failed: &mut Vec<Failure>,
) -> Result<Ended, DiskError> {
    loop {
        let mut message = match receive.recv_timeout(LOOK_EVERY) {
            Ok(message) => Some(message),
            Err(RecvTimeoutError::Timeout) => None,
            Err(RecvTimeoutError::Disconnected) => {
                let ended = if stop.load(Ordering::SeqCst) { Ended::Interrupted } else { Ended::Complete };
                return Ok(ended);
            }
        };
        while let Some(now) = message.take() {
            match now {
                Message::Finished(record) => {
                    journal.append(&record)?;
                    watch(Some(record.assessment.verdict));
                }
                Message::Failed(failure) => failed.push(failure),
            }
            message = receive.try_recv().ok();
        }
        journal.flush()?;
        watch(None);
        if stop.load(Ordering::SeqCst) {
            return Ok(Ended::Interrupted);
        }
    }
}

/// What the workers share.
struct Work<S, E> {
    source: Arc<S>,
    engine: E,
    plan: Plan,
    next: AtomicU64,
    /// Done before this filling began.
    done: Bitmap,
    stop: Arc<AtomicBool>,
}

impl<S: Source, E: Engine> Work<S, E> {
    /// One worker: batches until no cell is left. A batch that panics is picked up cell by cell.
    fn run(&self, send: &SyncSender<Message>) {
        let flight = RefCell::new(BTreeSet::new());
        loop {
            let mut draw = || self.draw();
            let broken = self.batch(&mut draw, &flight, send).err();
            if self.stopped() || (broken.is_none() && flight.borrow().is_empty()) {
                return;
            }
            let cells = flight.take();
            cells.into_iter().for_each(|cell| self.alone(cell, send));
            if broken.is_none() {
                return;
            }
        }
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
        let record = Record { cell, values: self.source.values(cell), assessment };
        self.post(send, Message::Finished(Box::new(record))) && !self.stopped()
    }

    /// Whether the writer is still there.
    fn post(&self, send: &SyncSender<Message>, message: Message) -> bool {
        send.send(message).is_ok()
    }

    /// The next cell in order that was not done before.
    fn draw(&self) -> Option<u64> {
        loop {
            if self.stopped() {
                return None;
            }
            let cell = self.next.fetch_add(1, Ordering::Relaxed);
            if cell >= self.source.cells() {
                return None;
            }
            if !self.done.has(cell) {
                return Some(cell);
            }
        }
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
