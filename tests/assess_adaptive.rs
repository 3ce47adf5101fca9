//! The adaptive engine where the symplectic scheme cannot go, and beside it where both can.

use std::path::Path;

use abide::assess::{ADAPTIVE, Assessment, Plan, assess, follow};
use abide::coords::{Configuration, configure};
use abide::input::{parse_system, read_system};
use abide::system::{Encounter, Engine, Limits, Span};
use abide::verdict::{LostHow, Verdict};

fn demo(name: &str) -> Configuration {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("systems").join(name);
    configure(&read_system(&path).unwrap().system).unwrap()
}

fn engine(energy_error: f64) -> Engine {
    Engine { scheme: "auto".to_string(), energy_error, ..Engine::default() }
}

fn plan(configuration: &Configuration, orbits: f64, encounter: Encounter, energy_error: f64) -> Plan {
    let limits = Limits { escape_au: None, encounter, stop_when_chaotic: false };
    Plan::new(Span::Orbits(orbits), &limits, &engine(energy_error), configuration)
}

/// Two Neptunes on crossing orbits: they meet again and again.
fn crossing() -> Configuration {
    let text = "title = \"Crossing\"\n[star]\nmass = \"1 Msun\"\nradius = \"1 Rsun\"\n\
        [[planet]]\nname = \"b\"\nperiod = \"100 d\"\nmass = \"20 Mearth\"\nradius = \"4 Rearth\"\neccentricity = 0.05\n\
        argument_of_pericentre = \"20 deg\"\nmean_anomaly = \"10 deg\"\n\
        [[planet]]\nname = \"c\"\nperiod = \"117 d\"\nmass = \"17 Mearth\"\nradius = \"4 Rearth\"\neccentricity = 0.08\n\
        argument_of_pericentre = \"200 deg\"\nmean_anomaly = \"120 deg\"\ninclination = \"88 deg\"\n";
    configure(&parse_system("crossing.toml", text).unwrap().system).unwrap()
}

#[test]
fn encounters_are_gone_through_with_the_energy_kept() {
    let configuration = crossing();
    let stopped = assess(&configuration, &plan(&configuration, 1500.0, Encounter::Stop { hill: 1.0 }, 1e-6));
    assert_eq!(stopped.loss.map(|l| l.how), Some(LostHow::Encounter), "{stopped:?}");
    let resolved = assess(&configuration, &plan(&configuration, 1500.0, Encounter::Resolve, 1e-6));
    assert!(resolved.end_time_day > 1.5 * stopped.end_time_day, "{resolved:?}");
    assert!(resolved.energy_error.unwrap() < 1e-6, "{resolved:?}");
    assert!(resolved.smallest_approach.unwrap().hill < 1.0, "{resolved:?}");
    assert!(matches!(resolved.verdict, Verdict::Chaotic | Verdict::Lost), "{resolved:?}");
    // Straight through with the symplectic scheme alone the same passages cost more energy.
    let through = Plan { energy_error: f64::INFINITY, ..plan(&configuration, 1500.0, Encounter::Off, 1e-6) };
    let through = assess(&configuration, &through);
    assert!(through.energy_error.unwrap() > 3.0 * resolved.energy_error.unwrap(), "{through:?} {resolved:?}");
}

#[test]
fn both_engines_say_the_same_of_a_regular_system() {
    for name in ["ombra.toml", "lanthorn.toml"] {
        let configuration = demo(name);
        let symplectic = plan(&configuration, 2000.0, Encounter::Stop { hill: 1.0 }, 1e-6);
        let adaptive = Plan { adaptive: true, ..symplectic.clone() };
        let (a, b) = (assess(&configuration, &symplectic), assess(&configuration, &adaptive));
        assert_eq!((a.verdict, b.verdict), (Verdict::Regular, Verdict::Regular), "{name}: {a:?} {b:?}");
        assert_eq!(b.scheme, ADAPTIVE);
        assert!(b.energy_error.unwrap() < 1e-12, "{name}: {b:?}");
        assert!((a.megno.unwrap() - b.megno.unwrap()).abs() < 0.02, "{name}: {a:?} {b:?}");
        for (x, y) in a.extent.iter().zip(&b.extent) {
            assert!((x.eccentricity.max - y.eccentricity.max).abs() < 2e-3, "{name}: {x:?} {y:?}");
        }
    }
}

#[test]
fn a_target_the_scheme_cannot_meet_goes_to_the_adaptive_engine() {
    let configuration = demo("ombra.toml");
    let mut asked = plan(&configuration, 300.0, Encounter::Stop { hill: 1.0 }, 1e-6);
    // Steps far too long for the error: two refinements cannot save them.
    asked.step_day = Some(12.0);
    asked.energy_error = 1e-12;
    asked.scheme = "(2,2)";
    let outcome = assess(&configuration, &asked);
    assert_eq!((outcome.scheme, outcome.redone), (ADAPTIVE, 3), "{outcome:?}");
    assert!(outcome.energy_error.unwrap() < 1e-12, "{outcome:?}");
}

