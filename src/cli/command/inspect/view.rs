//! What `inspect` knows, as plain data: printed as text or as JSON.

use serde::Serialize;

use super::angles::{AnglesView, angles};
use super::caveat::{Caveat, caveats};
use super::convention::ConventionView;
use super::criteria_view::CriteriaView;
use super::second::{CompanionView, PhysicsView, companion, has_meaning, physics};
use crate::assess;
use crate::coords::{Configuration, Elements};
use crate::criteria::{self, Neighbours};
use crate::kepler;
use crate::num::wrap_turn;
use crate::system::{Body, Frame, Group, Key, System};
use crate::units::{self, DEGREE, Unit};

#[derive(Debug, Serialize)]
pub struct View {
    pub title: String,
    pub epoch_jd: Option<f64>,
    pub star: StarView,
    pub convention: ConventionView,
    /// How each angle was read, body by body.
    pub angles: Vec<AnglesView>,
    pub planets: Vec<PlanetView>,
    pub companion: Option<CompanionView>,
    pub physics: PhysicsView,
    /// In the frames that have a meaning for every body.
    pub elements: Vec<FrameView>,
    pub neighbours: Vec<PairView>,
    /// For two coplanar planets only.
    pub hill_balance: Option<BalanceView>,
    pub criteria: CriteriaView,
    pub step: Option<StepView>,
    pub warnings: Vec<Caveat>,
}

#[derive(Debug, Serialize)]
pub struct StarView {
    pub mass_msun: f64,
    pub radius_rsun: f64,
    /// Whether the radius was stated; if not it is that of a star of the Sun's mean density.
    pub radius_stated: bool,
    pub age_gyr: Option<f64>,
}

#[derive(Debug, Serialize)]
pub struct PlanetView {
    pub name: String,
    pub mass: f64,
    pub mass_unit: &'static str,
    pub mass_from: &'static str,
    pub radius: f64,
    pub radius_unit: &'static str,
    /// Whether the radius was stated; if not it is that of a planet of Jupiter's mean density.
    pub radius_stated: bool,
    /// In the frame of the file.
    pub period_d: Option<f64>,
    pub semi_major_axis_au: f64,
    /// What was left out of the file and is taken as 0 (the inclination: 90 deg).
    pub assumed: Vec<&'static str>,
}

#[derive(Debug, Serialize)]
pub struct FrameView {
    pub frame: &'static str,
    /// Whether the file states its elements in this frame.
    pub stated: bool,
    pub planets: Vec<ElementsView>,
}

/// Osculating elements; the argument of pericentre is the planet's, whatever the file states.
#[derive(Debug, Serialize)]
pub struct ElementsView {
    pub name: String,
    pub period_d: Option<f64>,
    pub semi_major_axis_au: f64,
    pub eccentricity: f64,
    pub inclination_deg: f64,
    pub ascending_node_deg: f64,
    pub argument_of_pericentre_deg: f64,
    pub mean_anomaly_deg: f64,
    pub mean_longitude_deg: f64,
}

#[derive(Debug, Serialize)]
pub struct PairView {
    pub inner: String,
    pub outer: String,
    pub period_ratio: f64,
    pub mutual_hill_radius_au: f64,
    /// Absent for massless pairs.
    pub spacing_hill: Option<f64>,
    pub mutual_inclination_deg: f64,
    pub near_resonances: Vec<ResonanceView>,
}

#[derive(Debug, Serialize)]
pub struct ResonanceView {
    pub p: u32,
    pub q: u32,
    pub offset_percent: f64,
}

#[derive(Debug, Serialize)]
pub struct BalanceView {
    pub found: f64,
    pub needed: f64,
    pub stable: bool,
}

#[derive(Debug, Serialize)]
pub struct StepView {
    pub step_d: f64,
    /// Of the planet with the shortest period.
    pub steps_per_orbit: f64,
    pub innermost: String,
    /// The planet with the shortest pericentre passage, which decides the step.
    pub deciding: String,
    pub passage_d: f64,
    pub steps_per_passage: f64,
}

