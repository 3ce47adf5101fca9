//! The page: nothing overlaps, nothing is cut off, and the picture shows what the data say.

mod figure_world;

use abide::figure::render::{self, Page, Width, page};
use abide::figure::{Figure, MapInput, PlanetCurves, Region, ScaleKind, SeriesInput, map, series, ticks};
use abide::report;
use abide::survey::Record;
use abide::system::{Key, Spacing, Study};
use abide::verdict::Verdict;
use figure_world::{Pixels, SPAN_DAY, assessment, axis, plan, records, study, system};

const WIDTHS: [f64; 4] = [60.0, 88.0, 130.0, 180.0];

fn drawn(study: &Study, records: &[Record], column: &str) -> Figure {
    let caption = report::caption(study, &system(), &plan(), records, column);
    map(&MapInput {
        study,
        system: &system(),
        records,
        reach: 0,
        column,
        span_day: SPAN_DAY,
        caption: &caption,
    })
    .unwrap()
}

/// Two axes the other way round, a long title, logarithmic, incomplete.
fn turned() -> Figure {
    let mut turned = study(40, 31);
    let title = "A long title: a survey of the outer planet of an invented pair, period against eccentricity, in part";
    turned.axes = vec![axis(1, Key::Eccentricity, (0.0, 0.3, 40)), axis(1, Key::Period, (12.0, 40.0, 31))];
    turned.axes[1].spacing = Spacing::Log;
    turned.title = Some(title.to_owned());
    let mut found = records(&study(40, 31));
    found.truncate(800);
    drawn(&turned, &found, "energy_error")
}

fn through_time() -> Figure {
    let time: Vec<f64> = (0..2000).map(|i| f64::from(i) * 60.0).collect();
    let wave = |middle: f64, height: f64, days: f64| -> Vec<f64> {
        time.iter().map(|t| middle + height * (t * std::f64::consts::TAU / days).sin()).collect()
    };
    let (e_b, e_c) = (wave(0.05, 0.03, 31_000.0), wave(0.08, 0.02, 31_000.0));
    let (a_b, a_c) = (wave(0.0972, 3e-5, 1130.0), wave(0.1274, 6e-5, 4130.0));
    let megno: Vec<f64> = time.iter().map(|t| 2.0 * (1.0 - (-t / 9000.0).exp())).collect();
    let energy: Vec<f64> = time.iter().map(|t| 3e-10 * (t / 77.0).sin()).collect();
    let planets = [
        PlanetCurves { name: "b", eccentricity: &e_b, semi_major_axis_au: &a_b },
        PlanetCurves { name: "c", eccentricity: &e_c, semi_major_axis_au: &a_c },
    ];
    let caption = ["Followed for 10⁴ inner orbits; scheme (2,2), step 0.42 d.".to_owned()];
    series(&SeriesInput {
        title: "Lanthorn",
        time_day: &time,
        planets: &planets,
        megno_mean: &megno,
        energy_error: &energy,
        angles: &[],
        caption: &caption,
    })
    .unwrap()
}

fn figures() -> Vec<(String, Figure)> {
    let plane = study(120, 90);
    let found = records(&plane);
    let mut line = study(150, 1);
    line.axes.truncate(1);
    let along = records(&line);
    let mut all = vec![("turned".to_owned(), turned()), ("series".to_owned(), through_time())];
    for column in
        ["megno", "lyapunov_time", "verdict", "end_time", "c.e_max", "b.a_range", "smallest_approach_hill"]
    {
        all.push((column.to_owned(), drawn(&plane, &found, column)));
        all.push((format!("line-{column}"), drawn(&line, &along, column)));
    }
    let mut scans = study(20, 20);
    scans.axes =
        vec![axis(1, Key::RvSemiAmplitude, (1.0, 9.0, 20)), axis(0, Key::SqrtESinW, (-0.5, 0.5, 20))];
    let mut three = system();
    let mut outer = three.planets[1].clone();
    outer.name = "d".to_owned();
    outer.stated.insert(Key::Period, abide::system::Measured::exact(31.4, "d"));
    three.planets.push(outer);
    let mut wide = study(120, 90);
    wide.axes[0] = axis(1, Key::Period, (14.0, 25.0, 120));
    let caption = report::caption(&wide, &three, &plan(), &found, "megno");
    let input = MapInput {
        study: &wide,
        system: &three,
        records: &found,
        reach: 0,
        column: "megno",
        span_day: SPAN_DAY,
        caption: &caption,
    };
    all.push(("between".to_owned(), map(&input).unwrap()));
    let fine = study(1000, 700);
    all.push(("fine".to_owned(), drawn(&fine, &records(&fine), "megno")));
    all.push(("scans".to_owned(), drawn(&scans, &records(&study(20, 20)), "megno")));
    all
}

