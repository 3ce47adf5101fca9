//! The map as data: what is drawn, where, and what is said about it.

mod figure_world;

use abide::assess::Assessment;
use abide::figure::{
    Column, Figure, FigureError, Label, Legend, MapInput, Mark, Paint, Region, ScaleKind, columns, map,
    nominal, nominal_cell, resonances,
};
use abide::survey::Record;
use abide::system::{BodyRef, Key, Measured, Quantity, Spacing, Study, System, Target};
use abide::units::{DEGREE, GM_EARTH, GM_SUN};
use abide::verdict::{LostHow, Verdict};
use figure_world::{SPAN_DAY, assessment, axis, records, study, system};

fn try_map(study: &Study, system: &System, records: &[Record], column: &str) -> Result<Figure, FigureError> {
    map(&MapInput { study, system, records, reach: 0, column, span_day: SPAN_DAY, caption: &[] })
}

fn drawn(study: &Study, records: &[Record], column: &str) -> Figure {
    try_map(study, &system(), records, column).unwrap()
}

fn raster(figure: &Figure) -> &[Paint] {
    match &figure.panels[0].marks[0] {
        Mark::Raster { cells, .. } => cells,
        other => panic!("{other:?}"),
    }
}

fn one(study: &Study, found: Assessment) -> Vec<Record> {
    let cells: usize = study.axes.iter().map(|a| a.cells).product();
    (0..cells as u64)
        .map(|cell| Record { cell, values: vec![0.0; 2], assessment: found.clone(), filled: None })
        .collect()
}

#[test]
fn a_filled_cell_has_the_colour_of_the_nearest_integrated_one_of_its_verdict() {
    let study = study(6, 1);
    let filled = |cell, verdict, how| {
        Record::filled(cell, vec![0.0; 2], verdict, abide::survey::Filled { stride: 2, how })
    };
    let integrated = |cell, assessment| Record::integrated(cell, vec![0.0; 2], assessment);
    let records = [
        integrated(0, assessment(Verdict::Regular, None, 2.01, 1.0)),
        filled(1, Verdict::Regular, None),
        integrated(2, assessment(Verdict::Chaotic, None, 7.5, 1.0)),
        filled(3, Verdict::Regular, None),
        filled(4, Verdict::Lost, Some(LostHow::Escape)),
    ];
    let figure = drawn(&study, &records, "megno");
    let near = Paint::Value(2.01);
    let expected = [
        near,
        near,
        Paint::Value(7.5),
        near,
        // No integrated cell of its kind: still its own tone.
        Paint::Flat(Region::Escape),
        Paint::Flat(Region::Missing),
    ];
    assert_eq!(raster(&figure), expected);
    let verdicts = drawn(&study, &records, "verdict");
    assert_eq!(raster(&verdicts)[3], Paint::Flat(Region::Regular));
}

#[test]
fn a_finished_cell_stands_for_missing_ones_within_reach_only() {
    let study = study(7, 3);
    let records = [Record::integrated(7, vec![0.0; 2], assessment(Verdict::Regular, None, 2.01, 1.0))];
    let input = MapInput {
        study: &study,
        system: &system(),
        records: &records,
        reach: 2,
        column: "megno",
        span_day: SPAN_DAY,
        caption: &[],
    };
    let figure = map(&input).unwrap();
    for (cell, paint) in raster(&figure).iter().enumerate() {
        let near = cell % 7 <= 2;
        assert_eq!(*paint == Paint::Value(2.01), near, "{cell}");
        assert_eq!(*paint == Paint::Flat(Region::Missing), !near, "{cell}");
    }
}

