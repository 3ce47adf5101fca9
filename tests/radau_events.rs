//! Events at places and times known in closed form; passages; conics; the limits.

mod radau_support;

use std::f64::consts::{PI, TAU};
use std::ops::ControlFlow;

use abide::integrate::forces::Forces;
use abide::integrate::radau::{
    Bodies, Ending, Engine, Event, EventKind, RadauError, Stop, TOLERANCE, Until, Watch, advance, pass,
};
use abide::integrate::{State, Tangent};
use radau_support::*;

/// A planet at pericentre of an ellipse round a star, G × total mass = 1.
fn ellipse(axis: f64, eccentricity: f64, share: f64) -> State {
    let r = axis * (1.0 - eccentricity);
    let v = ((1.0 + eccentricity) / r).sqrt();
    // Barycentric velocity: the star's part of the relative one.
    State {
        star_gm: 1.0 - share,
        gm: vec![share],
        pos: vec![[r, 0.0, 0.0]],
        vel: vec![[0.0, v * (1.0 - share), 0.0]],
    }
}

/// All events of a run.
fn events(state: &State, days: f64, watch: &Watch) -> (Vec<Event>, Engine) {
    let mut engine = Engine::from_state(state, &[], &Forces::newton(), TOLERANCE).unwrap();
    let mut seen = Vec::new();
    let stop = engine.advance(days, watch, |event| {
        seen.push(*event);
        ControlFlow::Continue(())
    });
    assert_eq!(stop.unwrap(), Stop::Time);
    (seen, engine)
}

#[test]
fn every_pericentre_of_an_ellipse_either_way_in_time() {
    let watch = Watch { approach_au: f64::INFINITY, ..Watch::default() };
    for (axis, eccentricity, share) in
        [(1.0, 0.3, 1e-3), (2.5, 0.9, 0.5), (1.0, 0.01, 1e-12), (1.0, 0.999, 1e-6)]
    {
        let state = ellipse(axis, eccentricity, share);
        let period = TAU * f64::powf(axis, 1.5);
        for way in [1.0, -1.0] {
            let (seen, _) = events(&state, way * 5.5 * period, &watch);
            // The start is at a pericentre, where the rate is 0 but for rounding.
            let seen: Vec<&Event> = seen.iter().filter(|event| event.day.abs() > 0.01 * period).collect();
            assert_eq!(seen.len(), 5, "e = {eccentricity}, way {way}: {seen:?}");
            for (k, event) in seen.iter().enumerate() {
                let (day, distance) = (way * period * (k + 1) as f64, axis * (1.0 - eccentricity));
                // One rounding of the start shifts the period by 3/(1 − e) roundings. The minimum is as flat as the
                // circle is round: its time is good to rounding over e.
                let slack = 4e-15 * (k + 1) as f64 * (3.0 / (1.0 - eccentricity) + 1.0 / eccentricity);
                assert!((event.day - day).abs() < slack * period, "e = {eccentricity}: {event:?} {day}");
                assert!((event.distance_au / distance - 1.0).abs() < 1e-13 / (1.0 - eccentricity));
                assert_eq!((event.kind, event.first, event.second), (EventKind::Approach, 0, 1));
            }
        }
    }
}

#[test]
fn two_bodies_at_rest_touch_when_free_fall_says() {
    for (share, radius) in [(0.5, 1e-2), (1e-3, 5e-3), (1e-9, 1e-4)] {
        let state =
            State { star_gm: 1.0 - share, gm: vec![share], pos: vec![[1.0, 0.0, 0.0]], vel: vec![[0.0; 3]] };
        let until =
            Until { day: 10.0, apart: None, radii_au: vec![0.75 * radius, 0.25 * radius], escape_au: None };
        let outcome = pass(&state, None, &Forces::newton(), 0.0, &until, TOLERANCE).unwrap();
        assert_eq!(outcome.ending, Ending::Star { planet: 0 });
        // t = √(d³/2M) (arccos √x + √(x(1 − x))), x = distance/d.
        let x: f64 = radius;
        let day = (x.sqrt().acos() + (x * (1.0 - x)).sqrt()) / 2f64.sqrt();
        assert!((outcome.day - day).abs() < 2e-15, "{:e}", outcome.day - day);
        let gap = distance(&outcome.state.pos[0], &[0.0; 3]);
        // A rounding of the time moves the bodies by v · 1e-16.
        assert!((gap - radius).abs() < 4e-16 * (2.0 / radius).sqrt(), "{:e}", gap - radius);
    }
}