type Bounds = (f64, f64, f64, f64);

fn meet(a: Bounds, b: Bounds) -> bool {
    a.0 < b.2 && b.0 < a.2 && a.1 < b.3 && b.1 < a.3
}

fn check(name: &str, page: &Page) {
    let texts: Vec<(String, Bounds)> = page.texts.iter().map(|t| (t.label.text(), t.bounds())).collect();
    assert!(texts.len() > 6, "{name}");
    for (index, (text, bounds)) in texts.iter().enumerate() {
        let (left, top, right, bottom) = *bounds;
        assert!(
            left >= 0.0 && top >= 0.0 && right <= page.width && bottom <= page.height,
            "{name}: {text} is cut"
        );
        for (other, theirs) in &texts[index + 1..] {
            assert!(!meet(*bounds, *theirs), "{name}: {text:?} meets {other:?}");
        }
        for frame in page.frames.iter().chain(page.bar.iter().map(|b| &b.0)) {
            let frame = (frame.left, frame.top, frame.right, frame.bottom);
            assert!(!meet(*bounds, frame), "{name}: {text:?} reaches into a frame");
        }
    }
    assert!(page.texts.iter().all(|t| t.size >= 6.0), "{name}: smaller than 6 points");
}

#[test]
fn no_text_meets_another_or_leaves_the_page_at_any_width() {
    for (name, figure) in figures() {
        for mm in WIDTHS {
            check(&format!("{name} at {mm} mm"), &page(&figure, Width { mm }).unwrap());
        }
    }
}

#[test]
fn any_axis_can_be_laid_out() {
    let keys =
        [Key::Period, Key::SemiMajorAxis, Key::Eccentricity, Key::TransitTime, Key::MeanAnomaly, Key::Mass];
    let unit = |key: Key| match key {
        Key::Period => "d",
        Key::SemiMajorAxis => "au",
        Key::TransitTime => "JD",
        Key::MeanAnomaly => "deg",
        Key::Mass => "Mearth",
        _ => "",
    };
    let mut dice = (0..).map(figure_world::noise);
    let mut roll = |below: f64| dice.next().unwrap() * below;
    for case in 0..400 {
        let mut random_axis = |cells: usize| {
            let key = keys[roll(keys.len() as f64) as usize];
            let middle = if key == Key::TransitTime { 2_460_312.0 } else { 10f64.powf(roll(9.0) - 5.0) };
            let width = middle * 10f64.powf(-roll(6.0));
            let log = roll(1.0) < 0.4;
            let (from, to) = if log {
                (middle, middle * (1.0 + 10f64.powf(roll(6.0) - 3.0)))
            } else {
                (middle, middle + width)
            };
            let mut axis = axis(1, key, if roll(1.0) < 0.2 { (to, from, cells) } else { (from, to, cells) });
            axis.unit = unit(key);
            axis.spacing = if log { Spacing::Log } else { Spacing::Linear };
            axis
        };
        let mut plane = study(1, 1);
        plane.axes = vec![random_axis(1 + case % 7), random_axis(1 + case % 5)];
        let cells = plane.axes[0].cells * plane.axes[1].cells;
        let mut found = records(&study(7, 5));
        found.truncate(cells);
        let figure = drawn(&plane, &found, if case % 2 == 0 { "end_time" } else { "energy_error" });
        for mm in [60.0, 88.0, 180.0] {
            let (x, y) = (&plane.axes[0], &plane.axes[1]);
            let name = format!(
                "{case}: {} {}..{}, {} {}..{} at {mm} mm",
                x.path, x.from, x.to, y.path, y.from, y.to
            );
            check(&name, &page(&figure, Width { mm }).unwrap());
        }
    }
}

#[test]
fn crowded_resonances_keep_the_lowest_orders() {
    let mut crowded = study(50, 10);
    crowded.axes[0] = axis(1, Key::Period, (12.5, 60.0, 50));
    let figure = drawn(&crowded, &records(&study(50, 10)), "megno");
    let found = page(&figure, Width::COLUMN).unwrap();
    let offered = figure.panels[0].top.len();
    let kept = &found.frames[0].top_pins;
    assert!(kept.len() < offered && kept.len() >= 4, "{} of {offered}", kept.len());
    for ratio in [2.0, 1.5] {
        assert!(kept.iter().any(|at| (at / 11.862 - ratio).abs() < 1e-9), "{ratio} is missing");
    }
    check("crowded", &found);
}

