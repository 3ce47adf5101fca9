//! What differs between two TOML texts, key by key.

use std::collections::BTreeMap;

use toml::Value;

/// One line per key that was added, removed or changed, each beginning with `file`.
///
/// Tables in a list are told apart by their `name` (planets) or their `vary` (axes), so that a new one in front
/// does not make all that follow look changed.
pub fn changes(file: &str, before: &str, now: &str) -> Vec<String> {
    let (Some(before), Some(now)) = (flat(before), flat(now)) else {
        return if before == now { Vec::new() } else { vec![format!("{file}: the text differs")] };
    };
    let keys: std::collections::BTreeSet<&String> = before.keys().chain(now.keys()).collect();
    let line = |key: &String| match (before.get(key), now.get(key)) {
        (Some(was), Some(is)) if was == is => None,
        (Some(was), Some(is)) => Some(format!("{file}: {key} was {was}, is now {is}")),
        (Some(was), None) => Some(format!("{file}: {key} was {was}, is now absent")),
        (None, Some(is)) => Some(format!("{file}: {key} was absent, is now {is}")),
        (None, None) => None,
    };
    keys.into_iter().filter_map(line).collect()
}

/// The first five lines, and how many more there are.
pub fn first_few(mut lines: Vec<String>) -> Vec<String> {
    const SHOWN: usize = 5;
    let more = lines.len().saturating_sub(SHOWN);
    lines.truncate(SHOWN);
    if more > 0 {
        lines.push(format!("and {more} more"));
    }
    lines
}

fn flat(text: &str) -> Option<BTreeMap<String, String>> {
    let table: toml::Table = text.parse().ok()?;
    let mut entries = BTreeMap::new();
    for (key, value) in &table {
        spread(key, value, &mut entries);
    }
    Some(entries)
}

fn spread(path: &str, value: &Value, entries: &mut BTreeMap<String, String>) {
    match value {
        Value::Table(table) => {
            for (key, value) in table {
                spread(&format!("{path}.{key}"), value, entries);
            }
        }
        Value::Array(items) if items.iter().any(Value::is_table) => {
            for (index, item) in items.iter().enumerate() {
                spread(&format!("{path}[{}]", label(index, item)), item, entries);
            }
        }
        other => {
            entries.insert(path.to_string(), other.to_string());
        }
    }
}

fn label(index: usize, item: &Value) -> String {
    let named = item.get("name").or_else(|| item.get("vary")).and_then(Value::as_str);
    named.map_or_else(|| (index + 1).to_string(), str::to_string)
}

#[cfg(test)]
mod tests {
    use super::{changes, first_few};

    const BEFORE: &str =
        "span = \"1e4 orbits\"\n[[axis]]\nvary = \"c.period\"\ncells = 100\nfrom = \"16 d\"\n";

    #[test]
    fn comments_and_layout_are_no_change() {
        assert!(changes("study", BEFORE, &format!("# a note\n{}", BEFORE.replace(" = ", "="))).is_empty());
    }

    #[test]
    fn names_each_key_with_both_values() {
        let now = BEFORE.replace("100", "200").replace("from = \"16 d\"", "spacing = \"log\"");
        assert_eq!(
            changes("study", BEFORE, &now),
            [
                "study: axis[c.period].cells was 100, is now 200",
                "study: axis[c.period].from was \"16 d\", is now absent",
                "study: axis[c.period].spacing was absent, is now \"log\"",
            ]
        );
    }

    #[test]
    fn an_axis_in_front_leaves_the_others_unchanged() {
        let now = BEFORE.replace("[[axis]]", "[[axis]]\nvary = \"b.mass\"\n[[axis]]");
        assert_eq!(
            changes("study", BEFORE, &now),
            ["study: axis[b.mass].vary was absent, is now \"b.mass\""]
        );
    }

    #[test]
    fn a_long_list_is_cut_and_counted() {
        let lines = |count: usize| (1..=count).map(|k| k.to_string()).collect::<Vec<_>>();
        assert_eq!(first_few(lines(5)), lines(5));
        assert_eq!(first_few(lines(32)), ["1", "2", "3", "4", "5", "and 27 more"]);
    }

    #[test]
    fn unreadable_text_is_still_told() {
        assert_eq!(changes("study", "a = ", BEFORE), ["study: the text differs"]);
    }
}
