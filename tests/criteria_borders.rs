//! Margins of criteria, and their borders on maps, against formulas solved for the place of the border.

mod cli_support;
mod criteria_support;

use abide::coords::{Configuration, configure};
use abide::criteria::{
    amd_budget, circumbinary_limit, circumstellar_limit, coplanar_orbits_cross,
    critical_relative_eccentricity, exact_hill_balance, hierarchical_limit, margin, neighbours,
};
use abide::figure::{Border, border};
use abide::input::{StudyFile, parse_study, parse_system};
use abide::survey::{Grid, Made, Source, cell_values, configuration_at};
use abide::system::{Criterion, Frame};
use cli_support::{Desk, PAIR, PAIR_MAP};
use criteria_support::random::Random;
use criteria_support::{Draw, Kind, Sampling};

/// Two invented planets; b is circular, c carries the eccentricity.
const ROUND: &str = r#"
[star]
mass = "1 Msun"
[[planet]]
name = "b"
period = "100 d"
mass_ratio = "3e-5"
mean_anomaly = "20 deg"
[[planet]]
name = "c"
period = "150 d"
mass_ratio = "5e-5"
eccentricity = "0.1"
argument_of_pericentre = "40 deg"
mean_anomaly = "200 deg"
"#;

fn study(system: &str, axes: &str) -> StudyFile {
    let system = parse_system("system.toml", system).unwrap_or_else(|error| panic!("{error}"));
    let text = format!("system = \"system.toml\"\nspan = \"10 orbits\"\n{axes}");
    parse_study("study.toml", &text, system).unwrap_or_else(|error| panic!("{error}"))
}

fn plane(from: f64, to: f64, e: f64) -> StudyFile {
    let axes = format!(
        "[[axis]]\nvary = \"c.period / b.period\"\nfrom = {from}\nto = {to}\ncells = 30\n\
         [[axis]]\nvary = \"c.eccentricity\"\nfrom = 0.0\nto = {e}\ncells = 20\n"
    );
    study(ROUND, &axes)
}

fn border_of(file: &StudyFile, criterion: Criterion) -> Border {
    border(&file.study, &file.system.system, criterion)
}

/// a₂/a₁ of [`ROUND`] at a period ratio: Kepler's third law with both masses.
fn axes_at(period_ratio: f64) -> f64 {
    period_ratio.powf(2.0 / 3.0) * ((1.0 + 5e-5) / (1.0f64 + 3e-5)).cbrt()
}

fn points(border: &Border) -> Vec<(f64, f64)> {
    let all: Vec<(f64, f64)> = border.parts.concat();
    assert!(all.len() > 20, "{:?}: {} points", border.criterion, all.len());
    all
}

/// a₁ = a₂ (1 − e₂) for the reach of the orbits, Z_crit = e₂/√2 for their overlap, a width for circular ones.
#[test]
fn borders_lie_where_their_formulas_say() {
    let file = plane(1.12, 1.7, 0.35);
    for (x, e) in points(&border_of(&file, Criterion::Crossing)) {
        assert!((e - (1.0 - 1.0 / axes_at(x))).abs() < 1e-6, "crossing at {x}: {e}");
    }
    for (x, e) in points(&border_of(&file, Criterion::Overlap)) {
        let critical = critical_relative_eccentricity(8e-5, [1.0, axes_at(x)]).unwrap();
        assert!((e - critical * 2f64.sqrt()).abs() < 1e-6, "overlap at {x}: {e}");
    }
    // 1.46 ε^{2/7} (Deck et al. 2013, from memory), drawn up to e = 0.1 only.
    let circular = points(&border_of(&file, Criterion::CircularOverlap));
    for (x, e) in &circular {
        assert!((axes_at(*x) - 1.0 - 1.46 * 8e-5f64.powf(2.0 / 7.0)).abs() < 1e-6 && *e <= 0.1, "{x} {e}");
    }
    assert!(circular.iter().any(|(_, e)| *e > 0.095));
}

/// The quiet side lies to the left of the way: below the crossing, so the way leads to smaller period ratios.
#[test]
fn the_quiet_side_is_to_the_left() {
    let file = plane(1.12, 1.7, 0.35);
    for part in border_of(&file, Criterion::Crossing).parts {
        let (first, last) = (part[0], part[part.len() - 1]);
        let middle = part[part.len() / 2];
        // Left of (dx, dy) is (−dy, dx).
        let (across, up) = (-(last.1 - first.1), last.0 - first.0);
        let values = [middle.0 + 0.02 * across.signum(), (middle.1 + 0.02 * up.signum()).max(0.0)];
        let there = configuration_at(&file.system.system, &file.study, &values).unwrap();
        assert!(margin(Criterion::Crossing, &there).unwrap() > 0.0, "{values:?}");
    }
}