#[test]
fn ticks_are_round_inside_and_not_too_many() {
    let labels = |from, to, kind, wanted| -> Vec<String> {
        ticks(from, to, kind, wanted).major.iter().map(|t| t.label.text()).collect()
    };
    use ScaleKind::{Linear, Log};
    assert_eq!(labels(15.486, 21.014, Linear, 6), ["16", "17", "18", "19", "20", "21"]);
    assert_eq!(labels(-0.001, 0.301, Linear, 7), ["0.00", "0.05", "0.10", "0.15", "0.20", "0.25", "0.30"]);
    assert_eq!(labels(-1.0, 1.0, Linear, 4), ["−1.0", "−0.5", "0.0", "0.5", "1.0"]);
    assert_eq!(labels(2.0, 10.0, Log, 7), ["2", "3", "4", "5", "6", "8", "10"]);
    assert_eq!(labels(1e-10, 1e-7, Log, 4), ["10−10", "10−9", "10−8", "10−7"]);
    assert_eq!(labels(0.02, 300.0, Log, 5), ["0.1", "1", "10", "100"]);
    assert_eq!(labels(12.0, 40.0, Log, 6), ["15", "20", "25", "30", "35", "40"]);
    let minor = ticks(0.0, 1.0, Linear, 5).minor;
    assert_eq!(minor.len(), 5 * 3, "three between labels 0.2 apart");
    for seed in 0..2000 {
        let (from, width) =
            (2e3 * figure_world::noise(seed) - 1e3, 10f64.powf(8.0 * figure_world::noise(seed + 5000) - 4.0));
        for wanted in 2..9 {
            let found = ticks(from, from + width, Linear, wanted);
            assert!((2..=wanted + 4).contains(&found.major.len()), "{from} {width} {wanted}");
            let slack = 1e-8 * width;
            let all = found.major.iter().map(|t| t.at).chain(found.minor);
            assert!(all.into_iter().all(|at| at >= from - slack && at <= from + width + slack));
        }
    }
}

#[test]
fn the_picture_has_the_stated_physical_size() {
    let figure = turned();
    for (mm, per_inch, pixels) in [(180.0, 300, 2126), (88.0, 600, 2079), (125.0, 300, 1477)] {
        let found = Pixels::of(&render::png(&figure, Width { mm }).unwrap());
        // 180 mm / 25.4 × 300 = 2125.98 pixels.
        assert_eq!(found.info.width, pixels);
        let dims = found.info.pixel_dims.unwrap();
        assert_eq!(dims.unit, png::Unit::Meter);
        assert_eq!(dims.xppu, (f64::from(per_inch) / 0.0254).round() as u32);
        let real = f64::from(found.info.width) / f64::from(dims.xppu) * 1000.0;
        assert!((real - mm).abs() < 0.1, "{real} mm instead of {mm}");
    }
    for mm in [59.0, 401.0, f64::NAN, -88.0] {
        assert!(render::png(&figure, Width { mm }).is_err());
    }
}

#[test]
fn the_same_figure_gives_the_same_bytes() {
    let (first, second) = (render::png(&turned(), Width::COLUMN), render::png(&turned(), Width::COLUMN));
    assert_eq!(first.unwrap(), second.unwrap());
}

/// The centre of a cell in points.
fn centre(page: &Page, study: &Study, (column, row): (usize, usize)) -> (f64, f64) {
    let frame = &page.frames[0];
    let (columns, rows) = (study.axes[0].cells as f64, study.axes[1].cells as f64);
    let x = frame.left + (column as f64 + 0.5) / columns * (frame.right - frame.left);
    (x, frame.bottom - (row as f64 + 0.5) / rows * (frame.bottom - frame.top))
}

#[test]
fn each_cell_has_its_colour_from_edge_to_edge() {
    let mut few = study(17, 13);
    (few.axes[0].from, few.axes[0].to) = (30.0, 40.0);
    let cells = (0..17 * 13u64).filter(|c| *c != 5);
    let found: Vec<Record> = cells
        .map(|cell| {
            let megno = 2.0 + 8.0 * figure_world::noise(cell);
            Record {
                cell,
                values: vec![0.0; 2],
                assessment: assessment(Verdict::Chaotic, None, megno, 1.0),
                filled: None,
            }
        })
        .collect();
    let figure = drawn(&few, &found, "megno");
    let scale = figure.colour_bar.as_ref().unwrap().scale;
    for width in [Width::PAGE, Width::COLUMN] {
        let page = page(&figure, width).unwrap();
        let pixels = Pixels::of(&render::png(&figure, width).unwrap());
        let frame = &page.frames[0];
        let half = ((frame.right - frame.left) / 17.0 / 2.0, (frame.bottom - frame.top) / 13.0 / 2.0);
        for record in &found {
            let cell = (record.cell as usize % 17, record.cell as usize / 17);
            let expected = scale.colour(record.assessment.megno.unwrap()).unwrap();
            let middle = centre(&page, &few, cell);
            for (across, up) in [(0.0, 0.0), (-0.9, -0.9), (0.9, 0.9), (-0.9, 0.9), (0.9, 0.0)] {
                let place = (middle.0 + across * half.0, middle.1 + up * half.1);
                assert_eq!(
                    pixels.at(&page, place),
                    [expected.0, expected.1, expected.2],
                    "cell {cell:?} at {across}, {up}"
                );
            }
        }
        assert_eq!(pixels.at(&page, centre(&page, &few, (5, 0))), [255, 255, 255], "a gap stays white");
    }
}

