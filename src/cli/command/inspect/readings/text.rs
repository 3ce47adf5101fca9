//! The readings as a page of at most 100 columns.

use super::view::{ReadingView, ReadingWords, StateView, View};
use crate::cli::command::inspect::table::{PAGE_WIDTH, lines, significant, wrapped};
use crate::report::time_words;
use crate::units::YEAR_DAY;

/// The whole page, ending in a newline.
pub fn page(view: &View) -> String {
    let mut out: Vec<String> = vec![view.title.chars().take(PAGE_WIDTH).collect(), String::new()];
    out.push(wrapped(
        "",
        &format!(
            "Readings of the file, each followed for {} orbits of {} ({})",
            orbits(view.span_orbits),
            view.innermost,
            time_words(view.span_yr * YEAR_DAY)
        ),
    ));
    out.extend(tables(view));
    out.push("  * as the file is read".to_string());
    out.extend(keys(view));
    out.extend(refusals(view));
    out.extend(same(view));
    out.push(String::new());
    out.push(wrapped("", &conclusion(view)));
    out.push(String::new());
    out.join("\n")
}

fn orbits(number: f64) -> String {
    if number < 1e4 { significant(number, 4) } else { significant(number, 2) }
}

/// A column about a question, and what a reading questions.
type Question = (&'static str, fn(&ReadingWords) -> String);

/// The questions; one with a single answer is left out, but for the elements.
fn questions(view: &View) -> Vec<Question> {
    let all: [Question; 3] = [
        ("elements", |words| words.elements.to_string()),
        ("pericentre", pericentre),
        ("transit", |words| words.transit.to_string()),
    ];
    let differs = |answer: fn(&ReadingWords) -> String| {
        let every = view.readings.iter().map(|reading| answer(&reading.words));
        every.collect::<std::collections::BTreeSet<String>>().len() > 1
    };
    all.into_iter().filter(|(word, answer)| *word == "elements" || differs(*answer)).collect()
}

fn pericentre(words: &ReadingWords) -> String {
    if words.mean_longitude == words.pericentre {
        words.pericentre.to_string()
    } else {
        format!("{}, λ {}'s", words.pericentre, words.mean_longitude)
    }
}

/// One table, or where angles do not fit beside the verdicts, a second one with the rest of them.
fn tables(view: &View) -> Vec<String> {
    let questions = questions(view);
    let mut head: Vec<String> = vec![String::new()];
    head.extend(questions.iter().map(|(word, _)| word.to_string()));
    head.extend(["verdict", "⟨Y⟩"].map(String::from));
    let rows: Vec<Vec<String>> = view
        .readings
        .iter()
        .map(|reading| {
            let mut row = vec![number(reading)];
            row.extend(questions.iter().map(|(_, answer)| answer(&reading.words)));
            row.extend([verdict(reading), megno(reading)]);
            row
        })
        .collect();
    let left: Vec<usize> = (1..=questions.len() + 1).collect();
    let mut out = Vec::new();
    let (mut from, count) = (0, view.telling_angles.len());
    let (mut base_head, mut base_rows, mut base_left) = (head, rows, left);
    loop {
        let fits = |to: &usize| {
            let table = with_angles(view, (&base_head, &base_rows), from..*to, &base_left);
            table.iter().all(|line| line.chars().count() <= PAGE_WIDTH)
        };
        // One angle always, so that this ends.
        let to = (from + 1..=count).rev().find(fits).unwrap_or((from + 1).min(count));
        out.extend(with_angles(view, (&base_head, &base_rows), from..to, &base_left));
        from = to;
        if from >= count {
            return out;
        }
        base_head = vec![String::new()];
        base_rows = view.readings.iter().map(|reading| vec![number(reading)]).collect();
        base_left = Vec::new();
    }
}

fn with_angles(
    view: &View,
    (head, rows): (&[String], &[Vec<String>]),
    which: std::ops::Range<usize>,
    left: &[usize],
) -> Vec<String> {
    let letters: Vec<String> = which.clone().map(letter).collect();
    let head: Vec<&str> = head.iter().chain(&letters).map(String::as_str).collect();
    let rows: Vec<Vec<String>> = rows
        .iter()
        .zip(&view.readings)
        .map(|(row, reading)| {
            let states = which.clone().map(|index| state(reading.telling.get(index)));
            row.iter().cloned().chain(states).collect()
        })
        .collect();
    lines(&head, &rows, left)
}

fn number(reading: &ReadingView) -> String {
    format!("{}{}", reading.number, if reading.own { "*" } else { "" })
}

/// A, B, … and beyond Z the number.
fn letter(index: usize) -> String {
    u8::try_from(index)
        .ok()
        .filter(|index| *index < 26)
        .map_or(format!("({})", index + 1), |index| char::from(b'A' + index).to_string())
}

fn verdict(reading: &ReadingView) -> String {
    match (reading.verdict, reading.end_time_yr) {
        (Some("lost"), Some(year)) => format!("lost, {}", time_words(year * YEAR_DAY)),
        (Some(word), _) => word.to_string(),
        (None, _) => "cannot start".to_string(),
    }
}

fn megno(reading: &ReadingView) -> String {
    reading.megno.map_or("-".to_string(), |y| significant(y, if y < 100.0 { 4 } else { 3 }))
}

/// Centre and amplitude in whole degrees.
fn state(state: Option<&StateView>) -> String {
    match state {
        Some(StateView::Librates { centre_deg, amplitude_deg, .. }) => {
            let centre = centre_deg.round().rem_euclid(360.0);
            format!("{centre:.0} ± {amplitude_deg:.0}")
        }
        Some(StateView::Circulates { .. }) => "turns".to_string(),
        Some(StateView::Alternates { .. }) => "both".to_string(),
        Some(StateView::CannotTell { .. }) => "?".to_string(),
        None => "-".to_string(),
    }
}

/// What letters and words of the table mean, and how well it was integrated.
fn keys(view: &View) -> Vec<String> {
    let errors = view.readings.iter().filter_map(|reading| reading.energy_error);
    let worst = errors.fold(0.0, f64::max);
    let engine = format!("  Scheme {}; largest relative energy error {worst:.1e}", view.scheme);
    if view.telling_angles.is_empty() {
        let words = match view.angles_looked_at {
            0 => "No resonant angle was looked at: there is none, or no reading lived through the span"
                .to_string(),
            count => format!("No angle librates in any reading, of {count} looked at"),
        };
        return vec![wrapped("  ", &words), engine];
    }
    let angles = view.telling_angles.iter().enumerate();
    let mut out: Vec<String> =
        angles.map(|(index, words)| wrapped(&format!("  {}  ", letter(index)), words)).collect();
    let words = format!(
        "Angles in deg: centre ± largest departure where one librates over the whole span; \
         \"turns\": it circulates; \"both\": now this, now that; \"?\": the span does not tell. The best one of each \
         pair, chain and pair of pericentres out of {} looked at",
        view.angles_looked_at
    );
    out.push(wrapped("  ", &words));
    if view.readings.iter().any(|reading| reading.words.mean_longitude != reading.words.pericentre) {
        let words = "λ planet's: mean longitudes are the planets', arguments of pericentre the star's";
        out.push(wrapped("  ", words));
    }
    out.push(engine);
    out
}

fn refusals(view: &View) -> Vec<String> {
    let refused =
        view.readings.iter().filter_map(|reading| Some((reading.number, reading.refused.as_ref()?)));
    refused.map(|(number, why)| wrapped("  ", &format!("{number} cannot start: {why}"))).collect()
}

/// Readings that are one motion.
fn same(view: &View) -> Vec<String> {
    let of = |reading: &ReadingView| {
        (!reading.same.is_empty()).then(|| {
            let others: Vec<String> = reading.same.iter().map(|other| apart(other, &reading.words)).collect();
            wrapped(&format!("  {:<4}", reading.number), &others.join("; "))
        })
    };
    let found: Vec<String> = view.readings.iter().filter_map(of).collect();
    if found.is_empty() {
        return found;
    }
    let head =
        "The same motion as one of these, turned or mirrored as a whole at most, would come from".to_string();
    [String::new(), head].into_iter().chain(found).collect()
}

/// Where a reading differs from another.
fn apart(words: &ReadingWords, from: &ReadingWords) -> String {
    let mut parts = Vec::new();
    if words.elements != from.elements {
        parts.push(format!("elements {}", words.elements));
    }
    if words.pericentre != from.pericentre {
        parts.push(format!("pericentre of the {}", words.pericentre));
    }
    if words.mean_longitude != from.mean_longitude && words.mean_longitude != words.pericentre {
        parts.push(format!("mean longitudes of the {}", words.mean_longitude));
    }
    if words.transit != from.transit {
        parts.push(format!("transit at {}", words.transit));
    }
    parts.join(", ")
}

/// Whether the reading decides.
fn conclusion(view: &View) -> String {
    let list = |numbers: &[usize]| numbers.iter().map(ToString::to_string).collect::<Vec<_>>().join(", ");
    let verdicts = view.verdicts();
    let first = match verdicts.as_slice() {
        [] => "No reading can start.".to_string(),
        [(word, _)] if view.readings.len() == 1 => {
            format!("There is one reading, and its verdict is {word}.")
        }
        [(word, _)] => format!("The verdict does not depend on the reading: {word}."),
        several => {
            let parts: Vec<String> =
                several.iter().map(|(word, numbers)| format!("{word} in {}", list(numbers))).collect();
            format!("The verdict depends on the reading: {}.", parts.join("; "))
        }
    };
    let locked = view.telling_angles.iter().enumerate().filter_map(|(index, _)| {
        let (mut yes, mut no) = (Vec::new(), Vec::new());
        for reading in &view.readings {
            match reading.telling.get(index) {
                Some(StateView::Librates { .. }) => yes.push(reading.number),
                Some(StateView::Circulates { .. } | StateView::Alternates { .. }) => no.push(reading.number),
                // What the span does not tell is no difference between readings.
                Some(StateView::CannotTell { .. }) | None => {}
            }
        }
        (!yes.is_empty() && !no.is_empty())
            .then(|| format!(" {} librates in {} and not in {}.", letter(index), list(&yes), list(&no)))
    });
    std::iter::once(first).chain(locked).collect()
}
