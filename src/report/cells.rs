//! The table of the cells of a run.

use super::VERSION;
use super::table::{Column, Datatype, Entry, Meta, Table};
use super::words;
use crate::assess::{AngleFound, Assessment, Extent, Plan, Range};
use crate::survey::Record;
use crate::system::{Measure, Study};
use crate::units::{DEGREE, YEAR_DAY};
use crate::verdict::chaos;

/// What one column takes from a record.
type Take<'a> = Box<dyn Fn(&Record) -> Entry + 'a>;

/// Columns with the way each is filled, in the order of writing.
struct Columns<'a>(Vec<(Column, Take<'a>)>);

impl<'a> Columns<'a> {
    fn float(
        &mut self,
        name: impl Into<String>,
        unit: &'static str,
        meaning: impl Into<String>,
        take: impl Fn(&Record) -> Option<f64> + 'a,
    ) {
        let column = Column::new(name, unit, Datatype::Float, meaning);
        self.0.push((column, Box::new(move |r| take(r).filter(|v| !v.is_nan()).into())));
    }

    fn count(&mut self, name: &str, meaning: &str, take: impl Fn(&Record) -> Option<u64> + 'a) {
        let column = Column::new(name, "", Datatype::Count, meaning);
        self.0.push((column, Box::new(move |r| take(r).map_or(Entry::Absent, Entry::Count))));
    }

    fn text(&mut self, name: &str, meaning: &str, take: impl Fn(&Record) -> Option<String> + 'a) {
        let column = Column::new(name, "", Datatype::Text, meaning);
        self.0.push((column, Box::new(move |r| take(r).map_or(Entry::Absent, Entry::Text))));
    }
}

/// The cells of a run, one row per finished cell in the order of `records`; only what was measured has a column.
///
/// `planets` are the names in the order of the configuration. Times of the physics are in yr, the step in d.
pub fn cells_table(study: &Study, planets: &[String], plan: &Plan, records: &[Record]) -> Table {
    let mut columns = Columns(Vec::new());
    columns.count("cell", "index of the cell; the first axis runs fastest", |r| Some(r.cell));
    for (index, axis) in study.axes.iter().enumerate() {
        let meaning = format!("value of the axis {}", axis.path);
        columns.float(&axis.path, axis.unit, meaning, move |r| r.values.get(index).copied());
    }
    outcome_columns(&mut columns, planets);
    indicator_columns(&mut columns, study, plan, records);
    long_columns(&mut columns, planets, plan);
    if plan.extent {
        for (index, name) in planets.iter().enumerate() {
            extent_columns(&mut columns, index, name);
        }
    }
    closeness_columns(&mut columns, planets);
    trust_columns(&mut columns, plan);
    let rows = records.iter().map(|r| columns.0.iter().map(|(_, take)| take(r)).collect()).collect();
    Table { meta: meta(study, plan), columns: columns.0.into_iter().map(|(c, _)| c).collect(), rows }
}

fn meta(study: &Study, plan: &Plan) -> Vec<(String, Meta)> {
    let title = study.title.clone().unwrap_or_default();
    let cells: usize = study.axes.iter().map(|a| a.cells).product();
    vec![
        ("title".to_owned(), Meta::Text(title)),
        ("version".to_owned(), Meta::Text(VERSION.to_owned())),
        ("span".to_owned(), Meta::Text(words::span_words(study, plan, words::short))),
        ("span_d".to_owned(), Meta::Float(plan.span_day)),
        ("scheme".to_owned(), Meta::Text(plan.scheme.to_owned())),
        ("energy_error_target".to_owned(), Meta::Float(plan.energy_error)),
        ("cells_of_the_study".to_owned(), Meta::Count(cells as u64)),
    ]
}

fn name_of(planets: &[String], index: usize) -> String {
    planets.get(index).cloned().unwrap_or_else(|| format!("planet {index}"))
}

fn outcome_columns<'a>(columns: &mut Columns<'a>, planets: &'a [String]) {
    columns.text("verdict", "regular, chaotic, lost, undecided or untrusted", |r| {
        Some(r.assessment.verdict.word().to_owned())
    });
    let meaning = "time reached: the span, or how long a lost cell survived";
    columns.float("end_time", "yr", meaning, |r| computed(r).map(|a| a.end_time_day / YEAR_DAY));
    columns.text("lost_body", "planet that was lost", move |r| {
        r.assessment.loss.map(|loss| name_of(planets, loss.planet))
    });
    columns.text("lost_how", "escape, star, encounter or collision", |r| {
        r.lost_how().map(|how| how.word().to_owned())
    });
    columns.text("lost_other", "the other planet of an encounter or a collision", move |r| {
        r.assessment.loss.and_then(|loss| loss.other).map(|other| name_of(planets, other))
    });
}