#[test]
fn a_map_of_one_value_has_no_seam() {
    let mut even = study(123, 77);
    (even.axes[0].from, even.axes[0].to) = (30.0, 40.0);
    let same = |cell| Record {
        cell,
        values: vec![0.0; 2],
        assessment: assessment(Verdict::Chaotic, None, 5.0, 1.0),
        filled: None,
    };
    let figure = drawn(&even, &(0..123 * 77).map(same).collect::<Vec<_>>(), "megno");
    let page = page(&figure, Width::PAGE).unwrap();
    let pixels = Pixels::of(&render::png(&figure, Width::PAGE).unwrap());
    let frame = &page.frames[0];
    let expected = pixels.at(&page, centre(&page, &even, (60, 40)));
    let step = 72.0 / f64::from(page.pixels_per_inch);
    let (mut seen, mut y) = (0, frame.top + 2.0 * step);
    while y < frame.bottom - 2.0 * step {
        let mut x = frame.left + 2.0 * step;
        while x < frame.right - 2.0 * step {
            assert_eq!(pixels.at(&page, (x, y)), expected, "at {x}, {y}");
            seen += 1;
            x += step;
        }
        y += step;
    }
    assert!(seen > 1_000_000);
}

#[test]
fn regions_are_told_apart_without_colour() {
    // In grey: by lightness or by pattern, and two of equal pattern by much lightness.
    let all = Region::ALL;
    let light = |r: Region| {
        let c = r.tone().ground;
        0.2126 * f64::from(c.0) + 0.7152 * f64::from(c.1) + 0.0722 * f64::from(c.2)
    };
    for (index, a) in all.iter().enumerate() {
        for b in &all[index + 1..] {
            // "lost" without a cause never stands beside the causes.
            if *a == Region::Lost || *b == Region::Lost {
                continue;
            }
            let apart = a.tone().pattern != b.tone().pattern || (light(*a) - light(*b)).abs() > 15.0;
            assert!(apart, "{a:?} looks like {b:?}");
        }
    }
}

#[test]
fn the_scale_rises_evenly_in_lightness() {
    let scale = abide::figure::Scale { from: 0.0, to: 1.0, kind: ScaleKind::Linear };
    let linear = |v: u8| (f64::from(v) / 255.0).powf(2.2);
    let light: Vec<f64> = (0..=20)
        .map(|i| {
            let c = scale.colour(f64::from(i) / 20.0).unwrap();
            // CIE 1976 lightness from the luminance of sRGB (gamma taken as 2.2).
            116.0 * (0.2126 * linear(c.0) + 0.7152 * linear(c.1) + 0.0722 * linear(c.2)).cbrt() - 16.0
        })
        .collect();
    let steps: Vec<f64> = light.windows(2).map(|w| w[1] - w[0]).collect();
    let mean = (light[20] - light[0]) / 20.0;
    assert!(steps.iter().all(|s| *s > 0.4 * mean && *s < 2.0 * mean), "{steps:?}");
    assert_eq!(scale.colour(f64::NAN), None);
    assert_eq!(scale.colour(-3.0), scale.colour(0.0));
}

/// The words of the angle that a study watches stand under a map of that angle only.
#[test]
fn the_angle_is_told_where_it_is_shown() {
    let mut watched = plan();
    watched.angle = Some(abide::observe::ResonantAngle::new(vec![-2, 3], vec![-1, 0]).unwrap());
    let words = |column: &str| {
        report::caption(&study(3, 3), &system(), &watched, &records(&study(3, 3)), column).join(" ")
    };
    assert!(
        words("angle.amplitude").contains("The angle is 3λ_c − 2λ_b − ϖ_b."),
        "{}",
        words("angle.amplitude")
    );
    assert!(!words("megno").contains("The angle"), "{}", words("megno"));
}