/// As above, at a distance beyond contact; the way out of it is no event.
#[test]
fn a_pair_is_near_when_free_fall_says_and_only_on_its_way_in() {
    let (share, near): (f64, f64) = (1e-3, 0.3);
    let state =
        State { star_gm: 1.0 - share, gm: vec![share], pos: vec![[1.0, 0.0, 0.0]], vel: vec![[0.0; 3]] };
    let watch = Watch { near: vec![(1, 0, near)], ..Watch::default() };
    let day = (near.sqrt().acos() + (near * (1.0 - near)).sqrt()) / 2f64.sqrt();
    let (seen, _) = events(&state, 1.1, &watch);
    assert_eq!(seen.len(), 1, "{seen:?}");
    assert_eq!((seen[0].kind, seen[0].first, seen[0].second), (EventKind::Near, 0, 1));
    assert!((seen[0].day - day).abs() < 2e-15, "{:e}", seen[0].day - day);
    assert!((seen[0].distance_au - near).abs() < 1e-15);
    // An ellipse goes in once a turn: where r = a (1 − e cos E) is that distance before pericentre.
    let (axis, eccentricity): (f64, f64) = (1.0, 0.9);
    let watch = Watch { near: vec![(0, 1, 0.5)], ..Watch::default() };
    let (seen, _) = events(&ellipse(axis, eccentricity, share), 3.0 * TAU, &watch);
    let anomaly = TAU - (0.5 / eccentricity).acos();
    let day = anomaly - eccentricity * anomaly.sin();
    assert_eq!(seen.len(), 3, "{seen:?}");
    for (turn, event) in seen.iter().enumerate() {
        assert!((event.day - day - TAU * turn as f64).abs() < 1e-12, "{event:?} {day}");
    }
}

#[test]
fn a_run_stopped_at_an_event_goes_on_without_meeting_it_again() {
    let state = ellipse(1.0, 0.4, 1e-3);
    let watch = Watch { approach_au: f64::INFINITY, ..Watch::default() };
    let mut engine = Engine::from_state(&state, &[], &Forces::newton(), TOLERANCE).unwrap();
    let mut days = Vec::new();
    while let Stop::At(event) = engine.advance(60.0, &watch, |_| ControlFlow::Break(())).unwrap() {
        assert!((engine.day() - event.day).abs() < 1e-13);
        days.push(event.day);
    }
    days.retain(|day| *day > 0.1);
    assert_eq!(days.len(), 9, "{days:?}");
    assert!(days.iter().enumerate().all(|(k, day)| (day - TAU * (k + 1) as f64).abs() < 1e-12), "{days:?}");
    assert_eq!(engine.day(), 60.0);
}

#[test]
fn escape_on_a_parabola() {
    // From pericentre q = 1 with total mass 1: r = 1 + D², t = √2 (D + D³/3) (Barker).
    let state =
        State { star_gm: 1.0, gm: vec![0.0], pos: vec![[1.0, 0.0, 0.0]], vel: vec![[0.0, 2f64.sqrt(), 0.0]] };
    let until = Until { day: 1e6, apart: None, radii_au: vec![], escape_au: Some(101.0) };
    let outcome = pass(&state, None, &Forces::newton(), 0.0, &until, TOLERANCE).unwrap();
    assert_eq!(outcome.ending, Ending::Escape { planet: 0 });
    let day = 2f64.sqrt() * (10.0 + 1000.0 / 3.0);
    assert!((outcome.day / day - 1.0).abs() < 1e-13, "{:e}", outcome.day / day - 1.0);
    assert_eq!(outcome.energy_error, None);
}

/// Two planets on close circular orbits, the inner one about to overtake; distances in au, G × star mass = 1.
fn overtaking(gm: f64, gap: f64, behind: f64) -> State {
    let circular = |r: f64, angle: f64| {
        let v = (1.0 / r).sqrt();
        ([r * angle.cos(), r * angle.sin(), 0.0], [-v * angle.sin(), v * angle.cos(), 0.0])
    };
    let ((p1, v1), (p2, v2)) = (circular(1.0, 0.0), circular(1.0 + gap, behind));
    State { star_gm: 1.0, gm: vec![gm, gm], pos: vec![p1, p2], vel: vec![v1, v2] }
}

