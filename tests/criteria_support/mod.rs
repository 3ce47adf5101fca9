//! Random configurations on either side of a criterion's border, and what became of them.
#![allow(dead_code)]

#[allow(clippy::duplicate_mod, reason = "the tables of reports/validation have it too")]
#[path = "../validation/random.rs"]
pub mod random;

use std::f64::consts::TAU;

use abide::assess::{Assessment, Plan, run_batch};
use abide::coords::{Configuration, configure};
use abide::criteria::margin;
use abide::input::{SystemFile, parse_system};
use abide::system::{Criterion, Encounter, Engine, Limits, Span};
use abide::verdict::Verdict;
use random::Random;

/// Who circles whom: sets of bodies whose border is looked for in the ratio of semi-major axes.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Kind {
    /// So many planets of one star, neighbours at one ratio.
    Planets(usize),
    /// A planet of a star with a second star outside.
    Beside,
    /// A planet around two stars.
    Around,
}

/// How configurations are drawn; angles are even over the turn, masses even in the logarithm.
#[derive(Clone, Copy, Debug)]
pub struct Sampling {
    pub kind: Kind,
    /// Mass ratio of planets to the star.
    pub mass: (f64, f64),
    /// Largest eccentricity of planets.
    pub eccentricity: f64,
    /// Largest inclination of each planet to the common plane, deg.
    pub inclination: f64,
    /// Of the second star to the first, and its eccentricity.
    pub companion: ((f64, f64), f64),
}

impl Sampling {
    pub fn words(&self) -> String {
        let planets = format!(
            "m/m0 {:.0e} … {:.0e}, e ≤ {}, i ≤ {}°",
            self.mass.0, self.mass.1, self.eccentricity, self.inclination
        );
        let ((low, high), e) = self.companion;
        match self.kind {
            Kind::Planets(count) => format!("{count} planets, {planets}"),
            Kind::Beside => {
                format!("planet beside a second star ({low} … {high} of the first, e ≤ {e}), {planets}")
            }
            Kind::Around => format!("planet around two stars ({low} … {high}, e ≤ {e}), {planets}"),
        }
    }
}

struct Body {
    mass_ratio: f64,
    eccentricity: f64,
    angles_deg: [f64; 4],
}

/// Everything but the ratio of semi-major axes.
pub struct Draw {
    kind: Kind,
    planets: Vec<Body>,
    companion: Option<Body>,
}

impl Draw {
    pub fn new(sampling: &Sampling, random: &mut Random) -> Draw {
        let even_in_log =
            |random: &mut Random, (low, high): (f64, f64)| random.between(low.ln(), high.ln()).exp();
        let planet = |random: &mut Random| Body {
            mass_ratio: even_in_log(random, sampling.mass),
            eccentricity: random.between(0.0, sampling.eccentricity),
            angles_deg: [
                random.between(0.0, sampling.inclination),
                random.between(0.0, 360.0),
                random.between(0.0, 360.0),
                random.between(0.0, 360.0),
            ],
        };
        let (count, second) = match sampling.kind {
            Kind::Planets(count) => (count, false),
            Kind::Beside | Kind::Around => (1, true),
        };
        let planets = (0..count).map(|_| planet(random)).collect();
        let companion = second.then(|| Body {
            mass_ratio: random.between(sampling.companion.0.0, sampling.companion.0.1),
            eccentricity: random.between(0.0, sampling.companion.1),
            angles_deg: [0.0, 0.0, random.between(0.0, 360.0), random.between(0.0, 360.0)],
        });
        Draw { kind: sampling.kind, planets, companion }
    }

    /// With this ratio of the axes; the innermost orbit has 1 au, star and inclinations as everywhere in system files.
    pub fn configuration(&self, ratio: f64) -> Option<Configuration> {
        let mut text = String::from(
            "[star]\nmass = \"1 Msun\"\nradius = \"0.001 Rsun\"\n[convention]\nelements = \"jacobi\"\n",
        );
        let mut body = |head: &str, of: &Body, axis: f64| {
            let [i, node, argument, anomaly] = of.angles_deg;
            text += &format!(
                "{head}mass_ratio = \"{:e}\"\nradius = \"1e-6 Rsun\"\nsemi_major_axis = \"{axis:e} au\"\n\
                 eccentricity = \"{:e}\"\ninclination = \"{i:e} deg\"\nascending_node = \"{node:e} deg\"\n\
                 argument_of_pericentre = \"{argument:e} deg\"\nmean_anomaly = \"{anomaly:e} deg\"\n",
                of.mass_ratio, of.eccentricity
            );
        };
        for (index, planet) in self.planets.iter().enumerate() {
            let axis = if self.kind == Kind::Around { ratio } else { ratio.powi(index as i32) };
            body(&format!("[[planet]]\nname = \"p{index}\"\n"), planet, axis);
        }
        if let Some(companion) = &self.companion {
            let axis = if self.kind == Kind::Around { 1.0 } else { ratio };
            body("[companion]\nname = \"B\"\n", companion, axis);
        }
        let SystemFile { system, .. } =
            parse_system("drawn", &text).unwrap_or_else(|error| panic!("{error}"));
        configure(&system).ok()
    }

