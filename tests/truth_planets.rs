//! The planets against outside integrations and the JPL ephemeris; the whole spans are in reports/validation.

#[path = "validation/de406.rs"]
#[allow(dead_code, reason = "the table uses the rest")]
mod de406;
#[path = "validation/long_runs.rs"]
#[allow(dead_code, reason = "the table uses the rest")]
mod long_runs;
mod radau_support;
#[path = "validation/report.rs"]
#[allow(dead_code, reason = "the table uses the rest")]
mod report;

use std::collections::BTreeMap;

use abide::integrate::Scheme;
use abide::integrate::forces::rate_matched;
use long_runs::{Lane, Symplectic, Truth, light_terms, matched_model};
use radau_support::{LIGHT, solar_system};

/// Four models over two centuries either way by (10,6,4), 4-day steps. Rounding: three standard deviations of a random walk
/// (Brouwer 1937) for Mercury, which turns fastest. Relativity is a potential with rate-matched velocities: the scheme must end where
/// an independent integration of just that does, and as far from relativity in full as that one.
#[test]
fn the_symplectic_scheme_ends_where_the_reference_does() {
    let (names, start) = solar_system("DE406");
    let mut truth = Truth::read(&names);
    truth.years.retain(|year| year.abs() <= 200);
    assert_eq!(truth.years.len(), 4);
    let models = ["newton", "newton+potential", "newton+1pn", "newton+1pn+quad"];
    let lanes = models.map(|name| {
        let state = if name.contains("1pn") { rate_matched(&start, LIGHT) } else { start.clone() };
        Lane { state, terms: light_terms(name != "newton", name.contains("quad")) }
    });
    let scheme = Scheme::named("(10,6,4)").unwrap();
    let places = Symplectic { lanes: lanes.into(), scheme, step_day: 4.0 }.places(&truth.years);
    for (index, name) in models.iter().enumerate() {
        for year in &truth.years {
            let span = f64::from(year.abs());
            let substeps = 9.0 * span * 365.25 / 4.0;
            let rounding =
                3.0 * f64::EPSILON * substeps.sqrt() * 3.0 * std::f64::consts::PI * span / 0.2408 * 0.387;
            let at = &places[&(index, *year)];
            let full = name.contains("1pn");
            let own = if full { matched_model(name) } else { name.to_string() };
            let left = if full { truth.unmatched_au(name, *year) } else { vec![0.0; 9] };
            let (off, off_full) = (truth.off(&own, *year, at), truth.off(name, *year, at));
            for body in 0..9 {
                let who = format!("{name} {year}, {}", names[body]);
                assert!(off[body] < rounding, "{who}: {:e} against {rounding:e}", off[body]);
                let limit = rounding + left[body];
                assert!(off_full[body] < limit, "{who}: {:e} against {limit:e}", off_full[body]);
            }
        }
    }
}

/// The best model departs from DE406 as an independent integration of the same model does; another model does not.
#[test]
fn a_thousand_years_depart_from_the_ephemeris_as_they_must() {
    let ephemeris: BTreeMap<_, _> =
        de406::ephemeris().into_iter().filter(|(year, _)| (-1000..=0).contains(year)).collect();
    let agreed = |model: &str| {
        let rows = de406::compare(de406::BEST, "adaptive", &de406::adaptive(model, &ephemeris));
        assert_eq!(rows.len(), 8);
        rows.iter().filter(|row| row.last().unwrap() == "yes").count()
    };
    assert_eq!(agreed(de406::BEST), 8);
    assert_eq!(agreed("newton"), 0);
}
