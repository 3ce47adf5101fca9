//! Tangent vectors and MEGNO against 128-bit integrations (tests/truth/variational-orbits.csv) and, for Kepler
//! motion, against what is known of it.

mod truth_support;

use abide::integrate::{Advance, Block, Growth, Scheme, State, Tangent, advance};
use truth_support::tangent::{Problem, compare};

/// Every row that double precision can follow is met within what rounding and the integrals over time allow.
fn meets_the_table(name: &str, per_year: u32, years: f64, rows: usize) {
    let found = compare(&Problem::read(name), per_year, years);
    assert_eq!(found.len(), rows, "{name}");
    for row in found {
        let label = format!("{name}: {row:?}");
        assert!(row.rounding < 0.1, "past what double precision can follow: {label}");
        assert!(row.tangent <= row.rounding, "{label}");
        assert!((row.found.log - row.stated.log).abs() <= row.rounding, "{label}");
        // Y = 2 (L - mean of L): each of the two may be off by the rounding.
        let y = 4.0 * row.rounding;
        assert!((row.found.y - row.stated.y).abs() <= y + row.quadrature.0, "{label}");
        assert!((row.found.mean_y - row.stated.mean_y).abs() <= y + row.quadrature.1, "{label}");
        assert!(row.quadrature.0 < 1e-4 && row.quadrature.1 < 1e-4, "samples too far apart: {label}");
    }
}

#[test]
fn kepler_ellipse_with_a_massive_planet() {
    meets_the_table("kepler-two-body", 1024, 1000.0, 4);
}

#[test]
fn compact_chaotic_pair() {
    meets_the_table("compact-two-planet-chaotic", 256, 200.0, 8);
}

#[test]
fn particle_on_a_regular_orbit() {
    meets_the_table("cr3bp-regular", 64, 2000.0, 5);
}

#[test]
fn particle_on_chaotic_orbits() {
    meets_the_table("cr3bp-chaotic-2to1", 64, 1000.0, 6);
    meets_the_table("cr3bp-chaotic-strong", 128, 500.0, 5);
}

/// A massless planet with a = 1, GM = 1, e, at mean anomaly 0.5 or so: pure Kepler motion.
fn ellipse(e: f64) -> State {
    let (anomaly, root) = (0.9f64, (1.0 - e * e).sqrt());
    let r = 1.0 - e * anomaly.cos();
    State {
        star_gm: 1.0,
        gm: vec![0.0],
        pos: vec![[anomaly.cos() - e, root * anomaly.sin(), 0.0]],
        vel: vec![[-anomaly.sin() / r, root * anomaly.cos() / r, 0.0]],
    }
}

fn grown(start: &State, tangent: &Tangent, orbits: f64) -> Growth {
    let (steps_per_orbit, mut block) = (40.0, Block::new(1, 1));
    let step = std::f64::consts::TAU / steps_per_orbit;
    block.start(0, start, tangent, step, 1.0);
    let steps = (orbits * steps_per_orbit) as usize;
    advance(Advance { block: &mut block, scheme: Scheme::leapfrog(), steps, tangent: true });
    block.growth(0)
}

/// Directions that are evenly spread, none of them special.
fn displacements() -> impl Iterator<Item = Tangent> {
    let number = |k: usize| 2.0 * ((k as f64 + 1.0) * 0.618_033_988_749_894_9).fract() - 1.0;
    (0..12).map(move |k| Tangent {
        pos: vec![[number(6 * k), number(6 * k + 1), number(6 * k + 2)]],
        vel: vec![[number(6 * k + 3), number(6 * k + 4), number(6 * k + 5)]],
    })
}

fn energy_change(start: &State, tangent: &Tangent) -> f64 {
    let dot = |a: &[f64; 3], b: &[f64; 3]| a.iter().zip(b).map(|(x, y)| x * y).sum::<f64>();
    let (pos, vel) = (&start.pos[0], &start.vel[0]);
    dot(vel, &tangent.vel[0]) + dot(pos, &tangent.pos[0]) / dot(pos, pos).powf(1.5)
}

