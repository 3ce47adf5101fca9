//! The second star and the terms beside Newton's, as plain data and as lines of the page.

use serde::Serialize;

use super::table::{lines, short, significant, wrapped};
use super::view::{assumed, stated_key, unit_of};
use crate::coords::{Configuration, Terms};
use crate::num::wrap_turn;
use crate::system::{CompanionPlace, Frame, Group, Key, System};
use crate::units::{self, DEGREE};

/// Longest name shown in tables.
const NAME: usize = 16;

#[derive(Debug, Serialize)]
pub struct CompanionView {
    pub name: String,
    pub mass: f64,
    pub mass_unit: &'static str,
    pub mass_from: &'static str,
    pub mass_ratio: f64,
    pub radius_rsun: f64,
    /// Whether the radius was stated; if not it is that of a star of the Sun's mean density.
    pub radius_stated: bool,
    /// In the frame of the file.
    pub period_d: Option<f64>,
    pub semi_major_axis_au: f64,
    pub eccentricity: f64,
    /// "S-type", "P-type" or "both".
    pub kind: &'static str,
    /// Names of the planets that circle both stars; the others circle the star.
    pub around_both: Vec<String>,
    /// Why: the periods of the two planets next to its orbit, shorter and longer, d.
    pub next_inside_d: Option<f64>,
    pub next_outside_d: Option<f64>,
    pub assumed: Vec<&'static str>,
}

#[derive(Debug, Serialize)]
pub struct PhysicsView {
    pub relativity: bool,
    pub oblateness: Option<OblatenessView>,
    pub satellites: Vec<SatelliteView>,
    /// Bodies that feel but do not pull.
    pub massless: Vec<String>,
}

#[derive(Debug, Serialize)]
pub struct OblatenessView {
    pub j2: f64,
    pub radius_rsun: f64,
    /// Of the pole to the line of sight, which is that of the equator to the sky.
    pub inclination_deg: f64,
    pub ascending_node_deg: f64,
}

#[derive(Debug, Serialize)]
pub struct SatelliteView {
    pub planet: String,
    /// The planet feels −K GM r/r⁵ beside −GM r/r³.
    pub k_au2: f64,
}

/// None without a companion.
pub fn companion(system: &System, configuration: &Configuration) -> Option<CompanionView> {
    let body = system.companion.as_ref()?;
    let index = configuration.companion_index()?;
    let found = &configuration.planets[index];
    let periods = configuration.periods_day();
    let (outside, inside): (Vec<usize>, Vec<usize>) =
        configuration.planet_indices().partition(|planet| configuration.circles_pair(*planet));
    let period = |planet: &usize| periods[*planet];
    let mass_unit = unit_of(body, Group::Mass, "Msun");
    Some(CompanionView {
        name: found.name.clone(),
        mass: found.gm / mass_unit.inner,
        mass_unit: mass_unit.word,
        mass_from: stated_key(body, Group::Mass).map_or("", Key::word),
        mass_ratio: found.gm / configuration.star_gm,
        radius_rsun: found.radius_au * units::AU_M / units::SUN_RADIUS_M,
        radius_stated: body.stated.get(Key::Radius).is_some(),
        period_d: periods[index],
        semi_major_axis_au: found.elements.semi_major_axis_au,
        eccentricity: found.elements.eccentricity,
        kind: match configuration.companion_place()? {
            CompanionPlace::Outside => "S-type",
            CompanionPlace::Inside => "P-type",
            CompanionPlace::Between => "both",
        },
        next_inside_d: inside.iter().filter_map(period).max_by(f64::total_cmp),
        next_outside_d: outside.iter().filter_map(period).min_by(f64::total_cmp),
        around_both: outside.iter().map(|planet| configuration.planets[*planet].name.clone()).collect(),
        assumed: assumed(body),
    })
}

/// Whether elements in a frame are near to ellipses for every body: with a second star barycentric ones are not, nor
/// are astrocentric ones where planets circle both stars.
pub fn has_meaning(frame: Frame, configuration: &Configuration) -> bool {
    match configuration.companion_place() {
        None => true,
        Some(place) => frame == Frame::Jacobi || frame == Frame::Astrocentric && !place.has_circumbinary(),
    }
}