#[test]
fn an_encounter_is_passed_and_handed_back() {
    for gm in [1e-3, 1e-4, 1e-5] {
        let hill = (2.0 * gm / 3.0f64).cbrt();
        let state = overtaking(gm, 2.0 * hill, 3.0 * hill);
        let tangent = Tangent { pos: vec![[1.0, 0.0, 0.0], [0.0; 3]], vel: vec![[0.0; 3]; 2] };
        let until =
            Until { day: 1100.0, apart: Some((2, 1, 4.0 * hill)), radii_au: vec![], escape_au: Some(50.0) };
        let outcome = pass(&state, Some(&tangent), &Forces::newton(), 100.0, &until, TOLERANCE).unwrap();
        let gap = distance(&outcome.state.pos[0], &outcome.state.pos[1]);
        println!("gm {gm}: {:?} day {} nearest {:?}", outcome.ending, outcome.day, outcome.nearest);
        assert_eq!(outcome.ending, Ending::Apart);
        assert!((gap / (4.0 * hill) - 1.0).abs() < 1e-13);
        let nearest = outcome.nearest.unwrap();
        assert!(nearest.distance_au < 2.5 * hill && (nearest.first, nearest.second) == (1, 2));
        assert!(nearest.day > 0.0 && nearest.day < outcome.day - 100.0);
        let error = outcome.energy_error.unwrap();
        assert!(error.abs() < 4e-15, "gm {gm}: {error:e}");
        // The tangent vector is the derivative of the passage over the same time.
        let days = outcome.day - 100.0;
        let end = |shift: f64| {
            let mut start = state.clone();
            start.pos[0][0] += shift;
            advance(&start, None, &Forces::newton(), days, TOLERANCE).unwrap().state
        };
        let h = 1e-7;
        let (plus, minus) = (end(h), end(-h));
        let found = outcome.tangent.unwrap();
        for body in 0..2 {
            for k in 0..3 {
                let slope = (plus.pos[body][k] - minus.pos[body][k]) / (2.0 * h);
                let size = distance(&found.pos[body], &[0.0; 3]);
                assert!((slope - found.pos[body][k]).abs() < 1e-5 * size, "{slope} {}", found.pos[body][k]);
            }
        }
    }
}

#[test]
fn planets_collide_by_radii_and_overlap_is_seen_at_once() {
    let hill = (2e-5 / 3.0f64).cbrt();
    let state = overtaking(1e-5, 2.0 * hill, 3.0 * hill);
    let radii = vec![0.0, 0.8 * hill, 0.8 * hill];
    let until = |radii: &[f64]| Until { day: 1000.0, apart: None, radii_au: radii.to_vec(), escape_au: None };
    let outcome = pass(&state, None, &Forces::newton(), 0.0, &until(&radii), TOLERANCE).unwrap();
    assert_eq!(outcome.ending, Ending::Collision { first: 0, second: 1 });
    let gap = distance(&outcome.state.pos[0], &outcome.state.pos[1]);
    assert!((gap / (1.6 * hill) - 1.0).abs() < 1e-12);
    let huge = vec![0.0, 3.0 * hill, 3.0 * hill];
    let outcome = pass(&state, None, &Forces::newton(), 5.0, &until(&huge), TOLERANCE).unwrap();
    assert_eq!((outcome.ending, outcome.day), (Ending::Collision { first: 0, second: 1 }, 5.0));
    assert_eq!(outcome.work.steps, 0);
}

#[test]
fn mass_ratios_from_nothing_to_one() {
    for exponent in 0..=12 {
        let share = 0.5 * 10f64.powi(-exponent);
        for eccentricity in [0.0, 0.5, 0.99] {
            let state = ellipse(1.0, eccentricity, share);
            let outcome = advance(&state, None, &Forces::newton(), 10.0 * TAU, TOLERANCE).unwrap();
            let error = outcome.energy_error.unwrap();
            let slack = 2e-13 / (1.0 - eccentricity).powi(2);
            let away = distance(&outcome.state.pos[0], &state.pos[0]);
            assert!(error.abs() < 1e-13, "{share} {eccentricity}: {error:e}");
            assert!(away < slack, "{share} {eccentricity}: {away:e} against {slack:e}");
        }
    }
}

