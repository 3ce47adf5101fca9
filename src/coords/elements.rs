//! Osculating elements of one orbit, and the state they stand for.
//!
//! The reference plane is the plane of the sky: x points north, y east. The ascending node is counted from
//! x towards y, from north through east, and is where z grows. With the transit rule +90° (the default)
//! z points to the observer: z = r sin i sin(ω + ν) is largest, and the planet in front of the star, where
//! ω + ν = +90°. With the rule −90° the same numbers are read with z pointing away from the observer,
//! so that bodies recede at the node, and the planet is in front where ω + ν = −90°. ω is the planet's.

use nalgebra::{Rotation3, Vector3};

use crate::kepler;
use crate::num::wrap_turn;

/// Below this eccentricity an orbit is a circle: what is left is the rounding of a state.
const CIRCLE: f64 = 64.0 * f64::EPSILON;
/// Below this sine of the inclination an orbit lies in the reference plane, for the same reason.
const FLAT: f64 = 64.0 * f64::EPSILON;

/// Osculating Kepler elements; angles in radians.
///
/// `semi_major_axis_au` is negative and `eccentricity` > 1 for a hyperbola. `argument_of_pericentre` is the
/// orbiting body's own. For a circle the pericentre is put at the node, for an uninclined orbit the
/// node at the reference axis, so all six are always finite.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Elements {
    pub semi_major_axis_au: f64,
    pub eccentricity: f64,
    pub inclination: f64,
    pub ascending_node: f64,
    pub argument_of_pericentre: f64,
    pub mean_anomaly: f64,
}

/// Size, form and tilt of an orbit: the elements without the angles that need the body's place; cheaper, and the same bits.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Shape {
    pub semi_major_axis_au: f64,
    pub eccentricity: f64,
    pub inclination: f64,
}

/// Where an orbit's plane lies, and where in it the body is.
struct Orientation {
    inclination: f64,
    ascending_node: f64,
    /// From the node in the direction of motion, rad.
    argument_of_latitude: f64,
}

/// The form of an orbit, and what tells where along it the body is.
struct Form {
    semi_major_axis_au: f64,
    eccentricity: f64,
    /// e sin E, or e sinh E.
    sine: f64,
    /// e cos E of an ellipse.
    cosine: f64,
}

impl Shape {
    /// As [`Elements::from_state`].
    pub fn from_state(gm: f64, position_au: [f64; 3], velocity_au_day: [f64; 3]) -> Shape {
        let position = Vector3::from(position_au);
        let velocity = Vector3::from(velocity_au_day);
        let momentum = position.cross(&velocity);
        let form = form(gm, &position, &velocity, momentum.norm());
        Shape {
            semi_major_axis_au: form.semi_major_axis_au,
            eccentricity: circle_or(form.eccentricity),
            inclination: inclination(&some_normal(&position, &momentum)),
        }
    }

    /// a (1 − e), au.
    pub fn pericentre_au(&self) -> f64 {
        self.semi_major_axis_au * (1.0 - self.eccentricity)
    }
}

impl Elements {
    /// Elements of the orbit through a state.
    ///
    /// From e cos E = r v²/μ − 1 and e sin E = r·v / √(μ a) (with cosh and sinh beyond escape), the angular
    /// momentum r × v and its node line. Takes au, au day⁻¹ and μ in au³ day⁻². Node, argument and, for
    /// ellipses, the mean anomaly lie in [0, 2π). e < 64 ε is given as a circle, sin i < 64 ε as flat (i = 0
    /// or π). A state within one rounding of the parabola comes back as an ellipse of size r/ε. NaN only for
    /// a body at the centre or a state that is not finite.
    pub fn from_state(gm: f64, position_au: [f64; 3], velocity_au_day: [f64; 3]) -> Elements {
        let position = Vector3::from(position_au);
        let velocity = Vector3::from(velocity_au_day);
        let momentum = position.cross(&velocity);
        let form = form(gm, &position, &velocity, momentum.norm());
        let (mean_anomaly, true_anomaly) = form.anomalies();
        let plane = orientation(&position, &momentum);
        let circle = form.eccentricity < CIRCLE;
        Elements {
            semi_major_axis_au: form.semi_major_axis_au,
            eccentricity: circle_or(form.eccentricity),
            inclination: plane.inclination,
            ascending_node: wrap_turn(plane.ascending_node),
            argument_of_pericentre: if circle {
                0.0
            } else {
                wrap_turn(plane.argument_of_latitude - true_anomaly)
            },
            mean_anomaly: if circle {
                wrap_turn(plane.argument_of_latitude)
            } else if form.eccentricity < 1.0 {
                wrap_turn(mean_anomaly)
            } else {
                mean_anomaly
            },
        }
    }

