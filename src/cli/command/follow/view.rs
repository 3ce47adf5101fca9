//! The verdict with its numbers, in words and as JSON.

mod json;

use super::motion;
use super::why::{Why, megno};
use super::wish::{Wish, count};
use crate::assess::{
    ADAPTIVE, Analysed, Assessment, FEWEST_STEPS_PER_PASSAGE, Range, StepWhy, innermost_period_day,
    outermost_period_day,
};
use crate::cli::command::inspect::table::{lines, significant, wrapped};
use crate::kepler::pericentre_passage_day;
use crate::report::{short, time_words};
use crate::units::{DEGREE, YEAR_DAY};
use crate::verdict::{CHAOTIC_FROM, LEAST_OUTER_ORBITS, REGULAR_UP_TO, Verdict};

/// Width of the words that lead the lines.
const LEAD: usize = 11;

pub struct View<'a> {
    wish: &'a Wish,
    assessment: &'a Assessment,
    analysed: &'a Analysed,
    pub why: Why,
    names: Vec<&'a str>,
    inner: Counted,
    outer: Counted,
    passage: Passage,
}

/// A planet and how many of its orbits were followed.
struct Counted {
    planet: usize,
    period_day: f64,
    orbits: f64,
}

/// The shortest pericentre passage time scale and whose it is.
struct Passage {
    planet: usize,
    day: f64,
}

