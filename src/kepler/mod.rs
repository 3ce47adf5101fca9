//! Two-body mathematics on numbers.

mod anomaly;
mod drift;
mod stumpff;
mod universal;

pub use anomaly::{
    barker_from_mean, barker_from_true, eccentric_from_mean, eccentric_from_true, hyperbolic_from_mean,
    hyperbolic_from_true, mean_from_barker, mean_from_eccentric, mean_from_hyperbolic, mean_from_true,
    pericentre_passage_day, sinh_x_minus_x, true_from_barker, true_from_eccentric, true_from_hyperbolic,
    true_from_mean, x_minus_sin_x,
};
pub use drift::{Body, Low, Midway, drift, drift_keeping};