    /// Position (au) and velocity (au day⁻¹) of these elements around a mass parameter μ (au³ day⁻²).
    ///
    /// In the orbit's plane a (cos E − e), a √(1−e²) sin E and their rates (cosh and sinh for a hyperbola),
    /// then turned by the argument, the inclination and the node. NaN where a and e do not belong together.
    pub fn to_state(&self, gm: f64) -> ([f64; 3], [f64; 3]) {
        let (position, velocity) = self.in_plane(gm);
        let turn = Rotation3::from_axis_angle(&Vector3::z_axis(), self.ascending_node)
            * Rotation3::from_axis_angle(&Vector3::x_axis(), self.inclination)
            * Rotation3::from_axis_angle(&Vector3::z_axis(), self.argument_of_pericentre);
        ((turn * position).into(), (turn * velocity).into())
    }

    /// In the plane of the orbit, x towards the pericentre. Half angles keep 1 − e cos E exact near e = 1.
    fn in_plane(&self, gm: f64) -> (Vector3<f64>, Vector3<f64>) {
        let (a, e) = (self.semi_major_axis_au.abs(), self.eccentricity);
        if e < 1.0 {
            let anomaly = kepler::eccentric_from_mean(self.mean_anomaly, e);
            let half_square = (0.5 * anomaly).sin().powi(2);
            let (sin, cos) = anomaly.sin_cos();
            let minor = ((1.0 - e) * (1.0 + e)).sqrt();
            let distance = a * ((1.0 - e) + 2.0 * e * half_square);
            let speed = (gm * a).sqrt() / distance;
            (
                Vector3::new(a * ((1.0 - e) - 2.0 * half_square), a * minor * sin, 0.0),
                Vector3::new(-speed * sin, speed * minor * cos, 0.0),
            )
        } else {
            let anomaly = kepler::hyperbolic_from_mean(self.mean_anomaly, e);
            let half_square = (0.5 * anomaly).sinh().powi(2);
            let (sinh, cosh) = (anomaly.sinh(), anomaly.cosh());
            let minor = ((e - 1.0) * (e + 1.0)).sqrt();
            let distance = a * ((e - 1.0) + 2.0 * e * half_square);
            let speed = (gm * a).sqrt() / distance;
            (
                Vector3::new(a * ((e - 1.0) - 2.0 * half_square), a * minor * sinh, 0.0),
                Vector3::new(-speed * sinh, speed * minor * cosh, 0.0),
            )
        }
    }

    /// 2π √(a³/μ), day; none for a hyperbola.
    pub fn period_day(&self, gm: f64) -> Option<f64> {
        (self.eccentricity < 1.0)
            .then(|| std::f64::consts::TAU * (self.semi_major_axis_au.powi(3) / gm).sqrt())
    }

    pub fn shape(&self) -> Shape {
        let Elements { semi_major_axis_au, eccentricity, inclination, .. } = *self;
        Shape { semi_major_axis_au, eccentricity, inclination }
    }

    /// a (1 − e), au.
    pub fn pericentre_au(&self) -> f64 {
        self.shape().pericentre_au()
    }

    /// a (1 + e), au; infinite for a hyperbola.
    pub fn apocentre_au(&self) -> f64 {
        if self.eccentricity < 1.0 {
            self.semi_major_axis_au * (1.0 + self.eccentricity)
        } else {
            f64::INFINITY
        }
    }

    /// Longitude of pericentre: node + argument, rad in [0, 2π).
    pub fn longitude_of_pericentre(&self) -> f64 {
        wrap_turn(self.ascending_node + self.argument_of_pericentre)
    }

    /// Mean longitude: node + argument + mean anomaly, rad in [0, 2π).
    pub fn mean_longitude(&self) -> f64 {
        wrap_turn(self.ascending_node + self.argument_of_pericentre + self.mean_anomaly)
    }
}

