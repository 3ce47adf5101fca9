//! Tables and words: what is written, and that it reads back.

#[path = "figure_world/mod.rs"]
mod figure_world;

use abide::assess::Assessment;
use abide::coords::Elements;
use abide::report::{
    self, Column, Datatype, Entry, Meta, PlanetSeries, ReportError, Series, Spread, Summary, Table,
    cells_table, series_table,
};
use abide::survey::Record;
use abide::system::{BodyRef, Key, Measured, Step, Target};
use abide::units::DEGREE;
use abide::verdict::{LostHow, Verdict};
use figure_world::{SPAN_DAY, assessment, plan, records, study, system};

fn names() -> Vec<String> {
    vec!["b".to_owned(), "c".to_owned()]
}

/// The lines below the header, read by an ordinary CSV reader that skips comments.
fn rows(text: &str) -> Vec<Vec<String>> {
    let mut reader =
        csv::ReaderBuilder::new().has_headers(false).comment(Some(b'#')).from_reader(text.as_bytes());
    reader.records().map(|r| r.unwrap().iter().map(str::to_owned).collect()).collect()
}

#[test]
fn the_header_is_enhanced_csv() {
    let table = Table {
        meta: vec![
            ("title".to_owned(), Meta::Text("a \"quoted\" title: ±".to_owned())),
            ("target".to_owned(), Meta::Float(1e-7)),
            ("large".to_owned(), Meta::Float(1e20)),
            ("count".to_owned(), Meta::Count(3)),
        ],
        columns: vec![
            Column::new("c.period / b.period", "", Datatype::Float, "ratio"),
            Column::new("mass", "Mjup", Datatype::Float, ""),
            Column::new("who", "", Datatype::Text, "a name, or two"),
        ],
        rows: vec![
            vec![1.5.into(), Entry::Absent, "b, c".into()],
            vec![1e-7.into(), 0.1.into(), Entry::Absent],
        ],
    };
    let expected = "# %ECSV 1.0\n# ---\n# delimiter: ','\n# datatype:\n\
        # - {name: \"c.period / b.period\", datatype: float64, description: \"ratio\"}\n\
        # - {name: \"mass\", unit: \"jupiterMass\", datatype: float64}\n\
        # - {name: \"who\", datatype: string, description: \"a name, or two\"}\n\
        # meta: !!omap\n\
        # - {\"title\": \"a \\\"quoted\\\" title: ±\"}\n\
        # - {\"target\": 1.0e-7}\n\
        # - {\"large\": 1.0e+20}\n\
        # - {\"count\": 3}\n\
        # schema: astropy-2.0\n\
        c.period / b.period,mass,who\n1.5,,\"b, c\"\n1e-7,0.1,\n";
    assert_eq!(table.to_ecsv().unwrap(), expected);
}

#[test]
fn floats_read_back_to_the_same_bits() {
    let mut values: Vec<f64> =
        (0..4000).map(|i| (figure_world::noise(i) - 0.5) * 10f64.powi((i % 600) as i32 - 300)).collect();
    values.extend([0.1 + 0.2, f64::MIN_POSITIVE, 5e-324, f64::MAX, -0.0, 1e15, 123_456_789.0]);
    let rows_in = values.iter().map(|v| vec![Entry::Float(*v)]).collect();
    let columns = vec![Column::new("x", "", Datatype::Float, "")];
    let text = Table { columns, rows: rows_in, meta: Vec::new() }.to_ecsv().unwrap();
    let back: Vec<f64> = rows(&text)[1..].iter().map(|r| r[0].parse().unwrap()).collect();
    assert_eq!(back.len(), values.len());
    assert!(back.iter().zip(&values).all(|(a, b)| a.to_bits() == b.to_bits()));
}

#[test]
fn a_table_that_contradicts_itself_is_refused() {
    let columns = vec![Column::new("x", "", Datatype::Float, ""), Column::new("n", "", Datatype::Count, "")];
    let table = |rows| Table { meta: Vec::new(), columns: columns.clone(), rows };
    let error = table(vec![vec![1.0.into()]]).to_ecsv().unwrap_err();
    assert!(matches!(error, ReportError::Ragged { row: 0, found: 1, columns: 2 }));
    let error = table(vec![vec![1.0.into(), 1.0.into()]]).to_ecsv().unwrap_err();
    assert!(matches!(error, ReportError::Datatype { row: 0, found: "float64", declared: "uint64", .. }));
    let twice = Table { columns: vec![columns[0].clone(), columns[0].clone()], ..Table::default() };
    assert!(matches!(twice.to_ecsv().unwrap_err(), ReportError::Twice { .. }));
}