impl<'a> View<'a> {
    pub fn new(wish: &'a Wish, assessment: &'a Assessment, analysed: &'a Analysed) -> View<'a> {
        let configuration = &wish.configuration;
        let names: Vec<&str> = configuration.planets.iter().map(|planet| planet.name.as_str()).collect();
        let frame = configuration.own_frame();
        let orbits = configuration.orbits();
        let elements: Vec<_> = orbits.iter().map(|orbit| orbit.elements).collect();
        let periods = configuration.periods_of(frame, &elements);
        let counted = |period_day: f64| Counted {
            planet: periods.iter().position(|period| *period == Some(period_day)).unwrap_or(0),
            period_day,
            orbits: assessment.end_time_day / period_day,
        };
        let passages = orbits.iter().map(|orbit| {
            let elements = orbit.elements;
            pericentre_passage_day(elements.semi_major_axis_au, elements.eccentricity, orbit.mass_parameter)
        });
        let shortest = passages.enumerate().filter(|(_, day)| day.is_finite());
        let shortest = shortest.min_by(|one, other| one.1.total_cmp(&other.1)).unwrap_or((0, f64::NAN));
        let outer = counted(outermost_period_day(configuration));
        let escape_au = wish.plan.escape_limit_au(configuration);
        View {
            why: Why::of(assessment, &wish.plan, &names, escape_au, (outer.planet, outer.orbits)),
            inner: counted(innermost_period_day(configuration)),
            outer,
            passage: Passage { planet: shortest.0, day: shortest.1 },
            names,
            wish,
            assessment,
            analysed,
        }
    }

    /// What MEGNO says of chaos, whatever became of the planets; none where it does not tell.
    fn is_chaotic(&self) -> Option<bool> {
        let mean = self.assessment.megno?;
        let long = self.outer.orbits >= LEAST_OUTER_ORBITS;
        match mean {
            y if y >= CHAOTIC_FROM => Some(true),
            y if y <= REGULAR_UP_TO && long => Some(false),
            _ => None,
        }
    }

    /// What became of the planets, whatever MEGNO says.
    fn survival(&self) -> String {
        let a = self.assessment;
        match (a.verdict, a.loss) {
            (Verdict::Untrusted, _) => "not told, as the energy error was too large".to_owned(),
            (_, Some(loss)) => format!(
                "lost: {} by {} after {}",
                self.names[loss.planet],
                loss.how.word(),
                time_words(a.end_time_day)
            ),
            (Verdict::Chaotic, _) => {
                "all are still there at the end of the span; chaotic ones may be lost later, or never"
                    .to_owned()
            }
            _ => "all are still there at the end of the span, which says nothing of later".to_owned(),
        }
    }

    /// The verdict and when, as a title has it: "regular over 1e4 orbits of b (850 yr)".
    pub fn headline(&self) -> String {
        let a = self.assessment;
        let orbits = format!("{} orbits of {}", count(self.inner.orbits), self.names[self.inner.planet]);
        let time = time_words(a.end_time_day);
        match (a.verdict, a.loss) {
            (Verdict::Lost, Some(loss)) if a.end_time_day > 0.0 => {
                format!("lost by {} after {orbits} ({time})", loss.how.word())
            }
            (Verdict::Lost, Some(loss)) => format!("lost by {} at the start", loss.how.word()),
            (verdict, _) => format!("{} over {orbits} ({time})", verdict.word()),
        }
    }

    fn span(&self) -> String {
        let (inner, outer) = (&self.inner, &self.outer);
        let mut text = format!("{} orbits of {}", count(inner.orbits), self.names[inner.planet]);
        if outer.planet != inner.planet {
            text.push_str(&format!(", {} of {}", count(outer.orbits), self.names[outer.planet]));
        }
        text.push_str(&format!(", {}", time_words(self.assessment.end_time_day)));
        if self.assessment.end_time_day < self.wish.plan.span_day {
            text.push_str(&format!("; asked: {}", self.wish.span_words()));
        }
        text
    }

    pub fn scheme(&self) -> String {
        let plan = &self.wish.plan;
        if self.assessment.scheme == ADAPTIVE {
            return "15th-order Gauss-Radau with adaptive steps (Everhart 1985)".to_owned();
        }
        let auto = self.wish.options.iter().any(|o| o.flag == "--scheme" && o.meaning == "auto");
        format!(
            "{}{}{}, {} coordinates ({}){}",
            self.assessment.scheme,
            if plan.splitting().corrected { " with symplectic corrector" } else { "" },
            if auto { " (auto)" } else { "" },
            plan.coordinates.words(),
            plan.coordinates_why,
            if plan.compensated { ", compensated sums" } else { "" },
        )
    }

    /// [`View::scheme`] with the reason for the choice, where there was one to make.
    fn scheme_and_why(&self) -> String {
        let why = &self.wish.plan.scheme_why;
        if why.is_choice() && self.assessment.scheme != ADAPTIVE {
            format!("{}. Chosen: {why}", self.scheme())
        } else {
            self.scheme()
        }
    }

    fn step(&self) -> String {
        let a = self.assessment;
        if a.scheme == ADAPTIVE {
            let own = "chosen anew by the engine all along";
            return if self.wish.plan.adaptive {
                own.to_owned()
            } else {
                format!("{own}; {}", self.missed())
            };
        }
        let per_passage = self.passage.day / a.step_day;
        let mut text = format!(
            "{} d, {}; {per_passage:.1} in the shortest pericentre passage ({}: {} d), {:.1} per orbit of {}",
            significant(a.step_day, 4),
            match (&self.wish.plan.step_why, a.redone) {
                (StepWhy::Asked { .. }, 0) => "as asked".to_owned(),
                (why @ StepWhy::Pericentre { .. }, 0) => format!("auto: {why}"),
                (_, redone) => made_smaller(redone),
            },
            self.names[self.passage.planet],
            significant(self.passage.day, 4),
            self.inner.period_day / a.step_day,
            self.names[self.inner.planet],
        );
        if per_passage < FEWEST_STEPS_PER_PASSAGE {
            text.push_str(&format!(
                ". Warning: below {FEWEST_STEPS_PER_PASSAGE} to a passage step resonance can feign chaos"
            ));
        }
        let attempt = if a.redone > 0 { "at the last attempt" } else { "in all" };
        text.push_str(&format!(". {} steps {attempt}", count(self.steps())));
        text
    }

    /// Why the splitting was left.
    fn missed(&self) -> String {
        let (asked, scheme) = (short(self.wish.plan.energy_error), self.wish.plan.scheme);
        format!("the energy error passed {asked}, or could not be told, with smaller steps of {scheme} too")
    }

    /// Steps up to the end, also of the last block when the end came within it.
    fn steps(&self) -> f64 {
        (self.assessment.end_time_day / self.assessment.step_day).round()
    }

    fn chaos(&self) -> String {
        let a = self.assessment;
        let told = match self.is_chaotic() {
            Some(true) => "yes; ",
            Some(false) => "none seen; ",
            None => "not told; ",
        };
        let mean = a.megno.map_or("⟨Y⟩ not measured".to_owned(), |y| format!("⟨Y⟩ = {}", megno(y)));
        let mean = format!("{told}{mean}");
        match self.lyapunov_yr() {
            Some((time, error)) => {
                let (unit, size) = if time < 1.0 { ("d", YEAR_DAY) } else { ("yr", 1.0) };
                let orbits = time * YEAR_DAY / self.inner.period_day;
                format!(
                    "{mean}; Lyapunov time {} ± {} {unit} ({} orbits of {})",
                    short(time * size),
                    short(error * size),
                    short(orbits),
                    self.names[self.inner.planet]
                )
            }
            None if a.verdict == Verdict::Regular => {
                format!("{mean}; no Lyapunov time: of a regular orbit it would only reflect the span")
            }
            None => mean,
        }
    }

    /// 1/λ and its standard error σ/λ², yr.
    fn lyapunov_yr(&self) -> Option<(f64, f64)> {
        let l = self.assessment.lyapunov.filter(|l| l.per_day > 0.0)?;
        Some((1.0 / l.per_day / YEAR_DAY, l.error_per_day / l.per_day.powi(2) / YEAR_DAY))
    }

    pub fn energy(&self) -> String {
        let asked = short(self.wish.plan.energy_error);
        match self.assessment.energy_error {
            None => format!("not measured ({asked} asked)"),
            Some(error) => format!("largest relative error {} ({asked} asked)", short(error)),
        }
    }

    fn approach(&self) -> Option<String> {
        let found = self.assessment.smallest_approach?;
        let (i, j) = found.pair;
        Some(format!(
            "{} and {} to {} mutual Hill radii ({} au){}",
            self.names[i],
            self.names[j],
            short(found.hill),
            significant(found.au, 4),
            if self.names.len() > 2 { ", the closest of all pairs" } else { "" }
        ))
    }

    /// What the adaptive engine did for the scheme; nothing where it did nothing.
    fn passages(&self) -> Option<String> {
        let (blocks, error) = self.assessment.passages.zip(self.assessment.passage_energy_error)?;
        let s = if blocks == 1 { "" } else { "s" };
        let error = short(error);
        Some(format!(
            "{blocks} block{s} of steps done by the adaptive engine around close approaches; largest relative energy \
             error over one {error}"
        ))
    }

    /// Lines ending in a newline.
    pub fn text(&self) -> String {
        let a = self.assessment;
        let momentum = a.angular_momentum_error.map_or("not measured".to_owned(), |e| {
            format!("largest relative error of the total angular momentum {}", short(e))
        });
        let mut entries = vec![
            ("why", self.why.to_string()),
            ("span", self.span()),
            ("survival", self.survival()),
            ("chaos", self.chaos()),
            ("scheme", self.scheme_and_why()),
            ("step", self.step()),
            ("energy", self.energy()),
            ("momentum", momentum),
        ];
        entries.extend(self.approach().map(|approach| ("approach", approach)));
        entries.extend(self.passages().map(|passages| ("passages", passages)));
        let names = self.wish.names();
        let drift = self.analysed.as_ref().map(|analysis| ("drift", motion::drift(analysis, &names)));
        entries.splice(4..4, drift.ok());
        let mut out = vec![format!("{}: {}", self.wish.title(), self.headline()), String::new()];
        out.extend(entries.iter().map(|(lead, words)| wrapped(&format!("{lead:<LEAD$}"), words)));
        if !a.extent.is_empty() {
            out.push(String::new());
            out.extend(self.extents());
        }
        out.push(String::new());
        out.extend(motion::text(self.analysed, &names));
        out.join("\n") + "\n"
    }

    fn extents(&self) -> Vec<String> {
        let from_to = |range: &Range, scale: f64, decimals: usize| {
            format!("{:.decimals$} to {:.decimals$}", range.min / scale, range.max / scale)
        };
        let rows = self.names.iter().zip(&self.assessment.extent).map(|(name, extent)| {
            let axes = extent.semi_major_axis_au;
            let bound = || format!("{} to {}", significant(axes.min, 6), significant(axes.max, 6));
            vec![
                (*name).to_owned(),
                if axes.is_empty() { "never bound".to_owned() } else { bound() },
                from_to(&extent.eccentricity, 1.0, 5),
                from_to(&extent.inclination, DEGREE, 3),
            ]
        });
        lines(&["range of", "a (au)", "e", "i (deg)"], &rows.collect::<Vec<_>>(), &[])
    }
}

/// Of a cell that the splitting did in the end.
fn made_smaller(redone: u32) -> String {
    let times = match redone {
        1 => "once".to_owned(),
        2 => "twice".to_owned(),
        more => format!("{more} times"),
    };
    format!("made smaller {times} to keep the energy error or to tell it")
}
