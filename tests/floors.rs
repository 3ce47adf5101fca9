//! The plan of the house: a room uses rooms on strictly lower floors only, and only certain files may do certain things.

use std::collections::BTreeSet;
use std::fs;
use std::path::{Path, PathBuf};

/// Floors from the ground up; rooms on one floor do not know each other.
const FLOORS: [&[&str]; 10] = [
    &["units", "disk", "num", "lanes"],
    &["kepler", "system"],
    &["coords", "input"],
    &["integrate"],
    &["observe", "criteria"],
    &["verdict"],
    &["assess"],
    &["survey"],
    &["figure", "report"],
    &["cli"],
];

fn floor_of(room: &str) -> Option<usize> {
    FLOORS.iter().position(|rooms| rooms.contains(&room))
}

fn sources(folder: &Path, into: &mut Vec<PathBuf>) {
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            sources(&path, into);
        } else if path.extension().is_some_and(|e| e == "rs") {
            into.push(path);
        }
    }
}

/// Code without comments and without what follows `#[cfg(test)]` at the end of a file.
fn code(path: &Path) -> String {
    let text = fs::read_to_string(path).unwrap();
    let text = text.split("#[cfg(test)]\nmod tests").next().unwrap_or_default().to_string();
    text.lines().map(|line| line.split("//").next().unwrap_or_default()).collect::<Vec<_>>().join("\n")
}

/// Every room named after `crate::`, also inside braces: `use crate::{a::X, b};`.
fn rooms_used(code: &str) -> BTreeSet<String> {
    let mut rooms = BTreeSet::new();
    for (at, _) in code.match_indices("crate::") {
        let rest = code[at + "crate::".len()..].trim_start();
        let word = |s: &str| s.chars().take_while(|c| c.is_alphanumeric() || *c == '_').collect::<String>();
        if let Some(inside) = rest.strip_prefix('{') {
            let mut depth = 0;
            let mut start = 0;
            for (k, c) in inside.char_indices() {
                match c {
                    '{' => depth += 1,
                    '}' if depth == 0 => {
                        rooms.insert(word(inside[start..k].trim()));
                        break;
                    }
                    '}' => depth -= 1,
                    ',' if depth == 0 => {
                        rooms.insert(word(inside[start..k].trim()));
                        start = k + 1;
                    }
                    _ => {}
                }
            }
        } else {
            rooms.insert(word(rest));
        }
    }
    rooms.remove("");
    rooms
}

#[test]
fn rooms_use_strictly_lower_floors() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let mut files = Vec::new();
    sources(&root, &mut files);
    let (mut uses, mut faults) = (0, Vec::new());
    for file in &files {
        let inside = file.strip_prefix(&root).unwrap();
        let room = inside.components().next().unwrap().as_os_str().to_str().unwrap().trim_end_matches(".rs");
        if room == "lib" || room == "main" {
            continue;
        }
        let floor = floor_of(room).unwrap_or_else(|| panic!("{room} stands on no floor"));
        for used in rooms_used(&code(file)) {
            if used == room {
                continue;
            }
            uses += 1;
            match floor_of(&used) {
                Some(lower) if lower < floor => {}
                Some(_) => faults.push(format!("{} uses {used}, not on a lower floor", inside.display())),
                None => faults.push(format!("{} uses crate::{used}, no room", inside.display())),
            }
        }
    }
    assert!(files.len() > 60 && uses > 60, "looked at {} files, {uses} uses", files.len());
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}

#[test]
fn the_reader_of_uses_sees_all_forms() {
    let code = "use crate::a::X;\nuse crate::{b::{Y, Z}, c};\nfn f() { crate::d::g() }";
    assert_eq!(rooms_used(code).into_iter().collect::<Vec<_>>(), ["a", "b", "c", "d"]);
}

#[test]
fn only_these_files_do_these_things() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let mut files = Vec::new();
    sources(&root, &mut files);
    let rules: [(&str, &[&str]); 4] = [
        ("unsafe", &["lanes/processor.rs"]),
        ("plotters", &["figure/render/"]),
        (".unwrap()", &[]),
        ("std::process::exit", &["main.rs", "cli/"]),
    ];
    let mut seen = [0; 4];
    for file in &files {
        let inside = file.strip_prefix(&root).unwrap().to_str().unwrap().to_string();
        let code = code(file);
        for (rule, (what, allowed)) in rules.iter().enumerate() {
            if code.contains(what) {
                seen[rule] += 1;
                assert!(allowed.iter().any(|a| inside.starts_with(a)), "{inside} must not contain `{what}`");
            }
        }
    }
    assert!(seen[0] == 1 && seen[1] >= 1, "the rules looked at nothing: {seen:?}");
}

#[test]
fn the_top_level_holds_what_is_named() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let allowed = [
        "Cargo.toml",
        "Cargo.lock",
        "README.md",
        "DEVELOPERS.md",
        "LICENSE",
        "src",
        "tests",
        "systems",
        "reports",
        "target",
    ];
    for entry in fs::read_dir(root).unwrap() {
        let name = entry.unwrap().file_name().into_string().unwrap();
        assert!(
            allowed.contains(&name.as_str()) || name.starts_with('.'),
            "{name} is not named in DEVELOPERS.md"
        );
    }
    let guide = fs::read_to_string(root.join("DEVELOPERS.md")).unwrap();
    for name in allowed.iter().filter(|n| **n != "target") {
        assert!(guide.contains(name), "DEVELOPERS.md does not name {name}");
    }
}
