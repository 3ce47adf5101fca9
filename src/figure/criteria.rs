//! Borders of analytic criteria on a map, with the very quantities that the map holds fixed.

use std::cell::RefCell;

use super::contour::{Nodes, root, zero_lines};
use super::label::Label;
use super::model::{Figure, Legend, Mark, Stroke};
use super::{FigureError, grid};
use crate::criteria::margin;
use crate::survey::configuration_at;
use crate::system::{self, Criterion, Study, System};

/// Fewest and most places along an axis where a criterion is evaluated.
const FEWEST_PLACES: usize = 100;
const MOST_PLACES: usize = 300;

/// Where a criterion changes its answer on the axes of a study.
#[derive(Clone, Debug, PartialEq)]
pub struct Border {
    pub criterion: Criterion,
    /// Chains of points in the axes' units, the quiet side to their left. With one axis places on it, at height 0.
    pub parts: Vec<Vec<(f64, f64)>>,
    /// At how many places it was asked, said something, and said "quiet".
    pub asked: usize,
    pub said: usize,
    pub quiet: usize,
    /// What it needs and did not find where it said nothing: quantity and allowed values, each once.
    pub silent: Vec<(&'static str, &'static str)>,
}

/// The border of a criterion over the axes of a study.
///
/// The configuration of each place is made as that of a cell is; there are as many places as cells, between 100 and 300
/// along an axis, and the outer edges of the map. Points of the border are refined on configurations of their own.
pub fn border(study: &Study, system: &System, criterion: Criterion) -> Border {
    let across = places(&study.axes[0], system);
    let up = study.axes.get(1).map(|axis| places(axis, system));
    let silent = RefCell::new(Vec::new());
    let ask = |values: &[f64]| {
        let configuration = configuration_at(system, study, values)?;
        Some(margin(criterion, &configuration).map_err(|error| {
            let need = (error.quantity, error.allowed);
            let mut known = silent.borrow_mut();
            if !known.contains(&need) {
                known.push(need);
            }
        }))
    };
    let (mut asked, mut said, mut quiet) = (0, 0, 0);
    let mut values = Vec::new();
    for y in up.as_deref().unwrap_or(&[0.0]) {
        for x in &across {
            let answer = ask(&[*x, *y]);
            asked += usize::from(answer.is_some());
            let value = answer.and_then(Result::ok).unwrap_or(f64::NAN);
            said += usize::from(value.is_finite());
            quiet += usize::from(value > 0.0);
            values.push(value);
        }
    }
    let at = |x: f64, y: f64| ask(&[x, y]).and_then(Result::ok).unwrap_or(f64::NAN);
    let parts = match up {
        Some(up) => zero_lines(&Nodes { across, up, values }, at),
        None => changes(&across, &values, |x| at(x, 0.0)),
    };
    Border { criterion, parts, asked, said, quiet, silent: silent.into_inner() }
}

/// The places along an axis: the outer edges of the map and between them the cells, or more of them, or fewer.
fn places(axis: &system::Axis, system: &System) -> Vec<f64> {
    let panel = grid::panel_axis(axis, system);
    let parts = axis.cells.saturating_sub(1);
    let count = match axis.cells {
        0 | 1 => 1,
        cells if cells >= MOST_PLACES => MOST_PLACES,
        cells => parts * FEWEST_PLACES.div_ceil(cells) + 1,
    };
    let finer = system::Axis { cells: count, ..axis.clone() };
    let between = (0..count).map(|index| finer.at(index));
    std::iter::once(panel.from).chain(between).chain(std::iter::once(panel.to)).collect()
}

/// Places where a function of one axis changes its sign.
fn changes(across: &[f64], values: &[f64], at: impl Fn(f64) -> f64) -> Vec<Vec<(f64, f64)>> {
    let ends = across.windows(2).zip(values.windows(2));
    let unlike = ends.filter(|(_, v)| v.iter().all(|v| v.is_finite()) && (v[0] > 0.0) != (v[1] > 0.0));
    unlike.map(|(x, v)| vec![(root([(x[0], v[0]), (x[1], v[1])], &at), 0.0)]).collect()
}

