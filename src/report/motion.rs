//! Tables of what the motion of one configuration shows: fundamental frequencies, lines, resonant angles.

use std::f64::consts::TAU;

use super::VERSION;
use super::table::{Column, Datatype, Entry, Meta, Table};
use crate::assess::{Analysis, AngleAnalysed, DriftFrom};
use crate::num::wrap_half_turn;
use crate::observe::{AngleMotion, Candidate, Fundamental, Kind, NamedLine, ToldFrom, WhyNot};
use crate::units::{DEGREE, YEAR_DAY};

/// rad/day → deg/yr.
pub const DEGREE_YEAR: f64 = DEGREE / YEAR_DAY;

/// The configuration that was analysed.
#[derive(Clone, Copy, Debug)]
pub struct MotionInput<'a> {
    pub title: &'a str,
    /// Of the bodies, in the order of the configuration.
    pub names: &'a [String],
    pub analysis: &'a Analysis,
}

fn meta(input: &MotionInput<'_>) -> Vec<(String, Meta)> {
    let sampling = &input.analysis.sampling;
    let mut meta = vec![
        ("title".to_owned(), Meta::Text(input.title.to_owned())),
        ("version".to_owned(), Meta::Text(VERSION.to_owned())),
        ("samples".to_owned(), Meta::Count(sampling.count as u64)),
        ("time_between_samples_yr".to_owned(), Meta::Float(sampling.step_day / YEAR_DAY)),
        ("resolution_deg_per_yr".to_owned(), Meta::Float(TAU / sampling.span_day / DEGREE_YEAR)),
        ("dense_windows".to_owned(), Meta::Count(sampling.windows as u64)),
    ];
    if sampling.windows > 0 {
        let step = sampling.window_step_day / YEAR_DAY;
        meta.push(("samples_of_a_window".to_owned(), Meta::Count(sampling.window_count as u64)));
        meta.push(("time_between_samples_of_a_window_yr".to_owned(), Meta::Float(step)));
    }
    meta
}

fn float(name: &str, unit: &'static str, meaning: &str) -> Column {
    Column::new(name, unit, Datatype::Float, meaning)
}

fn text(name: &str, meaning: &str) -> Column {
    Column::new(name, "", Datatype::Text, meaning)
}

fn finite(value: f64) -> Entry {
    Some(value).filter(|value| value.is_finite()).into()
}

/// Whether a frequency makes fewer than two turns in the span, and so is little more than a guess: with Hann's window a
/// line is two resolution elements wide, and nearer to 0 it is not told from what stands still.
pub fn is_unturned(analysis: &Analysis, rad_day: f64) -> bool {
    rad_day.abs() * analysis.sampling.span_day < 2.0 * TAU
}

/// Largest k that [`forced`] looks at: first-order resonances up to 9:8, from either side.
const MOST_FORCED: i32 = 9;

/// The combination k n_i + (1 − k) n_j that a g or s is within a resolution element of, in words: eccentricities and
/// inclinations forced by a near resonance have such lines, and the line is then perhaps no mode of its own. None where an angle of
/// that pair librates (the resonance ties g to the mean motions) or where the frequency is known up to whole turns only.
pub fn forced(analysis: &Analysis, frequency: &Fundamental) -> Option<String> {
    known_up_to(analysis, frequency.kind).map_or(Some(()), |_| None)?;
    if !matches!(frequency.kind, Kind::Pericentre | Kind::Node) {
        return None;
    }
    let motions = analysis.fundamentals.iter().filter(|f| f.kind == Kind::Motion).enumerate();
    let motions: Vec<(usize, &Fundamental)> =
        motions.filter(|(_, motion)| motion.is_seen_by(frequency.own_of)).collect();
    let resolution = TAU / analysis.sampling.span_day;
    let locked = |i: usize, j: usize| {
        analysis.staying().any(|found| match found.candidate {
            Candidate::Pair { inner, outer, .. } => (inner, outer) == (i, j) || (inner, outer) == (j, i),
            _ => false,
        })
    };
    for k in 2..=MOST_FORCED {
        for (i, one) in &motions {
            for (j, other) in motions.iter().filter(|(j, _)| j != i) {
                let sum = f64::from(k) * one.rad_day - f64::from(k - 1) * other.rad_day;
                if (sum - frequency.rad_day).abs() < resolution && !locked(*i, *j) {
                    let less = if k == 2 { String::new() } else { (k - 1).to_string() };
                    return Some(format!("{k}{} − {less}{}", one.name, other.name));
                }
            }
        }
    }
    None
}