#[test]
fn each_cell_has_its_numbers_and_gaps_stay_gaps() {
    let study = study(3, 2);
    let mut lost = assessment(Verdict::Lost, Some(LostHow::Collision), 9.0, 0.25);
    lost.energy_error = None;
    let regular = assessment(Verdict::Regular, None, 2.0, 1.0);
    let records = [
        Record { cell: 1, values: vec![18.25, 0.0], assessment: lost, filled: None },
        Record { cell: 4, values: vec![18.25, 0.3], assessment: regular, filled: None },
    ];
    let text = cells_table(&study, &names(), &plan(), &records).to_ecsv().unwrap();
    let rows = rows(&text);
    let column = |name: &str| rows[0].iter().position(|c| c == name).unwrap_or_else(|| panic!("no {name}"));
    let (first, second) = (&rows[1], &rows[2]);
    let expected_first = [
        ("cell", "1"),
        ("c.period", "18.25"),
        ("c.eccentricity", "0.0"),
        ("verdict", "lost"),
        ("lost_body", "b"),
        ("lost_how", "collision"),
        ("lost_other", "c"),
        ("megno", ""),
        ("energy_error", ""),
        ("scheme", "(2,2)"),
        ("redone", "0"),
        ("approach_pair", "b c"),
    ];
    for (name, value) in expected_first {
        assert_eq!(first[column(name)], value, "{name}");
    }
    for name in ["lost_body", "lost_how", "lost_other", "lyapunov_time", "lyapunov_time_error"] {
        assert_eq!(second[column(name)], "", "{name}");
    }
    let number = |row: &[String], name: &str| -> f64 { row[column(name)].parse().unwrap() };
    let close = |a: f64, b: f64| assert!((a / b - 1.0).abs() < 1e-14, "{a} {b}");
    close(number(first, "end_time"), SPAN_DAY * 0.25 / 365.25);
    // Exponent 9 / span with a tenth of it as error.
    close(number(first, "lyapunov_time"), SPAN_DAY / 9.0 / 365.25);
    close(number(first, "lyapunov_time_error"), SPAN_DAY / 90.0 / 365.25);
    // ±0.2 % about 0.1274 au.
    assert!((number(second, "c.a_range") - 0.004).abs() < 1e-15);
    close(number(second, "c.e_max"), 0.06);
    close(number(second, "c.e_min"), 0.03);
    close(number(second, "c.i_max"), 1.6 / DEGREE);
    assert!(text.contains("# - {name: \"smallest_approach\", unit: \"AU\", datatype: float64"));
    assert!(text.contains("# - {name: \"c.period\", unit: \"d\", datatype: float64"));
}

#[test]
fn only_what_was_measured_has_a_column() {
    let mut study = study(3, 2);
    study.measure.clear();
    let mut plan = plan();
    (plan.extent, plan.megno) = (false, false);
    let record = Record {
        cell: 0,
        values: vec![1.0, 2.0],
        assessment: assessment(Verdict::Regular, None, 2.0, 1.0),
        filled: None,
    };
    let table = cells_table(&study, &names(), &plan, &[record]);
    let names: Vec<&str> = table.columns.iter().map(|c| c.name.as_str()).collect();
    assert!(
        !names.iter().any(|n| n.contains("megno") || n.contains("lyapunov") || n.contains(".e_m")),
        "{names:?}"
    );
    assert!(names.contains(&"energy_error") && names.contains(&"smallest_approach_hill"));
}

#[test]
fn the_series_has_degrees_years_and_gaps() {
    let element = |a: f64| Elements {
        semi_major_axis_au: a,
        eccentricity: 0.1,
        inclination: 90.0 * DEGREE,
        ascending_node: 0.0,
        argument_of_pericentre: 75.0 * DEGREE,
        mean_anomaly: 180.0 * DEGREE,
    };
    let series = Series {
        title: "Lanthorn".to_owned(),
        time_day: vec![0.0, 365.25],
        planets: vec![PlanetSeries { name: "b".to_owned(), elements: vec![element(1.0), element(2.0)] }],
        energy_error: vec![0.0, 1e-9],
        megno_mean: vec![f64::NAN, 1.5],
        lyapunov_per_day: vec![f64::NAN, 0.01],
        scheme: "(2,2)".to_owned(),
        step_day: 0.5,
        coordinates: "jacobi".to_owned(),
        reasons: vec![("step_why".to_owned(), "as asked".to_owned())],
        ..Series::default()
    };
    let table = series_table(&series);
    let header = table.to_ecsv().unwrap();
    for entry in ["scheme\": \"(2,2)", "step_d\": 0.5", "coordinates\": \"jacobi", "step_why\": \"as asked"] {
        assert!(header.contains(entry), "{entry}: {header}");
    }
    let names: Vec<&str> = table.columns.iter().map(|c| c.name.as_str()).collect();
    let expected = [
        "time",
        "b.a",
        "b.e",
        "b.i",
        "b.ascending_node",
        "b.argument_of_pericentre",
        "b.mean_anomaly",
        "energy_error",
        "megno_mean",
        "lyapunov",
    ];
    assert_eq!(names, expected);
    assert_eq!(table.column("time").unwrap(), [&Entry::Float(0.0), &Entry::Float(1.0)]);
    assert_eq!(table.column("megno_mean").unwrap(), [&Entry::Absent, &Entry::Float(1.5)]);
    assert_eq!(table.column("lyapunov").unwrap()[1], &Entry::Float(3.6525));
    let Entry::Float(angle) = table.column("b.argument_of_pericentre").unwrap()[0] else { panic!() };
    assert!((angle - 75.0).abs() < 1e-12);
    let meaning = |name| table.columns.iter().find(|c| c.name == name).unwrap().description.clone();
    assert_eq!(meaning("b.argument_of_pericentre"), "argument of pericentre of b");
    assert_eq!(meaning("b.ascending_node"), "ascending node of b");
    table.to_ecsv().unwrap();
}

