//! Many configurations: cells of a grid, a resumable run, the pool that fills it.

mod record;

pub use record::Record;