fn indicator_columns(columns: &mut Columns<'_>, study: &Study, plan: &Plan, records: &[Record]) {
    if plan.megno {
        let meaning = "mean MEGNO <Y> at the end; tends to 2 for regular motion";
        columns.float("megno", "", meaning, |r| r.assessment.megno);
        let meaning = "what the indicator says, also of a cell that was lost: regular, chaotic or undecided";
        let said = |a: &Assessment| chaos(a.verdict, a.megno).map(|chaos| chaos.word().to_owned());
        columns.text("chaos", meaning, move |r| said(&r.assessment));
    }
    let asked = study.measure.contains(&Measure::Lyapunov);
    if asked || records.iter().any(|r| r.assessment.lyapunov.is_some()) {
        let time = |per_day: f64| (per_day > 0.0).then(|| 1.0 / (per_day * YEAR_DAY));
        let meaning = "1 / maximal Lyapunov exponent; absent where the exponent is not told from zero";
        columns.float("lyapunov_time", "yr", meaning, move |r| {
            r.assessment.lyapunov.and_then(|l| time(l.per_day))
        });
        let meaning = "standard error of lyapunov_time, from that of the exponent to first order";
        columns.float("lyapunov_time_error", "yr", meaning, move |r| {
            let lyapunov = r.assessment.lyapunov?;
            time(lyapunov.per_day).map(|t| t * lyapunov.error_per_day / lyapunov.per_day)
        });
    }
}

/// What is told of the whole span: absent for cells that did not live through it.
fn long_columns(columns: &mut Columns<'_>, planets: &[String], plan: &Plan) {
    if plan.frequency_drift {
        let meaning = "log10 of the relative change of the mean motion between the halves of the span";
        let worst = format!("{meaning}, largest of all planets");
        columns.float("frequency_drift", "", worst, |r| r.assessment.worst_drift());
        for (index, name) in planets.iter().enumerate() {
            let meaning = format!("{meaning}, of {name}");
            columns.float(format!("{name}.frequency_drift"), "", meaning, move |r| {
                r.assessment.frequency_drift.get(index).copied()
            });
        }
    }
    if let Some(angle) = &plan.angle {
        let words = angle.words(planets);
        let libration = |r: &Record, which: usize| Some(r.assessment.angle?.libration()?[which] / DEGREE);
        let meaning = format!("{words}: librates, circulates, alternates (both) or cannot tell");
        columns
            .text("angle.motion", &meaning, |r| r.assessment.angle.map(|a| AngleFound::word(a).to_owned()));
        let meaning = format!("largest departure of {words} from its centre; absent unless it librates");
        columns.float("angle.amplitude", "deg", meaning, move |r| libration(r, 1));
        let meaning = format!("mean of {words}; absent unless it librates");
        columns.float("angle.centre", "deg", meaning, move |r| libration(r, 0));
    }
}

/// Width of a range relative to its middle.
fn relative_width(range: Range) -> f64 {
    (range.max - range.min) / (0.5 * (range.max + range.min))
}

fn extent_columns(columns: &mut Columns<'_>, planet: usize, name: &str) {
    let mut add = |column: &str, unit, meaning: &str, take: fn(&Extent) -> f64| {
        columns.float(format!("{name}.{column}"), unit, format!("{meaning} of {name}"), move |r| {
            r.assessment.extent.get(planet).map(take)
        });
    };
    add("e_max", "", "largest eccentricity", |x| x.eccentricity.max);
    add("e_min", "", "smallest eccentricity", |x| x.eccentricity.min);
    add("e_range", "", "largest - smallest eccentricity", |x| x.eccentricity.max - x.eccentricity.min);
    let meaning =
        "(largest - smallest) / middle of the range, semi-major axis while bound (not always if e_max >= 1)";
    add("a_range", "", meaning, |x| relative_width(x.semi_major_axis_au));
    add("i_max", "deg", "largest inclination to the sky plane", |x| x.inclination.max / DEGREE);
}

fn closeness_columns<'a>(columns: &mut Columns<'a>, planets: &'a [String]) {
    columns.float("smallest_approach", "au", "closest approach of two planets", |r| {
        r.assessment.smallest_approach.map(|a| a.au)
    });
    let meaning = "closest approach in mutual Hill radii of the pair at the epoch";
    columns.float("smallest_approach_hill", "", meaning, |r| r.assessment.smallest_approach.map(|a| a.hill));
    columns.text("approach_pair", "the two planets of the closest approach", move |r| {
        let (first, second) = r.assessment.smallest_approach?.pair;
        Some(format!("{} {}", name_of(planets, first), name_of(planets, second)))
    });
}

fn trust_columns(columns: &mut Columns<'_>, plan: &Plan) {
    columns.float("energy_error", "", "largest relative energy error seen", |r| r.assessment.energy_error);
    let meaning = "largest relative error of the total angular momentum seen";
    columns.float("angular_momentum_error", "", meaning, |r| r.assessment.angular_momentum_error);
    if plan.resolve {
        let meaning =
            "blocks of steps done by the adaptive engine around close approaches; absent where it did all";
        columns.count("passages", meaning, |r| r.assessment.passages);
        let meaning = "largest relative energy error over one of the passages; absent where there was none";
        columns.float("passage_energy_error", "", meaning, |r| r.assessment.passage_energy_error);
    }
    columns.text("scheme", "integration scheme", |r| computed(r).map(|a| a.scheme.to_owned()));
    columns.float("step", "d", "step of the final attempt", |r| computed(r).map(|a| a.step_day));
    columns.count("steps", "steps of the final attempt", |r| computed(r).map(|a| a.steps));
    let meaning = "attempts after the first: with smaller steps, the last with the adaptive engine where scheme says so";
    columns.count("redone", meaning, |r| computed(r).map(|a| u64::from(a.redone)));
    let meaning =
        "not integrated: verdict of all the cells so many cells away along the axes; absent if integrated";
    columns.count("filled", meaning, |r| r.filled.map(|filled| u64::from(filled.stride)));
}

/// What was found by integrating.
fn computed(record: &Record) -> Option<&Assessment> {
    record.filled.is_none().then_some(&record.assessment)
}
