//! One configuration followed: its rows, and that it can be put down anywhere without a trace.

use abide::assess::{Assessment, Follower, Plan, Row, assess, follow, plan_for_rows};
use abide::coords::{Configuration, configure};
use abide::input::parse_system;
use abide::num::Kept;
use abide::system::{Encounter, Engine, Limits, Span, Step};
use abide::verdict::Verdict;

/// An invented pair; c's period decides what becomes of it.
fn pair(period_c_day: f64, eccentricity: f64) -> Configuration {
    let text = format!(
        r#"
title = "Pair"
[star]
mass = "1 Msun"
[[planet]]
name = "b"
period = "10 d"
mass = "20 Mearth"
eccentricity = {eccentricity}
argument_of_pericentre = "20 deg"
mean_anomaly = "10 deg"
[[planet]]
name = "c"
period = "{period_c_day} d"
mass = "20 Mearth"
eccentricity = {eccentricity}
argument_of_pericentre = "200 deg"
mean_anomaly = "140 deg"
"#
    );
    configure(&parse_system("pair.toml", &text).unwrap().system).unwrap()
}

fn plan(configuration: &Configuration, orbits: f64, scheme: &str, energy_error: f64) -> Plan {
    let limits = Limits { escape_au: None, encounter: Encounter::Off, stop_when_chaotic: false };
    let engine = Engine {
        scheme: scheme.to_string(),
        coordinates: abide::system::CoordinateChoice::Auto,
        compensated: abide::system::Compensation::Auto,
        step: Step::Auto,
        energy_error,
    };
    Plan::new(Span::Orbits(orbits), &limits, &engine, configuration)
}

fn undisturbed(configuration: &Configuration, plan: &Plan, rows: usize) -> (Assessment, Vec<Row>) {
    follow(configuration, plan, rows, |_| true).unwrap()
}

/// With every digit of what was sampled.
fn sampled(configuration: &Configuration, plan: &Plan, rows: usize) -> ((Assessment, Vec<Row>), String) {
    let mut follower = Follower::new(configuration, plan, rows);
    while follower.assessment().is_none() {
        follower.one_block();
    }
    let samples = seen(&follower);
    (follower.finish().unwrap(), samples)
}

fn seen(follower: &Follower) -> String {
    format!("{:?} {:?}", follower.samples().whole(), follower.samples().windows())
}

/// Every digit of everything, also of what is not a number.
fn digits(outcome: &(Assessment, Vec<Row>)) -> String {
    format!("{outcome:?}")
}

/// Put down as bytes and taken up again every few blocks, also after the end.
fn disturbed(
    configuration: &Configuration,
    plan: &Plan,
    rows: usize,
) -> ((Assessment, Vec<Row>), String, usize) {
    let mut follower = Follower::new(configuration, plan, rows);
    let (mut state, mut times) = (7u64, 0);
    while follower.assessment().is_none() {
        state = state.wrapping_mul(6364136223846793005).wrapping_add(1442695040888963407);
        for _ in 0..=(state >> 59) {
            follower.one_block();
        }
        let kept = Kept::from_bytes(&follower.keep().to_bytes()).unwrap();
        let ended = follower.assessment().is_some();
        follower = Follower::restored(configuration, plan, rows, &kept).unwrap();
        times += 1;
        if ended {
            follower.one_block();
            assert!(follower.assessment().is_some(), "what had ended ends again at once");
        }
    }
    let samples = seen(&follower);
    (follower.finish().unwrap(), samples, times)
}