#[test]
fn each_cell_is_painted_by_its_verdict_and_number() {
    let study = study(4, 2);
    let lost = |how| assessment(Verdict::Lost, Some(how), 9.0, 0.1);
    let found = [
        assessment(Verdict::Regular, None, 2.01, 1.0),
        assessment(Verdict::Chaotic, None, 7.5, 1.0),
        lost(LostHow::Escape),
        lost(LostHow::Star),
        lost(LostHow::Encounter),
        assessment(Verdict::Untrusted, None, 2.0, 1.0),
        assessment(Verdict::Undecided, None, 2.4, 1.0),
    ];
    let records: Vec<Record> = found
        .into_iter()
        .enumerate()
        .map(|(cell, assessment)| Record {
            cell: cell as u64,
            values: vec![0.0, 0.0],
            assessment,
            filled: None,
        })
        .collect();
    let figure = drawn(&study, &records, "megno");
    let flat = Paint::Flat;
    let expected = [
        Paint::Value(2.01),
        Paint::Value(7.5),
        flat(Region::Escape),
        flat(Region::Star),
        flat(Region::Encounter),
        flat(Region::Untrusted),
        flat(Region::Undecided),
        flat(Region::Missing),
    ];
    assert_eq!(raster(&figure), expected);
    let named: Vec<&Legend> = figure.legend.iter().collect();
    let region = Legend::Region;
    let expected = [
        region(Region::Escape),
        region(Region::Star),
        region(Region::Encounter),
        region(Region::Undecided),
        region(Region::Untrusted),
        region(Region::Missing),
        Legend::Nominal(Label::plain("as stated, ±1σ")),
    ];
    assert_eq!(named, expected.iter().collect::<Vec<_>>(), "only what occurs, no more");
}

#[test]
fn the_first_axis_runs_fastest_and_upwards_is_the_second() {
    let study = study(3, 2);
    let mut records = one(&study, assessment(Verdict::Regular, None, 2.0, 1.0));
    records[4].assessment.megno = Some(8.0);
    let figure = drawn(&study, &records, "megno");
    // Cell 4 of 3 × 2 is the middle of the upper row.
    assert_eq!(raster(&figure).iter().position(|p| *p == Paint::Value(8.0)), Some(3 + 1));
}

#[test]
fn cell_centres_are_the_values_of_the_axis_so_edges_lie_half_a_cell_beyond() {
    let figure = drawn(&study(12, 4), &records(&study(12, 4)), "megno");
    let (x, y) = (&figure.panels[0].x, figure.panels[0].y.as_ref().unwrap());
    // 15.5..21 d in 12 cells: 0.5 d each; 0..0.3 in 4 cells: 0.1 each.
    assert!((x.from - 15.25).abs() < 1e-12 && (x.to - 21.25).abs() < 1e-12);
    assert!((y.from + 0.05).abs() < 1e-12 && (y.to - 0.35).abs() < 1e-12);
    assert_eq!(x.label.text(), "period of c, Pc [d]");
    assert_eq!(y.label.text(), "eccentricity of c, ec");

    let mut log = study(3, 2);
    log.axes[0].spacing = Spacing::Log;
    (log.axes[0].from, log.axes[0].to) = (10.0, 1000.0);
    let figure = drawn(&log, &one(&log, assessment(Verdict::Regular, None, 2.0, 1.0)), "megno");
    let x = &figure.panels[0].x;
    assert_eq!(x.kind, ScaleKind::Log);
    assert!((x.from - 10f64.powf(0.5)).abs() < 1e-12 && (x.to - 10f64.powf(3.5)).abs() < 1e-9);
}

#[test]
fn resonances_of_a_period_lie_at_the_multiples_of_the_neighbours_period() {
    let found = resonances(&study(200, 150), 0, &system());
    let pairs: Vec<(u32, u32)> = found.iter().map(|(_, r)| (r.p, r.q)).collect();
    // Between 15.5 d and 21 d with b at 11.862 d, orders 1 and 2, lowest order first.
    assert_eq!(pairs, [(3, 2), (4, 3), (5, 3), (7, 5)]);
    for (at, r) in found {
        assert!((at - 11.862 * f64::from(r.p) / f64::from(r.q)).abs() < 1e-12);
    }
    assert!(resonances(&study(200, 150), 1, &system()).is_empty(), "an eccentricity has none");
}

#[test]
fn resonances_of_a_semi_major_axis_follow_the_third_law() {
    let mut study = study(10, 10);
    study.axes[0] = axis(1, Key::SemiMajorAxis, (0.11, 0.14, 10));
    let found = resonances(&study, 0, &system());
    let (at, _) = found.iter().find(|(_, r)| (r.p, r.q) == (3, 2)).unwrap();
    let gm = 0.87 * GM_SUN + 9.4 * GM_EARTH;
    let period: f64 = 11.862 * 1.5;
    let expected = (gm * period * period / (4.0 * std::f64::consts::PI.powi(2))).powf(1.0 / 3.0);
    assert!((at / expected - 1.0).abs() < 1e-12, "{at} {expected}");
}

