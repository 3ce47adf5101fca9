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
