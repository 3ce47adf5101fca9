//! Draws what the other benches measured: cost against number of planets, and energy error against cost.
//!
//! `cargo bench --bench figure` reads reports/speed/{kernel,schemes}.csv and writes reports/speed/{planets,schemes}.png.

mod hues;

use hues::HUES;
use plotters::prelude::*;
use plotters::style::{FontStyle, register_font};
use std::path::PathBuf;

type Failure = Box<dyn std::error::Error>;

const SIZE: (u32, u32) = (1000, 700);
/// Schemes in the figure, as many as there are hues; all of them stand in schemes.csv.
const DRAWN: [&str; 7] = ["(2,2)", "(4,2)", "(8,2)", "(8,4)", "(10,4)", "(8,6,4)", "(10,6,4)"];

fn path(name: &str) -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("reports/speed").join(name)
}

fn rows(name: &str) -> Result<Vec<Vec<String>>, Failure> {
    let mut reader = csv::Reader::from_path(path(name))?;
    reader.records().map(|r| Ok(r?.iter().map(str::to_owned).collect())).collect()
}

/// A line: what it is called, and its points.
type Line = (String, Vec<(f64, f64)>);

/// Points of the rows that `wanted` picks, grouped by the words `name` makes of them, in order of appearance.
fn lines(
    rows: &[Vec<String>],
    name: impl Fn(&[String]) -> Option<String>,
    x: usize,
    y: usize,
) -> Result<Vec<Line>, Failure> {
    let mut lines: Vec<Line> = Vec::new();
    for row in rows {
        let Some(name) = name(row) else { continue };
        let point = (row[x].parse()?, row[y].parse()?);
        match lines.iter_mut().find(|line| line.0 == name) {
            Some(line) => line.1.push(point),
            None => lines.push((name, vec![point])),
        }
    }
    Ok(lines)
}

/// A number on a logarithmic axis: 10⁻⁸, or 2×10³ between the powers.
fn power_of_ten(value: f64) -> String {
    let text = format!("{value:.0e}");
    let (digit, power) = text.split_once('e').unwrap_or((&text, "0"));
    let raised = |letter: char| match letter {
        '-' => '⁻',
        other => "⁰¹²³⁴⁵⁶⁷⁸⁹".chars().nth(other as usize - '0' as usize).unwrap_or(other),
    };
    let power: String = power.chars().map(raised).collect();
    if digit == "1" { format!("10{power}") } else { format!("{digit}×10{power}") }
}

macro_rules! draw {
    ($chart:expr, $lines:expr, $x:expr, $y:expr, $x_tick:expr, $y_tick:expr) => {{
        $chart
            .configure_mesh()
            .x_desc($x)
            .x_label_formatter($x_tick)
            .y_label_formatter($y_tick)
            .y_desc($y)
            .label_style(("words", 20))
            .axis_desc_style(("words", 22))
            .draw()?;
        for (index, (name, points)) in $lines.into_iter().enumerate() {
            let hue = HUES[index % HUES.len()];
            let size = 3 + (index as u32 % 3) * 2;
            $chart
                .draw_series(LineSeries::new(points, hue.stroke_width(2)).point_size(size))?
                .label(name)
                .legend(move |(x, y)| {
                    PathElement::new([(x, y), (x + 24, y)], hue.stroke_width(2 + size / 3))
                });
        }
        $chart
            .configure_series_labels()
            .label_font(("words", 20))
            .background_style(WHITE.mix(0.9))
            .border_style(BLACK.mix(0.4))
            .position(SeriesLabelPosition::UpperRight)
            .draw()?;
    }};
}

fn planets() -> Result<(), Failure> {
    let rows = rows("kernel.csv")?;
    let lines = lines(&rows, |row| Some(format!("{}, {} tangent vector", row[1], row[2])), 0, 3)?;
    let file = path("planets.png");
    let page = BitMapBackend::new(&file, SIZE).into_drawing_area();
    page.fill(&WHITE)?;
    let mut chart = ChartBuilder::on(&page)
        .margin(30)
        .x_label_area_size(60)
        .y_label_area_size(100)
        .build_cartesian_2d(1.5f64..8.5, (4.0f64..400.0).log_scale())?;
    let whole = |number: &f64| format!("{number:.0}");
    draw!(chart, lines, "planets", "ns per planet-step", &whole, &whole);
    page.present()?;
    Ok(())
}

fn schemes() -> Result<(), Failure> {
    let rows = rows("schemes.csv")?;
    let drawn = |row: &[String]| row[0] == "2" && DRAWN.contains(&row[1].as_str());
    let lines = lines(&rows, |row| drawn(row).then(|| row[1].clone()), 4, 3)?;
    let file = path("schemes.png");
    let page = BitMapBackend::new(&file, SIZE).into_drawing_area();
    page.fill(&WHITE)?;
    let mut chart = ChartBuilder::on(&page)
        .margin(30)
        .x_label_area_size(60)
        .y_label_area_size(100)
        .build_cartesian_2d((1e2f64..1e4).log_scale(), (1e-15f64..1e-1).log_scale())?;
    draw!(
        chart,
        lines,
        "ns per inner orbit and configuration, two planets",
        "largest |ΔE/E| in 400 inner orbits",
        &|x| power_of_ten(*x),
        &|y| power_of_ten(*y)
    );
    page.present()?;
    Ok(())
}

fn main() -> Result<(), Failure> {
    register_font("words", FontStyle::Normal, dejavu::sans::regular())
        .map_err(|_| "the font cannot be read")?;
    planets()?;
    schemes()
}