#[test]
fn conics_of_every_kind_against_ninety_digits() {
    let rows = table("two-body-worked-examples.csv");
    let mut seen = 0;
    let mut worst: f64 = 0.0;
    for row in rows.iter().filter(|row| row["kind"].starts_with("propagate")) {
        let turns = row["dt_over_period"].parse::<f64>().unwrap_or(0.0).abs();
        if turns > 100.0 {
            continue;
        }
        let (mu, dt) = (number(row, "mu"), number(row, "dt"));
        let columns = |names: [&str; 3]| triple(row, names);
        let (r0, v0) = (columns(["x0", "y0", "z0"]), columns(["vx0", "vy0", "vz0"]));
        let r1 = columns(["x1", "y1", "z1"]);
        let state = State { star_gm: mu, gm: vec![0.0], pos: vec![r0], vel: vec![v0] };
        let unit = |pos: [f64; 3], vel: [f64; 3]| Tangent { pos: vec![pos], vel: vec![vel] };
        let scale = |x: &[f64; 3]| distance(x, &[0.0; 3]);
        // A rounding of the start, along each axis, becomes so much.
        let mut tangents = Vec::new();
        for k in 0..3 {
            let mut along = [0.0; 3];
            along[k] = 1.0;
            tangents.push(unit(along.map(|x| x * scale(&r0)), [0.0; 3]));
            tangents.push(unit([0.0; 3], along.map(|x| x * scale(&v0))));
        }
        let mut engine = Engine::from_state(&state, &tangents, &Forces::newton(), TOLERANCE).unwrap();
        run(&mut engine, dt);
        let condition = (0..6).map(|k| scale(&engine.tangent(k).unwrap().pos[0])).fold(scale(&r1), f64::max);
        let away = distance(&engine.state().pos[0], &r1) / (f64::EPSILON * condition);
        worst = worst.max(away);
        // A rounding of the speed at the pericentre of an ellipse is 2/(1 − e) of the energy.
        let deep = row["ecc"].parse::<f64>().map_or(0.0, |e| if e < 1.0 { 0.08 / (1.0 - e) } else { 0.0 });
        let limit = 2.0 * (1.0 + turns) * (4.0 + deep);
        assert!(away < limit, "{} {}: {away} roundings, allowed {limit}", row["id"], row["kind"]);
        seen += 1;
    }
    println!("{seen} conics, worst {worst} roundings of the start");
    assert!(seen > 50, "{seen}");
}

#[test]
fn limits_are_typed_errors_that_say_what_to_do() {
    let fall = State { star_gm: 1.0, gm: vec![1e-3], pos: vec![[1.0, 0.0, 0.0]], vel: vec![[0.0; 3]] };
    let fail = |smallest: f64, most: u64| {
        let mut engine = Engine::from_state(&fall, &[], &Forces::newton(), TOLERANCE).unwrap();
        engine.limits.smallest_day = smallest;
        engine.limits.most_steps = most;
        engine.advance(2.0, &Watch::default(), |_| ControlFlow::Continue(())).unwrap_err()
    };
    let error = fail(1e-9, u64::MAX);
    assert!(matches!(error, RadauError::StepTooSmall { first: 0, second: 1, .. }), "{error}");
    assert!(error.to_string().contains("give the bodies radii"), "{error}");
    let error = fail(0.0, 10);
    assert!(matches!(error, RadauError::TooManySteps { most: 10, .. }), "{error}");
    let point = Bodies { gm: vec![1.0, 1e-3], pos: vec![[0.0; 3]; 2], vel: vec![[0.0; 3]; 2] };
    let mut engine = Engine::from_bodies(&point, &[], &Forces::newton(), TOLERANCE).unwrap();
    let error = engine.advance(1.0, &Watch::default(), |_| ControlFlow::Continue(())).unwrap_err();
    assert!(matches!(error, RadauError::StepTooSmall { gap_au: 0.0, .. }), "{error}");
    let odd = Bodies { gm: vec![1.0, 1e-3], pos: vec![[0.0; 3]; 2], vel: vec![[0.0; 3]; 1] };
    let error = Engine::from_bodies(&odd, &[], &Forces::newton(), TOLERANCE).unwrap_err();
    assert_eq!(error, RadauError::Shape { bodies: 2, found: 9, needed: 12 });
    let error =
        advance(&State { gm: vec![f64::NAN], ..fall.clone() }, None, &Forces::newton(), 1.0, TOLERANCE);
    assert!(matches!(error.unwrap_err(), RadauError::NotFinite { .. }));
}

#[test]
fn half_a_turn_is_half_a_turn() {
    let state = ellipse(1.0, 0.6, 0.25);
    let outcome = advance(&state, None, &Forces::newton(), PI, TOLERANCE).unwrap();
    let end = outcome.state.pos[0];
    assert!((end[0] + 1.6).abs() < 1e-14 && end[1].abs() < 2e-14, "{end:?}");
}
