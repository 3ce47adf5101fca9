//! Every scheme has the generalised order it is named for, measured on two planets.

mod shelf;

use abide::integrate::{Coordinates, Scheme};
use shelf::order::slopes;

/// In both coordinate sets: first term ε hⁿ¹ within half a unit in the step (powers are not yet pure at three to
/// 24 steps per orbit) and last term εᵏ hⁿˡᵃˢᵗ, k = number of orders, within a tenth in the step and 0.4 in ε (other terms
/// are mixed in at ε = 0.1, and a corrected leapfrog has only the last; one without corrector only the first). A scheme
/// one order off would be 2 away in the step and 1 in ε.
#[test]
fn slopes_are_those_of_the_name() {
    assert_eq!(Scheme::all().len(), 16);
    let mut without_ratio = 0;
    for coordinates in [Coordinates::Heliocentric, Coordinates::Jacobi] {
        for scheme in Scheme::all() {
            let found = slopes(coordinates, scheme);
            let label = format!("{coordinates:?} {found:?}");
            let [first, last] = [found.orders[0], scheme.least_order()].map(f64::from);
            if !scheme.corrected {
                assert!((found.first_step - first).abs() < 0.5, "{label}");
                assert!((found.first_ratio - 1.0).abs() < 0.1, "{label}");
            }
            let terms = if first == last && !scheme.corrected { 1.0 } else { found.orders.len() as f64 };
            assert!((found.last_step - last).abs() < 0.1, "{label}");
            match found.last_ratio {
                Some(ratio) => assert!((ratio - terms).abs() < 0.4, "{label}"),
                None => without_ratio += 1,
            }
        }
    }
    assert_eq!(without_ratio, 2, "(8,6,4) and (10,6,4) in Jacobi coordinates");
}

/// The corrector takes the term ε h² out of leapfrog: without it the error is that term, first order in ε.
#[test]
fn the_corrector_removes_the_first_term_of_leapfrog() {
    use std::f64::consts::TAU;
    let corrected = Scheme::leapfrog();
    let plain = Scheme { corrected: false, ..corrected.clone() };
    for ratio in [1e-3, 1e-5] {
        let error =
            |scheme: &Scheme| shelf::worst_energy(&shelf::pair(ratio), scheme, TAU / 32.0, 32 * 50, 1);
        let gain = error(&plain) / error(corrected);
        // ε h² against ε² h²: the gain is of the order of 1/ε.
        assert!(gain * ratio > 0.05 && gain * ratio < 20.0, "ε = {ratio}: gain {gain}");
    }
}
