//! Cells: what moves, what stays as stated, and what becomes of cells that cannot be.

use std::f64::consts::TAU;
use std::path::PathBuf;

use abide::assess::{Plan, StepWhy};
use abide::coords::configure;
use abide::survey::{Grid, Made, Source, cell_count, cell_system, cell_values, plan_of};
use abide::system::{
    Axis, Body, BodyRef, Convention, Encounter, Engine, Frame, Key, Limits, Measure, Measured, Quantity,
    Spacing, Span, Stated, Study, System, Target,
};
use abide::units::{DEGREE, GM_EARTH, GM_SUN};
use abide::verdict::{LostHow, Verdict};

fn body(name: &str, stated: &[(Key, f64)]) -> Body {
    let mut all = Stated::default();
    stated.iter().for_each(|(key, value)| all.insert(*key, Measured::exact(*value, "")));
    Body { name: name.to_string(), stated: all }
}

/// Invented: b by its period, c by its semi-major axis.
fn system(frame: Frame) -> System {
    System {
        title: "Invented".to_string(),
        epoch_jd: Some(2_460_310.5),
        star: body("star", &[(Key::Mass, 0.9 * GM_SUN), (Key::Radius, 0.004)]),
        planets: vec![
            body(
                "b",
                &[(Key::MinimumMass, 5.0 * GM_EARTH), (Key::Period, 10.0), (Key::TransitTime, 2_460_312.0)],
            ),
            body("c", &[(Key::Mass, 2000.0 * GM_EARTH), (Key::SemiMajorAxis, 0.2), (Key::MeanAnomaly, 3.0)]),
        ],
        companion: None,
        convention: Convention { elements: frame, ..Convention::default() },
        physics: Default::default(),
    }
}

fn target(body: BodyRef, key: Key) -> Target {
    Target { body, key }
}

const B: BodyRef = BodyRef::Planet(0);
const C: BodyRef = BodyRef::Planet(1);

fn axis(path: &str, body: BodyRef, key: Key, quantity: Quantity, range: [f64; 2], cells: usize) -> Axis {
    Axis {
        path: path.to_string(),
        target: target(body, key),
        quantity,
        from: range[0],
        to: range[1],
        unit: "",
        scale: 1.0,
        cells,
        spacing: Spacing::Linear,
    }
}

fn study(axes: Vec<Axis>) -> Study {
    Study {
        title: None,
        system_path: PathBuf::from("invented.toml"),
        span: Span::Days(1e4),
        measure: vec![Measure::Megno],
        angle: None,
        axes,
        limits: Limits { escape_au: None, encounter: Encounter::Off, stop_when_chaotic: false },
        engine: Engine { energy_error: 1e-7, ..Engine::default() },
    }
}

fn moved(system: &System, study: &Study, cell: u64) -> System {
    cell_system(system, study, cell).unwrap()
}

/// Kepler's third law for planet `index`, μ written out per frame: the slow twin of what the room does.
fn period(system: &System, index: usize) -> f64 {
    let configuration = configure(system).unwrap();
    let gm: Vec<f64> = configuration.planets.iter().map(|p| p.gm).collect();
    let mu = configuration.star_gm
        + match (system.convention.elements, index) {
            (Frame::Astrocentric, _) | (Frame::Jacobi, 0) => gm[index],
            (Frame::Jacobi, _) | (Frame::Barycentric, _) => gm[0] + gm[1],
        };
    TAU * (configuration.planets[index].elements.semi_major_axis_au.powi(3) / mu).sqrt()
}

#[test]
fn the_first_axis_runs_fastest_and_both_ends_are_met() {
    let mut log = axis("c.mass", C, Key::Mass, Quantity::Value, [1e-10, 1e-8], 3);
    log.spacing = Spacing::Log;
    let study = study(vec![axis("b.period", B, Key::Period, Quantity::Value, [10.1, 10.7], 4), log]);
    assert_eq!(cell_count(&study), 12);
    let values: Vec<Vec<f64>> = (0..12).map(|cell| cell_values(&study, cell)).collect();
    assert_eq!(values[0], [10.1, 1e-10]);
    assert_eq!(values[3], [10.7, 1e-10]);
    assert_eq!(values[4][0], 10.1);
    assert_eq!(values[11], [10.7, 1e-8]);
    assert!(
        (values[5][0] - 10.3).abs() < 1e-14 && (values[5][1] / 1e-9 - 1.0).abs() < 1e-14,
        "{:?}",
        values[5]
    );
}

