//! What frequency and resonance analysis work on: elements at even times over the whole span, and in dense windows at its
//! start and end, for what is too fast for a long span's samples. Their number is bounded however long the span.

use nalgebra::{Rotation3, Vector3};

use super::Plan;
use super::batch::as_true;
use super::cell::Cell;
use super::kept_orbit::{keep_orbit, restored_orbit};
use crate::coords::Elements;
use crate::integrate::{Advance, Block, State, advance, angular_momentum};
use crate::num::{Kept, KeptReader};
use crate::observe::Moment;
use crate::system::Frame;

/// Most samples over the whole span; between half of these and all when the span has as many blocks.
pub const MOST_SAMPLES: usize = 8192;
/// Samples in each of the two windows.
const WINDOW_SAMPLES: usize = 4096;
/// Samples per period of the innermost planet in a window, at least.
const PER_ORBIT: f64 = 5.0;

/// Elements of every planet at even times, the first at `begin_day`.
#[derive(Clone, Debug, PartialEq)]
pub struct Track {
    pub begin_day: f64,
    pub step_day: f64,
    pub rows: Vec<Vec<Elements>>,
}

/// What has been kept of the motion so far; elements in the plan's frame, the invariable plane as reference plane.
#[derive(Clone, Debug)]
pub struct Samples {
    turn: Rotation3<f64>,
    frame: Frame,
    period_day: f64,
    block_day: f64,
    /// Blocks per sample.
    stride: u64,
    whole: Vec<Vec<Elements>>,
    windows: Option<Windows>,
    /// Once the end has come: how many samples there were before it.
    settled: Option<[usize; 3]>,
}

/// Samples every few steps, in the first and the last blocks.
#[derive(Clone, Debug)]
struct Windows {
    /// Steps per sample.
    every: u64,
    step_day: f64,
    blocks: u64,
    first: Vec<Vec<Elements>>,
    last: Vec<Vec<Elements>>,
}

impl Samples {
    /// Nothing but the start. `period_day` is that of the innermost planet.
    pub(super) fn new(start: &State, frame: Frame, period_day: f64) -> Samples {
        let total = Vector3::from(angular_momentum(start));
        let turn = Rotation3::rotation_between(&total, &Vector3::z())
            .filter(|_| total.norm() > 0.0)
            .unwrap_or_else(Rotation3::identity);
        let mut samples = Samples {
            turn,
            frame,
            period_day,
            block_day: 0.0,
            stride: 1,
            whole: Vec::new(),
            windows: None,
            settled: None,
        };
        samples.whole.push(samples.seen(start));
        samples
    }

    /// From the beginning, for the blocks that the cell has now.
    #[must_use]
    pub(super) fn again(&self, cell: &Cell, plan: &Plan) -> Samples {
        let mut samples = Samples::new(cell.stated(), self.frame, self.period_day);
        samples.block_day = plan.span_day / cell.blocks() as f64;
        let per_block = plan.block_steps as u64;
        let every = (self.period_day / (PER_ORBIT * cell.step_day())).floor().max(1.0) as u64;
        let blocks = (WINDOW_SAMPLES as u64 * every / per_block).max(1);
        // A short span is sampled as densely as a window. The adaptive engine's blocks have no steps to be cut at.
        if !cell.is_adaptive() && 2 * blocks < cell.blocks() {
            let step_day = cell.step_day() * every as f64;
            samples.windows = Some(Windows { every, step_day, blocks, first: Vec::new(), last: Vec::new() });
        }
        samples
    }

    fn seen(&self, state: &State) -> Vec<Elements> {
        let turned =
            |vectors: &[[f64; 3]]| vectors.iter().map(|v| (self.turn * Vector3::from(*v)).into()).collect();
        let state = State {
            star_gm: state.star_gm,
            gm: state.gm.clone(),
            pos: turned(&state.pos),
            vel: turned(&state.vel),
        };
        Moment { time_day: 0.0, state: &state }.elements(self.frame)
    }

    /// Takes the state at the end of a block.
    pub(super) fn see(&mut self, cell: &Cell, corrected: &Block) {
        if !cell.blocks_done().is_multiple_of(self.stride) {
            return;
        }
        self.whole.push(self.seen(&cell.shown(corrected.state(0))));
        if self.settled.is_none() && self.whole.len() > MOST_SAMPLES {
            self.whole = std::mem::take(&mut self.whole).into_iter().step_by(2).collect();
            self.stride *= 2;
        }
    }

