//! What a plan chooses for the user, and what it says of its choice.

use abide::assess::{CoordinatesWhy, Plan, SchemeWhy, StepWhy, Trial, assess};
use abide::coords::{Configuration, configure};
use abide::input::{parse_system, read_system};
use abide::integrate::{Coordinates, Scheme};
use abide::survey::plan_of;
use abide::system::{
    Axis, BodyRef, CoordinateChoice, Encounter, Engine, Key, Limits, Quantity, Spacing, Span, Step, Study,
    System, Target,
};
use abide::units::{GM_JUPITER, GM_SUN};

/// An invented pair.
fn system(mass_c: &str, period_c: &str) -> System {
    let text = format!(
        r#"
title = "Pair"
[star]
mass = "1 Msun"
[[planet]]
name = "b"
period = "10 d"
mass = "20 Mearth"
eccentricity = 0.05
argument_of_pericentre = "20 deg"
mean_anomaly = "10 deg"
[[planet]]
name = "c"
period = "{period_c}"
mass = "{mass_c}"
eccentricity = 0.05
argument_of_pericentre = "200 deg"
mean_anomaly = "140 deg"
"#
    );
    parse_system("pair.toml", &text).unwrap().system
}

fn pair() -> Configuration {
    configure(&system("20 Mearth", "34 d")).unwrap()
}

const OPEN: Limits = Limits { escape_au: None, encounter: Encounter::Off, stop_when_chaotic: false };

fn engine(scheme: &str, step: Step, energy_error: f64) -> Engine {
    Engine { scheme: scheme.to_string(), step, energy_error, ..Engine::default() }
}

fn plan(scheme: &str, step: Step, energy_error: f64) -> Plan {
    Plan::new(Span::Orbits(1000.0), &OPEN, &engine(scheme, step, energy_error), &pair())
}

/// A study whose only axis is a key of one planet, given in inner units.
fn study(planet: usize, key: Key, [from, to]: [f64; 2], limits: Limits) -> Study {
    let axis = Axis {
        path: key.word().to_string(),
        target: Target { body: BodyRef::Planet(planet), key },
        quantity: Quantity::Value,
        from,
        to,
        unit: "",
        scale: 1.0,
        cells: 5,
        spacing: Spacing::Linear,
    };
    Study {
        title: None,
        system_path: "pair.toml".into(),
        span: Span::Orbits(300.0),
        measure: Vec::new(),
        angle: None,
        axes: vec![axis],
        limits,
        engine: engine("auto", Step::Auto, 1e-6),
    }
}

fn planned(system: &System, study: &Study) -> Plan {
    plan_of(study, system, &configure(system).unwrap())
}

fn tried(plan: &Plan) -> (Trial, Vec<Trial>) {
    match &plan.scheme_why {
        SchemeWhy::Tried { chosen, each, .. } => (*chosen, each.clone()),
        SchemeWhy::Asked => panic!("it was open: {plan:?}"),
    }
}

fn stages(scheme: &str) -> usize {
    Scheme::named(scheme).unwrap().stages()
}

/// 300 Jupiters in the last cell, one as stated: the stated system alone would ask for heliocentric coordinates.
#[test]
fn the_heaviest_corner_decides_on_the_coordinates() {
    let far = |mass_c: &str| system(mass_c, "400 d");
    let stated = far("1 Mjup");
    let mut heavy = study(1, Key::Mass, [GM_JUPITER, 300.0 * GM_JUPITER], OPEN);
    heavy.engine.energy_error = 1e-9;
    let plan = planned(&stated, &heavy);
    assert_eq!(plan.coordinates, Coordinates::Jacobi);
    let CoordinatesWhy::Heavy { share, in_a_corner: true } = plan.coordinates_why else { panic!("{plan:?}") };
    assert!((share / (300.0 * GM_JUPITER / GM_SUN) - 1.0).abs() < 1e-12, "{share}");
    let words = "a planet has 0.286 of the star's mass in a corner of the grid, more than 0.03";
    assert_eq!(plan.coordinates_why.to_string(), words);
    // It matters: the heavy corner needs no second attempt.
    let corner = configure(&far("300 Mjup")).unwrap();
    let jacobi = assess(&corner, &plan);
    assert_eq!((jacobi.redone, jacobi.scheme), (0, plan.scheme), "{jacobi:?}");
    assert!(jacobi.energy_error.unwrap() < 1e-9, "{jacobi:?}");

    heavy.engine.coordinates = CoordinateChoice::Heliocentric;
    let asked = planned(&stated, &heavy);
    assert_eq!(
        (asked.coordinates, asked.coordinates_why),
        (Coordinates::Heliocentric, CoordinatesWhy::Asked)
    );
    let kicks = |plan: &Plan| tried(plan).0.kicks_per_passage();
    assert!(kicks(&asked) > 1.5 * kicks(&plan), "{} {}", kicks(&asked), kicks(&plan));
    let light = planned(&stated, &study(1, Key::Mass, [GM_JUPITER, 3.0 * GM_JUPITER], OPEN));
    assert_eq!(
        (light.coordinates, light.coordinates_why),
        (Coordinates::Heliocentric, CoordinatesWhy::Light)
    );
    let as_stated = planned(&far("90 Mjup"), &study(1, Key::Mass, [GM_JUPITER, 2.0 * GM_JUPITER], OPEN));
    assert!(matches!(as_stated.coordinates_why, CoordinatesWhy::Heavy { in_a_corner: false, .. }));
}

