//! What a followed configuration leaves: its series as a table and as a figure.

use std::path::PathBuf;

use super::checkpoint::{PICTURE, SERIES};
use super::view::View;
use super::wish::Wish;
use crate::assess::{Assessment, Row};
use crate::cli::CliError;
use crate::disk;
use crate::figure::render::{self, Width};
use crate::figure::{self, Figure, PlanetCurves, SeriesInput};
use crate::report::{PlanetSeries, Series, VERSION, printed, series_table};
use crate::system::Frame;

/// Writes table and figure, and names them. A configuration that ends at its start has nothing to draw.
pub fn write(
    wish: &Wish,
    view: &View<'_>,
    assessment: &Assessment,
    rows: &[Row],
) -> Result<Vec<PathBuf>, CliError> {
    let series = series(wish, assessment, rows);
    let table = series_table(&series).to_ecsv().map_err(CliError::working)?;
    let mut written = vec![wish.folder.join(SERIES)];
    disk::write_beside_then_rename(&written[0], table.as_bytes())?;
    if rows.len() > 1 {
        let figure = picture(wish, view, assessment, rows)?;
        let bytes = render::png(&figure, Width::PAGE).map_err(CliError::working)?;
        let path = wish.folder.join(PICTURE);
        disk::write_beside_then_rename(&path, &bytes)?;
        written.push(path);
    }
    Ok(written)
}

fn series(wish: &Wish, assessment: &Assessment, rows: &[Row]) -> Series {
    let planets = wish.configuration.planets.iter().enumerate();
    let absent = |number: Option<f64>| number.unwrap_or(f64::NAN);
    Series {
        title: wish.title().to_owned(),
        time_day: rows.iter().map(|row| row.time_day).collect(),
        planets: planets
            .clone()
            .map(|(index, planet)| PlanetSeries {
                name: planet.name.clone(),
                elements: rows.iter().map(|row| row.elements[index]).collect(),
            })
            .collect(),
        extents: planets.map(|(index, _)| rows.iter().map(|row| row.extent[index]).collect()).collect(),
        energy_error: rows.iter().map(|row| row.energy_error).collect(),
        angular_momentum_error: rows.iter().map(|row| row.angular_momentum_error).collect(),
        megno: rows.iter().map(|row| absent(row.megno)).collect(),
        megno_mean: rows.iter().map(|row| absent(row.mean_megno)).collect(),
        lyapunov_per_day: rows.iter().map(|row| absent(row.lyapunov_per_day)).collect(),
        scheme: assessment.scheme.to_owned(),
        step_day: assessment.step_day,
    }
}

/// Each row stands with the smallest and the largest value since the row before, so that thinning hides no extreme.
fn picture(wish: &Wish, view: &View<'_>, assessment: &Assessment, rows: &[Row]) -> Result<Figure, CliError> {
    let twice = |of: &dyn Fn(&Row) -> [f64; 2]| -> Vec<f64> { rows.iter().flat_map(of).collect() };
    let planets = 0..wish.configuration.planets.len();
    let ranges: Vec<(Vec<f64>, Vec<f64>)> = planets
        .map(|k| {
            let e = |row: &Row| [row.extent[k].eccentricity.min, row.extent[k].eccentricity.max];
            let a = |row: &Row| [row.extent[k].semi_major_axis_au.min, row.extent[k].semi_major_axis_au.max];
            (twice(&e), twice(&a))
        })
        .collect();
    let curves = wish.configuration.planets.iter().zip(&ranges).map(|(planet, (e, a))| PlanetCurves {
        name: &planet.name,
        eccentricity: e,
        semi_major_axis_au: a,
    });
    let caption = caption(wish, view, assessment);
    let input = SeriesInput {
        title: wish.title(),
        time_day: &twice(&|row| [row.time_day; 2]),
        planets: &curves.collect::<Vec<_>>(),
        megno_mean: &twice(&|row| [row.mean_megno.unwrap_or(f64::NAN); 2]),
        energy_error: &twice(&|row| [row.energy_error; 2]),
        caption: &caption,
    };
    figure::series(&input).map_err(CliError::working)
}

fn caption(wish: &Wish, view: &View<'_>, assessment: &Assessment) -> Vec<String> {
    let headline = view.headline();
    let mut letters = headline.chars();
    let headline: String = letters.next().into_iter().flat_map(char::to_uppercase).chain(letters).collect();
    let error = assessment.energy_error.map_or("not measured".to_owned(), printed);
    let frame = match wish.file.system.convention.elements {
        Frame::Astrocentric => "",
        Frame::Jacobi => " (the file states Jacobi ones)",
        Frame::Barycentric => " (the file states barycentric ones)",
    };
    vec![
        format!("{headline}."),
        format!(
            "Osculating astrocentric elements{frame}; at each time the smallest and the largest value since the time \
             before."
        ),
        format!(
            "Scheme {}, step {} d; largest relative energy error {error}. {VERSION}.",
            view.scheme(),
            printed(assessment.step_day),
        ),
    ]
}
