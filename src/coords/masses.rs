//! Masses and sizes, which may depend on each other.

use std::f64::consts::TAU;

use super::CoordsError;
use super::convert::mass_parameters;
use super::outline::Outline;
use crate::system::{Body, Frame, Key, System};

/// Rounds of the search for masses; its error shrinks at least by 2/3 in each.
const ROUNDS: usize = 200;
/// Below this sine of the inclination an orbit counts as seen face-on.
const FACE_ON: f64 = 1e-12;

/// What the statements say about masses and sizes, all in the order of [`System::orbiting`].
pub(super) struct Solved {
    /// G × mass, au³ day⁻².
    pub gm: Vec<f64>,
    /// Bodies by period; counts for Jacobi elements only.
    pub order: Vec<usize>,
    /// Of each planet's orbit in the frame of the file, au³ day⁻².
    pub mass_parameter: Vec<f64>,
    pub semi_major_axis_au: Vec<f64>,
}

#[derive(Clone, Copy)]
enum Size {
    PeriodDay(f64),
    SemiMajorAxisAu(f64),
}

impl Size {
    fn read(body: &Body) -> Result<Size, CoordsError> {
        let (key, value) = [Key::Period, Key::SemiMajorAxis]
            .into_iter()
            .find_map(|key| body.stated.value(key).map(|value| (key, value)))
            .ok_or_else(|| CoordsError::SizeMissing { planet: body.name.clone() })?;
        if !(value > 0.0 && value.is_finite()) {
            return Err(CoordsError::Size { planet: body.name.clone(), key: key.word(), found: value });
        }
        Ok(if key == Key::Period { Size::PeriodDay(value) } else { Size::SemiMajorAxisAu(value) })
    }

    fn period_day(self, mass_parameter: f64) -> f64 {
        match self {
            Size::PeriodDay(period_day) => period_day,
            Size::SemiMajorAxisAu(axis_au) => TAU * (axis_au.powi(3) / mass_parameter).sqrt(),
        }
    }

    fn semi_major_axis_au(self, mass_parameter: f64) -> f64 {
        match self {
            Size::PeriodDay(period_day) => (mass_parameter * (period_day / TAU).powi(2)).cbrt(),
            Size::SemiMajorAxisAu(axis_au) => axis_au,
        }
    }
}

/// Masses and sizes that fulfil all statements at once.
///
/// A mass from K needs the mass parameter of its orbit, which holds the masses; they are put into each
/// other until they stay. The map contracts by at most 2/3, so it settles on the only solution.
/// Errors: the variants of [`CoordsError`] about masses and sizes.
pub(super) fn solve(system: &System, bodies: &[&Body], outlines: &[Outline]) -> Result<Solved, CoordsError> {
    let star_gm = star_gm(system)?;
    let frame = system.convention.elements;
    let sizes = bodies.iter().map(|body| Size::read(body)).collect::<Result<Vec<_>, _>>()?;
    let statements = bodies
        .iter()
        .zip(outlines)
        .map(|(body, outline)| mass_statement(body, outline))
        .collect::<Result<Vec<_>, _>>()?;
    let mut order = order_by_period(&sizes, &vec![star_gm; sizes.len()]);
    // A stated semi-major axis has its period only when the masses inside it are known, a companion's above all.
    for _ in 0..=sizes.len() {
        let wish =
            Wish { frame, star_gm, order: &order, bodies, outlines, sizes: &sizes, statements: &statements };
        let gm = wish.masses()?;
        let mass_parameter = mass_parameters(frame, &order, star_gm, &gm);
        let next = order_by_period(&sizes, &mass_parameter);
        if next == order || frame != Frame::Jacobi {
            let axes = sizes.iter().zip(&mass_parameter);
            let semi_major_axis_au = axes.map(|(size, mu)| size.semi_major_axis_au(*mu)).collect();
            return Ok(Solved { gm, order, mass_parameter, semi_major_axis_au });
        }
        order = next;
    }
    Err(CoordsError::OrderNotSolvable)
}

/// All that the masses depend on.
struct Wish<'a> {
    frame: Frame,
    star_gm: f64,
    order: &'a [usize],
    bodies: &'a [&'a Body],
    outlines: &'a [Outline],
    sizes: &'a [Size],
    statements: &'a [(Key, f64)],
}

