//! Many configurations: cells of a grid, a resumable run, the pool that fills it.

mod axis;
mod bitmap;
mod calibration;
mod changes;
mod error;
mod grid;
mod journal;
mod line;
mod manifest;
mod plan;
mod pool;
mod record;
mod refine;
mod run;
mod schedule;
mod tally;
mod view;

pub use axis::{cell_count, cell_indices, cell_system, cell_values, configuration_at};
pub use bitmap::Bitmap;
pub use calibration::{Calls, Chosen, ChosenCells, Outcome, Threshold, choose, fit};
pub use changes::{changes, first_few};
pub use error::{Failure, SurveyError};
pub use grid::Grid;
pub use journal::{Journal, Recovered};
pub use line::Layout;
pub use manifest::{Identity, Manifest, PlanWords, VERSION, host, sha256, utc};
pub use plan::plan_of;
pub use pool::{Desk, Done, Ended, Engine, Made, News, Next, Source, fill};
pub use record::{Filled, Record};
pub use refine::{COARSEST, Fill, LARGE, Policy, Refine};
pub use run::{Found, JOURNAL, OUTPUTS, Run, STUDY, SYSTEM, Stored, read_journal, read_run};
pub use schedule::Stage;
pub use tally::Tally;
pub use view::{Calm, View};