/// Beyond a₂/a₁ = 2 the overlap of eccentric orbits says nothing: no points there, and it is counted.
#[test]
fn outside_its_domain_a_border_has_a_gap() {
    let file = plane(2.0, 3.6, 0.8);
    let found = border_of(&file, Criterion::Overlap);
    assert!(found.said < found.asked && found.said > found.asked / 3, "{} of {}", found.said, found.asked);
    assert_eq!(found.silent, [("a2/a1", "1 < a2/a1 <= 2")]);
    assert!(points(&found).iter().all(|(x, _)| axes_at(*x) <= 2.0));
    // A second star is what the limits beside two stars need.
    let none = border_of(&file, Criterion::Binary);
    assert_eq!((none.said, none.parts.len()), (0, 0));
}

/// A stated minimum mass grows as the inclination falls: the overlap is reached at sin i = Σ m sin i / ε_crit.
#[test]
fn what_the_map_holds_fixed_is_held_fixed() {
    let system = ROUND
        .replace("mass_ratio = \"3e-5\"", "minimum_mass = \"10 Mearth\"")
        .replace("mass_ratio = \"5e-5\"", "minimum_mass = \"20 Mearth\"")
        .replace("eccentricity = \"0.1\"", "eccentricity = \"0.05\"");
    let axes = "[[axis]]\nvary = \"all.inclination\"\nfrom = \"1 deg\"\nto = \"90 deg\"\ncells = 90\n";
    let file = study(&system.replace("150 d", "126 d"), axes);
    let found = border_of(&file, Criterion::CircularOverlap);
    assert_eq!(found.parts.len(), 1, "one place on one axis");
    let sine = found.parts[0][0].0.to_radians().sin();
    let earth = abide::units::GM_EARTH / abide::units::GM_SUN;
    let ratio = |mass: f64| 1.0 + mass * earth / sine;
    let gap = (126.0f64 / 100.0).powf(2.0 / 3.0) * (ratio(20.0) / ratio(10.0)).cbrt() - 1.0;
    let expected = 1.46 * (30.0 * earth / sine).powf(2.0 / 7.0);
    assert!((gap / expected - 1.0).abs() < 1e-4, "{gap} {expected} at sin i = {sine}");
}

#[test]
fn a_place_of_a_cell_has_the_configuration_of_the_cell() {
    let file = plane(1.2, 1.7, 0.2);
    let grid = Grid::new(file.system.system.clone(), file.study.clone()).unwrap();
    for cell in [0, 7, 31, 299, 599] {
        let Made::ToFollow(made) = grid.make(cell) else { panic!("{cell}") };
        let values = cell_values(&file.study, cell);
        assert_eq!(configuration_at(&file.system.system, &file.study, &values).unwrap(), made);
    }
}

fn sampling(kind: Kind) -> Sampling {
    let companion = ((0.2, 0.9), 0.5);
    Sampling { kind, mass: (1e-6, 1e-3), eccentricity: 0.2, inclination: 2.0, companion }
}

/// Signs of margins are the answers of the criteria themselves.
#[test]
fn margins_have_the_sign_of_the_criterion() {
    let mut random = Random::new(1);
    let mut seen = [[0usize; 2]; 5];
    for _ in 0..200 {
        let draw = Draw::new(&sampling(Kind::Planets(2)), &mut random);
        let found = draw.configuration(1.0 + random.between(0.05, 0.6)).unwrap();
        let quiet = |criterion| margin(criterion, &found).unwrap() > 0.0;
        let budget = amd_budget(&found).unwrap();
        let orbits = found.elements_in(Frame::Astrocentric);
        let expected = [
            (Criterion::Hill, exact_hill_balance(&found).unwrap().stable()),
            (Criterion::Crossing, !neighbours(&found)[0].crossing),
            (Criterion::Intersection, !coplanar_orbits_cross(&orbits[0], &orbits[1]).unwrap()),
            (Criterion::AmdCollision, budget.collision_stable()),
            (Criterion::AmdHill, budget.pairs[0].2.hill_stable()),
        ];
        for (k, (criterion, stable)) in expected.into_iter().enumerate() {
            assert_eq!(quiet(criterion), stable, "{criterion:?}");
            seen[k][usize::from(stable)] += 1;
        }
        let overlap = budget.pairs[0].2.overlap_stable().unwrap();
        assert_eq!(quiet(Criterion::AmdOverlap), overlap);
    }
    assert!(seen.iter().flatten().all(|count| *count > 5), "{seen:?}");
}

/// Of three planets the pair nearest to trouble counts.
#[test]
fn the_least_margin_of_the_pairs_counts() {
    let mut random = Random::new(2);
    for _ in 0..20 {
        let found = Draw::new(&sampling(Kind::Planets(3)), &mut random).configuration(1.3).unwrap();
        let pair = |range: std::ops::Range<usize>| {
            let planets = found.planets[range].to_vec();
            margin(Criterion::Crossing, &Configuration { planets, ..found.clone() }).unwrap()
        };
        let both = margin(Criterion::Crossing, &found).unwrap();
        assert_eq!(both, pair(0..2).min(pair(1..3)));
        assert!(margin(Criterion::Hill, &found).is_err(), "Hill stability is for two planets");
    }
}

