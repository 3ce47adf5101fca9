//! The adaptive engine where the symplectic scheme cannot go, and beside it where both can.

use std::path::Path;

use abide::assess::{ADAPTIVE, Plan, assess};
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
