//! The view as a page of at most 100 columns.

use super::angles::angle_lines;
use super::criteria_text;
use super::second::{companion_lines, physics_lines};
use super::table::{PAGE_WIDTH, lines, short, significant, wrapped};
use super::view::{FrameView, PairView, StepView, View};

/// Longest name shown in tables.
const NAME: usize = 16;
/// Longest name shown in the table of pairs.
const PAIR_NAME: usize = 12;

/// The whole page, ending in a newline.
pub fn page(view: &View) -> String {
    let mut out: Vec<String> = vec![view.title.chars().take(PAGE_WIDTH).collect(), star(view), String::new()];
    out.push("How the numbers are read".to_string());
    for line in &view.convention.in_words {
        out.push(wrapped(&format!("  {:<17}", line.about), line.words));
    }
    out.extend(assumed(view));
    out.push(String::new());
    out.push("Angles as they were read (deg)".to_string());
    out.extend(angle_lines(&view.angles));
    out.push(String::new());
    out.push("Bodies".to_string());
    out.extend(bodies(view));
    if let Some(companion) = &view.companion {
        out.push(String::new());
        out.extend(companion_lines(companion));
    }
    let physics = physics_lines(&view.physics);
    if !physics.is_empty() {
        out.push(String::new());
        out.push("Beside the pull of point masses".to_string());
        out.extend(physics);
    }
    out.push(String::new());
    out.push("Osculating elements (deg; the argument is that of the planet's pericentre)".to_string());
    out.extend(elements(&view.elements));
    if !view.neighbours.is_empty() {
        out.push(String::new());
        out.push("Neighbours (spacing in mutual Hill radii, tilt between the orbits in deg)".to_string());
        out.extend(neighbours(&view.neighbours));
    }
    if let Some(balance) = &view.hill_balance {
        let verdict =
            if balance.stable { "yes: they can never meet" } else { "no: a meeting is not excluded" };
        let text = format!(
            "Hill stability (Gladman 1993, coplanar): {:.5}, above {:.5}? {verdict}",
            balance.found, balance.needed
        );
        out.push(wrapped("  ", &text));
    }
    out.extend(criteria_text::section(&view.criteria));
    out.push(String::new());
    out.push("Step".to_string());
    out.extend(step(view.step.as_ref()));
    if !view.warnings.is_empty() {
        out.push(String::new());
        out.push("Warnings".to_string());
        out.extend(view.warnings.iter().map(|warning| wrapped("  - ", &warning.to_string())));
    }
    out.push(String::new());
    out.join("\n")
}

fn star(view: &View) -> String {
    let star = &view.star;
    let mut line = format!("star {} Msun, ", significant(star.mass_msun, 4));
    line.push_str(&format!("radius {} Rsun", significant(star.radius_rsun, 4)));
    if !star.radius_stated {
        line.push_str(" (of the Sun's density)");
    }
    if let Some(age) = star.age_gyr {
        line.push_str(&format!(", age {} Gyr", significant(age, 3)));
    }
    if let Some(epoch) = view.epoch_jd {
        line.push_str(&format!("; epoch JD {epoch}"));
    }
    line
}

/// What the file leaves out, bodies that leave out the same together.
fn assumed(view: &View) -> Vec<String> {
    let mut groups: Vec<(&[&str], Vec<String>)> = Vec::new();
    let planets = view.planets.iter().map(|planet| (&planet.name, &planet.assumed));
    let companion = view.companion.iter().map(|body| (&body.name, &body.assumed));
    for (name, assumed) in planets.chain(companion).filter(|(_, assumed)| !assumed.is_empty()) {
        let name = short(name, NAME);
        match groups.iter_mut().find(|(keys, _)| *keys == assumed.as_slice()) {
            Some((_, names)) => names.push(name),
            None => groups.push((assumed, vec![name])),
        }
    }
    groups
        .into_iter()
        .map(|(keys, names)| {
            let values: Vec<String> = keys
                .iter()
                .map(|key| match *key {
                    "inclination" => "inclination 90 deg".to_string(),
                    "eccentricity" => "eccentricity 0".to_string(),
                    key => format!("{key} 0 deg"),
                })
                .collect();
            wrapped(&format!("  {:<17}", "left out"), &format!("{}: {}", names.join(", "), values.join(", ")))
        })
        .collect()
}