/// At a step that was asked the scheme follows the energy error that was asked.
#[test]
fn a_scheme_is_found_for_a_step_that_was_asked() {
    let step = Step::PerOrbit(25.0);
    let easy = plan("auto", step, 1e-6);
    assert_eq!((easy.scheme, tried(&easy).1.len()), ("(2,2)", 1));
    let hard = plan("auto", step, 1e-12);
    let (chosen, each) = tried(&hard);
    assert!(chosen.met() && chosen.scheme == hard.scheme && chosen.scheme != "(2,2)", "{chosen:?}");
    assert_eq!(hard.step_day, plan("(2,2)", step, 1e-12).step_day);
    // All that cost less miss it, and they are tried in the order of their cost.
    assert!(each.is_sorted_by_key(|trial| trial.kicks_per_step));
    assert!(each.iter().all(|t| t.met() == (t.scheme == chosen.scheme)), "{each:?}");
    let words = hard.scheme_why.to_string();
    assert!(
        words.starts_with("the fewest kicks per step of those that keep 2.5e-13 in short runs"),
        "{words}"
    );
    assert!(words.contains("at the step asked: (2,2) 1 kick err "), "{words}");
    let found = assess(&pair(), &hard);
    assert_eq!((found.redone, found.scheme), (0, chosen.scheme), "{found:?}");
    assert!(found.energy_error.unwrap() <= 1e-12);
    assert!(assess(&pair(), &plan("(2,2)", step, 1e-12)).redone > 0);
    // What was asked stays as it was asked.
    assert_eq!(plan("(2,2)", step, 1e-12).scheme_why, SchemeWhy::Asked);

    let impossible = plan("auto", step, 1e-15);
    let (nearest, each) = tried(&impossible);
    assert_eq!(each.len(), 7);
    assert!(each.iter().all(|t| !t.met() && t.energy_error >= nearest.energy_error), "{each:?}");
    let words = impossible.scheme_why.to_string();
    assert!(words.starts_with("none keeps 2.5e-16, this one comes nearest in short runs at the step asked"));
}

/// A step so short that a short run would take for ever is tried over fewer orbits.
#[test]
fn a_very_short_step_is_tried_in_bounded_time() {
    let limits = Limits { escape_au: None, encounter: Encounter::Off, stop_when_chaotic: false };
    let engine = engine("auto", Step::Days(1e-6), 1e-6);
    let (chosen, _) = tried(&Plan::new(Span::Days(1e5), &limits, &engine, &pair()));
    assert_eq!((chosen.told, chosen.scheme), (1, "(2,2)"));
}

/// With every scheme asked in turn, none has a cheaper step that meets the target than the one that "auto" took.
#[test]
fn the_open_choice_is_the_cheapest_of_all_candidates() {
    for target in [1e-7, 1e-9, 1e-11] {
        let (chosen, _) = tried(&plan("auto", Step::Auto, target));
        assert!(chosen.met(), "{chosen:?}");
        let alone = ["(2,2)", "(8,4)", "(8,6,4)", "(10,6,4)"].map(|scheme| {
            let StepWhy::Pericentre { trial: Some(trial), .. } = plan(scheme, Step::Auto, target).step_why
            else {
                panic!("a step is chosen")
            };
            assert_eq!((trial.scheme, trial.kicks_per_step), (scheme, stages(scheme)));
            trial
        });
        let met = alone.iter().filter(|trial| trial.met());
        let cheapest = met.min_by(|a, b| a.kicks_per_passage().total_cmp(&b.kicks_per_passage()));
        assert_eq!(Some(&chosen), cheapest, "{target:e}: {alone:?}");
    }
}

