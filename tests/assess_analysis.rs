//! The analysis of massless bodies: what it takes, and that it tells of each what it would tell of it alone.

use abide::assess::{Analysis, Follower, NotAnalysed, Plan, analyse, plan_for_rows};
use abide::coords::{Configuration, configure};
use abide::input::parse_system;
use abide::observe::Kind;
use abide::system::{Compensation, CoordinateChoice, Encounter, Engine, Limits, Span, Step};

/// A giant and massless bodies inside it: four orbits, each of them again and again at other phases. Their pericentres turn once in 1500
/// inner orbits or so (Laplace–Lagrange theory).
fn belt(massless: usize) -> Configuration {
    let mut text =
        "title = \"Belt\"\n[star]\nmass = \"1 Msun\"\n[[planet]]\nname = \"b\"\nmass = \"10 Mjup\"\n\
                    semi_major_axis = \"5.2 au\"\neccentricity = 0.05\nargument_of_pericentre = \"0 deg\"\n\
                    mean_anomaly = \"0 deg\"\n"
            .to_owned();
    for body in 0..massless {
        let (orbit, turn) = (body % 4, body / 4);
        text += &format!(
            "[[planet]]\nname = \"p{body}\"\nmass = \"0 Mearth\"\nsemi_major_axis = \"{} au\"\neccentricity = 0.02\n\
             argument_of_pericentre = \"{} deg\"\nmean_anomaly = \"{} deg\"\n",
            1.8 + 0.15 * orbit as f64,
            60 * orbit + 17 * turn,
            100 * orbit + 71 * turn,
        );
    }
    configure(&parse_system("belt.toml", &text).unwrap().system).unwrap()
}

fn followed(configuration: &Configuration) -> Follower {
    let limits = Limits { escape_au: None, encounter: Encounter::Off, stop_when_chaotic: false };
    let engine = Engine {
        scheme: "(2,2)".to_owned(),
        coordinates: CoordinateChoice::Auto,
        compensated: Compensation::Auto,
        step: Step::PerOrbit(24.0),
        energy_error: 1e-3,
    };
    let plan = Plan::new(Span::Orbits(5000.0), &limits, &engine, configuration);
    let plan = Plan { extent: false, megno: false, ..plan_for_rows(&plan, configuration, 2000) };
    let mut follower = Follower::new(configuration, &plan, 10);
    while follower.assessment().is_none() {
        follower.one_block();
    }
    follower
}

fn analysed(configuration: &Configuration) -> Analysis {
    analyse(followed(configuration).samples(), configuration, &mut |_| true).unwrap()
}

/// Bodies that are twice as many take twice as much, whatever of them there is already.
#[test]
fn work_grows_in_proportion_to_the_massless_bodies() {
    let works = [4, 8, 16].map(|massless| analysed(&belt(massless)).work);
    let [four, eight, sixteen] = works;
    // The same four orbits again and again: as many candidates of each.
    assert_eq!(sixteen.signals - eight.signals, 2 * (eight.signals - four.signals));
    assert_eq!(sixteen.angles - eight.angles, 2 * (eight.angles - four.angles));
    // Phases decide whether an angle comes back to its mean in each third, so fits are no more than in proportion to the angles.
    assert!(works.iter().all(|work| work.fits <= 2 * work.angles), "{works:?}");
    // Bodies in one plane have two signals, of the whole span and of each window; a pair has 28 angles at most.
    let bodies = 17;
    assert!(sixteen.signals <= 6 * bodies && sixteen.angles <= 28 * bodies && four.angles > 4, "{works:?}");
}

/// Neither names nor numbers of a body depend on the other massless ones beside it.
#[test]
fn what_is_told_of_one_does_not_depend_on_the_others() {
    let (few, many) = (analysed(&belt(4)), analysed(&belt(8)));
    let of = |analysis: &Analysis, bodies: usize| -> Vec<(String, f64, Option<usize>)> {
        let all = analysis.fundamentals.iter().filter(|f| f.kind != Kind::Libration);
        let known = |index: usize| (0..bodies).contains(&index);
        let number = |name: &str| name[1..].parse::<usize>().ok();
        all.filter(|f| f.kind == Kind::Motion || number(&f.name).is_some_and(|n| known(n - 1)))
            .filter(|f| f.own_of.is_none_or(known))
            .map(|f| (f.name.clone(), f.rad_day, f.own_of))
            .collect()
    };
    let (one, other) = (of(&few, 5), of(&many, 5));
    assert_eq!(one.len(), other.len());
    // n of five bodies and a g of each: bodies of nearly the same precession have a g each.
    assert!(one.len() >= 10, "{one:?}");
    for (one, other) in one.iter().zip(&other) {
        assert_eq!((&one.0, one.2), (&other.0, other.2));
        assert!((one.1 - other.1).abs() <= 1e-9 * one.1.abs() + 1e-12, "{one:?} {other:?}");
    }
    assert!(
        many.fundamentals.iter().any(|f| f.name == "g9" && f.own_of == Some(8)),
        "{:?}",
        many.fundamentals
    );
    for (body, lines) in few.lines.motions.iter().enumerate() {
        let words = |analysis: &Analysis, body: usize| -> Vec<Option<String>> {
            let name = |line: &abide::observe::NamedLine| {
                line.name.as_ref().map(|name| name.words(&analysis.fundamentals))
            };
            analysis.lines.motions[body].iter().take(3).map(name).collect()
        };
        assert!(!lines.is_empty());
        assert_eq!(words(&few, body), words(&many, body), "body {body}");
    }
}

#[test]
fn it_ends_where_it_is_told_to() {
    let configuration = belt(4);
    let follower = followed(&configuration);
    let all = analyse(follower.samples(), &configuration, &mut |_| true).unwrap().work;
    for after in [0, 3, all.signals, all.signals + all.angles - 1] {
        let mut seen = Vec::new();
        let mut go_on = |at| {
            seen.push(at);
            seen.len() <= after
        };
        let found = analyse(follower.samples(), &configuration, &mut go_on);
        assert_eq!(found.err(), Some(NotAnalysed::Stopped));
        assert_eq!(seen.len(), after + 1);
        let last = seen[after];
        assert_eq!(last.signals + last.angles, after + 1);
        // Those of the windows are wanted once the whole span has shown how fast slow variables are.
        let known =
            if after < all.signals { last.signals_of <= all.signals } else { last.signals_of == all.signals };
        assert!(known && last.signals <= last.signals_of, "{last:?} {all:?}");
        assert_eq!(last.angles_of, if after < all.signals { 0 } else { all.angles });
    }
}