#[test]
fn put_down_anywhere_and_taken_up_it_ends_with_the_same_bits() {
    let quiet = pair(17.3, 0.05);
    let wild = pair(12.0, 0.11);
    let cases = [
        (&quiet, "(2,2)", 1e-6, Verdict::Regular, 0),
        (&quiet, "(10,6,4)", 1e-6, Verdict::Regular, 0),
        (&wild, "(2,2)", 1e-6, Verdict::Lost, 1),
        (&wild, "(2,2)", 1e-16, Verdict::Untrusted, 2),
    ];
    for (configuration, scheme, energy_error, verdict, redone) in cases {
        for (rows, compensated) in [(7, false), (300, false), (20, true)] {
            let plan = Plan { compensated, ..plan(configuration, 1000.0, scheme, energy_error) };
            // Short blocks, so that there are many moments to be put down at.
            let plan = plan_for_rows(&plan, configuration, 2000);
            let (plain, plain_samples) = sampled(configuration, &plan, rows);
            assert_eq!(plain.0.verdict, verdict, "{scheme} {energy_error}");
            assert!(plain.0.redone >= redone, "begins again on the way");
            let (broken, samples, times) = disturbed(configuration, &plan, rows);
            assert!(samples == plain_samples, "{scheme} {verdict:?} {rows} rows: samples differ");
            assert!(times >= 3 || verdict == Verdict::Untrusted, "put down {times} times only");
            assert_eq!(digits(&broken), digits(&plain), "{scheme} {verdict:?} {rows} rows");
        }
    }
}

#[test]
fn followed_and_assessed_are_the_same() {
    let configuration = pair(17.3, 0.05);
    let plan = plan_for_rows(&plan(&configuration, 500.0, "(2,2)", 1e-6), &configuration, 100);
    let (followed, _) = undisturbed(&configuration, &plan, 100);
    assert_eq!(followed, assess(&configuration, &plan));
}

#[test]
fn rows_begin_at_the_start_end_with_the_span_and_are_no_more_than_asked() {
    let configuration = pair(17.3, 0.05);
    for rows in [2, 3, 10, 100, 1000, 5000] {
        let base = plan(&configuration, 1000.0, "(2,2)", 1e-6);
        let plan = plan_for_rows(&base, &configuration, rows);
        let (assessment, found) = undisturbed(&configuration, &plan, rows);
        assert!(found.len() <= rows && found.len() * 2 > rows, "{} of {rows}", found.len());
        assert_eq!(found[0].time_day, 0.0);
        assert_eq!(found[found.len() - 1].time_day, assessment.end_time_day);
        let gap = found[1].time_day;
        for pair in found[..found.len() - 1].windows(2) {
            assert!((pair[1].time_day - pair[0].time_day - gap).abs() < 1e-9 * gap, "evenly spaced");
        }
    }
}

/// Thinning hides no extreme: the ranges of the rows together are the extent, and hold the row's own elements.
#[test]
fn the_ranges_of_the_rows_are_the_extent() {
    let configuration = pair(17.3, 0.05);
    let plan = plan(&configuration, 1000.0, "(2,2)", 1e-6);
    let (assessment, rows) = undisturbed(&configuration, &plan, 9);
    for (planet, extent) in assessment.extent.iter().enumerate() {
        let of = |row: &Row| row.extent[planet].eccentricity;
        let low = rows[1..].iter().map(|row| of(row).min).fold(f64::INFINITY, f64::min);
        let high = rows[1..].iter().map(|row| of(row).max).fold(0.0, f64::max);
        assert_eq!((low, high), (extent.eccentricity.min, extent.eccentricity.max));
        for row in &rows {
            let e = row.elements[planet].eccentricity;
            assert!(of(row).min <= e && e <= of(row).max);
        }
    }
}

#[test]
fn numbers_of_something_else_are_not_taken_up() {
    let configuration = pair(17.3, 0.05);
    let plan = plan(&configuration, 1000.0, "(2,2)", 1e-6);
    let mut follower = Follower::new(&configuration, &plan, 50);
    (0..40).for_each(|_| follower.one_block());
    let bytes = follower.keep().to_bytes();
    let restored = |bytes: &[u8], rows| {
        Follower::restored(&configuration, &plan, rows, &Kept::from_bytes(bytes).unwrap()).is_some()
    };
    assert!(restored(&bytes, 50));
    assert!(!restored(&bytes[..bytes.len() - 8], 50), "one number short");
    assert!(!restored(&[&bytes[..], &[0; 8]].concat(), 50), "one number too many");
    assert!(!restored(&bytes, 5), "more rows than there may be");
}