impl View {
    pub fn new(system: &System, configuration: &Configuration) -> View {
        let pairs = criteria::neighbours(configuration);
        View {
            title: system.title.clone(),
            epoch_jd: system.epoch_jd,
            star: star(system, configuration),
            convention: super::convention::convention(system),
            angles: angles(system, configuration),
            planets: planets(system, configuration),
            companion: companion(system, configuration),
            physics: physics(configuration),
            elements: [Frame::Astrocentric, Frame::Jacobi, Frame::Barycentric]
                .into_iter()
                .filter(|frame| has_meaning(*frame, configuration))
                .map(|frame| in_frame(frame, configuration))
                .collect(),
            hill_balance: criteria::two_planet_balance(configuration).map(|balance| BalanceView {
                found: balance.found,
                needed: balance.needed,
                stable: balance.stable(),
            }),
            criteria: CriteriaView::new(configuration, &pairs),
            step: step(configuration, assess::auto_step_day(configuration)),
            warnings: caveats(configuration, &pairs),
            neighbours: pairs.iter().map(|pair| pair_view(pair, configuration)).collect(),
        }
    }
}

pub fn frame_word(frame: Frame) -> &'static str {
    match frame {
        Frame::Astrocentric => "astrocentric",
        Frame::Jacobi => "jacobi",
        Frame::Barycentric => "barycentric",
    }
}

fn star(system: &System, configuration: &Configuration) -> StarView {
    StarView {
        mass_msun: configuration.star_gm / units::GM_SUN,
        radius_rsun: configuration.star_radius_au * units::AU_M / units::SUN_RADIUS_M,
        radius_stated: system.star.stated.get(Key::Radius).is_some(),
        age_gyr: system.star.stated.value(Key::Age).map(|day| day / (1e9 * units::YEAR_DAY)),
    }
}

fn planets(system: &System, configuration: &Configuration) -> Vec<PlanetView> {
    let periods = configuration.periods_day();
    system
        .planets
        .iter()
        .zip(&configuration.planets)
        .zip(periods)
        .map(|((body, planet), period_d)| {
            let heavy = planet.gm > 0.1 * units::GM_JUPITER;
            let mass_unit = unit_of(body, Group::Mass, if heavy { "Mjup" } else { "Mearth" });
            let radius_unit = unit_of(body, Group::Radius, if heavy { "Rjup" } else { "Rearth" });
            PlanetView {
                name: planet.name.clone(),
                mass: planet.gm / mass_unit.inner,
                mass_unit: mass_unit.word,
                mass_from: stated_key(body, Group::Mass).map_or("", Key::word),
                radius: planet.radius_au / radius_unit.inner,
                radius_unit: radius_unit.word,
                radius_stated: body.stated.get(Key::Radius).is_some(),
                period_d,
                semi_major_axis_au: planet.elements.semi_major_axis_au,
                assumed: assumed(body),
            }
        })
        .collect()
}

pub(super) fn stated_key(body: &Body, group: Group) -> Option<Key> {
    body.stated.iter().map(|(key, _)| key).find(|key| key.group() == group)
}

/// The unit the file used for that quantity, if it is a unit of the same kind as `usual`.
pub(super) fn unit_of(body: &Body, group: Group, usual: &'static str) -> Unit {
    let usual = Unit::from_word(usual).expect("the usual units are units");
    stated_key(body, group)
        .and_then(|key| body.stated.get(key))
        .and_then(|measured| Unit::from_word(measured.unit))
        .filter(|unit| unit.dimension == usual.dimension)
        .unwrap_or(usual)
}

pub(super) fn assumed(body: &Body) -> Vec<&'static str> {
    let has = |group: Group| body.stated.iter().any(|(key, _)| key.group() == group);
    let vector = [Key::ECosW, Key::SqrtECosW].into_iter().any(|key| body.stated.get(key).is_some());
    let all = [
        (has(Group::Shape), "eccentricity"),
        (has(Group::Pericentre) || vector, "argument_of_pericentre"),
        (has(Group::Inclination), "inclination"),
        (has(Group::Node), "ascending_node"),
    ];
    all.into_iter().filter(|(stated, _)| !stated).map(|(_, word)| word).collect()
}