#[test]
fn a_step_is_shortened_by_no_more_than_the_schemes_order_asks() {
    let configuration = demo("ombra.toml");
    // The first look that shows more than the target sees an error between once and three times it, so that the step
    // must become between the root of 1/4 and that of 1/12 of itself: the square root, or the fourth of (8,4).
    for (scheme, root) in [("(8,4)", 0.25), ("(2,2)", 0.5)] {
        let free = Plan {
            scheme,
            step_day: Some(12.0),
            energy_error: f64::INFINITY,
            ..plan(&configuration, 300.0, Encounter::Stop { hill: 1.0 }, 1e-6)
        };
        let coarse = assess(&configuration, &free);
        let asked = Plan { energy_error: coarse.energy_error.unwrap() / 3.0, ..free.clone() };
        let fine = assess(&configuration, &asked);
        assert_eq!((fine.scheme, fine.redone), (scheme, 1), "{fine:?}");
        assert!(fine.energy_error.unwrap() <= asked.energy_error, "{fine:?}");
        let found = fine.step_day / coarse.step_day;
        let [least, most] = [12.0f64, 4.0].map(|parts| (1.0 / parts).powf(root));
        // Shorter by up to a block, so that the span holds a whole number of blocks.
        let blocks = asked.span_day / (coarse.step_day * most * asked.block_steps as f64);
        assert!(
            found <= most && found > least * (1.0 - 1.0 / blocks),
            "{scheme}: {found} in {least} … {most}"
        );
    }
}

/// Two planets of ten earth masses in the star's plane, `c` further out at `axis_au`, ahead of `b` by `ahead_deg`.
fn near_the_star(physics: &str, axis_au: f64, eccentricity: f64, ahead_deg: f64) -> Configuration {
    let text = format!(
        "title = \"Passing\"\n[star]\nmass = \"1 Msun\"\nradius = \"0.5 Rsun\"\n{physics}\n\
         [[planet]]\nname = \"b\"\nsemi_major_axis = \"0.04 au\"\nmass = \"10 Mearth\"\nradius = \"1.5 Rearth\"\n\
         mean_anomaly = \"0 deg\"\n\
         [[planet]]\nname = \"c\"\nsemi_major_axis = \"{axis_au} au\"\nmass = \"10 Mearth\"\nradius = \"2.5 Rearth\"\n\
         eccentricity = {eccentricity}\nmean_anomaly = \"{ahead_deg} deg\"\n"
    );
    configure(&parse_system("passing.toml", &text).unwrap().system).unwrap()
}

const RELATIVITY: &str = "[physics]\nrelativity = true";

/// Forty steps per orbit of the scheme of the smallest error.
fn fine(configuration: &Configuration, orbits: f64, encounter: Encounter) -> Plan {
    let engine =
        Engine { scheme: "(10,6,4)".to_string(), step: abide::system::Step::PerOrbit(40.0), ..engine(1e-6) };
    let limits = Limits { escape_au: None, encounter, stop_when_chaotic: false };
    Plan::new(Span::Orbits(orbits), &limits, &engine, configuration)
}

/// Handed to another law and back, the same passages cost 1.3e-7 at each kick: only the law of the scheme keeps the energy.
#[test]
fn the_passages_of_a_scheme_obey_its_law() {
    for physics in ["", RELATIVITY] {
        let configuration = near_the_star(physics, 0.0445, 0.04, 60.0);
        let outcome = assess(&configuration, &fine(&configuration, 100.0, Encounter::Resolve));
        assert_eq!((outcome.loss, outcome.redone), (None, 0), "{physics} {outcome:?}");
        assert!(outcome.passages.unwrap() >= 2, "{physics} {outcome:?}");
        assert!(outcome.passage_energy_error.unwrap() < 1e-13, "{physics} {outcome:?}");
        assert!(outcome.energy_error.unwrap() < 1e-12, "{physics} {outcome:?}");
        assert!(outcome.energy_error >= outcome.passage_energy_error);
    }
}

/// What is told is in the velocities that were stated, not in those that give the potential its mean motion.
#[test]
fn the_first_row_is_the_stated_orbit_with_relativity_too() {
    let configuration = near_the_star(RELATIVITY, 0.06, 0.04, 60.0);
    let symplectic = fine(&configuration, 200.0, Encounter::Stop { hill: 1.0 });
    let adaptive = Plan { adaptive: true, ..symplectic.clone() };
    let told = |plan: &Plan| follow(&configuration, plan, 20, |_| true).unwrap();
    let (a, b) = (told(&symplectic), told(&adaptive));
    for (planet, axis_au) in [0.04, 0.06].into_iter().enumerate() {
        for rows in [&a.1, &b.1] {
            let first = rows[0].elements[planet].semi_major_axis_au;
            assert!((first / axis_au - 1.0).abs() < 1e-13, "{first}");
        }
        // 6 GM/(c² r) = 1.5e-6 at 0.04 au is what the velocities differ by, twice that in the axis.
        let middle = |outcome: &Assessment| {
            let range = outcome.extent[planet].semi_major_axis_au;
            0.5 * (range.min + range.max)
        };
        let apart = middle(&a.0) / middle(&b.0) - 1.0;
        assert!(apart.abs() < 3e-7, "{planet}: {apart:e}");
    }
}

