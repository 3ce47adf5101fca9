//! Frequencies and resonances of what was followed, in words and as JSON.

use std::f64::consts::TAU;

use serde_json::{Value, json};

use crate::assess::{Analysis, AngleAnalysed, DriftFrom, NotAnalysed};
use crate::cli::command::inspect::table::{PAGE_WIDTH, lines, short, significant, wrapped};
use crate::observe::{AngleMotion, Kind};
use crate::report::{AngleWords, DEGREE_YEAR, forced, is_unturned, relation_words, time_words};
use crate::units::YEAR_DAY;

/// Longest names in the angles of the terminal: the first with which the lines fit.
const NAMES: [usize; 5] = [16, 10, 7, 5, 4];
/// Most angles that the terminal lists.
const MOST_ANGLES: usize = 12;

fn true_minus(text: String) -> String {
    text.replace('-', "−")
}

/// With one decimal; no minus before zero.
fn decimal(value: f64) -> String {
    let text = format!("{value:.1}");
    if text == "-0.0" { "0.0".to_owned() } else { true_minus(text) }
}

/// How far the mean motions drift, in one sentence.
pub fn drift(analysis: &Analysis, names: &[String]) -> String {
    let drift = &analysis.drift;
    let between = match analysis.drift_from {
        DriftFrom::Halves => "the two halves of the span",
        DriftFrom::Windows => "dense windows at the start and the end of the span",
    };
    format!(
        "log10 |1 − n₂/n₁| = {} at worst ({}), between {between}; n the mean motion (Laskar 1990, 1993)",
        decimal(drift.worst_log10()),
        names[drift.worst],
    )
}

/// The tables of frequencies and of angles that do not simply circulate.
pub fn text(analysed: &Result<Analysis, NotAnalysed>, names: &[String]) -> Vec<String> {
    let analysis = match analysed {
        Ok(analysis) => analysis,
        Err(why) => {
            return vec![wrapped("  ", &format!("frequencies and resonances were not looked at: {why}"))];
        }
    };
    let mut out = frequencies(analysis);
    out.push(String::new());
    out.extend(resonances(analysis, names));
    out
}

fn frequencies(analysis: &Analysis) -> Vec<String> {
    let rows = analysis.fundamentals.iter().enumerate().map(|(index, f)| {
        let drift = analysis.drift.of_planets.get(index).filter(|_| f.kind == Kind::Motion);
        vec![
            f.name.clone(),
            true_minus(significant(f.rad_day / DEGREE_YEAR, 8)),
            time_words(TAU / f.rad_day.abs()) + if is_unturned(analysis, f.rad_day) { " *" } else { "" },
            drift.map_or(String::new(), |drift| decimal(drift.log10())),
        ]
    });
    let mut out = lines(&["frequency", "deg/yr", "period", "drift"], &rows.collect::<Vec<_>>(), &[]);
    let sampling = &analysis.sampling;
    let mut words = format!(
        "from {} samples over {}, one each {}",
        sampling.count,
        time_words(sampling.span_day),
        time_words(sampling.step_day)
    );
    if sampling.windows > 0 {
        words.push_str(&format!(
            ", and {} dense window{} of {} samples, one each {}",
            sampling.windows,
            if sampling.windows == 1 { "" } else { "s" },
            sampling.window_count,
            time_words(sampling.window_step_day)
        ));
    }
    if let Some(fold) = analysis.known_up_to_rad_day {
        words.push_str(&format!(
            ". Samples are so far apart that multiples of {} deg/yr may be missing from g and s",
            significant(fold / DEGREE_YEAR, 4)
        ));
    }
    if analysis.fundamentals.iter().any(|f| is_unturned(analysis, f.rad_day)) {
        words.push_str(". * fewer than two turns in the span: little more than a guess");
    }
    for frequency in &analysis.fundamentals {
        if let Some(combination) = forced(analysis, frequency) {
            words.push_str(&format!(
                ". {} is also {combination}: perhaps forced by the near resonance and no mode",
                frequency.name
            ));
        }
    }
    if let Some(relation) = relation_words(analysis) {
        words.push_str(&format!(". Locked: {relation}"));
    }
    out.push(wrapped("  ", &words));
    out
}

