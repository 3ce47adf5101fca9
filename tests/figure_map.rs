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

#[test]
fn more_pictures_for_the_eye() {
    let system = figure_world::system();
    let mut study = figure_world::study(150, 1);
    study.axes.truncate(1);
    let records = figure_world::records(&study);
    for column in ["megno", "verdict", "lyapunov_time"] {
        let figure = figure(&study, &system, &records, column);
        show(&format!("one-{column}.png"), &render::png(&figure, Width::PAGE).unwrap());
        show(&format!("one-{column}-88.png"), &render::png(&figure, Width::COLUMN).unwrap());
    }
    let mut study = figure_world::study(40, 31);
    study.axes = vec![
        figure_world::axis(1, abide::system::Key::Eccentricity, (0.0, 0.3, 40)),
        figure_world::axis(1, abide::system::Key::Period, (12.0, 40.0, 31)),
    ];
    study.axes[1].spacing = abide::system::Spacing::Log;
    study.title = Some("A long title: a survey of the outer planet of an invented pair, period against eccentricity, in part".into());
    let mut records = figure_world::records(&figure_world::study(40, 31));
    records.truncate(800);
    let figure = figure(&study, &system, &records, "energy_error");
    show("turned.png", &render::png(&figure, Width::PAGE).unwrap());
    show("turned-88.png", &render::png(&figure, Width::COLUMN).unwrap());
}
