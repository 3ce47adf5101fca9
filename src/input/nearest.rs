//! The word that was probably meant.

/// Fewest insertions, deletions, replacements and swaps of neighbours that turn one word into the other, case ignored
/// (optimal string alignment; Damerau 1964).
fn distance(first: &str, second: &str) -> usize {
    let first: Vec<char> = first.to_lowercase().chars().collect();
    let second: Vec<char> = second.to_lowercase().chars().collect();
    let mut rows: Vec<Vec<usize>> = vec![(0..=second.len()).collect()];
    for i in 1..=first.len() {
        let mut row = vec![i];
        for j in 1..=second.len() {
            let change = usize::from(first[i - 1] != second[j - 1]);
            let mut best = (rows[i - 1][j] + 1).min(row[j - 1] + 1).min(rows[i - 1][j - 1] + change);
            let swapped = i > 1 && j > 1 && first[i - 1] == second[j - 2] && first[i - 2] == second[j - 1];
            if swapped {
                best = best.min(rows[i - 2][j - 2] + 1);
            }
            row.push(best);
        }
        rows.push(row);
    }
    rows[first.len()][second.len()]
}

/// What a paper may call a key that has another word here.
const OTHER_NAMES: [(&str, &str); 22] = [
    ("e", "eccentricity"),
    ("ecc", "eccentricity"),
    ("a", "semi_major_axis"),
    ("p", "period"),
    ("k", "rv_semi_amplitude"),
    ("m", "mass"),
    ("msini", "minimum_mass"),
    ("i", "inclination"),
    ("inc", "inclination"),
    ("w", "argument_of_pericentre"),
    ("omega", "argument_of_pericentre"),
    ("argument_of_periastron", "argument_of_pericentre"),
    ("argument_of_pericenter", "argument_of_pericentre"),
    ("longitude_of_periastron", "longitude_of_pericentre"),
    ("node", "ascending_node"),
    ("t0", "transit_time"),
    ("tc", "transit_time"),
    ("tp", "pericentre_time"),
    ("day", "d"),
    ("days", "d"),
    ("year", "yr"),
    ("years", "yr"),
];

/// The allowed word nearest to `found`, if one is near enough to be meant.
pub(crate) fn nearest<'w>(found: &str, allowed: impl IntoIterator<Item = &'w str>) -> Option<&'w str> {
    if found.chars().count() > 60 {
        return None;
    }
    let renamed =
        OTHER_NAMES.iter().find(|(other, _)| found.eq_ignore_ascii_case(other)).map(|(_, ours)| *ours);
    let (near, word) = allowed
        .into_iter()
        .map(|word| (if Some(word) == renamed { 0 } else { distance(found, word) }, word))
        .min_by_key(|(far, _)| *far)?;
    (near <= 1 + found.chars().count() / 4).then_some(word)
}

/// "did you mean …?", or the fallback where nothing is near.
pub(crate) fn did_you_mean<'w>(
    found: &str,
    allowed: impl IntoIterator<Item = &'w str>,
    otherwise: &str,
) -> String {
    match nearest(found, allowed) {
        Some(word) => format!("did you mean \"{word}\"?"),
        None => otherwise.to_string(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn counts_edits() {
        assert_eq!(distance("period", "period"), 0);
        assert_eq!(distance("preiod", "period"), 1);
        assert_eq!(distance("kitten", "sitting"), 3); // the textbook case
        assert_eq!(distance("", "abc"), 3);
    }

    #[test]
    fn suggests_only_what_is_near() {
        let words = ["period", "eccentricity", "mass"];
        assert_eq!(nearest("excentricity", words), Some("eccentricity"));
        assert_eq!(nearest("ECC", words), Some("eccentricity"));
        assert_eq!(nearest("colour", words), None);
    }
}