#[test]
fn resonances_of_ratios_and_factors_and_of_the_inner_planet() {
    let mut ratio = study(10, 10);
    ratio.axes[0].quantity = Quantity::RatioTo(Target { body: BodyRef::Planet(0), key: Key::Period });
    (ratio.axes[0].from, ratio.axes[0].to) = (1.4, 2.1);
    let (at, first) = resonances(&ratio, 0, &system())[0];
    assert_eq!((at, first.p, first.q), (2.0, 2, 1));

    let mut factor = study(10, 10);
    factor.axes[0].quantity = Quantity::Factor;
    (factor.axes[0].from, factor.axes[0].to) = (0.95, 1.05);
    let found = resonances(&factor, 0, &system());
    assert!((found[0].0 - 11.862 * 1.5 / 17.79).abs() < 1e-12, "{found:?}");

    let mut inner = study(10, 10);
    inner.axes[0] = axis(0, Key::Period, (11.0, 12.5, 10));
    let found = resonances(&inner, 0, &system());
    assert!((found[0].0 - 17.79 * 2.0 / 3.0).abs() < 1e-12 && (found[0].1.p, found[0].1.q) == (3, 2));
}

#[test]
fn a_neighbour_that_moves_as_well_gives_no_pins() {
    let mut both = study(10, 10);
    both.axes[1] = axis(0, Key::Period, (11.0, 12.5, 10));
    assert!(resonances(&both, 0, &system()).is_empty() && resonances(&both, 1, &system()).is_empty());
}

#[test]
fn the_stated_values_are_marked_with_their_error_bars() {
    let study = study(56, 31);
    let figure = drawn(&study, &records(&study), "megno");
    let mark = figure.panels[0].marks.iter().find_map(|m| match m {
        Mark::Nominal { x, y, x_bar, y_bar } => Some((*x, y.unwrap(), x_bar.unwrap(), y_bar.unwrap())),
        _ => None,
    });
    let (x, y, x_bar, y_bar) = mark.unwrap();
    assert_eq!((x, y), (17.79, 0.08));
    assert!((x_bar.0 - 17.67).abs() < 1e-12 && (x_bar.1 - 17.91).abs() < 1e-12);
    assert!((y_bar.0 - 0.05).abs() < 1e-12 && (y_bar.1 - 0.11).abs() < 1e-12);
    // 0.1 d and 0.01 per cell: 17.79 is nearest to cell 23 (17.8), 0.08 is cell 8.
    assert_eq!(nominal_cell(&study, &system()), Some(8 * 56 + 23));

    let mut away = study.clone();
    (away.axes[0].from, away.axes[0].to) = (30.0, 40.0);
    let figure = drawn(&away, &records(&study), "megno");
    assert!(!figure.panels[0].marks.iter().any(|m| matches!(m, Mark::Nominal { .. })));
    assert!(!figure.legend.iter().any(|l| matches!(l, Legend::Nominal(_))));
    assert_eq!(nominal_cell(&away, &system()), None);
}