#[test]
fn a_value_replaces_one_statement_and_leaves_the_others() {
    let system = system(Frame::Astrocentric);
    let mut tilt = axis("all.inclination", BodyRef::All, Key::Inclination, Quantity::Value, [30.0, 60.0], 2);
    tilt.scale = DEGREE;
    let cell = moved(&system, &study(vec![tilt]), 0);
    for (planet, before) in cell.planets.iter().zip(&system.planets) {
        assert_eq!(planet.stated.value(Key::Inclination), Some(30.0 * DEGREE));
        for (key, measured) in before.stated.iter() {
            assert_eq!(planet.stated.get(key), Some(measured));
        }
    }
    // sin 30° = 1/2: a minimum mass grows to its double, a mass does not.
    let configuration = configure(&cell).unwrap();
    assert!((configuration.planets[0].gm / (10.0 * GM_EARTH) - 1.0).abs() < 1e-14);
    assert_eq!(configuration.planets[1].gm, 2000.0 * GM_EARTH);
}

#[test]
fn a_star_key_moves_the_star() {
    let system = system(Frame::Astrocentric);
    let mut mass = axis("star.mass", BodyRef::Star, Key::Mass, Quantity::Value, [0.8, 1.0], 3);
    mass.scale = GM_SUN;
    let cell = moved(&system, &study(vec![mass]), 2);
    assert_eq!(cell.star.stated.value(Key::Mass), Some(GM_SUN));
    assert_eq!(cell.planets, system.planets);
}

#[test]
fn a_ratio_moves_the_target_whatever_key_states_its_size() {
    for frame in [Frame::Astrocentric, Frame::Jacobi, Frame::Barycentric] {
        let system = system(frame);
        // c states a semi-major axis; the period ratio must come out all the same.
        let over_b = axis(
            "c.period / b.period",
            C,
            Key::Period,
            Quantity::RatioTo(target(B, Key::Period)),
            [1.5, 2.5],
            3,
        );
        let cell = moved(&system, &study(vec![over_b]), 1);
        assert!((period(&cell, 1) / period(&cell, 0) - 2.0).abs() < 1e-13, "{frame:?}");
        assert_eq!(cell.planets[0], system.planets[0]);
        assert_eq!(cell.planets[1].stated.value(Key::SemiMajorAxis), None);
        assert_eq!(cell.planets[1].stated.value(Key::MeanAnomaly), Some(3.0));
    }
}

#[test]
fn a_factor_counts_from_what_was_stated() {
    let system = system(Frame::Jacobi);
    let factor = axis("c.semi_major_axis", C, Key::SemiMajorAxis, Quantity::Factor, [0.5, 2.0], 3);
    let cell = moved(&system, &study(vec![factor]), 2);
    assert!((period(&cell, 1) / period(&system, 1) / 8f64.sqrt() - 1.0).abs() < 1e-13);
}

#[test]
fn a_ratio_counts_from_the_other_body_of_its_own_cell() {
    let system = system(Frame::Astrocentric);
    let value = axis("b.period", B, Key::Period, Quantity::Value, [10.0, 20.0], 2);
    let ratio =
        axis("c.period / b.period", C, Key::Period, Quantity::RatioTo(target(B, Key::Period)), [2.0, 3.0], 2);
    let cell = moved(&system, &study(vec![value, ratio]), 3);
    assert_eq!(cell.planets[0].stated.value(Key::Period), Some(20.0));
    assert_eq!(cell.planets[1].stated.value(Key::Period), Some(60.0));
}

#[test]
fn cells_that_cannot_be_become_records_at_time_zero() {
    // c from b's own orbit outward; at the last cell of e its pericentre is inside the star.
    let size = axis("c.semi_major_axis", C, Key::SemiMajorAxis, Quantity::Value, [0.05, 0.2], 2);
    let shape = axis("c.eccentricity", C, Key::Eccentricity, Quantity::Value, [0.0, 0.99], 2);
    let grid = Grid::new(system(Frame::Astrocentric), study(vec![size, shape])).unwrap();
    assert!(matches!(grid.make(0), Made::ToFollow(_)));
    let Made::Settled(record) = grid.make(3) else { panic!("0.2 au × 0.01 is inside 0.004 au") };
    let loss = record.loss.unwrap();
    assert_eq!(
        (record.verdict, loss.how, loss.planet, loss.time_day),
        (Verdict::Lost, LostHow::Star, 1, 0.0)
    );
    assert_eq!((record.energy_error, record.megno, record.steps), (None, None, 0));
    let (count, first, reason) = grid.settled(0..4).unwrap();
    assert_eq!((count, first), (2, 2));
    assert!(reason.contains("inside the star"), "{reason}");
}

