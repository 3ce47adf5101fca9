//! One configuration and one plan → one assessment: a pure function, whether computed alone or in a batch.

mod assessment;
mod batch;
mod plan;

pub use assessment::{Approach, Assessment, Extent, Loss, Lyapunov, Range};
pub use batch::{assess, run_batch};
pub use plan::{Plan, StepWhy, auto_step_day};
