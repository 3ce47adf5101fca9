//! Angles on the circle.

use std::f64::consts::{PI, TAU};

/// The angle of the same direction in [−π, π]; an angle already there is returned untouched.
pub fn wrap_half_turn(angle: f64) -> f64 {
    if angle.abs() <= PI {
        return angle;
    }
    let rest = angle % TAU;
    if rest > PI {
        rest - TAU
    } else if rest < -PI {
        rest + TAU
    } else {
        rest
    }
}

/// The angle of the same direction in [0, 2π).
pub fn wrap_turn(angle: f64) -> f64 {
    let rest = angle % TAU;
    let rest = if rest < 0.0 { rest + TAU } else { rest };
    // A tiny negative angle rounds up to the full turn.
    if rest >= TAU { 0.0 } else { rest }
}

/// `value` moved by whole periods to lie within half a period of `near`.
///
/// value + k · period. With `period` = 2π: the turn of an angle next to another. Units are the caller's.
pub fn turn_near(value: f64, near: f64, period: f64) -> f64 {
    value + ((near - value) / period).round() * period
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    proptest! {
        #[test]
        fn wrapped_angles_point_the_same_way(angle in -1e3..1e3f64) {
            for (wrapped, low, high) in [(wrap_half_turn(angle), -PI, PI), (wrap_turn(angle), 0.0, TAU)] {
                prop_assert!((low..=high).contains(&wrapped));
                prop_assert!((wrapped.cos() - angle.cos()).abs() < 1e-12);
                prop_assert!((wrapped.sin() - angle.sin()).abs() < 1e-12);
            }
        }

        #[test]
        fn nearest_turn_is_within_half_a_turn(value in -1e3..1e3f64, near in -1e3..1e3f64) {
            let moved = turn_near(value, near, TAU);
            prop_assert!((moved - near).abs() <= PI * (1.0 + 1e-12));
            prop_assert!((moved.cos() - value.cos()).abs() < 1e-12);
        }
    }

    #[test]
    fn edges_of_the_circle() {
        assert_eq!(wrap_half_turn(PI), PI);
        assert_eq!(wrap_half_turn(-PI), -PI);
        assert_eq!(wrap_turn(-1e-300), 0.0);
        assert_eq!(wrap_turn(TAU), 0.0);
    }
}