#[test]
fn what_is_not_stated_is_derived_with_its_bars() {
    // a ∝ P^(2/3): 0.12 d of 17.79 d gives 2/3 of that share.
    let found = nominal(&axis(1, Key::SemiMajorAxis, (0.1, 0.2, 5)), &system()).unwrap();
    assert!((found.plus.unwrap() / found.value / (0.12 / 17.79) - 2.0 / 3.0).abs() < 1e-12);
    // Shares in quadrature for a ratio.
    let mut ratio = axis(1, Key::Period, (1.4, 1.6, 5));
    ratio.quantity = Quantity::RatioTo(Target { body: BodyRef::Planet(0), key: Key::Period });
    let found = nominal(&ratio, &system()).unwrap();
    assert!((found.value - 17.79 / 11.862).abs() < 1e-14);
    let share = ((0.12f64 / 17.79).powi(2) + (0.004f64 / 11.862).powi(2)).sqrt();
    assert!((found.plus.unwrap() / found.value - share).abs() < 1e-14);
    // The same angle, a turn further.
    let mut angle = axis(1, Key::ArgumentOfPericentre, (-360.0, -180.0, 5));
    angle.scale = DEGREE;
    assert!((nominal(&angle, &system()).unwrap().value + 285.0).abs() < 1e-9);
    // All planets alike, or nothing.
    let mut all = axis(1, Key::Eccentricity, (0.0, 0.3, 5));
    all.target.body = BodyRef::All;
    assert_eq!(nominal(&all, &system()), None);
    let mut alike = system();
    alike.planets.iter_mut().for_each(|p| p.stated.insert(Key::Eccentricity, Measured::exact(0.02, "")));
    assert_eq!(nominal(&all, &alike).unwrap().value, 0.02);
}

#[test]
fn the_colour_bar_names_its_ends() {
    let study = study(60, 40);
    let records = records(&study);
    let bar = drawn(&study, &records, "megno").colour_bar.unwrap();
    assert_eq!((bar.scale.from, bar.scale.to, bar.scale.kind), (2.0, 10.0, ScaleKind::Log));
    assert!(bar.before && bar.after);
    assert_eq!(bar.label.text(), "MEGNO ⟨Y⟩ (logarithmic)");
    let bar = drawn(&study, &records, "c.e_max").colour_bar.unwrap();
    assert!(!bar.before && !bar.after && bar.scale.kind == ScaleKind::Linear);
    assert!(!bar.label.text().contains("log"));
    let largest =
        records.iter().filter(|r| matches!(r.assessment.verdict, Verdict::Regular | Verdict::Chaotic));
    let largest = largest.map(|r| r.assessment.extent[1].eccentricity.max).fold(0.0, f64::max);
    assert!(bar.scale.to >= largest && bar.scale.to < largest + 0.15, "{:?} {largest}", bar.scale);
    // Times run downwards; who lived through the span would have lived longer.
    let bar = drawn(&study, &records, "end_time").colour_bar.unwrap();
    assert!(bar.before && !bar.after && (bar.scale.from - SPAN_DAY / 365.25).abs() < 1e-9);
    assert!(drawn(&study, &records, "verdict").colour_bar.is_none());
}

#[test]
fn a_regular_cell_without_a_lyapunov_time_is_no_gap() {
    let study = study(3, 2);
    let mut records = one(&study, assessment(Verdict::Chaotic, None, 5.0, 1.0));
    records[0].assessment = assessment(Verdict::Regular, None, 2.0, 1.0);
    records[1].assessment.lyapunov = None;
    let figure = drawn(&study, &records, "lyapunov_time");
    assert_eq!(raster(&figure)[0], Paint::Flat(Region::Regular));
    assert_eq!(raster(&figure)[1], Paint::Flat(Region::NoValue));
    let Paint::Value(years) = raster(&figure)[2] else { panic!() };
    assert!((years - SPAN_DAY / 5.0 / 365.25).abs() < 1e-9);
}

#[test]
fn a_lost_cell_shows_its_energy_error_where_there_is_one() {
    let study = study(3, 2);
    let mut records = one(&study, assessment(Verdict::Lost, Some(LostHow::Escape), 5.0, 0.1));
    records[0].assessment.energy_error = None;
    records[1].assessment = assessment(Verdict::Regular, None, 2.0, 1.0);
    records[1].assessment.energy_error = None;
    let figure = drawn(&study, &records, "energy_error");
    let expected = [Paint::Flat(Region::Escape), Paint::Flat(Region::NoValue), Paint::Value(2.5e-9)];
    let close = |a: &Paint, b: &Paint| match (a, b) {
        (Paint::Value(a), Paint::Value(b)) => (a / b - 1.0).abs() < 1e-12,
        _ => a == b,
    };
    assert!(raster(&figure).iter().zip(&expected).all(|(a, b)| close(a, b)), "{:?}", raster(&figure));
}