#[test]
fn quantiles_are_by_nearest_rank_and_nan_is_never_hidden() {
    let of = |values: &[f64]| Spread::of(values.iter().copied());
    let hundred: Vec<f64> = (1..=100).map(f64::from).collect();
    assert_eq!(of(&hundred), Some(Spread { median: 50.0, q95: 95.0, largest: 100.0 }));
    assert_eq!(of(&[3.0]), Some(Spread { median: 3.0, q95: 3.0, largest: 3.0 }));
    assert_eq!(of(&[2.0, -5.0]), Some(Spread { median: 2.0, q95: 5.0, largest: 5.0 }));
    assert_eq!(of(&[]), None);
    assert!(of(&[1.0, f64::NAN]).unwrap().largest.is_nan());
}

#[test]
fn the_summary_counts_and_says_what_was_done() {
    let study = study(4, 2);
    let lost = |how| assessment(Verdict::Lost, Some(how), 9.0, 0.5);
    let found = [
        assessment(Verdict::Regular, None, 2.0, 1.0),
        assessment(Verdict::Regular, None, 2.0, 1.0),
        assessment(Verdict::Chaotic, None, 6.0, 1.0),
        lost(LostHow::Encounter),
        lost(LostHow::Escape),
    ];
    let records: Vec<Record> = found
        .into_iter()
        .enumerate()
        .map(|(cell, assessment)| Record {
            cell: cell as u64,
            values: vec![0.0; 2],
            assessment,
            filled: None,
        })
        .collect();
    let text = report::summary_text(&study, &system(), &plan(), &records, Some(2));
    for line in [
        "Lanthorn",
        "cells        5 of 8 finished; the rest is missing below",
        "span         1e4 inner orbits (325 yr)",
        "regular      2 (40.0 %)",
        "chaotic      1 (20.0 %)",
        "lost         2 (40.0 %)",
        "  escape     1 (20.0 %)",
        "  encounter  1 (20.0 %)",
        "undecided    0 (0.0 %)",
        "untrusted    0 (0.0 %)",
        "nominal      cell 2 is chaotic, MEGNO 6.000, energy error 3.6e-9",
        "energy error median 3.6e-9, 95 % of cells below 8.1e-9, largest 8.1e-9 (target 1e-7)",
        "scheme       (2,2) with corrector",
        "step         0.42 d (1/20 of the shortest pericentre passage)",
        &format!("  why        {}", plan().scheme_why),
        &format!("  why        {}", plan().step_why.outcome().unwrap()),
    ] {
        assert!(text.lines().any(|l| l == line), "missing {line:?} in\n{text}");
    }
    assert!(text.contains("varied: c.period, c.eccentricity") && text.contains("astrocentric"));
    let json = Summary::of(&study, &system(), &plan(), &records, Some(7)).json();
    assert_eq!(json["verdicts"]["lost"], 2);
    assert_eq!(json["lost_how"]["encounter"], 1);
    assert_eq!(json["nominal"]["cell"], 7);
    assert!(json["nominal"]["verdict"].is_null(), "cell 7 is not finished");
    assert_eq!(json["finished"], 5);
}

#[test]
fn what_is_held_names_the_statements_that_stay() {
    let mut study = study(4, 2);
    let held = |study: &_| Summary::of(study, &system(), &plan(), &[], None).held;
    // Period and eccentricity move; mass, pericentre and mean anomaly of c stay.
    let expected = "varied: c.period, c.eccentricity; held as stated: \
                    mass, argument of pericentre, mean anomaly of c; all of the other bodies";
    assert_eq!(held(&study), expected);
    // The stated period gives way to the semi-major axis.
    study.axes[0] = figure_world::axis(1, Key::SemiMajorAxis, (0.1, 0.2, 4));
    assert!(!held(&study).contains("period,") && held(&study).contains("mean anomaly"), "{}", held(&study));
    study.engine.step = Step::Auto;
}

