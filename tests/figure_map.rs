//! The map as data, on the page, and as a picture.

mod figure_world;

use abide::figure::render::{self, Width};
use abide::figure::{Figure, MapInput, map};
use abide::report;
use abide::survey::Record;
use abide::system::{Study, System};

fn figure(study: &Study, system: &System, records: &[Record], column: &str) -> Figure {
    let caption = report::caption(study, system, &figure_world::plan(), records);
    let span_day = figure_world::SPAN_DAY;
    map(&MapInput { study, system, records, column, span_day, caption: &caption }).unwrap()
}

/// Writes pictures for the eye where FIGURES_INTO points to; otherwise nothing.
fn show(name: &str, bytes: &[u8]) {
    if let Some(folder) = std::env::var_os("FIGURES_INTO") {
        std::fs::write(std::path::Path::new(&folder).join(name), bytes).unwrap();
    }
}

#[test]
fn pictures_for_the_eye() {
    let (system, study) = (figure_world::system(), figure_world::study(200, 150));
    let records = figure_world::records(&study);
    for column in ["megno", "lyapunov_time", "verdict", "end_time", "c.e_max"] {
        let figure = figure(&study, &system, &records, column);
        show(&format!("{column}.png"), &render::png(&figure, Width::PAGE).unwrap());
        show(&format!("{column}-88.png"), &render::png(&figure, Width::COLUMN).unwrap());
    }
}
