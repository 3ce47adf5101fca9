//! One configuration followed with its series; it can be put down at any time and taken up later.

use super::batch::{as_true, one_block};
use super::cell::{Cell, Next};
use super::plan::{BLOCK_SAMPLES, innermost_period_day};
use super::samples::Samples;
use super::series::Rows;
use super::{Assessment, Plan, Row};
use crate::coords::Configuration;
use crate::integrate::{Block, SAMPLE_EVERY};
use crate::num::Kept;

/// Follows one configuration and keeps at most `rows` rows (2 at least), evenly spaced, the first at the start.
///
/// `progress` is told the share done (it falls back when the cell is done again with a smaller step) and answers
/// whether to go on; at `false` the answer is `None`. The assessment has the bits of [`super::assess`] under the
/// same plan.
pub fn follow(
    configuration: &Configuration,
    plan: &Plan,
    rows: usize,
    mut progress: impl FnMut(f64) -> bool,
) -> Option<(Assessment, Vec<Row>)> {
    let mut follower = Follower::new(configuration, plan, rows);
    while follower.assessment().is_none() {
        follower.one_block();
        if follower.assessment().is_none() && !progress(follower.progress().share) {
            return None;
        }
    }
    follower.finish()
}

/// The plan with blocks short enough for so many rows over this configuration's span, and no shorter.
///
/// Rows are taken at the ends of blocks; a block as long as a survey's would leave a short span few rows.
#[must_use]
pub fn plan_for_rows(plan: &Plan, configuration: &Configuration, rows: usize) -> Plan {
    let step = plan.step_for(configuration);
    let samples_per_row = plan.span_day / step / SAMPLE_EVERY as f64 / rows.max(2).saturating_sub(1) as f64;
    let wanted = BLOCK_SAMPLES.into_iter().find(|samples| *samples as f64 >= samples_per_row);
    let samples = wanted.unwrap_or(BLOCK_SAMPLES[BLOCK_SAMPLES.len() - 1]);
    Plan { block_steps: plan.block_steps.min(samples * SAMPLE_EVERY), ..plan.clone() }
}

/// How far a configuration has been followed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FollowProgress {
    pub share: f64,
    pub time_day: f64,
    pub step_day: f64,
    /// Largest relative energy error so far.
    pub energy_error: f64,
    pub mean_megno: Option<f64>,
    /// How many times it began again, with smaller steps and then with the adaptive engine.
    pub redone: u32,
    /// The adaptive engine does everything.
    pub adaptive: bool,
}

/// A configuration on its way.
#[derive(Debug)]
pub struct Follower {
    plan: Plan,
    rows: Rows,
    samples: Samples,
    /// Absent when the configuration could not even start.
    on_its_way: Option<OnItsWay>,
    assessment: Option<Assessment>,
}

#[derive(Clone, Debug)]
struct OnItsWay {
    cell: Cell,
    block: Block,
}

impl Follower {
    pub fn new(configuration: &Configuration, plan: &Plan, rows: usize) -> Follower {
        let plan = plan.clone();
        let period_day = innermost_period_day(configuration);
        match Cell::new(configuration, &plan) {
            Ok(cell) => {
                let mut block = plan.block(1, configuration.planets.len());
                cell.enter(&mut block, 0, &plan);
                let rows = Rows::new(cell.stated(), plan.frame, rows);
                let samples = Samples::new(cell.stated(), plan.frame, period_day).again(&cell, &plan);
                Follower { plan, rows, samples, on_its_way: Some(OnItsWay { cell, block }), assessment: None }
            }
            Err(assessment) => {
                let start = super::physics::barycentric(configuration);
                let rows = Rows::new(&start, plan.frame, rows);
                let samples = Samples::new(&start, plan.frame, period_day);
                Follower { plan, rows, samples, on_its_way: None, assessment: Some(*assessment) }
            }
        }
    }

    /// Given once the configuration has come to its end.
    pub fn assessment(&self) -> Option<&Assessment> {
        self.assessment.as_ref()
    }