fn in_frame(frame: Frame, configuration: &Configuration) -> FrameView {
    // The frame of the file shows what was stated, to the last digit; the others come from the state.
    let stated = frame == configuration.frame;
    let elements: Vec<Elements> = if stated {
        configuration.planets.iter().map(|planet| planet.elements).collect()
    } else {
        configuration.elements_in(frame)
    };
    let periods = configuration.periods_of(frame, &elements);
    let planets = configuration
        .planets
        .iter()
        .zip(elements)
        .zip(periods)
        .map(|((planet, elements), period_d)| ElementsView {
            name: planet.name.clone(),
            period_d,
            semi_major_axis_au: elements.semi_major_axis_au,
            eccentricity: elements.eccentricity,
            inclination_deg: elements.inclination / DEGREE,
            ascending_node_deg: wrap_turn(elements.ascending_node) / DEGREE,
            argument_of_pericentre_deg: wrap_turn(elements.argument_of_pericentre) / DEGREE,
            mean_anomaly_deg: if elements.eccentricity < 1.0 {
                wrap_turn(elements.mean_anomaly) / DEGREE
            } else {
                elements.mean_anomaly / DEGREE
            },
            mean_longitude_deg: elements.mean_longitude() / DEGREE,
        })
        .collect();
    FrameView { frame: frame_word(frame), stated, planets }
}

fn pair_view(pair: &Neighbours, configuration: &Configuration) -> PairView {
    PairView {
        inner: configuration.planets[pair.inner].name.clone(),
        outer: configuration.planets[pair.outer].name.clone(),
        period_ratio: pair.period_ratio,
        mutual_hill_radius_au: pair.mutual_hill_radius_au,
        spacing_hill: Some(pair.spacing_hill).filter(|spacing| spacing.is_finite()),
        mutual_inclination_deg: pair.mutual_inclination / DEGREE,
        near_resonances: pair
            .resonances
            .iter()
            .map(|near| ResonanceView { p: near.p, q: near.q, offset_percent: near.offset_percent })
            .collect(),
    }
}

/// The step that a survey would take, with the body that decides it; none when no planet is bound.
fn step(configuration: &Configuration, step_d: f64) -> Option<StepView> {
    let orbits = configuration.orbits();
    let passage = |body: usize| {
        let orbit = &orbits[body].elements;
        let mass_parameter = orbits[body].mass_parameter;
        kepler::pericentre_passage_day(orbit.semi_major_axis_au, orbit.eccentricity, mass_parameter)
    };
    let deciding = (0..orbits.len()).min_by(|&one, &other| passage(one).total_cmp(&passage(other)))?;
    let (innermost, period_d) = configuration
        .planet_indices()
        .filter_map(|planet| orbits[planet].period_day().map(|period| (planet, period)))
        .min_by(|one, other| one.1.total_cmp(&other.1))?;
    (step_d > 0.0).then(|| StepView {
        step_d,
        steps_per_orbit: period_d / step_d,
        innermost: configuration.planets[innermost].name.clone(),
        deciding: configuration.planets[deciding].name.clone(),
        passage_d: passage(deciding),
        steps_per_passage: passage(deciding) / step_d,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::coords::StatedState;

    /// An eccentric outer planet decides the step, the inner one counts the orbits.
    #[test]
    fn the_step_names_the_planet_that_decides() {
        let body = |name: &str, distance: f64, speed: f64| StatedState {
            name: name.to_string(),
            gm: 0.0,
            radius_au: 0.0,
            position_au: [distance, 0.0, 0.0],
            velocity_au_day: [0.0, speed, 0.0],
        };
        // μ = 1: a circle at 1, and a pericentre at 0.5 with e = 0.96 (v² = (1 + e)/q).
        let bodies = vec![body("b", 1.0, 1.0), body("c", 0.5, (1.96f64 / 0.5).sqrt())];
        let step = step(&Configuration::from_states(1.0, 0.0, bodies), 0.1).unwrap();
        let passage = std::f64::consts::TAU * (0.125f64 / 1.96).sqrt();
        assert_eq!((step.innermost.as_str(), step.deciding.as_str()), ("b", "c"));
        assert!((step.passage_d / passage - 1.0).abs() < 1e-12);
        assert!((step.steps_per_passage - passage / 0.1).abs() < 1e-10);
        assert!((step.steps_per_orbit - 10.0 * std::f64::consts::TAU).abs() < 1e-10);
    }

    #[test]
    fn without_a_step_there_is_no_view_of_it() {
        let empty = Configuration::from_states(1.0, 0.0, Vec::new());
        assert!(step(&empty, 0.1).is_none());
    }
}
