//! How each stated angle was read, body by body: what it came from and what it became.

use serde::Serialize;

use super::table::{lines, short, wrapped};
use super::view::{frame_word, stated_key};
use crate::coords::Configuration;
use crate::num::wrap_turn;
use crate::system::{Body, Group, Key, Pair, Pericentre, System};
use crate::units::DEGREE;

/// Longest name shown in the table.
const NAME: usize = 14;

/// The angles of one body at the epoch, in the frame of the file.
#[derive(Debug, Serialize)]
pub struct AnglesView {
    pub name: String,
    pub frame: &'static str,
    /// Of the body's own pericentre, whatever the file states.
    pub argument_of_pericentre_deg: f64,
    /// The stated keys; empty when left out.
    pub argument_from: Vec<&'static str>,
    /// Added to what was stated.
    pub argument_turned_deg: f64,
    pub inclination_deg: f64,
    pub inclination_from: Option<&'static str>,
    pub ascending_node_deg: f64,
    pub node_from: Option<&'static str>,
    pub mean_anomaly_deg: f64,
    pub phase_from: Option<&'static str>,
    /// Absent: phases hold at time 0.
    pub epoch_jd: Option<f64>,
}

/// Planets in the order of the file, then the companion.
pub fn angles(system: &System, configuration: &Configuration) -> Vec<AnglesView> {
    let turned = match system.convention.pericentre {
        Pericentre::Planet => 0.0,
        Pericentre::Star => 180.0,
    };
    let view = |(body, found): (&Body, &crate::coords::Planet)| {
        let from = |group: Group| stated_key(body, group).map(Key::word);
        AnglesView {
            name: found.name.clone(),
            frame: frame_word(configuration.frame),
            argument_of_pericentre_deg: wrap_turn(found.elements.argument_of_pericentre) / DEGREE,
            argument_from: argument_from(body),
            argument_turned_deg: turned,
            inclination_deg: found.elements.inclination / DEGREE,
            inclination_from: from(Group::Inclination),
            ascending_node_deg: wrap_turn(found.elements.ascending_node) / DEGREE,
            node_from: from(Group::Node),
            mean_anomaly_deg: wrap_turn(found.elements.mean_anomaly) / DEGREE,
            phase_from: from(Group::Phase),
            epoch_jd: system.epoch_jd,
        }
    };
    system.orbiting().zip(&configuration.planets).map(view).collect()
}

fn argument_from(body: &Body) -> Vec<&'static str> {
    match body.stated.pair() {
        Some(pair) => vec![pair.keys().0.word(), pair.keys().1.word()],
        None => stated_key(body, Group::Pericentre).map(Key::word).into_iter().collect(),
    }
}

/// A row per body, then what all rows have in common.
pub fn angle_lines(views: &[AnglesView]) -> Vec<String> {
    let rows: Vec<Vec<String>> = views
        .iter()
        .map(|view| {
            let stated = |from: Option<&str>| if from.is_some() { "stated" } else { "left out" }.to_string();
            vec![
                short(&view.name, NAME),
                degrees(view.argument_of_pericentre_deg),
                argument_words(view),
                degrees(view.ascending_node_deg),
                stated(view.node_from),
                degrees(view.mean_anomaly_deg),
                view.phase_from.unwrap_or("left out").to_string(),
            ]
        })
        .collect();
    let head = ["body", "argument", "from", "node", "from", "mean anom.", "from"];
    let mut out = lines(&head, &rows, &[2, 4, 6]);
    out.extend(views.first().map(|first| wrapped("  ", &in_common(first, views))));
    out
}

/// The keys, short enough for the column.
fn argument_words(view: &AnglesView) -> String {
    let square_root = Pair::Sqrt.keys().0.word();
    match view.argument_from.as_slice() {
        [] => "left out".to_string(),
        [first, _] if *first == square_root => format!("{first}, …sin_w"),
        keys => keys.join(", "),
    }
}

fn in_common(first: &AnglesView, views: &[AnglesView]) -> String {
    let mut words = "The argument leads from the ascending node to the body's own pericentre".to_string();
    if first.argument_turned_deg != 0.0 {
        words.push_str(", which is 180 deg from the stated one, the star's");
    }
    let when = first.epoch_jd.map_or("time 0".to_string(), |epoch| format!("the epoch, JD {epoch}"));
    let frame = if first.frame == "jacobi" { "Jacobi" } else { first.frame };
    words.push_str(&format!("; mean anomalies are those of the {frame} orbits at {when}"));
    let from = |key: Key| views.iter().any(|view| view.phase_from == Some(key.word()));
    if from(Key::MeanLongitude) {
        words.push_str("; a mean longitude is node + argument, as stated, + mean anomaly");
    }
    words
}

/// Three decimals; what would print as a full turn is 0.
fn degrees(angle: f64) -> String {
    let text = format!("{angle:.3}");
    if text == "360.000" { "0.000".to_string() } else { text }
}
