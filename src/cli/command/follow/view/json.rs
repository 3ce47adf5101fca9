//! The verdict as JSON, and why scheme, step and coordinates are what they are.

use serde_json::{Map, Value, json};

use super::{View, made_smaller, motion};
use crate::assess::{ADAPTIVE, Extent, Range};
use crate::cli::CliError;
use crate::report::VERSION;
use crate::survey::{PlanWords, sha256};
use crate::units::{DEGREE, YEAR_DAY};
use crate::verdict::{CHAOTIC_FROM, LEAST_OUTER_ORBITS, REGULAR_UP_TO, Verdict};

/// How the names of reasons end, here and in the plan of a run.
const REASON: &str = "_why";

impl View<'_> {
    /// The coordinates of the splitting; none where the adaptive engine did it, which has its own.
    pub fn coordinates(&self) -> Option<String> {
        let plan = &self.wish.plan;
        (self.assessment.scheme != ADAPTIVE).then(|| plan.coordinates.word().to_owned())
    }

    /// Why scheme, step and coordinates are what they are: names and words are those of the plan in a survey's `run.json`.
    pub fn reasons(&self) -> Vec<(String, String)> {
        let (plan, a) = (&self.wish.plan, self.assessment);
        let reason = |name: &str, words: &str| (name.to_owned() + REASON, words.to_owned());
        if a.scheme == ADAPTIVE {
            let why = if plan.adaptive { "as asked".to_owned() } else { self.missed() };
            return vec![reason("scheme", &why), reason("step", "chosen anew by the engine all along")];
        }
        let words = serde_json::to_value(PlanWords::of(plan, &self.wish.names())).unwrap_or_default();
        let entries = words.as_object().into_iter().flatten();
        let told = entries.filter_map(|(name, words)| Some((name.strip_suffix(REASON)?, words.as_str()?)));
        told.map(|(name, words)| match (name, a.redone) {
            ("step", 1..) => reason(name, &format!("{words}; {}", made_smaller(a.redone))),
            _ => reason(name, words),
        })
        .collect()
    }

    /// The options that decide the numbers, as they were typed or are by default.
    fn asked(&self) -> Map<String, Value> {
        let typed =
            |words: &str| if words.is_empty() { Value::Null } else { Value::String(words.to_owned()) };
        let named = self
            .wish
            .options
            .iter()
            .map(|option| (option.flag.trim_start_matches('-').replace('-', "_"), typed(&option.typed)));
        named.collect()
    }

    fn extents_json(&self) -> Map<String, Value> {
        let pair = |range: &Range, scale: f64| json!([range.min / scale, range.max / scale]);
        let ranges = |extent: &Extent| {
            json!({
                "a_au": pair(&extent.semi_major_axis_au, 1.0),
                "e": pair(&extent.eccentricity, 1.0),
                "i_deg": pair(&extent.inclination, DEGREE),
            })
        };
        let named = self.names.iter().zip(&self.assessment.extent);
        named.map(|(name, extent)| ((*name).to_owned(), ranges(extent))).collect()
    }

    /// The same for scripts; what is absent is null. Ends in a newline.
    pub fn json(&self) -> Result<String, CliError> {
        let a = self.assessment;
        let name = |planet: usize| self.names[planet];
        let (frequencies, resonances) = motion::json(self.analysed, &self.wish.names());
        let mut value = json!({
            "title": self.wish.title(),
            "version": VERSION,
            "verdict": a.verdict.word(),
            "why": self.why.to_string(),
            "thresholds": {
                "regular_up_to": REGULAR_UP_TO,
                "chaotic_from": CHAOTIC_FROM,
                "least_outer_orbits": LEAST_OUTER_ORBITS,
            },
            "loss": a.loss.map(|loss| json!({
                "time_yr": loss.time_day / YEAR_DAY,
                "planet": name(loss.planet),
                "other": loss.other.map(name),
                "how": loss.how.word(),
            })),
            "span_yr": self.wish.plan.span_day / YEAR_DAY,
            "end_time_yr": a.end_time_day / YEAR_DAY,
            "inner": { "planet": name(self.inner.planet), "orbits": self.inner.orbits },
            "outer": { "planet": name(self.outer.planet), "orbits": self.outer.orbits },
            "survived": (a.verdict != Verdict::Untrusted).then_some(a.loss.is_none()),
            "chaotic": self.is_chaotic(),
            "megno_mean": a.megno,
            "lyapunov_time_yr": self.lyapunov_yr().map(|(time, error)| json!({ "value": time, "error": error })),
            "energy_error": a.energy_error,
            "energy_error_asked": self.wish.plan.energy_error,
            "angular_momentum_error": a.angular_momentum_error,
            "scheme": a.scheme,
            "coordinates": self.coordinates(),
            "compensated": self.wish.plan.compensated,
            "step_d": a.step_day,
            "steps_per_passage": self.passage.day / a.step_day,
            "steps": self.steps() as u64,
            "redone": a.redone,
            "passages": a.passages.map(|blocks| json!({
                "blocks": blocks,
                "largest_energy_error": a.passage_energy_error,
            })),
            "smallest_approach": a.smallest_approach.map(|found| json!({
                "pair": [name(found.pair.0), name(found.pair.1)],
                "hill": found.hill,
                "au": found.au,
            })),
            "extent": self.extents_json(),
            "frequencies": frequencies,
            "resonances": resonances,
            "asked": self.asked(),
            "system_sha256": sha256(&self.wish.file.text),
        });
        if let Value::Object(entries) = &mut value {
            entries.extend(self.reasons().into_iter().map(|(name, words)| (name, Value::String(words))));
        }
        let mut text = serde_json::to_string_pretty(&value).map_err(CliError::working)?;
        text.push('\n');
        Ok(text)
    }
}
