//! How far the planets are from where a second star would unsettle them, as plain data and as lines of the page.

use serde::Serialize;

use super::table::{lines, short, significant, wrapped};
use crate::coords::Configuration;
use crate::criteria::{CriticalAxis, OutOfDomain, binary_limits};

const NAME: usize = 16;

/// The limits of one planet; what a fit does not say is absent, with its reason among those of all criteria.
#[derive(Debug, Serialize)]
pub struct BinaryView {
    pub planet: String,
    /// "S-type" or "P-type".
    pub kind: &'static str,
    pub semi_major_axis_au: f64,
    pub holman_wiegert: Option<CriticalView>,
    pub mardling_aarseth: Option<CriticalView>,
}

#[derive(Debug, Serialize)]
pub struct CriticalView {
    pub critical_axis_au: f64,
    /// Formal error of the fit.
    pub error_au: Option<f64>,
    /// Above 1 on the stable side.
    pub margin: f64,
    pub stable: bool,
}

/// `hear` is told of each planet what a fit says and gives what was said.
pub fn limits(
    configuration: &Configuration,
    mut hear: impl FnMut(&str, Result<CriticalAxis, OutOfDomain>) -> Option<CriticalAxis>,
) -> Vec<BinaryView> {
    let view = |critical: CriticalAxis| CriticalView {
        critical_axis_au: critical.au,
        error_au: critical.error_au,
        margin: critical.margin,
        stable: critical.margin > 1.0,
    };
    binary_limits(configuration)
        .into_iter()
        .map(|found| {
            let name = &configuration.planets[found.planet].name;
            BinaryView {
                planet: name.clone(),
                kind: if found.circles_pair { "P-type" } else { "S-type" },
                semi_major_axis_au: found.semi_major_axis_au,
                holman_wiegert: hear(name, found.holman_wiegert).map(view),
                mardling_aarseth: hear(name, found.mardling_aarseth).map(view),
            }
        })
        .collect()
}

/// The section after an empty line; none without a second star.
pub fn limit_lines(views: &[BinaryView]) -> Vec<String> {
    if views.is_empty() {
        return Vec::new();
    }
    let mut out =
        vec![String::new(), "Limits beside the second star (critical semi-major axes, au)".to_string()];
    let rows: Vec<Vec<String>> = views.iter().map(row).collect();
    let head = ["planet", "kind", "a", "fit 1", "margin", "fit 2", "margin"];
    out.extend(lines(&head, &rows, &[1]));
    out.push(wrapped(
        "  ",
        "Fit 1: Holman & Wiegert (1999), circular coplanar test particles over 1e4 binary periods, with its formal error; \
         S-type for 0.1 <= mu <= 0.9 and e <= 0.8 of the binary, P-type for 0.1 <= mu <= 0.5 and e <= 0.7, here up to 30 deg \
         of tilt. Fit 2: Mardling & Aarseth (2001), three masses, the planet's orbit as inner (S-type) or outer one (P-type), \
         mass ratio outer to inner pair up to 5. Margin: ratio of semi-major axes to the limit, above 1 on the stable side, \
         which is inside of the limit for S-type and outside of it for P-type",
    ));
    out
}

fn row(view: &BinaryView) -> Vec<String> {
    let axis = |found: &Option<CriticalView>| {
        found.as_ref().map_or("-".to_string(), |found| {
            let error = found.error_au.map_or(String::new(), |error| format!(" ± {}", significant(error, 2)));
            format!("{}{error}", significant(found.critical_axis_au, 4))
        })
    };
    let margin = |found: &Option<CriticalView>| {
        found.as_ref().map_or("-".to_string(), |found| significant(found.margin, 3))
    };
    vec![
        short(&view.planet, NAME),
        view.kind.to_string(),
        significant(view.semi_major_axis_au, 5),
        axis(&view.holman_wiegert),
        margin(&view.holman_wiegert),
        axis(&view.mardling_aarseth),
        margin(&view.mardling_aarseth),
    ]
}
