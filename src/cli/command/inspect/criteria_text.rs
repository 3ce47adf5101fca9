//! Criteria and secular modes as lines of the page.

use super::binary::limit_lines;
use super::criteria_view::{AmdView, ChainView, CriteriaView, ModeView, PairCriteria, SecularView};
use super::table::{lines, short, significant, wrapped};
use crate::units::DEGREE;

const NAME: usize = 12;
/// Planets named beside a mode at most.
const MOST_NAMED: usize = 3;
/// A planet is named beside a mode from this participation on.
const NAMED_FROM: f64 = 0.05;
/// Planets beside each other in the table of amplitudes, and the longest name there.
const COLUMNS: usize = 8;
const COLUMN: usize = 8;
/// Relativity is missed from this share of a frequency on.
const WORTH_NAMING: f64 = 0.01;

/// The sections, each after an empty line; none without planets in pairs or modes.
pub fn section(view: &CriteriaView) -> Vec<String> {
    let mut out = Vec::new();
    if !view.pairs.is_empty() {
        out.push(String::new());
        out.push("Criteria (each number with its limit to the right of it)".to_string());
        out.extend(pairs(&view.pairs));
        out.extend(amd(view));
    }
    if let Some(hill) = &view.exact_hill {
        let verdict = if hill.stable { "yes: they can never meet" } else { "no: a meeting is not excluded" };
        let text = format!(
            "Hill stability (Marchal & Bozis 1982, exact): {:.6}, above {:.6}? {verdict}",
            hill.found, hill.needed
        );
        out.push(wrapped("  ", &text));
    }
    if !view.chains.is_empty() {
        out.push(String::new());
        out.push("Three-body combinations of mean motions near 0".to_string());
        out.extend(view.chains.iter().map(chain));
    }
    if let Some(secular) = &view.secular {
        out.push(String::new());
        out.push(wrapped("", &secular_head(secular)));
        out.extend(modes(secular));
        out.extend(amplitudes(secular));
        out.extend(budget(secular));
    }
    out.extend(limit_lines(&view.binary));
    if !view.silent.is_empty() {
        out.push(String::new());
        out.push("Not said".to_string());
        out.extend(view.silent.iter().map(|reason| wrapped("  - ", reason)));
    }
    out
}

fn or_dash(value: Option<f64>, digits: usize) -> String {
    value.map_or("-".to_string(), |value| significant(value, digits))
}

fn pair_name(inner: &str, outer: &str) -> String {
    format!("{} {}", short(inner, NAME), short(outer, NAME))
}

fn pairs(pairs: &[PairCriteria]) -> Vec<String> {
    let rows: Vec<Vec<String>> = pairs
        .iter()
        .map(|pair| {
            vec![
                pair_name(&pair.inner, &pair.outer),
                format!("{:.4}", pair.gap),
                or_dash(pair.first_order_overlap, 3),
                format!("{:.4}", pair.relative_eccentricity),
                or_dash(pair.critical_relative_eccentricity, 3),
                pair.outer_eccentricity_at_crossing.map_or("-".to_string(), |e| format!("{e:.3}")),
                or_dash(pair.quarter_power_spacing, 3),
            ]
        })
        .collect();
    let head = ["pair", "da/a", "overlap", "Z", "overlap", "e cross", "/m^1/4"];
    let mut out = lines(&head, &rows, &[]);
    out.push(wrapped(
        "  ",
        "da/a against 1.46 m^2/7 (Deck et al. 2013); Z = |e2 - e1|/sqrt 2 as vectors (Hadden & Lithwick 2018); e of the outer \
         planet at crossing; spacing over the fourth root of the mean mass ratio",
    ));
    out
}

fn amd(view: &CriteriaView) -> Vec<String> {
    let rows: Vec<Vec<String>> = view
        .pairs
        .iter()
        .filter_map(|pair| pair.amd.as_ref().map(|amd| (pair, amd)))
        .map(|(pair, amd)| {
            vec![
                pair_name(&pair.inner, &pair.outer),
                significant(amd.relative, 3),
                significant(amd.collision, 3),
                significant(amd.hill, 3),
                or_dash(amd.overlap, 3),
                calls(amd),
            ]
        })
        .collect();
    if rows.is_empty() {
        return Vec::new();
    }
    let mut out =
        vec!["  Angular momentum deficit, relative to the outer planet, and its critical values".to_string()];
    out.extend(lines(&["pair", "AMD", "collision", "Hill", "overlap", "stable against"], &rows, &[5]));
    if let Some(innermost) = view.innermost_amd {
        let fate = if innermost < 1.0 {
            "it cannot be driven into the star"
        } else {
            "it could be driven into the star"
        };
        out.push(wrapped("  ", &format!("of the innermost planet {}: {fate}", significant(innermost, 3))));
    }
    out
}

fn calls(amd: &AmdView) -> String {
    let overlap = amd.overlap.is_some_and(|overlap| amd.relative < overlap.min(amd.collision));
    let named = [
        (amd.relative < amd.collision, "collision"),
        (amd.relative < amd.hill, "Hill"),
        (overlap, "overlap"),
    ];
    let stable: Vec<&str> = named.iter().filter(|(stable, _)| *stable).map(|(_, name)| *name).collect();
    if stable.is_empty() { "none".to_string() } else { stable.join(", ") }
}

