//! Frequencies and resonances of what was followed, in words and as JSON.

use std::f64::consts::TAU;

use serde_json::{Value, json};

use super::wish::count;
use crate::assess::{Analysis, AngleFound, DriftFrom, NotAnalysed};
use crate::cli::command::inspect::table::{lines, short, significant, wrapped};
use crate::observe::{AngleMotion, Kind};
use crate::report::{AngleWords, DEGREE_YEAR, time_words};
use crate::units::YEAR_DAY;

/// Longest name in the angles of the terminal.
const NAME: usize = 4;
/// Most angles that the terminal lists.
const MOST_ANGLES: usize = 12;

fn true_minus(text: String) -> String {
    text.replace('-', "−")
}

/// A logarithm with a decimal.
fn logarithm(value: f64) -> String {
    true_minus(format!("{value:.1}"))
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
        logarithm(drift.worst_log10()),
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
            time_words(TAU / f.rad_day.abs()),
            drift.map_or(String::new(), |drift| logarithm(drift.log10())),
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
    if let Some(relation) = &analysis.relation {
        words.push_str(&format!(". Locked: {} = 0", relation.words(&analysis.fundamentals)));
    }
    out.push(wrapped("  ", &words));
    out
}

fn resonances(analysis: &Analysis, names: &[String]) -> Vec<String> {
    let all = analysis.angles.len();
    let circulates = |found: &&AngleFound| matches!(found.told.motion, AngleMotion::Circulates { .. });
    let mut listed: Vec<&AngleFound> = analysis.angles.iter().filter(|found| !circulates(found)).collect();
    // Stable: angles that stay come first, in the order of their candidates.
    listed.sort_by_key(|found| !found.told.stays());
    if listed.is_empty() {
        let words = match all {
            0 => "no resonance up to order 8 is near, and one planet alone has no apsides to compare"
                .to_owned(),
            _ => format!("resonances: none of {all} angles librates, all circulate (resonances.ecsv)"),
        };
        return vec![wrapped("  ", &words)];
    }
    let brief: Vec<String> = names.iter().map(|name| short(name, NAME)).collect();
    let number =
        |value: Option<f64>, digits| value.map_or(String::new(), |v| true_minus(significant(v, digits)));
    let whole = |value: Option<f64>| value.map_or(String::new(), |v| true_minus(format!("{v:.1}")));
    let rows: Vec<Vec<String>> = listed
        .iter()
        .take(MOST_ANGLES)
        .map(|found| {
            let seen = AngleWords::of(found, names);
            vec![
                found.angle.words(&brief),
                seen.resonance,
                seen.motion.to_owned(),
                whole(seen.centre_deg),
                whole(seen.amplitude_deg),
                number(seen.period_yr, 4),
            ]
        })
        .collect();
    let head = ["angle", "of", "motion", "centre/deg", "amplitude/deg", "period/yr"];
    let mut out = lines(&head, &rows, &[1, 2]);
    let left = listed.len().saturating_sub(MOST_ANGLES);
    let more = if left > 0 { format!("{left} more, and ") } else { String::new() };
    let circulating = all - listed.len();
    out.push(wrapped(
        "  ",
        &format!("{more}{} of {all} angles circulate (resonances.ecsv)", count(circulating as f64)),
    ));
    out
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
        "relation": analysis.relation.as_ref().map(|r| format!("{} = 0", r.words(&analysis.fundamentals))),
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
