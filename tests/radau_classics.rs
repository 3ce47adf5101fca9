//! Three-body problems with known ends (tests/truth/three-body-classics.csv: 128-bit Taylor runs).

mod radau_support;

use radau_support::classics::*;
use radau_support::*;

/// Each error must be below `roundings` times what one rounding of the start does.
fn check(problem: &str, roundings: f64, to: f64) -> Vec<Seen> {
    let seen = follow(problem, to);
    for Seen { t, error, conditioning } in &seen {
        println!("{problem} t = {t}: error {error:.1e}, conditioning {conditioning:.1e}");
        assert!(
            *error <= roundings * f64::EPSILON * conditioning,
            "{problem} at {t}: error {error:e}, conditioning {conditioning:e}"
        );
    }
    seen
}

#[test]
fn pythagorean_problem_to_the_digits_that_its_conditioning_leaves() {
    let seen = check("pythagorean", 4.0, 70.0);
    assert_eq!(seen.len(), 14);
    assert!(seen[2].error < 1e-12 && seen[9].error < 1e-6, "{seen:?}");
}

#[test]
fn pythagorean_closest_approach() {
    let rows = table("three-body-classics.csv");
    let truth = rows.iter().find(|r| r["part"] == "closest-approach").unwrap();
    let (closest, approaches) = closest_approach();
    assert!(approaches > 20, "{approaches}");
    // Masses 4 and 5 are the second and third body.
    assert_eq!((closest.first, closest.second), (1, 2));
    // One rounding, 1e-16, is worth about 1e-15 of the time; the distance is of the square root kind in angular
    // momentum, where a rounding of v = 200 at d = 4e-4 is 1e-13 of it.
    let time_error = (closest.day - truth["t"].parse::<f64>().unwrap()).abs();
    let relative = (closest.distance_au / number(truth, "x") - 1.0).abs();
    println!("closest approach: time off by {time_error:e}, distance by {relative:e} of itself");
    assert!(time_error < 2e-12 && relative < 5e-12, "{time_error:e} {relative:e}");
}

#[test]
fn figure_eight() {
    for problem in ["figure-eight-8digits", "figure-eight-refined"] {
        let seen = check(problem, 10.0, f64::INFINITY);
        assert_eq!(seen.len(), 7, "{problem}");
    }
}

#[test]
fn lagrange_solutions_on_both_sides_of_the_critical_ratio() {
    let stable = check("lagrange-stable", 10.0, 200.0);
    // The unstable one leaves its triangle; at 200 no digit is left in double precision.
    let unstable = check("lagrange-unstable", 10.0, 100.0);
    let growth = |seen: &[Seen]| seen.iter().find(|s| s.t == 100.0).unwrap().conditioning;
    assert!(growth(&unstable) > 1e3 * growth(&stable));
}

#[test]
fn tangent_vectors_of_a_particle_at_l4() {
    for ratio in RATIOS {
        let seen = tangent_at_l4(ratio);
        assert!(seen.len() >= 4, "{ratio}");
        for (t, error, limit) in seen {
            println!("L4, {ratio}, t = {t}: tangent off by {error:.1e} of itself");
            assert!(error < limit, "{ratio} at {t}: {error:e} against {limit:e}");
        }
    }
}

#[test]
fn exponent_of_the_unstable_triangle() {
    let (found, stated) = exponent();
    println!("exponent {}, frequency {}", found[0], found[1]);
    assert!((found[0] - stated[0]).abs() < 2e-9, "{found:?}");
    assert!((found[1] - stated[1]).abs() < 2e-9, "{found:?}");
}

#[test]
fn sun_jupiter_saturn_over_ten_thousand_years_either_way() {
    let seen = sun_jupiter_saturn_off();
    assert_eq!(seen.len(), 8);
    for (years, error) in seen {
        let limit = jupiter_limit_au(years);
        println!("Sun, Jupiter, Saturn {years} yr: error {error:.1e} au, limit {limit:.1e} au");
        assert!(error < limit, "{years}: {error:e} against {limit:e}");
    }
}