#[test]
fn a_target_below_rounding_is_said_to_be_missed() {
    let plan = plan("auto", Step::Auto, 1e-15);
    let (nearest, each) = tried(&plan);
    assert_eq!(each.len(), 4);
    assert!(each.iter().all(|t| !t.met() && t.energy_error >= nearest.energy_error), "{each:?}");
    let StepWhy::Pericentre { trial, steps_per_passage } = &plan.step_why else { panic!("{plan:?}") };
    assert_eq!((trial, *steps_per_passage), (&Some(nearest), nearest.steps_per_passage));
    let words = plan.step_why.to_string();
    let error = nearest.energy_error.unwrap();
    let end = format!(
        "short runs of 1 configuration err by at most {error:.1e} then, which misses the 2.5e-16 wanted"
    );
    assert!(words.ends_with(&end), "{words}");
    assert!(plan.scheme_why.to_string().starts_with("none keeps 2.5e-16, this one comes nearest"));
}

/// A limit within the orbits loses everything at the first look; a close start tells nothing where encounters are resolved.
#[test]
fn runs_that_are_lost_tell_nothing() {
    let lost = Limits { escape_au: Some(0.05), ..OPEN };
    for step in [Step::Auto, Step::PerOrbit(30.0)] {
        let plan = Plan::new(Span::Orbits(1000.0), &lost, &engine("auto", step, 1e-9), &pair());
        let (chosen, _) = tried(&plan);
        assert_eq!((chosen.told, chosen.followed, chosen.energy_error), (0, 1, None));
        assert_eq!((plan.scheme, chosen.met()), ("(2,2)", false));
        let words = "the usual one, as the short runs told nothing: the one configuration was lost in them";
        assert_eq!(plan.scheme_why.to_string(), words);
        assert_eq!(plan.step_why.to_string().contains("told nothing"), step == Step::Auto);
    }
    // c at 34 d is 0.2 au out, at 100 d 0.42 au: the last corner is beyond the limit.
    let near = Limits { escape_au: Some(0.3), ..OPEN };
    let plan = planned(&system("20 Mearth", "34 d"), &study(1, Key::Period, [30.0, 100.0], near));
    let (chosen, _) = tried(&plan);
    assert_eq!((chosen.told, chosen.followed), (2, 3));
    let words = plan.step_why.to_string();
    assert!(
        words.contains("short runs of 2 configurations (1 more was lost in them) err by at most"),
        "{words}"
    );

    let crossing = Limits { encounter: Encounter::Resolve, ..OPEN };
    let close = study(1, Key::Period, [10.9, 11.1], crossing);
    let (chosen, _) = tried(&planned(&system("20 Mearth", "11 d"), &close));
    assert_eq!((chosen.told, chosen.scheme, chosen.steps_per_passage), (0, "(2,2)", 20.0));
}

#[test]
fn the_demo_keeps_leapfrog_at_twenty_steps() {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/systems/lanthorn.toml");
    let nominal = configure(&read_system(path).unwrap().system).unwrap();
    let plan = Plan::new(Span::Orbits(1e4), &OPEN, &engine("auto", Step::Auto, 1e-6), &nominal);
    let (chosen, each) = tried(&plan);
    assert_eq!((plan.scheme, chosen.steps_per_passage, each.len()), ("(2,2)", 20.0, 1));
    let error = chosen.energy_error.unwrap();
    let words = format!(
        "the fewest kicks per passage of those that keep 2.5e-7 in short runs: (2,2) 20 kicks err {error:.1e}; \
         dearer at their fewest steps: (8,4) 100, (8,6,4) 140, (10,6,4) 160"
    );
    assert_eq!(plan.scheme_why.to_string(), words);
}

/// Two planets of the demo come about as near to each other as this limit: whether a short run crosses it hangs on scheme
/// and step, and one that is lost under the first scheme says nothing of the others.
#[test]
fn a_scheme_that_loses_the_runs_does_not_end_the_search() {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/systems/lanthorn.toml");
    let configuration = configure(&read_system(path).unwrap().system).unwrap();
    let limits = Limits { encounter: Encounter::Stop { hill: 9.184 }, ..OPEN };
    let plan = Plan::new(Span::Orbits(210.0), &limits, &engine("auto", Step::Auto, 1e-10), &configuration);
    let SchemeWhy::Tried { chosen, each, .. } = &plan.scheme_why else { panic!("{:?}", plan.scheme_why) };
    assert!(chosen.met(), "{chosen:?}");
    assert!(each.len() > 1 && chosen.scheme != "(2,2)", "{each:?}");
}