fn chain(view: &ChainView) -> String {
    let terms: Vec<String> = view
        .coefficients
        .iter()
        .zip(&view.planets)
        .map(|(k, name)| format!("{k:+} n({})", short(name, NAME)))
        .collect();
    wrapped("  ", &format!("{}: period {} yr", terms.join(" "), significant(view.period_yr, 3)))
}

fn modes(view: &SecularView) -> Vec<String> {
    let names: Vec<String> = view.planets.iter().map(|planet| short(&planet.name, NAME)).collect();
    let row = |letter: &str, index: usize, mode: &ModeView| {
        let period = 360.0 / mode.deg_yr.abs();
        vec![
            format!("{letter}{}", index + 1),
            significant(mode.deg_yr, 5),
            // A mode at rest has no period.
            if period.is_finite() { significant(period, 4) } else { "-".to_string() },
            format!("{:.1}", 100.0 * mode.amd_share),
            taking_part(mode, &names),
        ]
    };
    let mut rows: Vec<Vec<String>> =
        view.pericentres.iter().enumerate().map(|(index, mode)| row("g", index, mode)).collect();
    rows.extend(view.nodes.iter().enumerate().map(|(index, mode)| row("s", index, mode)));
    lines(&["mode", "deg/yr", "period (yr)", "AMD %", "carried by"], &rows, &[4])
}

fn secular_head(view: &SecularView) -> String {
    let star = match (view.relativity, view.oblateness) {
        (true, true) => "with the star's relativity and J2",
        (true, false) => "with the star's relativity",
        (false, true) => "with the star's J2, without relativity",
        (false, false) => "without the star's relativity",
    };
    let plane = if view.oblateness { "the star's equator" } else { "the invariable plane" };
    format!("Secular modes (Laplace-Lagrange {star}, to {plane}; not valid in a resonance)")
}

/// What each planet has of each mode.
fn amplitudes(view: &SecularView) -> Vec<String> {
    let mut out = vec!["  Amplitudes: e in the modes g, inclination (deg) in the modes s".to_string()];
    let names: Vec<String> = view.planets.iter().map(|planet| short(&planet.name, COLUMN)).collect();
    for (part, names) in names.chunks(COLUMNS).enumerate() {
        let columns = part * COLUMNS..part * COLUMNS + names.len();
        let row = |letter: &str, index: usize, mode: &ModeView, unit: f64, decimals: usize| {
            let cells = mode.amplitude[columns.clone()].iter();
            let cells = cells.map(|amplitude| unsigned_zero(amplitude / unit, decimals));
            std::iter::once(format!("{letter}{}", index + 1)).chain(cells).collect::<Vec<_>>()
        };
        let g = view.pericentres.iter().enumerate().map(|(index, mode)| row("g", index, mode, 1.0, 5));
        let s = view.nodes.iter().enumerate().map(|(index, mode)| row("s", index, mode, DEGREE, 3));
        let head: Vec<&str> = std::iter::once("mode").chain(names.iter().map(String::as_str)).collect();
        out.extend(lines(&head, &g.chain(s).collect::<Vec<_>>(), &[]));
    }
    out
}

/// A number that rounds to zero has no sign.
fn unsigned_zero(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    if text.trim_matches(['-', '0', '.']).is_empty() { format!("{:.decimals$}", 0.0) } else { text }
}

/// Who holds the angular momentum deficit, and what relativity would change where it is left out.
fn budget(view: &SecularView) -> Vec<String> {
    let mut out = vec![format!(
        "  Angular momentum deficit, {} of the angular momentum of circular orbits",
        significant(view.amd_relative, 3)
    )];
    let rows: Vec<Vec<String>> = view
        .planets
        .iter()
        .map(|planet| {
            vec![
                short(&planet.name, NAME),
                format!("{:.4}", planet.largest_eccentricity),
                format!("{:.1}", 100.0 * planet.amd_of_eccentricity),
                format!("{:.1}", 100.0 * planet.amd_of_inclination),
            ]
        })
        .collect();
    out.extend(lines(&["planet", "largest e", "AMD % of e", "AMD % of tilt"], &rows, &[]));
    if let Some(share) = view.relativity_would_add.filter(|share| *share > WORTH_NAMING) {
        let words = format!(
            "relativity, which the file leaves out ([physics] relativity = true), would raise a frequency g by {} %",
            significant(100.0 * share, 2)
        );
        out.push(wrapped("  ", &words));
    }
    out
}

fn taking_part(mode: &ModeView, names: &[String]) -> String {
    let mut all: Vec<(f64, &String)> = mode.participation.iter().copied().zip(names).collect();
    all.sort_by(|one, other| other.0.total_cmp(&one.0));
    let named = all.iter().take(MOST_NAMED).filter(|(share, _)| *share >= NAMED_FROM);
    named.map(|(share, name)| format!("{name} {:.0} %", 100.0 * share)).collect::<Vec<_>>().join(", ")
}