    /// Follows the configuration by one block of steps; nothing is left to do once it has ended.
    pub fn one_block(&mut self) {
        let (None, Some(now)) = (&self.assessment, &mut self.on_its_way) else { return };
        // What is put down after the end is the moment before it: taken up, it ends again in the same way.
        let before = now.clone();
        let corrected = one_block(&mut now.block, &self.plan);
        let next = now.cell.look(&self.plan, &before.block, &mut now.block, &corrected, 0);
        if matches!(next, Next::End(_)) {
            self.rows.close();
            self.samples.close();
        }
        let whole = match &next {
            Next::Again => false,
            Next::GoOn => true,
            Next::End(assessment) => assessment.loss.is_none(),
        };
        if whole {
            let passed = now.cell.is_adaptive() || now.cell.passages() > before.cell.passages();
            // What the adaptive engine did lies in the block itself.
            let seen = if passed { as_true(&now.block, &self.plan) } else { corrected };
            self.rows.see(&now.cell, &self.plan, &now.block, &seen);
            self.samples.see(&now.cell, &seen);
            if passed {
                self.samples.without_windows();
            } else {
                let index = before.cell.blocks_done();
                self.samples.look_within(index, &now.cell, &self.plan, &before.block);
            }
        }
        match next {
            Next::GoOn => {}
            Next::Again => {
                now.cell.enter(&mut now.block, 0, &self.plan);
                self.rows = self.rows.again(now.cell.stated());
                self.samples = self.samples.again(&now.cell, &self.plan);
            }
            Next::End(assessment) => {
                *now = before;
                self.assessment = Some(*assessment);
            }
        }
    }

    pub fn progress(&self) -> FollowProgress {
        let Some(OnItsWay { cell, .. }) = &self.on_its_way else {
            let (share, time_day, step_day) = (1.0, 0.0, f64::NAN);
            return FollowProgress {
                share,
                time_day,
                step_day,
                energy_error: 0.0,
                mean_megno: None,
                redone: 0,
                adaptive: self.plan.adaptive,
            };
        };
        FollowProgress {
            share: cell.share_done(),
            time_day: cell.time_day(&self.plan),
            step_day: cell.step_day(),
            energy_error: cell.worst_energy_error(),
            mean_megno: cell.mean_megno(),
            redone: cell.redone(),
            adaptive: cell.is_adaptive(),
        }
    }

    /// The motion at even times, for frequency and resonance analysis.
    pub fn samples(&self) -> &Samples {
        &self.samples
    }

    /// Assessment and rows; none before the end.
    pub fn finish(self) -> Option<(Assessment, Vec<Row>)> {
        Some((self.assessment?, self.rows.finish()))
    }

    /// Everything that does not follow from configuration, plan and number of rows, to the last bit.
    pub fn keep(&self) -> Kept {
        let mut kept = Kept::default();
        if let Some(OnItsWay { cell, block }) = &self.on_its_way {
            cell.keep(&mut kept);
            block.keep(&mut kept);
            self.rows.keep(&mut kept);
            self.samples.keep(&mut kept);
        }
        kept
    }

    /// Takes up what [`Follower::keep`] put down under the same configuration, plan and number of rows.
    ///
    /// None when it does not fit them.
    pub fn restored(
        configuration: &Configuration,
        plan: &Plan,
        rows: usize,
        kept: &Kept,
    ) -> Option<Follower> {
        let mut follower = Follower::new(configuration, plan, rows);
        let mut reader = kept.reader();
        if let Some(OnItsWay { cell, block }) = &mut follower.on_its_way {
            cell.restore(&mut reader)?;
            block.restore(&mut reader)?;
            follower.rows = follower.rows.again(cell.stated());
            follower.rows.restore(&mut reader)?;
            follower.samples = follower.samples.again(cell, &follower.plan);
            follower.samples.restore(&mut reader)?;
        }
        reader.is_empty().then_some(follower)
    }
}