#[test]
fn planets_at_one_place_are_lost_by_collision() {
    let mut system = system(Frame::Astrocentric);
    // c on b's orbit but for the phase, which the axis brings to b's; the lighter of the two is lost.
    for (gm_b, lost, other) in [(GM_EARTH, 0, 1), (3000.0 * GM_EARTH, 1, 0), (2000.0 * GM_EARTH, 1, 0)] {
        system.planets[0] =
            body("b", &[(Key::Mass, gm_b), (Key::SemiMajorAxis, 0.2), (Key::MeanAnomaly, 1.0)]);
        let phase = axis("c.mean_anomaly", C, Key::MeanAnomaly, Quantity::Value, [1.0, 3.0], 2);
        let grid = Grid::new(system.clone(), study(vec![phase])).unwrap();
        let Made::Settled(record) = grid.make(0) else { panic!("both planets are at one place") };
        let loss = record.loss.unwrap();
        assert_eq!((loss.how, loss.planet, loss.other), (LostHow::Collision, lost, Some(other)));
        assert!(matches!(grid.make(1), Made::ToFollow(_)));
    }
}

#[test]
fn a_cell_without_a_configuration_is_undecided() {
    let tilt = axis("all.inclination", BodyRef::All, Key::Inclination, Quantity::Value, [0.0, 1.0], 2);
    let grid = Grid::new(system(Frame::Astrocentric), study(vec![tilt])).unwrap();
    let Made::Settled(record) = grid.make(0) else { panic!("no mass follows face-on") };
    assert_eq!((record.verdict, record.loss, record.end_time_day), (Verdict::Undecided, None, 0.0));
}

#[test]
fn an_impossible_nominal_system_is_an_error() {
    let mut system = system(Frame::Astrocentric);
    system.star = body("star", &[(Key::Mass, GM_SUN), (Key::Radius, 0.15)]);
    let value = axis("c.mass", C, Key::Mass, Quantity::Value, [0.0, 1e-9], 2);
    let error = Grid::new(system, study(vec![value])).unwrap_err();
    assert!(error.is_input());
    let cause = std::error::Error::source(&error).unwrap().to_string();
    assert!(cause.contains("planet b is inside the star"), "{cause}");
}

/// Largest error and number of the short runs that a plan rests on; all of them told something.
fn trial(plan: &Plan) -> (f64, usize) {
    let StepWhy::Pericentre { trial: Some(trial), .. } = plan.step_why else { panic!("{plan:?}") };
    assert_eq!(trial.told, trial.followed);
    (trial.energy_error.unwrap(), trial.told)
}

#[test]
fn the_plan_of_a_study_holds_in_its_corners() {
    let system = system(Frame::Astrocentric);
    let nominal = configure(&system).unwrap();
    let eccentricity = |to| axis("c.eccentricity", C, Key::Eccentricity, Quantity::Value, [0.0, to], 7);
    let wide =
        study(vec![eccentricity(0.4), axis("b.e", B, Key::Eccentricity, Quantity::Value, [0.0, 0.3], 3)]);
    let plan = plan_of(&wide, &system, &nominal);
    // The last along the first axis, and so on: 7 × 3 cells.
    let corners = [0, 6, 14, 20].map(|cell| configure(&moved(&system, &wide, cell)).unwrap());
    assert_eq!(plan, Plan::for_study(&wide, &nominal, &corners));
    assert_eq!(trial(&plan).1, 5);
    // With a semi-major axis of 0.2 au the pericentre of the last cell, 0.002 au, is inside the star: it is left out.
    let into_the_star = plan_of(&study(vec![eccentricity(0.99)]), &system, &nominal);
    assert_eq!(trial(&into_the_star).1, 2);
}

#[test]
fn a_planet_without_mass_as_stated_has_its_mass_in_the_corners() {
    let mut system = system(Frame::Astrocentric);
    system.planets[1].stated.insert(Key::Mass, Measured::exact(0.0, ""));
    let nominal = configure(&system).unwrap();
    let heavy = axis("c.mass", C, Key::Mass, Quantity::Value, [0.0, 300.0 * GM_EARTH], 5);
    let study = study(vec![heavy]);
    let (error, runs) = trial(&plan_of(&study, &system, &nominal));
    assert_eq!(runs, 3);
    assert!(error <= 0.25 * study.engine.energy_error, "{error}");
}
