//! The rows of a series, evenly spaced: one per block until there are as many as asked for, then every second one is
//! dropped and rows come half as often. So an early end leaves many rows, and a long way no more than asked.

use super::cell::Cell;
use super::kept_orbit::{keep_orbit, restored_orbit};
use super::{Extent, Plan};
use crate::coords::Elements;
use crate::integrate::{Block, State};
use crate::num::{Kept, KeptReader};
use crate::observe::{ExtentWatch, Moment};
use crate::system::Frame;

/// The motion at one time.
#[derive(Clone, Debug, PartialEq)]
pub struct Row {
    pub time_day: f64,
    /// Osculating elements per planet in the plan's frame.
    pub elements: Vec<Elements>,
    /// Ranges of a, e and i per planet since the row before, at the ends of blocks; the first row has its own values.
    pub extent: Vec<Extent>,
    /// |E − E₀|/|E₀| at this time.
    pub energy_error: f64,
    /// |L − L₀|/|L₀| at this time.
    pub angular_momentum_error: f64,
    /// Y and its time average; absent before the second sample or when not measured.
    pub megno: Option<f64>,
    pub mean_megno: Option<f64>,
    /// ln(|δ|/|δ₀|)/t, per day.
    pub lyapunov_per_day: Option<f64>,
}

/// What has been kept of the series so far.
#[derive(Clone, Debug)]
pub(super) struct Rows {
    most: usize,
    frame: Frame,
    /// Blocks per row.
    stride: u64,
    since: ExtentWatch,
    rows: Vec<Row>,
    /// Once the end has come: how many rows there were before it, and the ranges since the last of them.
    settled: Option<(usize, ExtentWatch)>,
}

impl Rows {
    /// At most `most` rows (2 at least), the first at the start.
    pub fn new(start: &State, frame: Frame, most: usize) -> Rows {
        let most = most.max(2);
        let planets = start.gm.len();
        let moment = Moment { time_day: 0.0, state: start };
        let mut at_start = ExtentWatch::new(planets);
        at_start.see(&moment.shapes(frame));
        let first = Row {
            time_day: 0.0,
            elements: moment.elements(frame),
            extent: at_start.finish(),
            energy_error: 0.0,
            angular_momentum_error: 0.0,
            megno: None,
            mean_megno: None,
            lyapunov_per_day: None,
        };
        Rows { most, frame, stride: 1, since: ExtentWatch::new(planets), rows: vec![first], settled: None }
    }

    /// From the beginning.
    pub fn again(&self, start: &State) -> Rows {
        Rows::new(start, self.frame, self.most)
    }

    pub fn see(&mut self, cell: &Cell, plan: &Plan, block: &Block, corrected: &Block) {
        let state = cell.shown(corrected.state(0));
        let time_day = cell.time_day(plan);
        let moment = Moment { time_day, state: &state };
        self.since.see(&moment.shapes(self.frame));
        let done = cell.blocks_done();
        if !done.is_multiple_of(self.stride) && done != cell.blocks() {
            return;
        }
        let growth = block.growth(0);
        let measured = plan.megno && growth.samples > 1;
        let (energy_error, angular_momentum_error) = cell.last_errors();
        let since = std::mem::replace(&mut self.since, ExtentWatch::new(state.gm.len()));
        self.rows.push(Row {
            time_day,
            elements: moment.elements(self.frame),
            extent: since.finish(),
            energy_error,
            angular_momentum_error,
            megno: measured.then_some(growth.y),
            mean_megno: measured.then_some(growth.mean_y),
            lyapunov_per_day: measured.then_some(growth.log / time_day),
        });
        // One place is left for the last row, which may come between two others.
        if self.settled.is_none() && self.rows.len() > self.most - 1 {
            self.thin();
        }
    }

    /// Drops every second row; its ranges go to the row after it.
    fn thin(&mut self) {
        self.stride *= 2;
        let mut passed: Option<Vec<Extent>> = None;
        for (index, mut row) in std::mem::take(&mut self.rows).into_iter().enumerate() {
            if index % 2 == 1 {
                passed = Some(row.extent);
                continue;
            }
            if let Some(passed) = passed.take() {
                row.extent = row.extent.iter().zip(&passed).map(|(now, before)| now.joined(before)).collect();
            }
            self.rows.push(row);
        }
        if let Some(passed) = passed {
            self.since.join(&passed);
        }
    }

    /// The end has come: what is put down from now on is what there was before it.
    pub fn close(&mut self) {
        self.settled = Some((self.rows.len(), self.since.clone()));
    }

    pub fn finish(self) -> Vec<Row> {
        self.rows
    }

    pub fn keep(&self, kept: &mut Kept) {
        let (count, since) =
            self.settled.as_ref().map_or((self.rows.len(), &self.since), |(count, since)| (*count, since));
        kept.count(self.stride);
        since.keep(kept);
        kept.count(count as u64);
        // The first row follows from the start.
        for row in &self.rows[1..count.max(1)] {
            row.keep(kept);
        }
    }

    pub fn restore(&mut self, kept: &mut KeptReader<'_>) -> Option<()> {
        self.stride = kept.count().filter(|stride| *stride > 0)?;
        self.since.restore(kept)?;
        let count = kept.size().filter(|count| (1..=self.most).contains(count))?;
        let planets = self.rows[0].elements.len();
        for _ in 1..count {
            self.rows.push(Row::restored(kept, planets)?);
        }
        Some(())
    }
}

impl Row {
    fn keep(&self, kept: &mut Kept) {
        kept.floats(&[self.time_day, self.energy_error, self.angular_momentum_error]);
        for (e, extent) in self.elements.iter().zip(&self.extent) {
            keep_orbit(e, kept);
            extent.keep(kept);
        }
        for number in [self.megno, self.mean_megno, self.lyapunov_per_day] {
            kept.count(u64::from(number.is_some()));
            kept.float(number.unwrap_or(0.0));
        }
    }

    fn restored(kept: &mut KeptReader<'_>, planets: usize) -> Option<Row> {
        let (time_day, energy_error, angular_momentum_error) = (kept.float()?, kept.float()?, kept.float()?);
        let (mut elements, mut extent) = (Vec::new(), Vec::new());
        for _ in 0..planets {
            elements.push(restored_orbit(kept)?);
            extent.push(Extent::restored(kept)?);
        }
        let mut number = || Some((kept.count()? != 0, kept.float()?)).map(|(some, x)| some.then_some(x));
        Some(Row {
            time_day,
            elements,
            extent,
            energy_error,
            angular_momentum_error,
            megno: number()?,
            mean_megno: number()?,
            lyapunov_per_day: number()?,
        })
    }
}