/// The tangent along the shell of constant energy: what changes the energy is taken out of the velocity.
fn on_shell(start: &State, tangent: &Tangent) -> Tangent {
    let vel = &start.vel[0];
    let share = energy_change(start, tangent) / vel.iter().map(|v| v * v).sum::<f64>();
    let moved = [0, 1, 2].map(|k| tangent.vel[0][k] - share * vel[k]);
    Tangent { pos: tangent.pos.clone(), vel: vec![moved] }
}

/// Published: ⟨Y⟩ of a Kepler ellipse from a generic displacement is 2.0042, 2.0015, 2.00065 after 300, 1000, 3000
/// orbits (e = 0.1) and 2.0045, 2.00088 after 300, 3000 (e = 0.3); own integration of this project, not of this engine.
///
/// What differs there is displacement, metric and sampling, which the source does not give: they set how ⟨Y⟩
/// approaches 2, not that it does. A sheared displacement δ₀ + st has ⟨Y⟩ = 2 + (A + B ln t)/t, with A and B from
/// the angle between δ₀ and s and from the units that make positions and velocities comparable. So the limit is
/// tested after this law is taken out, for every direction, and the published departures must lie among ours.
/// A displacement almost along constant energy approaches 2 only when kt ≫ 1, k the relative rate of its
/// shear; those with k below a tenth of the mean motion are left out.
#[test]
fn megno_of_an_ellipse_tends_to_two() {
    for (e, published) in [(0.1, [4.2e-3, 1.5e-3, 0.65e-3]), (0.3, [4.5e-3, f64::NAN, 0.88e-3])] {
        let start = ellipse(e);
        let spans = [300.0, 1000.0, 3000.0, 10_000.0, 30_000.0];
        let mut departures = Vec::new();
        for tangent in displacements() {
            let size: f64 = [&tangent.pos[0], &tangent.vel[0]].into_iter().flatten().map(|x| x * x).sum();
            if 3.0 * energy_change(&start, &tangent).abs() / size.sqrt() < 0.1 {
                continue;
            }
            let found = spans.map(|orbits| grown(&start, &tangent, orbits).mean_y);
            let limit = without_log([spans[2], spans[3], spans[4]], [found[2], found[3], found[4]]);
            assert!((limit - 2.0).abs() < 1e-4, "e {e}: {found:?} tend to {limit}");
            assert!((found[4] - 2.0).abs() < 2e-3, "e {e}: {found:?}");
            departures.push(found.map(|y| y - 2.0));
        }
        assert!(departures.len() >= 10, "e {e}");
        for (k, stated) in published.into_iter().enumerate().filter(|(_, p)| !p.is_nan()) {
            let most = departures.iter().map(|d| d[k]).fold(f64::MIN, f64::max);
            let least = departures.iter().map(|d| d[k]).fold(f64::MAX, f64::min);
            assert!(least < stated && stated < most, "e {e}: {least} {stated} {most}");
        }
    }
}

/// y∞ of y = y∞ + (A + B ln t)/t through three points.
fn without_log(t: [f64; 3], y: [f64; 3]) -> f64 {
    let rows = nalgebra::Matrix3::from_fn(|i, j| [1.0, 1.0 / t[i], t[i].ln() / t[i]][j]);
    (rows.try_inverse().unwrap() * nalgebra::Vector3::from(y))[0]
}

/// Published: 0.0000, still 1.3e-3 after 300 orbits (e = 0.3), for a displacement along the energy surface: without
/// shear the displacement stays bounded, Y − 2 (L − mean of L) falls as 1/t and ⟨Y⟩ as (ln t)/t. The law is taken out as above.
#[test]
fn megno_along_constant_energy_tends_to_zero() {
    for e in [0.1, 0.3] {
        let start = ellipse(e);
        let mut early = Vec::new();
        for tangent in displacements() {
            let tangent = on_shell(&start, &tangent);
            let spans = [300.0, 3000.0, 30_000.0];
            let found = spans.map(|orbits| grown(&start, &tangent, orbits).mean_y);
            let limit = without_log(spans, found);
            assert!(limit.abs() < 1e-5 && found[2].abs() < 1e-4, "e {e}: {found:?} tend to {limit}");
            early.push(found[0]);
        }
        let (least, most) = early.iter().fold((f64::MAX, f64::MIN), |(l, m), y| (l.min(*y), m.max(*y)));
        assert!(e != 0.3 || (least < 1.3e-3 && 1.3e-3 < most), "{least} {most}");
    }
}