/// Draws the borders of criteria over the map of a study, with their legend and what is to be said about them.
///
/// With one axis they are upright lines. Errors: more criteria than can be told apart.
pub fn add_criteria(
    figure: &mut Figure,
    study: &Study,
    system: &System,
    criteria: &[Criterion],
) -> Result<(), FigureError> {
    if criteria.len() > Stroke::ALL.len() {
        return Err(FigureError::Criteria { found: criteria.len(), most: Stroke::ALL.len() });
    }
    let Some(panel) = figure.panels.first_mut() else { return Ok(()) };
    let Some(heights) = panel.y.as_ref().map(|y| (y.from, y.to)) else { return Ok(()) };
    let mut words = Vec::new();
    for (criterion, stroke) in criteria.iter().zip(Stroke::ALL) {
        let mut border = border(study, system, *criterion);
        words.extend(silence_words(&border));
        if border.parts.is_empty() {
            continue;
        }
        if study.axes.len() == 1 {
            upright(&mut border.parts, heights);
        }
        panel.marks.push(Mark::Border { parts: border.parts, stroke, sided: study.axes.len() == 2 });
        figure.legend.push(Legend::Border(Label::plain(name(*criterion)), stroke));
    }
    let any = panel.marks.iter().any(|mark| matches!(mark, Mark::Border { .. }));
    let ticks = if study.axes.len() == 2 { "; their ticks point to the quiet side" } else { "" };
    let what = format!(
        "Curves: borders of analytic criteria, each on the configuration that the map has at that place{ticks}."
    );
    let told = any.then_some(what).into_iter().chain(words);
    figure.caption.splice(0..0, told);
    Ok(())
}

fn name(criterion: Criterion) -> String {
    match criterion.source() {
        "" => criterion.title().to_owned(),
        source => format!("{} ({source})", criterion.title()),
    }
}

fn upright(parts: &mut [Vec<(f64, f64)>], (from, to): (f64, f64)) {
    for part in parts {
        let at = part[0].0;
        *part = vec![(at, from), (at, to)];
    }
}

/// Where a criterion has no border, and why; none where its curve lacks nothing.
fn silence_words(border: &Border) -> Option<String> {
    let name = name(border.criterion);
    let answer = if border.quiet == 0 { "on its other side" } else { "on its quiet side" };
    if border.said == border.asked {
        return border.parts.is_empty().then(|| format!("No curve ({name}): all of the map is {answer}."));
    }
    let needs: Vec<String> =
        border.silent.iter().map(|(what, allowed)| format!("{what}: {allowed}")).collect();
    let needs = needs.join("; ");
    if border.said == 0 {
        return Some(format!("No curve ({name}): all of the map is outside its domain ({needs})."));
    }
    let share = match 100.0 * (border.asked - border.said) as f64 / border.asked as f64 {
        share if share < 1.0 => "under 1".to_owned(),
        share if share > 99.0 => "over 99".to_owned(),
        share => format!("{share:.0}"),
    };
    Some(if border.parts.is_empty() {
        format!(
            "No curve ({name}): {share} % of the map is outside its domain ({needs}), and all the rest {answer}."
        )
    } else {
        format!("No curve ({name}) in {share} % of the map, outside its domain ({needs}).")
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn one_sentence_says_where_there_is_no_curve() {
        let words = |said: usize, quiet: usize, part: bool| {
            silence_words(&Border {
                criterion: Criterion::Crossing,
                parts: if part { vec![vec![(0.0, 0.0), (1.0, 1.0)]] } else { Vec::new() },
                asked: 1000,
                said,
                quiet,
                silent: vec![("e", "e < 1")],
            })
        };
        assert_eq!(words(1000, 400, true), None);
        for (said, quiet, part, end) in [
            (1000, 1000, false, ": all of the map is on its quiet side."),
            (1000, 0, false, ": all of the map is on its other side."),
            (0, 0, false, ": all of the map is outside its domain (e: e < 1)."),
            (
                3,
                3,
                false,
                ": over 99 % of the map is outside its domain (e: e < 1), and all the rest on its quiet side.",
            ),
            (
                500,
                0,
                false,
                ": 50 % of the map is outside its domain (e: e < 1), and all the rest on its other side.",
            ),
            (997, 400, true, " in under 1 % of the map, outside its domain (e: e < 1)."),
        ] {
            let found = words(said, quiet, part).unwrap();
            assert!(found.starts_with("No curve (") && found.ends_with(&format!("){end}")), "{found}");
        }
    }
}
