//! What stands under a figure: what was done, what was held fixed, how far the numbers can be trusted.

use super::summary::Spread;
use super::{VERSION, words};
use crate::assess::Plan;
use crate::survey::Record;
use crate::system::{Study, System};

/// Sentences for the foot of a figure, one per topic; the figure breaks them into lines.
pub fn caption(study: &Study, system: &System, plan: &Plan, records: &[Record], column: &str) -> Vec<String> {
    let errors = records.iter().filter_map(|r| r.assessment.energy_error);
    let energy = Spread::of(errors).map_or_else(
        || "energy error not measured".to_owned(),
        |s| {
            format!(
                "relative energy error: median {}, 95 % below {}, largest {}",
                words::printed(s.median),
                words::printed(s.q95),
                words::printed(s.largest)
            )
        },
    );
    let total: usize = study.axes.iter().map(|a| a.cells).product();
    let cells = if records.len() < total {
        format!("Incomplete: {} of {total} cells done (each shown over the cells around it)", records.len())
    } else {
        format!("{total} cells")
    };
    let filled = records.iter().filter(|r| r.filled.is_some()).count();
    let span = words::span_words(study, plan, words::printed);
    let followed = if filled == 0 {
        format!("{cells}, each followed for {span}.")
    } else {
        format!(
            "{cells}: {} followed for {span}; {filled} far from any other verdict take that on which all cells around \
             them agree, and the colour of the nearest of these.",
            records.len() - filled
        )
    };
    let early = words::early_end_words(plan).map_or_else(String::new, |w| format!(" Chaotic cells: {w}."));
    let names: Vec<String> = system.orbiting().map(|body| body.name.clone()).collect();
    let angle = plan.angle.as_ref().filter(|_| column.starts_with("angle."));
    let angle = angle.map(|angle| format!(" The angle is {}.", angle.words(&names)));
    vec![
        followed + &early + angle.as_deref().unwrap_or_default(),
        format!(
            "Scheme {} in {} coordinates, step {}; {}; {energy}.",
            words::scheme_words(plan.scheme),
            plan.coordinates.words(),
            words::step_words(plan, records),
            attempts(records)
        ),
        format!("{}.", capital(&words::held_words(study, system))),
        format!("{}. {VERSION}.", capital(&words::convention_words(system.convention, system.epoch_jd))),
    ]
}

/// How many cells needed more than the first attempt.
fn attempts(records: &[Record]) -> String {
    let cells = |count: u64| match count {
        0 => "no cell".to_owned(),
        1 => "1 cell".to_owned(),
        many => format!("{many} cells"),
    };
    match words::second_attempts(records) {
        (0, 0) => "no cell redone".to_owned(),
        (smaller, adaptive) => {
            format!(
                "{} redone with smaller steps, {} by the adaptive engine",
                cells(smaller),
                cells(adaptive)
            )
        }
    }
}

fn capital(text: &str) -> String {
    let mut letters = text.chars();
    letters.next().map_or_else(String::new, |first| first.to_uppercase().chain(letters).collect())
}