    /// Goes through a block of a window again, from `before` on, and takes its samples. `index` is that of the block.
    pub(super) fn look_within(&mut self, index: u64, cell: &Cell, plan: &Plan, before: &Block) {
        let Some(windows) = &self.windows else { return };
        let per_block = plan.block_steps as u64;
        let at_end = index >= cell.blocks().saturating_sub(windows.blocks);
        if index >= windows.blocks && !at_end {
            return;
        }
        let mut alone = before.clone();
        let (begin, mut done) = (index * per_block, 0);
        let mut seen = Vec::new();
        let mut next = begin.next_multiple_of(windows.every) - begin;
        while next < per_block {
            let steps = (next - done) as usize;
            advance(Advance { block: &mut alone, scheme: plan.splitting(), steps, tangent: false });
            seen.push(self.seen(&cell.shown(as_true(&alone, plan).state(0))));
            done = next;
            next += windows.every;
        }
        if let Some(windows) = &mut self.windows {
            if at_end { windows.last.extend(seen) } else { windows.first.extend(seen) }
        }
    }

    /// A block of a window was not gone through in steps of the scheme: there are no windows.
    pub(super) fn without_windows(&mut self) {
        self.windows = None;
    }

    /// The end has come: what is put down from now on is what there was before it.
    pub(super) fn close(&mut self) {
        self.settled = Some(self.counts());
    }

    fn counts(&self) -> [usize; 3] {
        let of = |count: fn(&Windows) -> usize| self.windows.as_ref().map_or(0, count);
        [self.whole.len(), of(|w| w.first.len()), of(|w| w.last.len())]
    }

    /// Over the whole span, up to the first row with an unbound planet.
    pub fn whole(&self) -> Track {
        Track { begin_day: 0.0, step_day: self.block_day * self.stride as f64, rows: bound(&self.whole) }
    }

    /// The dense windows at the start and the end that are complete enough to be of use.
    pub fn windows(&self) -> Vec<Track> {
        let Some(windows) = &self.windows else { return Vec::new() };
        let first = Track { begin_day: 0.0, step_day: windows.step_day, rows: bound(&windows.first) };
        let span_day = windows.step_day * windows.last.len() as f64;
        let end_day = self.block_day * self.stride as f64 * self.whole.len() as f64;
        let begin_day = (end_day - span_day).max(0.0);
        let last = Track { begin_day, step_day: windows.step_day, rows: bound(&windows.last) };
        [first, last].into_iter().filter(|track| track.rows.len() >= WINDOW_SAMPLES / 2).collect()
    }

    pub(super) fn keep(&self, kept: &mut Kept) {
        let counts = self.settled.unwrap_or_else(|| self.counts());
        kept.count(self.stride);
        kept.count(u64::from(self.windows.is_some()));
        for (count, rows) in counts.into_iter().zip(self.lists()) {
            kept.count(count as u64);
            rows[..count].iter().flatten().for_each(|orbit| keep_orbit(orbit, kept));
        }
    }

    fn lists(&self) -> [&[Vec<Elements>]; 3] {
        let of = |list: fn(&Windows) -> &[Vec<Elements>]| self.windows.as_ref().map_or(&[][..], list);
        [&self.whole, of(|w| &w.first), of(|w| &w.last)]
    }

    /// Takes up what was put down, after [`Samples::again`].
    pub(super) fn restore(&mut self, kept: &mut KeptReader<'_>) -> Option<()> {
        self.stride = kept.count().filter(|stride| *stride > 0)?;
        if kept.count()? == 0 {
            self.windows = None;
        }
        let planets = self.whole[0].len();
        let mut list = |most: usize| -> Option<Vec<Vec<Elements>>> {
            let count = kept.size().filter(|count| *count <= most)?;
            (0..count).map(|_| (0..planets).map(|_| restored_orbit(kept)).collect()).collect()
        };
        self.whole = list(MOST_SAMPLES + 1).filter(|whole| !whole.is_empty())?;
        let (first, last) = (list(2 * WINDOW_SAMPLES)?, list(2 * WINDOW_SAMPLES)?);
        if let Some(windows) = &mut self.windows {
            (windows.first, windows.last) = (first, last);
        }
        Some(())
    }
}

fn bound(rows: &[Vec<Elements>]) -> Vec<Vec<Elements>> {
    let whole = |row: &&Vec<Elements>| row.iter().all(|orbit| (0.0..1.0).contains(&orbit.eccentricity));
    rows.iter().take_while(whole).cloned().collect()
}