/// What resonances lay on the frequencies, as "n_b − 2n_c + g1 = 0"; none where nothing is locked.
pub fn relation_words(analysis: &Analysis) -> Option<String> {
    let words = analysis.relations.iter().map(|r| format!("{} = 0", r.words(&analysis.fundamentals)));
    let words: Vec<String> = words.collect();
    if words.is_empty() { None } else { Some(words.join("; ")) }
}

/// What else must be known of a frequency.
fn remark(analysis: &Analysis, frequency: &Fundamental) -> Entry {
    let mut words = Vec::new();
    if is_unturned(analysis, frequency.rad_day) {
        words.push("fewer than two turns in the span".to_owned());
    }
    if let Some(combination) = forced(analysis, frequency) {
        words.push(format!("also {combination}: perhaps forced and no mode"));
    }
    if words.is_empty() { Entry::Absent } else { Entry::Text(words.join("; ")) }
}

/// How far a fundamental frequency is known: whole turns per sample may be missing from slow ones.
fn known_up_to(analysis: &Analysis, kind: Kind) -> Option<f64> {
    let slow = matches!(kind, Kind::Pericentre | Kind::Node);
    analysis.known_up_to_rad_day.filter(|_| slow)
}

/// Fundamental frequencies with their drift, one row each.
pub fn frequencies_table(input: &MotionInput<'_>) -> Table {
    let analysis = input.analysis;
    let between = match analysis.drift_from {
        DriftFrom::Halves => "the first and the second half of the span",
        DriftFrom::Windows => "the windows at the start and the end of the span",
    };
    let columns = vec![
        text("name", "n, g, s of the body or mode, l of a libration"),
        text("kind", "what the frequency is of"),
        float("frequency", "deg/yr", "over the whole span"),
        float("period", "yr", "360 deg over the frequency"),
        float("known_up_to", "deg/yr", "multiples of this may be missing; absent if none can be"),
        float("first", "deg/yr", &format!("in the first of {between}")),
        float("second", "deg/yr", &format!("in the second of {between}")),
        float("drift", "", "log10 of |1 - second/first|"),
        text("remark", "what else must be known"),
    ];
    let motions = analysis.fundamentals.iter().enumerate().map(|(index, f)| {
        let drift = analysis.drift.of_planets.get(index).filter(|_| f.kind == Kind::Motion);
        vec![
            Entry::Text(f.name.clone()),
            Entry::Text(f.kind.to_string()),
            finite(f.rad_day / DEGREE_YEAR),
            finite(TAU / f.rad_day.abs() / YEAR_DAY),
            known_up_to(analysis, f.kind).map(|fold| fold / DEGREE_YEAR).into(),
            drift.map(|d| d.first_rad_day / DEGREE_YEAR).into(),
            drift.map(|d| d.second_rad_day / DEGREE_YEAR).into(),
            drift.map(|d| d.log10()).into(),
            remark(analysis, f),
        ]
    });
    Table { meta: meta(input), columns, rows: motions.collect() }
}