fn bodies(view: &View) -> Vec<String> {
    let rows: Vec<Vec<String>> = view
        .planets
        .iter()
        .map(|planet| {
            vec![
                short(&planet.name, NAME),
                format!("{} {}", significant(planet.mass, 4), planet.mass_unit),
                planet.mass_from.to_string(),
                format!("{} {}", significant(planet.radius, 3), planet.radius_unit),
                if planet.radius_stated { "radius" } else { "density" }.to_string(),
                planet.period_d.map_or(String::new(), |period| significant(period, 7)),
                significant(planet.semi_major_axis_au, 6),
            ]
        })
        .collect();
    lines(&["planet", "mass", "from", "radius", "from", "period (d)", "a (au)"], &rows, &[2, 4])
}

fn elements(frames: &[FrameView]) -> Vec<String> {
    let mut rows: Vec<Vec<String>> = Vec::new();
    for frame in frames {
        let stated = if frame.stated { " (stated)" } else { "" };
        let mut head = vec![format!("{}{stated}", frame.frame)];
        head.resize(8, String::new());
        rows.push(head);
        rows.extend(frame.planets.iter().map(|planet| {
            vec![
                format!("  {}", short(&planet.name, NAME)),
                significant(planet.semi_major_axis_au, 6),
                format!("{:.5}", planet.eccentricity),
                degrees(planet.inclination_deg),
                degrees(planet.ascending_node_deg),
                degrees(planet.argument_of_pericentre_deg),
                degrees(planet.mean_anomaly_deg),
                degrees(planet.mean_longitude_deg),
            ]
        }));
    }
    let head = ["frame", "a (au)", "e", "incl.", "node", "argument", "mean anom.", "mean long."];
    lines(&head, &rows, &[])
}

/// Three decimals; what would print as a full turn is 0.
fn degrees(angle: f64) -> String {
    let text = format!("{angle:.3}");
    if text == "360.000" { "0.000".to_string() } else { text }
}

fn neighbours(pairs: &[PairView]) -> Vec<String> {
    let rows: Vec<Vec<String>> = pairs
        .iter()
        .map(|pair| {
            let near: Vec<String> = pair
                .near_resonances
                .iter()
                .map(|near| format!("{}:{} {:+.2} %", near.p, near.q, near.offset_percent))
                .collect();
            vec![
                format!("{} {}", short(&pair.inner, PAIR_NAME), short(&pair.outer, PAIR_NAME)),
                significant(pair.period_ratio, 5),
                pair.spacing_hill.map_or("massless".to_string(), |spacing| format!("{spacing:.2}")),
                format!("{:.2}", pair.mutual_inclination_deg),
                near.join(", "),
            ]
        })
        .collect();
    lines(&["pair", "P ratio", "Hill radii", "tilt", "near resonances"], &rows, &[4])
}

fn step(step: Option<&StepView>) -> Vec<String> {
    let Some(step) = step else {
        return vec!["  none can be suggested: no planet is bound".to_string()];
    };
    let text = format!(
        "{} d: {:.1} steps per orbit of {}, {:.0} per turn at the fastest pericentre rate ({}: {} d); with fewer \
         than 15 step resonances spoil maps",
        significant(step.step_d, 4),
        step.steps_per_orbit,
        short(&step.innermost, NAME),
        step.steps_per_passage,
        short(&step.deciding, NAME),
        significant(step.passage_d, 4),
    );
    vec![wrapped("  ", &text)]
}