#[test]
fn an_unknown_column_lists_those_there_are() {
    let study = study(3, 2);
    let mut plain = assessment(Verdict::Regular, None, 2.0, 1.0);
    plain.extent.clear();
    let records = one(&study, plain);
    let names: Vec<String> = columns(&system(), &records).into_iter().map(|c| c.name(&system())).collect();
    let expected =
        ["verdict", "megno", "end_time", "energy_error", "smallest_approach", "smallest_approach_hill"];
    assert_eq!(names, expected, "no Lyapunov time and no extent in these records");
    let error = try_map(&study, &system(), &records, "c.e_max").unwrap_err().to_string();
    assert!(error.contains("\"c.e_max\"") && names.iter().all(|n| error.contains(n.as_str())), "{error}");
    assert_eq!(
        Column::find("c.a_range", &system(), &figure_world::records(&study)).unwrap(),
        Column::ARange(1)
    );
}

#[test]
fn a_record_of_another_study_is_refused() {
    let study = study(3, 2);
    let mut records = one(&study, assessment(Verdict::Regular, None, 2.0, 1.0));
    records[5].cell = 6;
    let error = try_map(&study, &system(), &records, "megno").unwrap_err();
    assert!(matches!(error, FigureError::CellOutside { cell: 6, cells: 6 }));
}

#[test]
fn one_axis_gives_points_over_it() {
    let mut study = study(5, 1);
    study.axes.truncate(1);
    let mut records = one(&study, assessment(Verdict::Chaotic, None, 4.0, 1.0));
    records[2].assessment = assessment(Verdict::Lost, Some(LostHow::Escape), 9.0, 0.5);
    records[3].assessment = assessment(Verdict::Undecided, None, 2.5, 1.0);
    let figure = drawn(&study, &records, "megno");
    let panel = &figure.panels[0];
    let (chaotic, escape) = (Region::Chaotic, Region::Escape);
    let cells = vec![chaotic, chaotic, escape, Region::Undecided, chaotic];
    let Mark::Strip { cells: strip, height } = &panel.marks[0] else { panic!() };
    assert_eq!(*strip, cells);
    let places = |wanted: bool| -> Vec<(f64, f64)> {
        let points = panel.marks.iter().find_map(|m| match m {
            Mark::Points { points, hollow } if *hollow == wanted => Some(points),
            _ => None,
        });
        points.unwrap().iter().map(|p| (p.0, p.1)).collect()
    };
    assert_eq!((places(false).len(), places(true).len()), (3, 1));
    for ((x, y), expected) in places(false).iter().zip([15.5, 16.875, 21.0]) {
        assert!((x - expected).abs() < 1e-12 && *y == 4.0);
    }
    assert!((places(true)[0].0 - 19.625).abs() < 1e-12 && places(true)[0].1 == 2.5);
    // The strip hides no point.
    let y = panel.y.as_ref().unwrap();
    assert!(y.scale().place(2.5).unwrap() > height + 0.03 && y.to > 4.0);
    let words = figure.caption.join(" ");
    assert!(words.contains("bottom edge: verdicts; hollow points: undecided cells."), "{words}");
    let named: Vec<&Legend> = figure.legend.iter().filter(|l| matches!(l, Legend::Region(_))).collect();
    let region = Legend::Region;
    assert_eq!(named, [&region(chaotic), &region(escape), &region(Region::Undecided)]);
}

#[test]
fn the_caption_says_whose_resonances_are_labelled() {
    let mut three = system();
    let mut outer = three.planets[1].clone();
    outer.name = "d".to_owned();
    outer.stated.insert(Key::Period, Measured::exact(31.4, "d"));
    let mut plane = study(3, 2);
    plane.axes[0] = axis(0, Key::Period, (8.0, 12.5, 3));
    let found = one(&plane, assessment(Verdict::Regular, None, 2.0, 1.0));
    let words = |system: &System| try_map(&plane, system, &found, "megno").unwrap().caption.join(" ");
    assert_eq!(words(&three), "Top edge: mean-motion resonances of b with c (longer : shorter period).");
    // d is no neighbour of b, so resonances with it have no label.
    three.planets.push(outer);
    let expected = "Top edge: mean-motion resonances of b, only those with c (longer : shorter period).";
    assert_eq!(words(&three), expected);
}
