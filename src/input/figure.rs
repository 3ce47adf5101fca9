//! `[figure]` of a study: what is drawn over its map.

use super::error::{Fault, InputError};
use super::raw::{Entry, RawTable, RawValue};
use super::source::{Complaint, Source};
use crate::system::Criterion;

/// Reads the criteria whose borders the map shows; none where nothing is said.
pub(crate) fn criteria(source: &Source, top: &RawTable) -> Result<Vec<Criterion>, InputError> {
    let about = "figure";
    let Some(entry) = top.get(about) else { return Ok(Vec::new()) };
    let table = entry.table(source)?;
    table.check_keys(source, about, &["criteria"])?;
    let Some(entry) = table.get("criteria") else { return Ok(Vec::new()) };
    let words: Vec<(&str, Criterion)> =
        Criterion::ALL.into_iter().map(|criterion| (criterion.word(), criterion)).collect();
    let mut found = Vec::new();
    for (text, at) in entry.words(source)? {
        let one = Entry { value: RawValue::Text(text.to_string()), value_at: at, ..entry.clone() };
        let criterion = one.choice(source, about, &words)?;
        if found.contains(&criterion) {
            let complaint = Complaint::new(Fault::Twice, format!("\"{text}\" twice"));
            let complaint = complaint.allowed("each criterion once");
            return Err(one.refuse(source, about, complaint.advice("take one of them out")));
        }
        found.push(criterion);
    }
    if found.len() > Criterion::MOST_ON_A_MAP {
        let complaint = Complaint::new(Fault::Count, format!("{} criteria", found.len()));
        let complaint =
            complaint.allowed(format!("up to {}, which can be told apart", Criterion::MOST_ON_A_MAP));
        let advice =
            "leave some out here and draw them on a map of their own: abide draw RUN --criterion NAME";
        return Err(entry.refuse(source, about, complaint.advice(advice)));
    }
    Ok(found)
}