impl Wish<'_> {
    /// The masses that fulfil the statements, the bodies taken in this order.
    fn masses(&self) -> Result<Vec<f64>, CoordsError> {
        let mut gm = vec![0.0; self.sizes.len()];
        let mut last_change = f64::INFINITY;
        for _ in 0..ROUNDS {
            let next = self.round(&gm)?;
            let change = largest_change(&gm, &next).1;
            // Settled: the rest of the change is rounding, and no longer shrinks.
            if change == 0.0 || (change < 16.0 * f64::EPSILON && change >= last_change) {
                return Ok(next);
            }
            last_change = change;
            gm = next;
        }
        let (worst, change) = largest_change(&gm, &self.round(&gm)?);
        let planet = self.bodies[worst].name.clone();
        let key = self.statements[worst].0.word();
        Err(CoordsError::MassNotSolvable { planet, key, rounds: ROUNDS, change })
    }

    fn round(&self, gm: &[f64]) -> Result<Vec<f64>, CoordsError> {
        let parameters = mass_parameters(self.frame, self.order, self.star_gm, gm);
        let body = |index: usize| {
            let (statement, outline) = (self.statements[index], &self.outlines[index]);
            let found = mass(statement, self.star_gm, parameters[index], outline, self.sizes[index]);
            if found >= 0.0 && found.is_finite() {
                return Ok(found);
            }
            let planet = self.bodies[index].name.clone();
            Err(CoordsError::Mass { planet, key: statement.0.word(), found })
        };
        (0..gm.len()).map(body).collect()
    }
}

pub(super) fn star_gm(system: &System) -> Result<f64, CoordsError> {
    let found = system.star.stated.value(Key::Mass).ok_or(CoordsError::StarMassMissing)?;
    if found > 0.0 && found.is_finite() { Ok(found) } else { Err(CoordsError::StarMass { found }) }
}

/// The order in which Jacobi elements take the bodies: by period, ties as in the file.
fn order_by_period(sizes: &[Size], mass_parameter: &[f64]) -> Vec<usize> {
    let period_day = |body: usize| sizes[body].period_day(mass_parameter[body]);
    let mut order: Vec<usize> = (0..sizes.len()).collect();
    order.sort_by(|&one, &other| period_day(one).total_cmp(&period_day(other)));
    order
}

fn mass_statement(body: &Body, outline: &Outline) -> Result<(Key, f64), CoordsError> {
    let (key, value) = [Key::Mass, Key::MinimumMass, Key::MassRatio, Key::RvSemiAmplitude]
        .into_iter()
        .find_map(|key| body.stated.value(key).map(|value| (key, value)))
        .ok_or_else(|| CoordsError::MassMissing { planet: body.name.clone() })?;
    let from_projection = matches!(key, Key::MinimumMass | Key::RvSemiAmplitude);
    if from_projection && outline.inclination.sin().abs() < FACE_ON {
        return Err(CoordsError::FaceOn {
            planet: body.name.clone(),
            key: key.word(),
            inclination_deg: outline.inclination.to_degrees(),
        });
    }
    Ok((key, value))
}

fn mass(statement: (Key, f64), star_gm: f64, mass_parameter: f64, outline: &Outline, size: Size) -> f64 {
    let (key, value) = statement;
    match key {
        Key::MinimumMass => value / outline.inclination.sin().abs(),
        Key::MassRatio => value * star_gm,
        Key::RvSemiAmplitude => {
            let mean_motion = TAU / size.period_day(mass_parameter);
            value / semi_amplitude_per_gm(mass_parameter, mean_motion, outline)
        }
        _ => value,
    }
}

/// The star's radial-velocity semi-amplitude per G × mass of the planet, (au day⁻¹) / (au³ day⁻²).
///
/// K = (m / M) n a sin i / √(1 − e²) with n² a³ = G M, so K / Gm = (n / μ²)^{1/3} sin i / √(1 − e²). M is the
/// total mass of the orbit in the frame of the file: star and planet for astrocentric elements, star and the
/// planets up to this one for Jacobi elements, everything for barycentric ones. `mean_motion` in rad day⁻¹.
pub(super) fn semi_amplitude_per_gm(mass_parameter: f64, mean_motion: f64, outline: &Outline) -> f64 {
    let e = outline.eccentricity;
    (mean_motion / (mass_parameter * mass_parameter)).cbrt() * outline.inclination.sin().abs()
        / ((1.0 - e) * (1.0 + e)).sqrt()
}

/// Which mass changed most, relative to itself, and by how much.
fn largest_change(before: &[f64], after: &[f64]) -> (usize, f64) {
    before
        .iter()
        .zip(after)
        .map(|(before, after)| if before == after { 0.0 } else { (after - before).abs() / after.abs() })
        .enumerate()
        .fold((0, 0.0), |worst, (index, change)| if change > worst.1 { (index, change) } else { worst })
}