/// Every line of every signal with the combination it is named by.
pub fn lines_table(input: &MotionInput<'_>) -> Table {
    let analysis = input.analysis;
    let columns = vec![
        text("signal", "a exp(i λ), e exp(i ϖ) or sin(i/2) exp(i Ω) of a body, or an angle that librates"),
        Column::new("rank", "", Datatype::Count, "place by amplitude, from 1"),
        float("frequency", "deg/yr", "known up to whole turns per sample where no combination is found"),
        float("period", "yr", "360 deg over the frequency"),
        float("amplitude", "", "in the unit of the signal"),
        text("unit", "of the amplitude; empty for plain numbers"),
        float("phase", "deg", "at the epoch, of A exp(i phase); of a cosine for angles"),
        text("combination", "in names of frequencies.ecsv; absent where no simple one fits"),
        float("misfit", "deg/yr", "frequency less the combination"),
        Column::new("rivals", "", Datatype::Count, "other combinations as simple that fit as well"),
        float("frequency_error", "deg/yr", "standard error if the rest were white noise and no line near"),
    ];
    let mut rows = Vec::new();
    let mut push = |signal: String, unit: &str, scale: f64, lines: &[NamedLine]| {
        for (index, named) in lines.iter().enumerate() {
            rows.push(line_row(&signal, index, (unit, scale), named, &analysis.fundamentals));
        }
    };
    for (name, lines) in input.names.iter().zip(&analysis.lines.motions) {
        push(format!("{name}: a exp(i λ)"), "au", 1.0, lines);
    }
    for (name, lines) in input.names.iter().zip(&analysis.lines.pericentres) {
        push(format!("{name}: e exp(i ϖ)"), "", 1.0, lines);
    }
    for (name, lines) in input.names.iter().zip(&analysis.lines.nodes) {
        push(format!("{name}: sin(i/2) exp(i Ω)"), "", 1.0, lines);
    }
    for found in &analysis.angles {
        push(found.angle.words(input.names), "deg", DEGREE, &found.lines);
    }
    let mut meta = meta(input);
    meta.extend(relation_words(analysis).map(|words| ("relation".to_owned(), Meta::Text(words))));
    meta.push(("plane".to_owned(), Meta::Text("the invariable plane".to_owned())));
    Table { meta, columns, rows }
}

fn line_row(
    signal: &str,
    index: usize,
    (unit, scale): (&str, f64),
    named: &NamedLine,
    fundamentals: &[Fundamental],
) -> Vec<Entry> {
    let line = &named.line;
    let name = named.name.as_ref();
    vec![
        Entry::Text(signal.to_owned()),
        Entry::Count(index as u64 + 1),
        finite(line.frequency / DEGREE_YEAR),
        finite(TAU / line.frequency.abs() / YEAR_DAY),
        finite(line.amplitude.norm() / scale),
        if unit.is_empty() { Entry::Absent } else { Entry::Text(unit.to_owned()) },
        finite(line.amplitude.arg() / DEGREE),
        name.map(|name| name.words(fundamentals)).map_or(Entry::Absent, Entry::Text),
        name.map(|name| name.misfit_rad_day / DEGREE_YEAR).into(),
        name.map(|name| name.rivals as u64).into(),
        finite(line.frequency_error / DEGREE_YEAR),
    ]
}

/// Every resonant angle that was looked at and how it moves, one row each.
pub fn resonances_table(input: &MotionInput<'_>) -> Table {
    let columns = vec![
        text("bodies", "from the inside out"),
        text("resonance", "p:q of a pair, coefficients of a chain, or apsides"),
        text("angle", "λ mean longitude, ϖ longitude of pericentre"),
        text("motion", "librates, confined, circulates, alternates or unknown"),
        float("centre", "deg", "of the libration, or middle of the arc, -180 to 180"),
        float("amplitude", "deg", "largest departure from the centre"),
        float(
            "period",
            "yr",
            "of the strongest term of a libration, or of a turn; negative for retrograde turns",
        ),
        float("main_amplitude", "deg", "of the strongest term"),
        text(
            "told_from",
            "whole: samples of the whole span; windows: dense windows and the arc of all samples",
        ),
        text("remark", "why the motion is not known"),
    ];
    let rows = input.analysis.angles.iter().map(|found| resonance_row(found, input.names));
    Table { meta: meta(input), columns, rows: rows.collect() }
}

