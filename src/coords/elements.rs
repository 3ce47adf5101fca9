//! Osculating elements of one orbit.

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