/// Two bodies move on one ellipse: the expected values are the stated ones.
#[test]
fn a_planet_alone_keeps_its_elements() {
    let text = "title = \"Alone\"\n[star]\nmass = \"1 Msun\"\n[[planet]]\nname = \"b\"\nsemi_major_axis = \"0.7 au\"\n\
                mass = \"1 Mjup\"\neccentricity = 0.6\nargument_of_pericentre = \"50 deg\"\nmean_anomaly = \"0 deg\"\n\
                inclination = \"60 deg\"";
    let configuration = configure(&parse_system("alone.toml", text).unwrap().system).unwrap();
    let plan = plan(&configuration, 1000.0, "(10,6,4)", 1e-10);
    let (assessment, rows) = undisturbed(&configuration, &plan, 200);
    assert_eq!(assessment.verdict, Verdict::Regular);
    assert_eq!(assessment.smallest_approach, None);
    for row in &rows {
        let e = &row.elements[0];
        assert!((e.semi_major_axis_au - 0.7).abs() < 1e-9, "{}", e.semi_major_axis_au);
        assert!((e.eccentricity - 0.6).abs() < 1e-9 && (e.inclination.to_degrees() - 60.0).abs() < 1e-9);
        assert!((e.argument_of_pericentre.to_degrees() - 50.0).abs() < 1e-6);
    }
}

/// Long enough for windows and for thinning: at most as many samples as there may be, evenly spaced, five to an orbit and more in
/// the windows; taken up anywhere they are the same.
#[test]
fn samples_are_bounded_dense_at_both_ends_and_the_same_after_a_break() {
    let configuration = pair(17.3, 0.05);
    let base = plan(&configuration, 5000.0, "(2,2)", 1e-6);
    let plan = plan_for_rows(&base, &configuration, 2 * abide::assess::MOST_SAMPLES);
    let mut follower = Follower::new(&configuration, &plan, 10);
    while follower.assessment().is_none() {
        follower.one_block();
    }
    let (whole, windows) = (follower.samples().whole(), follower.samples().windows());
    let count = whole.rows.len();
    assert!(count <= abide::assess::MOST_SAMPLES + 1 && 2 * count > abide::assess::MOST_SAMPLES, "{count}");
    assert_eq!(windows.len(), 2);
    for window in &windows {
        assert!(
            window.step_day <= 2.0 && window.rows.len() > 4000,
            "{} {}",
            window.step_day,
            window.rows.len()
        );
    }
    assert!(windows[0].begin_day == 0.0 && windows[1].begin_day > 0.8 * plan.span_day);
    // What a window saw at the start is what the whole span saw there.
    let (one, other) = (&whole.rows[0][0], &windows[0].rows[0][0]);
    assert!((one.semi_major_axis_au - other.semi_major_axis_au).abs() < 1e-9, "{one:?} {other:?}");
    let (_, samples, _) = disturbed(&configuration, &plan, 10);
    assert!(samples == seen(&follower));
}

/// The adaptive engine's rows are its own, whatever the length of the blocks in which it is looked at.
#[test]
fn rows_of_the_adaptive_engine_do_not_depend_on_the_step() {
    let configuration = pair(17.3, 0.05);
    let at_end = |step_day: f64| {
        let mut plan = plan(&configuration, 40.0, "(2,2)", 1e-6);
        (plan.adaptive, plan.step_day, plan.megno) = (true, Some(step_day), false);
        let (assessment, rows) = undisturbed(&configuration, &plan, 50);
        assert!(assessment.loss.is_none());
        rows.last().unwrap().elements.clone()
    };
    for (fine, coarse) in at_end(0.4).iter().zip(&at_end(2.0)) {
        assert!((fine.eccentricity - coarse.eccentricity).abs() < 1e-10, "{fine:?} {coarse:?}");
        assert!((fine.semi_major_axis_au / coarse.semi_major_axis_au - 1.0).abs() < 1e-10);
    }
}
