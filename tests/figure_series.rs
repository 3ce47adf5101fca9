//! Panels through time as data.

use abide::figure::render::{Width, page};
use abide::figure::{Figure, FigureError, Legend, Mark, PlanetCurves, ScaleKind, SeriesInput, series};

fn input<'a>(
    time: &'a [f64],
    planets: &'a [PlanetCurves<'a>],
    megno: &'a [f64],
    energy: &'a [f64],
) -> SeriesInput<'a> {
    SeriesInput {
        title: "Lanthorn",
        time_day: time,
        planets,
        megno_mean: megno,
        energy_error: energy,
        angles: &[],
        caption: &[],
    }
}

#[test]
fn four_panels_share_the_time_axis_in_the_unit_that_reads_best() {
    let time = [0.0, 365.25e3, 730.5e3, 1095.75e3];
    let planets = [
        PlanetCurves { name: "b", eccentricity: &[0.1; 4], semi_major_axis_au: &[1.0, 1.0002, 0.9998, 1.0] },
        PlanetCurves { name: "c", eccentricity: &[0.2; 4], semi_major_axis_au: &[2.0; 4] },
    ];
    let figure = series(&input(&time, &planets, &[0.0, 1.5, 1.9, 2.0], &[0.0, 1e-9, -3e-9, 2e-9])).unwrap();
    let labels: Vec<String> = figure.panels.iter().map(|p| p.y.as_ref().unwrap().label.text()).collect();
    assert_eq!(labels, ["eccentricity", "Δa/a0 [10−4]", "MEGNO ⟨Y⟩", "|ΔE/E|"]);
    assert!(figure.panels.iter().all(|p| p.x == figure.panels[0].x));
    assert_eq!(figure.panels[0].x.label.text(), "time [yr]");
    assert_eq!(figure.panels[0].x.to, 3000.0);
    let curves: Vec<_> = figure.panels[1].marks.iter().filter(|m| matches!(m, Mark::Curve(_))).collect();
    let Mark::Curve(b) = curves[0] else { panic!() };
    assert!((b.points[1].1 - 2.0).abs() < 1e-9 && (b.points[2].1 + 2.0).abs() < 1e-9);
    let energy = figure.panels[3].y.as_ref().unwrap();
    assert_eq!((energy.kind, energy.from, energy.to), (ScaleKind::Log, 1e-9, 1e-8));
    let names: Vec<String> = figure
        .legend
        .iter()
        .map(|l| if let Legend::Curve(name, _) = l { name.text() } else { panic!() })
        .collect();
    assert_eq!(names, ["b", "c"]);
}

#[test]
fn what_was_not_measured_has_no_panel() {
    let planets = [PlanetCurves { name: "b", eccentricity: &[0.1; 2], semi_major_axis_au: &[1.0; 2] }];
    let figure = series(&input(&[0.0, 10.0], &planets, &[], &[])).unwrap();
    assert_eq!(figure.panels.len(), 2);
    assert_eq!(figure.panels[0].x.label.text(), "time [d]");
    assert!(matches!(series(&input(&[], &[], &[], &[])), Err(FigureError::EmptySeries)));
}

#[test]
fn every_panel_through_time_has_at_least_three_numbers() {
    for mm in [60.0, 88.0, 130.0, 180.0] {
        let found = page(&narrow_panels(), Width { mm }).unwrap();
        assert_eq!(found.frames.len(), 4);
        for (index, frame) in found.frames.iter().enumerate() {
            let labels: Vec<String> = frame.y.major.iter().map(|t| t.label.text()).collect();
            assert!(labels.len() >= 3, "panel {index} at {mm} mm: {labels:?}");
        }
    }
}

/// Ranges in which steps of 1, 2 and 5 find little: a narrow one beside a large offset, a single decade of errors.
fn narrow_panels() -> Figure {
    let time: Vec<f64> = (0..50).map(|i| f64::from(i) * 60.0).collect();
    let e: Vec<f64> = (0..50).map(|i| 0.2488 + 2.3e-5 * f64::from(i)).collect();
    let energy: Vec<f64> = (0..50).map(|i| 1.3e-9 + 1.0e-10 * f64::from(i)).collect();
    let planets = [PlanetCurves { name: "b", eccentricity: &e, semi_major_axis_au: &[1.0; 50] }];
    series(&SeriesInput {
        title: "Lanthorn",
        time_day: &time,
        planets: &planets,
        megno_mean: &[1.97; 50],
        energy_error: &energy,
        angles: &[],
        caption: &[],
    })
    .unwrap()
}