    fn margin(&self, criterion: Criterion, ratio: f64) -> f64 {
        self.configuration(ratio).and_then(|c| margin(criterion, &c).ok()).unwrap_or(f64::NAN)
    }

    /// The ratio of axes on the border, between `low` (not quiet) and `high` (quiet).
    fn border(&self, criterion: Criterion, (mut low, mut high): (f64, f64)) -> Option<f64> {
        if !(self.margin(criterion, low) < 0.0 && self.margin(criterion, high) > 0.0) {
            return None;
        }
        for _ in 0..30 {
            let middle = 0.5 * (low + high);
            let value = self.margin(criterion, middle);
            if value.is_nan() {
                return None;
            }
            if value > 0.0 { high = middle } else { low = middle }
        }
        Some(0.5 * (low + high))
    }
}

/// A configuration with its place: the gap (a₂ − a₁)/a₁ over that on the border.
pub struct Drawn {
    pub place: f64,
    pub configuration: Configuration,
}

/// Configurations with their places even within each of `bins`, `each` per bin, whose margin has the sign that it should have.
pub fn draw(
    criterion: Criterion,
    sampling: &Sampling,
    range: (f64, f64),
    bins: &[(f64, f64)],
    each: usize,
    seed: u64,
) -> Vec<Drawn> {
    let mut random = Random::new(seed);
    let mut found = Vec::new();
    let mut tries = 0;
    for bin in bins {
        let mut count = 0;
        while count < each {
            tries += 1;
            assert!(tries < 1000 * each, "{criterion:?}: the domain is hardly ever met");
            let draw = Draw::new(sampling, &mut random);
            let place = random.between(bin.0, bin.1);
            let Some(border) = draw.border(criterion, range) else { continue };
            let Some(configuration) = draw.configuration(1.0 + place * (border - 1.0)) else { continue };
            let Ok(value) = margin(criterion, &configuration) else { continue };
            let started = abide::coords::check_start(&configuration).is_ok();
            if (value > 0.0) == (place > 1.0) && started {
                found.push(Drawn { place, configuration });
                count += 1;
            }
        }
    }
    found
}

/// Follows all for so many orbits at 1 au around one solar mass, ended at so many mutual Hill radii, without chaos
/// indicator unless asked.
pub fn follow(drawn: &[Drawn], orbits: f64, hill: f64, chaos: bool) -> Vec<Assessment> {
    let year = TAU / (abide::units::GM_SUN).sqrt();
    let limits = Limits { escape_au: None, encounter: Encounter::Stop { hill }, stop_when_chaotic: false };
    let engine = Engine { energy_error: 1e-5, ..Engine::default() };
    let mut plan = Plan::new(Span::Days(orbits * year), &limits, &engine, &drawn[0].configuration);
    plan.megno = chaos;
    let mut feed = drawn.iter().enumerate();
    let mut answers: Vec<Option<Assessment>> = vec![None; drawn.len()];
    run_batch(
        &plan,
        || feed.next().map(|(index, drawn)| (index as u64, drawn.configuration.clone())),
        |index, assessment| {
            answers[index as usize] = Some(assessment);
            true
        },
    );
    answers.into_iter().map(|answer| answer.expect("every cell is answered")).collect()
}

/// Whether two planets met or exchanged their order.
pub fn met_or_exchanged(found: &Assessment) -> bool {
    let exchanged =
        found.extent.windows(2).any(|pair| pair[0].semi_major_axis_au.max >= pair[1].semi_major_axis_au.min);
    let met = found.loss.is_some_and(|loss| loss.other.is_some());
    met || exchanged
}

pub fn lost(found: &Assessment) -> bool {
    found.verdict == Verdict::Lost
}

pub fn chaotic_or_lost(found: &Assessment) -> bool {
    matches!(found.verdict, Verdict::Lost | Verdict::Chaotic)
}

/// 95 % interval of a share (Wilson 1927).
pub fn wilson(hits: usize, of: usize) -> (f64, f64) {
    let (n, z) = (of as f64, 1.959_963_985);
    let share = hits as f64 / n;
    let (shift, scale) = (share + z * z / (2.0 * n), 1.0 + z * z / n);
    let half = z * (share * (1.0 - share) / n + z * z / (4.0 * n * n)).sqrt();
    (((shift - half) / scale).max(0.0), ((shift + half) / scale).min(1.0))
}