fn resonances(analysis: &Analysis, names: &[String]) -> Vec<String> {
    let all = analysis.angles.len();
    if all == 0 {
        return vec![wrapped("  ", "resonances: one body alone has none")];
    }
    let of = |wanted: fn(&AngleAnalysed) -> bool| -> Vec<&AngleAnalysed> {
        analysis.angles.iter().filter(|found| wanted(found)).collect()
    };
    let mut listed = of(|found| found.told.stays());
    listed.extend(of(|found| matches!(found.told.motion, AngleMotion::Alternates { .. })));
    let circulating = of(|found| matches!(found.told.motion, AngleMotion::Circulates { .. })).len();
    let untold = all - listed.len() - circulating;
    let count = |number: usize, one: &str, many: &str| match number {
        0 => format!("none {one}"),
        1 => format!("1 {one}"),
        _ => format!("{number} {many}"),
    };
    let angles = if all == 1 { "angle" } else { "angles" };
    let mut words = format!("of {all} resonant {angles} {}", count(circulating, "circulates", "circulate"));
    if listed.is_empty() {
        words.push_str(", none librates");
    }
    if untold > 0 {
        let untold = count(untold, "is not told", "are not told");
        words.push_str(&format!(", {untold}: the span is too short or the samples too sparse"));
    }
    let left = listed.len().saturating_sub(MOST_ANGLES);
    if left > 0 {
        words.push_str(&format!("; {left} more than shown librate or alternate"));
    }
    words.push_str(". All are in resonances.ecsv");
    let mut out = if listed.is_empty() { Vec::new() } else { angle_lines(&listed, names) };
    out.push(wrapped("  ", &words));
    out
}

fn angle_lines(listed: &[&AngleAnalysed], names: &[String]) -> Vec<String> {
    let number = |value: Option<f64>| value.map_or(String::new(), |v| true_minus(significant(v, 4)));
    let degree = |value: Option<f64>| value.map_or(String::new(), decimal);
    let with_names = |most: usize| {
        let brief: Vec<String> = names.iter().map(|name| short(name, most)).collect();
        let row = |found: &&AngleAnalysed| {
            let seen = AngleWords::of(found, names);
            vec![
                found.angle.words(&brief),
                seen.resonance,
                seen.motion.to_owned(),
                degree(seen.centre_deg),
                degree(seen.amplitude_deg),
                number(seen.period_yr),
            ]
        };
        let rows: Vec<Vec<String>> = listed.iter().take(MOST_ANGLES).map(row).collect();
        lines(&["angle", "of", "motion", "centre/deg", "amplitude/deg", "period/yr"], &rows, &[1, 2])
    };
    let fits = |lines: &Vec<String>| lines.iter().all(|line| line.chars().count() <= PAGE_WIDTH);
    NAMES.into_iter().map(with_names).find(fits).unwrap_or_else(|| with_names(1))
}

/// The same for scripts: frequencies and resonances; null where they were not looked at.
pub fn json(analysed: &Result<Analysis, NotAnalysed>, names: &[String]) -> (Value, Value) {
    let Ok(analysis) = analysed else { return (Value::Null, Value::Null) };
    let sampling = &analysis.sampling;
    let fundamentals = analysis.fundamentals.iter().map(|f| {
        json!({
            "name": f.name,
            "kind": f.kind.to_string(),
            "deg_per_yr": f.rad_day / DEGREE_YEAR,
            "period_yr": TAU / f.rad_day.abs() / YEAR_DAY,
        })
    });
    let drift = names.iter().zip(&analysis.drift.of_planets);
    let frequencies = json!({
        "fundamental": fundamentals.collect::<Vec<_>>(),
        "slow_known_up_to_deg_per_yr": analysis.known_up_to_rad_day.map(|fold| fold / DEGREE_YEAR),
        "relation": relation_words(analysis),
        "drift_log10": drift.map(|(name, drift)| (name.clone(), json!(drift.log10()))).collect::<serde_json::Map<_, _>>(),
        "drift_log10_worst": analysis.drift.worst_log10(),
        "drift_worst_planet": names[analysis.drift.worst],
        "drift_between": match analysis.drift_from {
            DriftFrom::Halves => "halves",
            DriftFrom::Windows => "windows",
        },
        "samples": sampling.count,
        "time_between_samples_yr": sampling.step_day / YEAR_DAY,
        "resolution_deg_per_yr": TAU / sampling.span_day / DEGREE_YEAR,
        "dense_windows": sampling.windows,
        "samples_of_a_window": sampling.window_count,
        "time_between_samples_of_a_window_yr": sampling.window_step_day / YEAR_DAY,
    });
    let resonances = analysis.angles.iter().map(|found| {
        let seen = AngleWords::of(found, names);
        json!({
            "bodies": seen.bodies,
            "resonance": seen.resonance,
            "angle": found.angle.words(names),
            "motion": seen.motion,
            "centre_deg": seen.centre_deg,
            "amplitude_deg": seen.amplitude_deg,
            "period_yr": seen.period_yr,
        })
    });
    (frequencies, Value::Array(resonances.collect()))
}
