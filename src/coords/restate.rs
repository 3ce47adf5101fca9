//! The way back: from a state to the numbers a file would state.

use std::f64::consts::{PI, TAU};

use super::configure::Cast;
use super::convert::elements_in_order;
use super::masses::{self, semi_amplitude_per_gm};
use super::outline::{Outline, owner_turn};
use super::{Configuration, CoordsError, Elements};
use crate::kepler;
use crate::num::{turn_near, wrap_half_turn};
use crate::system::{Body, Convention, Key, Measured, System};

/// The system that states the same keys in the same conventions, with values from masses and states alone.
///
/// Takes from `system` which keys are stated, the epoch and the convention, and from `configuration` masses,
/// radii, positions and velocities (never its elements). Angles and times come in the turn nearest to the
/// stated one. Where a state leaves an angle open (the pericentre of a circle, the node of an orbit in the
/// reference plane) the stated one stands, and what depends on it is counted from there. Uncertainties and
/// units are kept.
///
/// Errors: those of [`super::configure()`], when the system itself states no configuration.
pub fn restate(system: &System, configuration: &Configuration) -> Result<System, CoordsError> {
    let cast = Cast::of(system);
    let bodies = cast.bodies(system);
    let outlines = bodies.iter().map(|body| Outline::read(body)).collect::<Result<Vec<_>, _>>()?;
    let order = masses::solve(system, &bodies, &outlines)?.order;
    let frame = system.convention.elements;
    let gm: Vec<f64> = configuration.planets.iter().map(|planet| planet.gm).collect();
    let pos: Vec<[f64; 3]> = configuration.planets.iter().map(|planet| planet.position_au).collect();
    let vel: Vec<[f64; 3]> = configuration.planets.iter().map(|planet| planet.velocity_au_day).collect();
    let elements = elements_in_order(frame, &order, configuration.star_gm, &gm, &pos, &vel);
    let parameters = super::convert::mass_parameters(frame, &order, configuration.star_gm, &gm);
    let mut answer = system.clone();
    replace(&mut answer.star, |key, stated| match key {
        Key::Mass => configuration.star_gm,
        Key::Radius => configuration.star_radius_au,
        _ => stated,
    });
    for (index, body) in answer.planets.iter_mut().chain(&mut answer.companion).enumerate() {
        let found = Found::new(&elements[index], &outlines[index], &system.convention);
        let source = Source {
            gm: gm[index],
            star_gm: configuration.star_gm,
            radius_au: configuration.planets[index].radius_au,
            mass_parameter: parameters[index],
            epoch_jd: system.epoch_jd.unwrap_or(0.0),
            convention: system.convention,
        };
        replace(body, |key, stated| found.value(key, stated, &source));
    }
    Ok(answer)
}

fn replace(body: &mut Body, value: impl Fn(Key, f64) -> f64) {
    let stated: Vec<(Key, Measured)> = body.stated.iter().collect();
    for (key, measured) in stated {
        body.stated.insert(key, Measured { value: value(key, measured.value), ..measured });
    }
}

/// What the values of one planet come from, beside its elements.
struct Source {
    gm: f64,
    star_gm: f64,
    radius_au: f64,
    mass_parameter: f64,
    epoch_jd: f64,
    convention: Convention,
}

/// An orbit found from a state, with the angles that the state leaves open as they were stated.
struct Found {
    outline: Outline,
    semi_major_axis_au: f64,
    mean_anomaly: f64,
}

impl Found {
    fn new(elements: &Elements, stated: &Outline, convention: &Convention) -> Found {
        let (mut node, mut argument) = (elements.ascending_node, elements.argument_of_pericentre);
        let mut mean_anomaly = elements.mean_anomaly;
        // In the reference plane the state gives Ω + ω (prograde) or ω − Ω (retrograde), with Ω put to 0.
        if elements.inclination == 0.0 {
            node = stated.ascending_node;
            argument -= node;
        } else if elements.inclination == PI {
            node = stated.ascending_node;
            argument += node;
        }
        // On a circle it gives ω + M, with ω put to 0 before the node was moved.
        if elements.eccentricity == 0.0 {
            mean_anomaly += argument - stated.argument(convention);
            argument = stated.argument(convention);
        }
        Found {
            outline: Outline {
                eccentricity: elements.eccentricity,
                stated_argument: argument - owner_turn(convention),
                inclination: elements.inclination,
                ascending_node: node,
            },
            semi_major_axis_au: elements.semi_major_axis_au,
            mean_anomaly: wrap_half_turn(mean_anomaly),
        }
    }

    fn value(&self, key: Key, stated: f64, source: &Source) -> f64 {
        let outline = &self.outline;
        let mean_motion = (source.mass_parameter / self.semi_major_axis_au.powi(3)).sqrt();
        let (sin, cos) = outline.stated_argument.sin_cos();
        let e = outline.eccentricity;
        let angle = |value: f64| turn_near(value, stated, TAU);
        let date = |mean_at_date: f64| {
            let value = source.epoch_jd - (self.mean_anomaly - mean_at_date) / mean_motion;
            turn_near(value, stated, TAU / mean_motion)
        };
        match key {
            Key::Mass => source.gm,
            Key::MinimumMass => source.gm * outline.inclination.sin().abs(),
            Key::MassRatio => source.gm / source.star_gm,
            Key::RvSemiAmplitude => {
                source.gm * semi_amplitude_per_gm(source.mass_parameter, mean_motion, outline)
            }
            Key::Radius => source.radius_au,
            // A satellite leaves one number, which two keys state.
            Key::Age | Key::SatelliteMassRatio | Key::SatelliteSemiMajorAxis => stated,
            Key::Period => TAU / mean_motion,
            Key::SemiMajorAxis => self.semi_major_axis_au,
            Key::Eccentricity => e,
            Key::ECosW => e * cos,
            Key::ESinW => e * sin,
            Key::SqrtECosW => e.sqrt() * cos,
            Key::SqrtESinW => e.sqrt() * sin,
            Key::ArgumentOfPericentre => angle(outline.stated_argument),
            Key::LongitudeOfPericentre => angle(outline.ascending_node + outline.stated_argument),
            Key::MeanAnomaly => angle(self.mean_anomaly),
            Key::MeanLongitude => angle(outline.ascending_node + outline.stated_argument + self.mean_anomaly),
            Key::TrueAnomaly => angle(kepler::true_from_mean(self.mean_anomaly, e)),
            Key::PericentreTime => date(0.0),
            Key::TransitTime => date(outline.mean_anomaly_at_transit(&source.convention)),
            Key::Inclination => outline.inclination,
            Key::AscendingNode => angle(outline.ascending_node),
        }
    }
}
