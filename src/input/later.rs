//! What the files may one day say but this version cannot do. To widen the program, take the line out here and
//! read the key where it belongs.

use super::error::{Fault, InputError};
use super::raw::{RawTable, RawValue};
use super::source::{Complaint, Source};

/// When a key is refused.
enum When {
    Present,
    /// The text is one of these.
    Words(&'static [&'static str]),
}

struct Later {
    /// Empty for the top of the file.
    section: &'static str,
    key: &'static str,
    when: When,
    what: &'static str,
    advice: &'static str,
}

const TAKE_OUT: &str = "take it out";

const LATER: [Later; 4] = [
    Later {
        section: "",
        key: "samples",
        when: When::Present,
        what: "samples of a posterior ([samples])",
        advice: "use one or two [[axis]] tables",
    },
    Later {
        section: "",
        key: "draws",
        when: When::Present,
        what: "draws from the stated uncertainties",
        advice: "use one or two [[axis]] tables",
    },
    Later {
        section: "engine",
        key: "scheme",
        when: When::Words(&["(6,2)", "(10,2)"]),
        what: "this scheme",
        advice: "use \"auto\", or a neighbour such as \"(4,2)\" or \"(8,2)\"",
    },
    Later { section: "engine", key: "seed", when: When::Present, what: "random draws", advice: TAKE_OUT },
];

/// Refuses what is known but not there yet. `section` is the table's word, empty for the top of the file.
pub(crate) fn refuse(source: &Source, section: &str, table: &RawTable) -> Result<(), InputError> {
    for later in LATER.iter().filter(|later| later.section == section) {
        let Some(entry) = table.get(later.key) else { continue };
        let is_word = |value: &RawValue, word: &str| matches!(value, RawValue::Text(text) if text == word);
        let at = match (&later.when, &entry.value) {
            (When::Present, _) => Some(entry.key_at.clone()),
            (When::Words(words), value) if words.iter().any(|word| is_word(value, word)) => {
                Some(entry.value_at.clone())
            }
            _ => None,
        };
        if let Some(at) = at {
            let complaint = Complaint::new(Fault::NotYet, later.what).advice(later.advice);
            return Err(source.at(at, complaint));
        }
    }
    Ok(())
}