fn resonance_row(found: &AngleAnalysed, names: &[String]) -> Vec<Entry> {
    let seen = AngleWords::of(found, names);
    vec![
        Entry::Text(seen.bodies),
        Entry::Text(seen.resonance),
        Entry::Text(found.angle.words(names)),
        Entry::Text(seen.motion.to_owned()),
        seen.centre_deg.into(),
        seen.amplitude_deg.into(),
        seen.period_yr.into(),
        found.told.libration().map(|l| l.main_amplitude / DEGREE).into(),
        match found.told.from {
            ToldFrom::Whole => "whole".into(),
            ToldFrom::Windows => "windows".into(),
        },
        seen.remark.map_or(Entry::Absent, Entry::Text),
    ]
}

/// An angle and its motion in words and in the units of tables.
#[derive(Clone, Debug, PartialEq)]
pub struct AngleWords {
    pub bodies: String,
    pub resonance: String,
    pub motion: &'static str,
    pub centre_deg: Option<f64>,
    pub amplitude_deg: Option<f64>,
    pub period_yr: Option<f64>,
    pub remark: Option<String>,
}

impl AngleWords {
    pub fn of(found: &AngleAnalysed, names: &[String]) -> AngleWords {
        let name = |planet: usize| names.get(planet).map_or("?", String::as_str);
        let (bodies, resonance) = match &found.candidate {
            Candidate::Pair { inner, outer, p, q } => {
                (format!("{} {}", name(*inner), name(*outer)), format!("{p}:{q}"))
            }
            Candidate::Chain { planets, coefficients } => {
                let bodies: Vec<&str> = planets.iter().map(|planet| name(*planet)).collect();
                let signed: Vec<String> =
                    coefficients.iter().map(|k| k.to_string().replace('-', "−")).collect();
                (bodies.join(" "), signed.join(","))
            }
            Candidate::Apsides { one, other } => {
                (format!("{} {}", name(*one), name(*other)), "apsides".to_owned())
            }
        };
        let mut words = AngleWords {
            bodies,
            resonance,
            motion: "unknown",
            centre_deg: None,
            amplitude_deg: None,
            period_yr: None,
            remark: None,
        };
        words.motion(found);
        words
    }

    fn motion(&mut self, found: &AngleAnalysed) {
        let signed = |angle: f64| wrap_half_turn(angle) / DEGREE;
        match found.told.motion {
            AngleMotion::Librates(libration) => {
                self.motion = "librates";
                self.centre_deg = Some(signed(libration.centre));
                self.amplitude_deg = Some(libration.amplitude / DEGREE);
                self.period_yr = Some(libration.main_period_day / YEAR_DAY);
            }
            AngleMotion::Circulates { rate_rad_day } => {
                self.motion = "circulates";
                self.period_yr = Some(TAU / rate_rad_day / YEAR_DAY);
            }
            AngleMotion::Alternates { .. } => self.motion = "alternates",
            AngleMotion::CannotTell(why) => {
                self.remark = Some(
                    match why {
                        WhyNot::ShortSpan { .. } => "the span holds fewer than two periods",
                        WhyNot::Drifting { .. } => "its mean drifts: it may be about to turn",
                        WhyNot::SparseSamples => "samples are too far apart",
                    }
                    .to_owned(),
                );
                if let Some(arc) = found.told.arc.filter(|_| found.told.stays()) {
                    self.motion = "confined";
                    self.centre_deg = Some(signed(arc.middle));
                    self.amplitude_deg = Some(arc.half_width / DEGREE);
                    self.remark =
                        Some("never leaves the arc at any sample; its period is not resolved".to_owned());
                }
            }
        }
    }
}