#[test]
fn what_is_held_goes_body_by_body() {
    let held = |study: &_, system: &_| Summary::of(study, system, &plan(), &[], None).held;
    let mut stated = system();
    for planet in &mut stated.planets {
        planet.stated.insert(Key::Inclination, Measured::exact(80.0 * DEGREE, "deg"));
        planet.stated.remove(Key::Mass);
        planet.stated.insert(Key::RvSemiAmplitude, Measured::exact(1e-6, "m/s"));
        let anomaly = planet.stated.get(Key::MeanAnomaly).unwrap();
        planet.stated.remove(Key::MeanAnomaly);
        planet.stated.insert(Key::PericentreTime, anomaly);
    }
    let mut plane = study(4, 2);
    plane.axes[0].path = "all.inclination".to_owned();
    plane.axes[0].target = Target { body: BodyRef::All, key: Key::Inclination };
    (plane.axes[0].from, plane.axes[0].to, plane.axes[0].scale) = (30.0, 80.0, DEGREE);
    plane.axes[1] = figure_world::axis(1, Key::MeanAnomaly, (0.0, 3.0, 2));
    // The mean anomaly takes the place of the pericentre time of c, and b keeps its own.
    let expected = "varied: all.inclination, c.mean_anomaly; held as stated: \
                    radial-velocity semi-amplitude, period, eccentricity, argument of pericentre, \
                    pericentre time of b; \
                    radial-velocity semi-amplitude, period, eccentricity, argument of pericentre of c; \
                    all of the star";
    assert_eq!(held(&plane, &stated), expected);

    // An angle that turns with a moved component is not held, though it was stated.
    let mut vector = study(4, 2);
    vector.axes = vec![
        figure_world::axis(1, Key::ECosW, (-0.1, 0.1, 4)),
        figure_world::axis(1, Key::Eccentricity, (0.1, 0.2, 2)),
    ];
    let words = held(&vector, &system());
    assert!(words.contains("held as stated: mass, period, mean anomaly of c;"), "{words}");

    // All bodies moved: no others are left to be held.
    let mut everything = study(4, 2);
    everything.axes[0].target = Target { body: BodyRef::Star, key: Key::Mass };
    everything.axes[1].target.body = BodyRef::All;
    let words = held(&everything, &system());
    assert!(
        words.ends_with("held as stated: mass, period, argument of pericentre, mean anomaly of b and c"),
        "{words}"
    );
}

#[test]
fn the_caption_says_when_cells_are_missing() {
    let study = study(40, 30);
    let mut found = records(&study);
    let whole = report::caption(&study, &system(), &plan(), &found, "megno").join(" ");
    assert!(
        whole.contains("1200 cells") && whole.contains("10⁴ inner orbits") && !whole.contains("ncomplete"),
        "{whole}"
    );
    found.truncate(7);
    let part = report::caption(&study, &system(), &plan(), &found, "megno").join(" ");
    assert!(part.contains("Incomplete: 7 of 1200 cells"), "{part}");
    assert!(
        part.contains("step 0.42 d")
            && part.contains("epoch JD 2460310.5 TDB")
            && part.contains(report::VERSION)
    );
}

#[test]
fn second_attempts_are_counted_by_what_they_ended_with() {
    let study = study(4, 2);
    let cell = |cell, redone, scheme| {
        let assessment = Assessment { redone, scheme, ..assessment(Verdict::Regular, None, 2.0, 1.0) };
        Record { cell, values: vec![0.0; 2], assessment, filled: None }
    };
    // Handed over after two smaller steps, and at once because planets met.
    let records = [
        cell(0, 0, "(2,2)"),
        cell(1, 1, "(2,2)"),
        cell(2, 2, "(2,2)"),
        cell(3, 3, "adaptive"),
        cell(4, 0, "adaptive"),
    ];
    let summary = Summary::of(&study, &system(), &plan(), &records, None);
    assert!(
        summary.text().contains("redone       2 cells with smaller steps, 2 cells by the adaptive engine\n"),
        "{}",
        summary.text()
    );
    assert_eq!(
        (&summary.json()["redone_with_smaller_steps"], &summary.json()["adaptive"]),
        (&2.into(), &2.into())
    );
    let caption =
        |records: &[Record]| report::caption(&study, &system(), &plan(), records, "megno").join(" ");
    let all = caption(&records);
    assert!(all.contains("; 2 cells redone with smaller steps, 2 cells by the adaptive engine;"), "{all}");
    assert!(all.contains("Scheme (2,2) with corrector in"), "{all}");
    let one = caption(&records[..2]);
    assert!(one.contains("; 1 cell redone with smaller steps, no cell by the adaptive engine;"), "{one}");
    assert!(caption(&records[..1]).contains("; no cell redone;"));
}
