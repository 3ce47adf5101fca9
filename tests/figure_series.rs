//! Panels through time.

use abide::figure::render::{self, Width};
use abide::figure::{PlanetCurves, SeriesInput, series};

fn show(name: &str, bytes: &[u8]) {
    if let Some(folder) = std::env::var_os("FIGURES_INTO") {
        std::fs::write(std::path::Path::new(&folder).join(name), bytes).unwrap();
    }
}

#[test]
fn pictures_for_the_eye() {
    let count = 2000;
    let time: Vec<f64> = (0..count).map(|i| f64::from(i) * 60.0).collect();
    let wave = |middle: f64, height: f64, days: f64| -> Vec<f64> {
        time.iter().map(|t| middle + height * (t * std::f64::consts::TAU / days).sin()).collect()
    };
    let (e_b, e_c) = (wave(0.05, 0.03, 31_000.0), wave(0.08, 0.02, 31_000.0));
    let (a_b, a_c) = (wave(0.0972, 3e-5, 1130.0), wave(0.1274, 4e-5, 1130.0));
    let megno: Vec<f64> = time.iter().map(|t| 2.0 * (1.0 - (-t / 9000.0).exp()) + 0.2 * (t / 4000.0).sin() / (1.0 + t / 9000.0)).collect();
    let energy: Vec<f64> = time.iter().map(|t| 3e-10 * (t / 77.0).sin()).collect();
    let planets = [
        PlanetCurves { name: "b", eccentricity: &e_b, semi_major_axis_au: &a_b },
        PlanetCurves { name: "c", eccentricity: &e_c, semi_major_axis_au: &a_c },
    ];
    let caption = ["Followed for 10⁴ inner orbits; scheme (2,2), step 0.42 d. abide 0.1.0.".to_owned()];
    let figure = series(&SeriesInput {
        title: "Lanthorn",
        time_day: &time,
        planets: &planets,
        megno_mean: &megno,
        energy_error: &energy,
        caption: &caption,
    })
    .unwrap();
    show("series.png", &render::png(&figure, Width::PAGE).unwrap());
    show("series-88.png", &render::png(&figure, Width::COLUMN).unwrap());
}
