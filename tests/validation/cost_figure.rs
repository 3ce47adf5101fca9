//! The figure of energy error against cost.

use std::path::Path;

use super::hues::HUES;
use abide::integrate::Coordinates;
use plotters::coord::Shift;
use plotters::prelude::*;
use plotters::style::{FontStyle, register_font};

/// One scheme in one coordinate set on one system: kicks per turn and largest energy error.
pub struct Curve {
    pub system: &'static str,
    pub coordinates: Coordinates,
    pub scheme: &'static str,
    pub points: Vec<(f64, f64)>,
}

/// One panel per system and coordinate set.
pub fn draw(curves: &[&Curve], file: &Path) {
    register_font("words", FontStyle::Normal, dejavu::sans::regular()).ok().unwrap();
    let page = BitMapBackend::new(file, (1500, 1250)).into_drawing_area();
    page.fill(&WHITE).unwrap();
    let panels = page.split_evenly((2, 2));
    let kinds = [
        ("giants", "Giant planets", Coordinates::Heliocentric),
        ("giants", "Giant planets", Coordinates::Jacobi),
        ("compact", "Compact three", Coordinates::Heliocentric),
        ("compact", "Compact three", Coordinates::Jacobi),
    ];
    for (panel, (system, title, coordinates)) in panels.iter().zip(kinds) {
        let set = if coordinates == Coordinates::Jacobi { "Jacobi" } else { "heliocentric" };
        let title = format!("{title}, {set} coordinates");
        let of = |c: &&Curve| c.system == system && c.coordinates == coordinates;
        draw_panel(panel, &curves.iter().copied().filter(of).collect::<Vec<_>>(), &title);
    }
    page.present().unwrap();
}

fn draw_panel(panel: &DrawingArea<BitMapBackend<'_>, Shift>, curves: &[&Curve], title: &str) {
    let mut chart = ChartBuilder::on(panel)
        .margin(14)
        .caption(title, ("words", 26))
        .x_label_area_size(58)
        .y_label_area_size(92)
        .build_cartesian_2d((10f64..2000.0).log_scale(), (1e-16f64..1e-2).log_scale())
        .unwrap();
    chart
        .configure_mesh()
        .light_line_style(WHITE)
        .x_desc("kicks per turn of the innermost planet")
        .y_desc("largest |ΔE/E| in 300 turns")
        .x_label_formatter(&|x| format!("{x:.0}"))
        .y_label_formatter(&|y| format!("1e{:.0}", y.log10()))
        .label_style(("words", 19))
        .axis_desc_style(("words", 21))
        .draw()
        .unwrap();
    for (index, curve) in curves.iter().enumerate() {
        let hue = HUES[index % HUES.len()];
        // Round-off of exactly 0 has no place on the scale; errors beyond its ends are drawn at them.
        let points: Vec<(f64, f64)> = curve.points.iter().map(|p| (p.0, p.1.clamp(1e-16, 1e-2))).collect();
        chart.draw_series(LineSeries::new(points.clone(), hue.stroke_width(2))).unwrap();
        mark(&mut chart, index, &points, curve.scheme, hue);
    }
    chart
        .configure_series_labels()
        .label_font(("words", 19))
        .background_style(WHITE.mix(0.9))
        .border_style(BLACK.mix(0.4))
        .position(SeriesLabelPosition::UpperRight)
        .draw()
        .unwrap();
}

type Plane =
    Cartesian2d<plotters::coord::combinators::LogCoord<f64>, plotters::coord::combinators::LogCoord<f64>>;

/// Markers of three shapes, so that lines are not told apart by colour alone.
fn mark<'a, 'b: 'a>(
    chart: &mut ChartContext<'a, BitMapBackend<'b>, Plane>,
    index: usize,
    points: &[(f64, f64)],
    name: &str,
    hue: RGBColor,
) {
    let line = move |x: i32, y: i32| PathElement::new([(x - 6, y), (x + 22, y)], hue.stroke_width(2));
    let points = points.iter().copied();
    let style = if index < 3 { hue.filled() } else { hue.stroke_width(2) };
    match index % 3 {
        0 => {
            chart.draw_series(points.map(|p| Circle::new(p, 5, style))).unwrap().label(name).legend(
                move |(x, y)| EmptyElement::at((0, 0)) + line(x, y) + Circle::new((x + 8, y), 5, style),
            )
        }
        1 => chart.draw_series(points.map(|p| TriangleMarker::new(p, 7, style))).unwrap().label(name).legend(
            move |(x, y)| EmptyElement::at((0, 0)) + line(x, y) + TriangleMarker::new((x + 8, y), 7, style),
        ),
        _ => chart
            .draw_series(points.map(|p| Cross::new(p, 5, hue.stroke_width(2))))
            .unwrap()
            .label(name)
            .legend(move |(x, y)| {
                EmptyElement::at((0, 0)) + line(x, y) + Cross::new((x + 8, y), 5, hue.stroke_width(2))
            }),
    };
}