fn two_stars(kind: &str, axis: f64, eccentricity: f64) -> Configuration {
    let (planet, star) = if kind == "beside" { (1.0, axis) } else { (axis, 1.0) };
    let text = format!(
        "[star]\nmass = \"1 Msun\"\n[convention]\nelements = \"jacobi\"\n[companion]\nmass = \"0.5 Msun\"\n\
         semi_major_axis = \"{star} au\"\neccentricity = {eccentricity}\nmean_anomaly = \"10 deg\"\n\
         [[planet]]\nname = \"b\"\nmass = \"1 Mearth\"\nsemi_major_axis = \"{planet} au\"\nmean_anomaly = \"77 deg\"\n"
    );
    configure(&parse_system("two", &text).unwrap_or_else(|error| panic!("{error}")).system).unwrap()
}

/// μ = 0.5/1.5 in both; the margin changes its sign at the critical ratio (S-type orbits are astrocentric: the planet's
/// pull on the star moves the second star's elements by less than 1e-4).
#[test]
fn limits_beside_and_around_two_stars() {
    let inside = 1.0 / circumstellar_limit(1.0 / 3.0, 0.3).unwrap().axis_ratio;
    let outside = circumbinary_limit(1.0 / 3.0, 0.3).unwrap().axis_ratio;
    for (kind, limit, criterion) in [
        ("beside", inside, Criterion::Binary),
        ("around", outside, Criterion::Binary),
        ("beside", hierarchical_limit(0.5, 0.3, 0.0).unwrap() / 0.7, Criterion::Hierarchy),
        ("around", hierarchical_limit(3e-6 / 1.5, 0.0, 0.0).unwrap(), Criterion::Hierarchy),
    ] {
        let of = |axis: f64| margin(criterion, &two_stars(kind, axis, 0.3)).unwrap();
        assert!(of(0.999 * limit) < 0.0 && of(1.001 * limit) > 0.0, "{kind}: {} at {limit}", of(limit));
    }
    let one = two_stars("beside", 20.0, 0.3);
    for criterion in [Criterion::Hill, Criterion::Overlap, Criterion::AmdHill] {
        let words = margin(criterion, &one).unwrap_err().to_string();
        assert!(
            words.contains("the number of stars = 2") && words.contains("planets of one star"),
            "{words}"
        );
    }
}

/// From the study's own words to the picture, the table, and other curves later, without a step of integration more.
#[test]
fn a_study_names_the_borders_of_its_map() {
    let desk = Desk::new().file("pair.toml", PAIR);
    let with = format!("{PAIR_MAP}[figure]\ncriteria = [\"hill\", \"crossing\"]\n");
    let desk = desk.file("pair-map.toml", &with);
    desk.abide("survey").args(["pair-map.toml", "--into", "run"]).run().done();
    let table = String::from_utf8(desk.read("run/criteria.ecsv")).unwrap();
    let rows: Vec<&str> = table.lines().filter(|line| !line.starts_with('#')).collect();
    assert_eq!(rows[0], "cell,c.period,c.eccentricity,hill,crossing");
    assert_eq!(rows.len(), 1 + 63);
    let map = desk.read("run/map.png");
    desk.abide("draw").args(["run", "--criterion", "none"]).run().done();
    assert_ne!(desk.read("run/map.png"), map);
    desk.abide("draw").arg("run").run().done();
    assert_eq!(desk.read("run/map.png"), map, "the study's criteria are the default");
    desk.abide("draw")
        .args(["run", "--criterion", "amd-hill", "--margins"])
        .run()
        .done()
        .said("criteria.ecsv");
    assert!(String::from_utf8(desk.read("run/criteria.ecsv")).unwrap().contains(",amd-hill\n"));
    // Other curves are no other study.
    let desk = desk.file("pair-map.toml", with.replace("hill", "amd-collision"));
    desk.abide("survey").args(["pair-map.toml", "--into", "run"]).run().done().said("is finished");
}

#[test]
fn criteria_that_cannot_be_drawn_are_refused() {
    let refused = |criteria: &str, words: &[&str]| {
        let study = format!("{PAIR_MAP}[figure]\ncriteria = {criteria}\n");
        let desk = Desk::new().file("pair.toml", PAIR).file("pair-map.toml", study);
        let outcome = desk.abide("survey").args(["pair-map.toml", "--into", "run"]).run().refused();
        for word in words {
            assert!(outcome.stderr.contains(word), "{word}: {outcome:#?}");
        }
    };
    refused("[\"hil\"]", &["pair-map.toml:15:", "hil", "\"hill\"", "did you mean"]);
    refused("[\"hill\", \"hill\"]", &["\"hill\" twice"]);
    let seven: Vec<String> = Criterion::ALL[..7].iter().map(|c| format!("\"{}\"", c.word())).collect();
    refused(&format!("[{}]", seven.join(", ")), &["7 criteria", "up to 6"]);
}