#[test]
fn a_crash_course_ends_as_an_encounter_with_either_engine() {
    let configuration = near_the_star("", 0.0422, 0.0, 30.0);
    let symplectic = fine(&configuration, 100.0, Encounter::Stop { hill: 1.0 });
    let adaptive = Plan { adaptive: true, ..symplectic.clone() };
    let (a, b) = (assess(&configuration, &symplectic), assess(&configuration, &adaptive));
    assert_eq!((a.scheme, b.scheme), ("(10,6,4)", ADAPTIVE));
    let (lost, also) = (a.loss.unwrap(), b.loss.unwrap());
    assert_eq!((lost.how, lost.planet, lost.other), (LostHow::Encounter, also.planet, also.other));
    assert_eq!(also.how, LostHow::Encounter);
    // The kernel notices at the end of the step, the adaptive engine where it happens.
    let late = lost.time_day - also.time_day;
    assert!(late >= 0.0 && late <= a.step_day, "{late} {} {a:?} {b:?}", a.step_day);
    assert!((b.smallest_approach.unwrap().hill - 1.0).abs() < 1e-12, "{b:?}");
    assert!(b.energy_error.unwrap() < 1e-13, "{b:?}");
    // It ended within its first block of 128 steps, at the end of which the momentum would have been looked at.
    assert_eq!((b.steps < 128, b.angular_momentum_error), (true, None), "{b:?}");
    // Only contact ends what is not to end at encounters, and that is later.
    for encounter in [Encounter::Resolve, Encounter::Off] {
        for adaptive in [false, true] {
            let plan = Plan { adaptive, ..fine(&configuration, 100.0, encounter) };
            let through = assess(&configuration, &plan);
            assert!(through.loss.is_none_or(|loss| loss.how == LostHow::Collision), "{through:?}");
            assert!(through.end_time_day > lost.time_day, "{through:?}");
        }
    }
}

#[test]
fn a_collision_is_as_near_as_the_radii_say() {
    let configuration = near_the_star("", 0.0422, 0.0, 30.0);
    let resolved = fine(&configuration, 100.0, Encounter::Resolve);
    for plan in [resolved.clone(), Plan { adaptive: true, ..resolved }] {
        let outcome = assess(&configuration, &plan);
        let loss = outcome.loss.unwrap();
        assert_eq!(loss.how, LostHow::Collision, "{outcome:?}");
        // 1.5 + 2.5 nominal earth radii of 6378.1 km (IAU 2015 B3), in au (IAU 2012 B2).
        let contact_au = 4.0 * 6378.1 / 149_597_870.7;
        let nearest = outcome.smallest_approach.unwrap();
        assert!((nearest.au / contact_au - 1.0).abs() < 1e-9, "{outcome:?}");
        assert_eq!(nearest.pair, (0, 1));
    }
}

/// At one step per orbit the planets seem to meet in the first step, before any energy error can show.
#[test]
fn a_loss_in_the_first_steps_is_looked_at_with_shorter_ones() {
    let configuration = demo("lanthorn.toml");
    let step = abide::system::Step::PerOrbit(1.0);
    let engine = Engine { step, scheme: "(2,2)".to_owned(), ..engine(1e-6) };
    let limits =
        Limits { escape_au: None, encounter: Encounter::Stop { hill: 1.0 }, stop_when_chaotic: false };
    let plan = Plan::new(Span::Orbits(300.0), &limits, &engine, &configuration);
    let outcome = assess(&configuration, &plan);
    assert_eq!(outcome.verdict, Verdict::Regular, "{outcome:?}");
    assert!(outcome.redone > 0 && outcome.energy_error.unwrap() <= 1e-6, "{outcome:?}");
    // Where no error is too large, it is not known at least.
    let anything = Plan { energy_error: f64::INFINITY, ..plan };
    let outcome = assess(&configuration, &anything);
    assert_eq!((outcome.verdict, outcome.energy_error), (Verdict::Lost, None), "{outcome:?}");
    // A true loss as early is found again.
    let configuration = near_the_star("", 0.0405, 0.0, 4.64);
    let early = Plan { step_day: Some(0.1), ..fine(&configuration, 100.0, Encounter::Stop { hill: 2.5 }) };
    let outcome = assess(&configuration, &early);
    assert_eq!(outcome.loss.map(|loss| loss.how), Some(LostHow::Encounter), "{outcome:?}");
    assert!(outcome.redone > 0 && outcome.energy_error.unwrap() <= 1e-6, "{outcome:?}");
}