pub fn physics(configuration: &Configuration) -> PhysicsView {
    let Terms { relativity, oblateness } = configuration.terms;
    let oblateness = oblateness.map(|star| OblatenessView {
        j2: star.j2,
        radius_rsun: star.radius_au * units::AU_M / units::SUN_RADIUS_M,
        inclination_deg: star.pole[2].clamp(-1.0, 1.0).acos() / DEGREE,
        ascending_node_deg: wrap_turn(star.pole[0].atan2(-star.pole[1])) / DEGREE,
    });
    let bodies = || configuration.planets.iter();
    PhysicsView {
        relativity,
        oblateness,
        satellites: bodies()
            .filter_map(|body| {
                body.satellite_k_au2.map(|k_au2| SatelliteView { planet: body.name.clone(), k_au2 })
            })
            .collect(),
        massless: bodies().filter(|body| body.gm == 0.0).map(|body| body.name.clone()).collect(),
    }
}

/// The companion: a table of one row, then what circles what and why.
pub fn companion_lines(view: &CompanionView) -> Vec<String> {
    let row = vec![
        short(&view.name, NAME),
        format!("{} {}", significant(view.mass, 4), view.mass_unit),
        view.mass_from.to_string(),
        significant(view.mass_ratio, 4),
        format!("{} Rsun", significant(view.radius_rsun, 3)),
        if view.radius_stated { "radius" } else { "density" }.to_string(),
        view.period_d.map_or(String::new(), |period| significant(period, 7)),
        significant(view.semi_major_axis_au, 6),
    ];
    let head = ["companion", "mass", "from", "to the star", "radius", "from", "period (d)", "a (au)"];
    let mut out = lines(&head, &[row], &[2, 5]);
    out.push(wrapped("  ", &hierarchy(view)));
    let left_out = match view.kind {
        "S-type" => "barycentric elements, which have",
        _ => "astrocentric and barycentric elements, which have",
    };
    out.push(wrapped("  ", &format!("not shown below: {left_out} no meaning here")));
    out
}

fn hierarchy(view: &CompanionView) -> String {
    let day = |period: Option<f64>| period.map_or(String::new(), |p| format!("{} d", significant(p, 5)));
    let (own, inside, outside) = (day(view.period_d), day(view.next_inside_d), day(view.next_outside_d));
    match view.kind {
        "S-type" => format!(
            "S-type: the planets circle the star, the companion circles all of them, because its period ({own}) is \
             longer than every planet's (up to {inside})"
        ),
        "P-type" => format!(
            "P-type: the planets circle the centre of mass of star and companion, because the companion's period \
             ({own}) is shorter than every planet's (from {outside})"
        ),
        _ => format!(
            "both: {} circle the centre of mass of star and companion (periods from {outside}), the other planets \
             the star (up to {inside}), the companion's period being {own}",
            view.around_both.join(", ")
        ),
    }
}

/// What acts beside the pull of point masses; nothing where nothing does.
pub fn physics_lines(view: &PhysicsView) -> Vec<String> {
    let mut out = Vec::new();
    let mut say = |about: &str, words: String| out.push(wrapped(&format!("  {about:<17}"), &words));
    if view.relativity {
        say("relativity", "first post-Newtonian term of the star on each planet".to_string());
    }
    if let Some(star) = &view.oblateness {
        let words = format!(
            "J2 of the star {:e} at {} Rsun; equator inclined {:.2} deg to the reference plane, node at {:.2} deg",
            star.j2,
            significant(star.radius_rsun, 4),
            star.inclination_deg,
            star.ascending_node_deg
        );
        say("oblateness", words);
    }
    for satellite in &view.satellites {
        let words =
            format!("of {}, averaged: K = {:.4e} au^2", short(&satellite.planet, NAME), satellite.k_au2);
        say("satellite", words);
    }
    if !view.massless.is_empty() {
        say("massless", format!("{}: they feel the others and do not pull", view.massless.join(", ")));
    }
    out
}