fn form(gm: f64, position: &Vector3<f64>, velocity: &Vector3<f64>, momentum: f64) -> Form {
    let distance = position.norm();
    let radial = position.dot(velocity);
    let kinetic = distance * velocity.norm_squared() / gm;
    // r/a; a parabola to rounding has no a, and is given as the largest ellipse that rounding can tell.
    let binding = 2.0 - kinetic;
    let binding = if binding.abs() < f64::EPSILON { f64::EPSILON } else { binding };
    let semi_major_axis_au = distance / binding;
    let sine = radial / (gm * semi_major_axis_au.abs()).sqrt();
    let cosine = 1.0 - binding;
    let eccentricity = if binding > 0.0 {
        // A radial fall has e = 1; it is kept among the ellipses.
        cosine.hypot(sine).min(1.0 - 0.5 * f64::EPSILON)
    } else {
        // e² − 1 = h²/(μ |a|) has no cancellation far out, where cosh and sinh have.
        let excess = momentum / (gm * semi_major_axis_au.abs()).sqrt();
        1.0f64.hypot(excess).max(1.0 + f64::EPSILON)
    };
    Form { semi_major_axis_au, eccentricity, sine, cosine }
}

impl Form {
    /// Mean and true anomaly.
    fn anomalies(&self) -> (f64, f64) {
        let e = self.eccentricity;
        if e < 1.0 {
            // The true anomaly comes from this very E, so that what E misses for small e cancels in ω + M.
            let eccentric = self.sine.atan2(self.cosine);
            (kepler::mean_from_eccentric(eccentric, e), kepler::true_from_eccentric(eccentric, e))
        } else {
            let hyperbolic = (self.sine / e).asinh();
            (kepler::mean_from_hyperbolic(hyperbolic, e), kepler::true_from_hyperbolic(hyperbolic, e))
        }
    }
}

fn circle_or(eccentricity: f64) -> f64 {
    if eccentricity < CIRCLE { 0.0 } else { eccentricity }
}

fn orientation(position: &Vector3<f64>, momentum: &Vector3<f64>) -> Orientation {
    let momentum = some_normal(position, momentum);
    let size = momentum.norm();
    let level = momentum.x.hypot(momentum.y);
    let flat = level <= FLAT * size;
    let node = if flat { Vector3::x() } else { Vector3::new(-momentum.y / level, momentum.x / level, 0.0) };
    let ahead = momentum.cross(&node) / size;
    Orientation {
        inclination: inclination(&momentum),
        ascending_node: node.y.atan2(node.x),
        argument_of_latitude: position.dot(&ahead).atan2(position.dot(&node)),
    }
}

fn inclination(momentum: &Vector3<f64>) -> f64 {
    let level = momentum.x.hypot(momentum.y);
    match level <= FLAT * momentum.norm() {
        true if momentum.z > 0.0 => 0.0,
        true => std::f64::consts::PI,
        false => level.atan2(momentum.z),
    }
}

/// The angular momentum, or some normal of a radial orbit.
fn some_normal(position: &Vector3<f64>, momentum: &Vector3<f64>) -> Vector3<f64> {
    if momentum.norm() > 0.0 { *momentum } else { any_normal(position) }
}

/// A radial orbit lies in every plane through it; this is one of them.
fn any_normal(position: &Vector3<f64>) -> Vector3<f64> {
    let axis = if position.x.abs() <= position.y.abs() { Vector3::x() } else { Vector3::y() };
    position.cross(&axis).normalize()
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    proptest! {
        #[test]
        fn the_shape_is_that_of_the_elements_to_the_bit(
            pos in prop::array::uniform3(-3.0f64..3.0),
            vel in prop::array::uniform3(-1.2f64..1.2),
            kind in 0u8..4,
        ) {
            let (pos, vel) = match kind {
                0 => ([pos[0], pos[1], 0.0], [vel[0], vel[1], 0.0]),
                1 => (pos, pos.map(|x| 0.3 * x)),
                2 => ([1.0, 0.0, 0.0], [0.0, 1.0, vel[2]]),
                _ => (pos, vel),
            };
            let (elements, shape) = (Elements::from_state(1.0, pos, vel), Shape::from_state(1.0, pos, vel));
            let bits = |s: Shape| [s.semi_major_axis_au, s.eccentricity, s.inclination].map(f64::to_bits);
            prop_assert_eq!(bits(elements.shape()), bits(shape));
        }
    }
}
