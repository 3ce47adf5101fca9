//! Osculating elements at even times: what frequency and resonance analysis work on.

use crate::coords::Elements;
use crate::num::{Complex, turn_near};
use std::f64::consts::TAU;

/// Largest departure of a time from even spacing, in spacings.
const UNEVEN: f64 = 1e-3;

/// A series that cannot be analysed.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
pub enum SeriesError {
    #[error("a series needs at least {needed} rows, not {found}")]
    TooShort { found: usize, needed: usize },
    #[error("row {row} has {found} planets, but {needed} mass parameters are given")]
    Planets { row: usize, found: usize, needed: usize },
    #[error("row {row} is at {found_day} d, but rows of equal spacing need {expected_day} d there")]
    Uneven { row: usize, found_day: f64, expected_day: f64 },
    #[error("planet {planet} is not on a bound orbit in row {row}")]
    Unbound { planet: usize, row: usize },
}

/// Elements of all planets at even times.
#[derive(Clone, Copy, Debug)]
pub struct ElementSeries<'a> {
    step_day: f64,
    /// G (star + planet), au³ day⁻², per planet.
    mass_parameter: &'a [f64],
    rows: &'a [Vec<Elements>],
}

impl<'a> ElementSeries<'a> {
    pub const FEWEST_ROWS: usize = 16;

    /// Checks the series: `rows[k]` holds the elements of all planets at `times_day[k]`.
    ///
    /// Errors: [`SeriesError`]; planets and rows are counted from 0.
    pub fn new(
        times_day: &[f64],
        rows: &'a [Vec<Elements>],
        mass_parameter: &'a [f64],
    ) -> Result<ElementSeries<'a>, SeriesError> {
        let found = rows.len().min(times_day.len());
        if found < Self::FEWEST_ROWS {
            return Err(SeriesError::TooShort { found, needed: Self::FEWEST_ROWS });
        }
        let step_day = (times_day[found - 1] - times_day[0]) / (found - 1) as f64;
        for (row, (time, planets)) in times_day.iter().zip(rows).enumerate() {
            let expected_day = times_day[0] + step_day * row as f64;
            let even = (time - expected_day).abs() <= UNEVEN * step_day;
            if !(even && step_day > 0.0) {
                return Err(SeriesError::Uneven { row, found_day: *time, expected_day });
            }
            if planets.len() != mass_parameter.len() {
                let needed = mass_parameter.len();
                return Err(SeriesError::Planets { row, found: planets.len(), needed });
            }
            let bound = |orbit: &Elements| (0.0..1.0).contains(&orbit.eccentricity);
            if let Some(planet) = planets.iter().position(|orbit| !bound(orbit)) {
                return Err(SeriesError::Unbound { planet, row });
            }
        }
        Ok(ElementSeries { step_day, mass_parameter, rows: &rows[..found] })
    }

    pub fn step_day(&self) -> f64 {
        self.step_day
    }

    pub fn span_day(&self) -> f64 {
        self.step_day * (self.rows.len() - 1) as f64
    }

    /// G (star + planet), au³ day⁻².
    pub fn mass_parameter(&self, planet: usize) -> f64 {
        self.mass_parameter[planet]
    }

    pub fn planets(&self) -> usize {
        self.mass_parameter.len()
    }

    pub fn rows(&self) -> &'a [Vec<Elements>] {
        self.rows
    }

    /// Mean osculating mean motion √(μ/a³), rad/day.
    pub fn osculating_motion(&self, planet: usize) -> f64 {
        let motions = self.rows.iter().map(|row| {
            let axis = row[planet].semi_major_axis_au;
            (self.mass_parameter[planet] / (axis * axis * axis)).sqrt()
        });
        motions.sum::<f64>() / self.rows.len() as f64
    }

    /// a exp(iλ), au.
    pub fn motion_signal(&self, planet: usize) -> Vec<Complex> {
        self.each(planet, |orbit| Complex::from_polar(orbit.semi_major_axis_au, orbit.mean_longitude()))
    }

    /// e exp(iϖ).
    pub fn pericentre_signal(&self, planet: usize) -> Vec<Complex> {
        self.each(planet, |orbit| Complex::from_polar(orbit.eccentricity, orbit.longitude_of_pericentre()))
    }

    /// sin(i/2) exp(iΩ), to the reference plane of the elements.
    pub fn node_signal(&self, planet: usize) -> Vec<Complex> {
        self.each(planet, |orbit| Complex::from_polar((0.5 * orbit.inclination).sin(), orbit.ascending_node))
    }

    /// A frequency that sampling has folded, moved by whole turns per sample next to `near`, rad/day.
    pub fn unfolded(&self, frequency: f64, near: f64) -> f64 {
        turn_near(frequency, near, TAU / self.step_day)
    }

    fn each(&self, planet: usize, signal: impl Fn(&Elements) -> Complex) -> Vec<Complex> {
        self.rows.iter().map(|row| signal(&row[planet])).collect()
    }
}
