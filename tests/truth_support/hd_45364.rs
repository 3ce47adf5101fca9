//! Fundamental frequencies of HD 45364.

use std::f64::consts::TAU;

use abide::assess::follow;
use abide::coords::{Elements, configure};
use abide::input::read_system;
use abide::system::{Frame, Span};
use abide::units::YEAR_DAY;

use super::line::{real, slope, strongest, unwrapped};
use super::{plan, truth_path};

#[derive(Debug)]
pub struct Frequencies {
    /// Main line of 2λb − 3λc + ϖb.
    pub libration_deg_per_yr: f64,
    pub amplitude_deg: f64,
    /// Mean of n_b − n_c.
    pub difference_deg_per_yr: f64,
    /// Largest absolute value of the angle, rad.
    pub largest_angle: f64,
    pub energy_error: f64,
}

/// Follows the published solution, its elements read in that frame, and looks for its lines.
///
/// Blocks of 16 steps (a third of a year), so that neither angle turns by half a circle between two rows.
pub fn frequencies(years: f64, frame: Frame) -> Frequencies {
    let file = read_system(truth_path("hd-45364.toml")).unwrap_or_else(|error| panic!("{error}"));
    let mut system = file.system;
    system.convention.elements = frame;
    let start = configure(&system).unwrap();
    let mut plan = plan(&start, Span::Days(years * YEAR_DAY), 1e-6);
    plan.block_steps = 16;
    (plan.megno, plan.extent) = (false, false);
    let (assessment, rows) = follow(&start, &plan, usize::MAX, |_| true).expect("never stopped");
    assert!(assessment.loss.is_none(), "{assessment:?}");
    let step = (rows[1].time_day - rows[0].time_day) / YEAR_DAY;
    let planets = || rows.iter().map(|row| (&row.elements[0], &row.elements[1]));
    let resonant = |(b, c): (&Elements, &Elements)| {
        2.0 * b.mean_longitude() - 3.0 * c.mean_longitude() + b.longitude_of_pericentre()
    };
    let angle = unwrapped(planets().map(resonant));
    let mean = (angle.iter().sum::<f64>() / angle.len() as f64 / TAU).round() * TAU;
    let angle: Vec<f64> = angle.iter().map(|x| x - mean).collect();
    let (line, half) = strongest(&real(angle.iter().copied()), step, 0.05, 1.0);
    let difference = unwrapped(planets().map(|(b, c)| b.mean_longitude() - c.mean_longitude()));
    Frequencies {
        libration_deg_per_yr: line.to_degrees(),
        amplitude_deg: 2.0 * half.to_degrees(),
        difference_deg_per_yr: slope(&difference, step).0.to_degrees(),
        largest_angle: angle.iter().fold(0.0, |most, x| x.abs().max(most)),
        energy_error: assessment.energy_error.expect("it was integrated"),
    }
}

/// What was found beside what Correia et al. (2009), Table 4 has (seen).
#[derive(Debug)]
pub struct Row {
    pub quantity: &'static str,
    pub found: f64,
    pub published: f64,
    /// Relative; absolute where the published value is 0.
    pub limit: f64,
}

impl Row {
    pub fn departure(&self) -> f64 {
        if self.published == 0.0 { self.found } else { self.found / self.published - 1.0 }
    }
}

/// `abide follow` over 1e4 years with the elements read in that frame, and its tables beside the published one:
/// frequencies from frequencies.ecsv, lines of the resonant angle from lines.ecsv by the names that the program gives them.
pub fn table(elements: &str) -> Vec<Row> {
    let folder = tempfile::tempdir().unwrap();
    let text = std::fs::read_to_string(truth_path("hd-45364.toml")).unwrap();
    let read = text.replace("elements = \"jacobi\"", &format!("elements = \"{elements}\""));
    assert!(read.contains(&format!("elements = \"{elements}\"")));
    std::fs::write(folder.path().join("system.toml"), read).unwrap();
    let status = std::process::Command::new(env!("CARGO_BIN_EXE_abide"))
        .args(["follow", "system.toml", "--span", "1e4 yr", "--into", "out", "--quiet"])
        .current_dir(folder.path())
        .status()
        .unwrap();
    assert!(status.success());
    let rows = |name: &str| {
        let path = folder.path().join("out").join(name);
        let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_path(path).unwrap();
        reader.records().map(|record| record.unwrap()).collect::<Vec<_>>()
    };
    let frequencies = rows("frequencies.ecsv");
    let of =
        |name: &str| -> f64 { frequencies.iter().find(|row| &row[0] == name).unwrap()[2].parse().unwrap() };
    let lines = rows("lines.ecsv");
    // Columns: signal, rank, frequency, period, amplitude, unit, phase, combination.
    let line = |combination: &str| -> (f64, f64) {
        let wanted = |row: &&csv::StringRecord| &row[0] == "3λ_c − 2λ_b − ϖ_b" && &row[7] == combination;
        let row = lines.iter().find(wanted).unwrap_or_else(|| panic!("no line {combination}: {lines:?}"));
        (row[2].parse().unwrap(), row[4].parse().unwrap())
    };
    let (libration, apsidal) = (line("l"), line("g2 − g1"));
    let row = |quantity, found, published, limit| Row { quantity, found, published, limit };
    vec![
        row("libration l, deg/yr", libration.0, 19.8207, 0.01),
        row("its amplitude, deg", libration.1, 68.444, 0.03),
        row("g2 - g1, deg/yr", apsidal.0, 0.8698, 0.01),
        row("its amplitude, deg", apsidal.1, 13.400, 0.03),
        row("its period, yr", 360.0 / apsidal.0, 413.9, 0.01),
        row("n_b - n_c, deg/yr", of("n_b") - of("n_c"), 192.3963, 0.01),
        row("n_c - g1, deg/yr", of("n_c") - of("g1"), 384.7926, 0.01),
        row("n_b - g1, deg/yr", of("n_b") - of("g1"), 577.1889, 0.01),
        row("2n_b - 3n_c + g1, deg/yr", 2.0 * of("n_b") - 3.0 * of("n_c") + of("g1"), 0.0, 5e-5),
    ]
}
