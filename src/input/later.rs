//! What the files may one day say but this version cannot do. To widen the program, take the line out here and
//! read the key where it belongs.

use super::error::{Fault, InputError};
use super::raw::RawTable;
use super::source::{Complaint, Source};

struct Later {
    /// Empty for the top of the file.
    section: &'static str,
    key: &'static str,
    what: &'static str,
    advice: &'static str,
}

const TAKE_OUT: &str = "take it out";

const LATER: [Later; 3] = [
    Later {
        section: "",
        key: "samples",
        what: "samples of a posterior ([samples])",
        advice: "use one or two [[axis]] tables",
    },
    Later {
        section: "",
        key: "draws",
        what: "draws from the stated uncertainties",
        advice: "use one or two [[axis]] tables",
    },
    Later { section: "engine", key: "seed", what: "random draws", advice: TAKE_OUT },
];

/// Refuses what is known but not there yet. `section` is the table's word, empty for the top of the file.
pub(crate) fn refuse(source: &Source, section: &str, table: &RawTable) -> Result<(), InputError> {
    for later in LATER.iter().filter(|later| later.section == section) {
        let Some(entry) = table.get(later.key) else { continue };
        let complaint = Complaint::new(Fault::NotYet, later.what).advice(later.advice);
        return Err(source.at(entry.key_at.clone(), complaint));
    }
    Ok(())
}
