//! One configuration and one plan → one assessment: a pure function, whether computed alone or in a batch.

mod analysis;
mod assessment;
mod batch;
mod calibrate;
mod cell;
mod kept_orbit;
mod one;
mod physics;
mod plan;
mod samples;
mod series;
mod why;

pub use analysis::{
    Analysed, Analysis, AnalysisProgress, AnalysisWork, AngleAnalysed, DriftFrom, NotAnalysed, Sampling,
    analyse, angle_series,
};
pub use assessment::{AngleFound, Approach, Assessment, Extent, Loss, Lyapunov, Range};
pub use batch::{BatchWork, assess, run_batch};
pub use cell::ADAPTIVE;
pub use one::{FollowProgress, Follower, follow, plan_for_rows};
pub use plan::{
    FEWEST_STEPS_PER_PASSAGE, Plan, STEPS_PER_PASSAGE, auto_step_day, innermost_period_day,
    outermost_period_day,
};
pub use samples::{MOST_SAMPLES, Samples, Track};
pub use series::Row;
pub use why::{CoordinatesWhy, SchemeWhy, StepWhy, Trial};
