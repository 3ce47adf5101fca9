//! What a followed configuration leaves: its series as a table and as a figure.

use std::path::PathBuf;

use super::Done;
use super::checkpoint::{FREQUENCIES, LINES, PICTURE, RESONANCES, SERIES, VERDICT};
use super::view::View;
use super::wish::Wish;
use crate::assess::{Analysis, AngleAnalysed, Assessment, Range, Row, Samples, angle_series};
use crate::cli::CliError;
use crate::disk;
use crate::figure::render::{self, Width};
use crate::figure::{self, AngleCurve, Figure, PlanetCurves, SeriesInput};
use crate::observe::Candidate;
use crate::report::{
    MotionInput, PlanetSeries, Series, VERSION, frequencies_table, lines_table, printed, resonances_table,
    series_table,
};
use crate::system::Frame;

/// Most angles that are drawn.
const MOST_DRAWN: usize = 3;

/// An angle for the figure.
pub struct AngleDrawn {
    name: String,
    points: Vec<(f64, f64)>,
}

/// The angles to draw: of every pair and chain that librates the calmest one, then apsides.
pub fn drawn(wish: &Wish, analysis: &Analysis, samples: &Samples) -> Vec<AngleDrawn> {
    let mut staying: Vec<&AngleAnalysed> = analysis.staying().collect();
    let apsides = |found: &AngleAnalysed| matches!(found.candidate, Candidate::Apsides { .. });
    staying.sort_by_key(|found| apsides(found));
    let mut chosen: Vec<&AngleAnalysed> = Vec::new();
    for found in staying {
        if chosen.iter().all(|other| other.candidate != found.candidate) {
            chosen.push(found);
        }
    }
    let names = wish.names();
    let angle = |found: &AngleAnalysed| AngleDrawn {
        name: found.angle.words(&names),
        points: angle_series(samples, &found.angle),
    };
    chosen.into_iter().take(MOST_DRAWN).map(angle).collect()
}

/// Writes tables and figure, and names them. A configuration that ends at its start has nothing to draw.
pub fn write(wish: &Wish, view: &View<'_>, done: &Done) -> Result<Vec<PathBuf>, CliError> {
    let mut written = Vec::new();
    let mut put = |name: &str, bytes: &[u8]| -> Result<(), CliError> {
        let path = wish.folder.join(name);
        disk::write_beside_then_rename(&path, bytes)?;
        written.push(path);
        Ok(())
    };
    put(SERIES, series_table(&series(wish, view, done)).to_ecsv().map_err(CliError::working)?.as_bytes())?;
    if let Ok(analysis) = &done.analysed {
        let names = wish.names();
        let input = MotionInput { title: wish.title(), names: &names, analysis };
        let tables = [
            (FREQUENCIES, frequencies_table(&input)),
            (LINES, lines_table(&input)),
            (RESONANCES, resonances_table(&input)),
        ];
        for (name, table) in tables {
            put(name, table.to_ecsv().map_err(CliError::working)?.as_bytes())?;
        }
    }
    put(VERDICT, view.json()?.as_bytes())?;
    if done.rows.len() > 1 {
        let figure = picture(wish, view, done)?;
        put(PICTURE, &render::png(&figure, Width::PAGE).map_err(CliError::working)?)?;
    }
    Ok(written)
}

fn series(wish: &Wish, view: &View<'_>, done: &Done) -> Series {
    let (assessment, rows) = (&done.assessment, &done.rows);
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
        coordinates: view.coordinates().unwrap_or_default(),
        compensated: wish.plan.compensated,
        reasons: view.reasons(),
    }
}

/// So many rows are needed for the ranges of the rows to run together into bands.
const BAND_ROWS: usize = 400;

/// Whether each row stands with the smallest and the largest value since the row before, so that thinning hides no
/// extreme; fewer rows would give a comb, and rows of one moment each have no range.
fn has_bands(rows: &[Row]) -> bool {
    let wide = |row: &Row| row.extent.iter().any(|extent| extent.eccentricity.min < extent.eccentricity.max);
    rows.len() >= BAND_ROWS && rows.iter().any(wide)
}

fn picture(wish: &Wish, view: &View<'_>, done: &Done) -> Result<Figure, CliError> {
    let (assessment, rows) = (&done.assessment, &done.rows);
    let bands = has_bands(rows);
    let each = |of: &dyn Fn(&Row) -> (f64, Range)| -> Vec<f64> {
        let points = rows.iter().map(of);
        if bands {
            points.flat_map(|(_, range)| [range.min, range.max]).collect()
        } else {
            points.map(|(now, _)| now).collect()
        }
    };
    let once = |of: fn(&Row) -> f64| each(&|row| (of(row), Range { min: of(row), max: of(row) }));
    let planets = 0..wish.configuration.planets.len();
    let values: Vec<(Vec<f64>, Vec<f64>)> = planets
        .map(|k| {
            let e = |row: &Row| (row.elements[k].eccentricity, row.extent[k].eccentricity);
            let a = |row: &Row| (row.elements[k].semi_major_axis_au, row.extent[k].semi_major_axis_au);
            (each(&e), each(&a))
        })
        .collect();
    let curves = wish.configuration.planets.iter().zip(&values).map(|(planet, (e, a))| PlanetCurves {
        name: &planet.name,
        eccentricity: e,
        semi_major_axis_au: a,
    });
    let caption = caption(wish, view, assessment, bands);
    let angles = done.angles.iter().map(|angle| AngleCurve { name: &angle.name, points: &angle.points });
    let input = SeriesInput {
        title: wish.title(),
        time_day: &once(|row| row.time_day),
        planets: &curves.collect::<Vec<_>>(),
        megno_mean: &once(|row| row.mean_megno.unwrap_or(f64::NAN)),
        energy_error: &once(|row| row.energy_error),
        angles: &angles.collect::<Vec<_>>(),
        caption: &caption,
    };
    figure::series(&input).map_err(CliError::working)
}

fn caption(wish: &Wish, view: &View<'_>, assessment: &Assessment, bands: bool) -> Vec<String> {
    let headline = view.headline();
    let mut letters = headline.chars();
    let headline: String = letters.next().into_iter().flat_map(char::to_uppercase).chain(letters).collect();
    let error = assessment.energy_error.map_or("not measured".to_owned(), printed);
    let frame = match wish.file.system.convention.elements {
        stated if stated == wish.plan.frame => "",
        Frame::Astrocentric => " (the file states astrocentric ones)",
        Frame::Jacobi => " (the file states Jacobi ones)",
        Frame::Barycentric => " (the file states barycentric ones)",
    };
    let bands =
        if bands { "; at each time the smallest and the largest value since the time before" } else { "" };
    vec![
        format!("{headline}."),
        format!("Osculating {} elements{frame}{bands}.", shown(wish.plan.frame)),
        format!(
            "Scheme {}, step {} d; largest relative energy error {error}. {VERSION}.",
            view.scheme(),
            printed(assessment.step_day),
        ),
    ]
}

fn shown(frame: Frame) -> &'static str {
    match frame {
        Frame::Astrocentric => "astrocentric",
        Frame::Jacobi => "Jacobi",
        Frame::Barycentric => "barycentric",
    }
}
