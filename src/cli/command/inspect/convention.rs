//! How the numbers of a file are read, in sentences.

use serde::Serialize;

use super::view::frame_word;
use crate::system::{Frame, Group, Key, Pericentre, System, Transit};

/// How the numbers of the file are read: the words of the file, then sentences.
#[derive(Debug, Serialize)]
pub struct ConventionView {
    pub elements: &'static str,
    pub pericentre: &'static str,
    pub transit: &'static str,
    /// Whether anything stated or left out is about the plane of the sky; if not, every plane would do.
    pub needs_sky: bool,
    pub in_words: Vec<InWords>,
}

#[derive(Debug, Serialize)]
pub struct InWords {
    pub about: &'static str,
    pub words: &'static str,
}

pub fn convention(system: &System) -> ConventionView {
    let convention = &system.convention;
    let elements = match convention.elements {
        Frame::Astrocentric => "astrocentric: each orbit about the star, mass parameter G (star + planet)",
        Frame::Jacobi => {
            "Jacobi: about the centre of mass of star and bodies of shorter period, G (these + body)"
        }
        Frame::Barycentric => "barycentric: about the centre of mass of the whole system, G (total mass)",
    };
    let (pericentre, pericentre_words) = match convention.pericentre {
        Pericentre::Planet => {
            ("planet", "arguments and longitudes are those of the planets' own pericentres")
        }
        Pericentre::Star => {
            ("star", "arguments and longitudes are the star's; the planets' lie 180 deg away")
        }
    };
    let epoch = if system.epoch_jd.is_some() {
        "phases and orbits hold at the epoch (TDB)"
    } else {
        "no epoch stated: phases hold at time 0, dates cannot be used"
    };
    let mut in_words = vec![("elements", elements), ("pericentre", pericentre_words)];
    in_words.extend(plane(system));
    in_words.push(("epoch", epoch));
    ConventionView {
        elements: frame_word(convention.elements),
        pericentre,
        transit: match convention.transit {
            Transit::Plus90 => "+90 deg",
            Transit::Minus90 => "-90 deg",
        },
        needs_sky: needs_sky(system),
        in_words: in_words.into_iter().map(|(about, words)| InWords { about, words }).collect(),
    }
}

/// Whether something is seen from afar: a transit, a projected mass, an orbit taken as edge-on.
fn needs_sky(system: &System) -> bool {
    let seen = [Key::TransitTime, Key::MinimumMass, Key::RvSemiAmplitude];
    system.orbiting().any(|body| {
        let tilted = body.stated.iter().any(|(key, _)| key.group() == Group::Inclination);
        !tilted || seen.into_iter().any(|key| body.stated.get(key).is_some())
    })
}

/// The plane that inclinations and nodes refer to, with what hangs on its being the sky.
fn plane(system: &System) -> Vec<(&'static str, &'static str)> {
    if !needs_sky(system) {
        let words = "whichever the file's inclinations and nodes refer to, the sky or another one: no transit, \
                     minimum mass or velocity hangs on it";
        return vec![("reference plane", words)];
    }
    let (transit, sight) = match system.convention.transit {
        Transit::Plus90 => (
            "where true anomaly + argument of pericentre (the planet's) = +90 deg",
            "z points to the observer, so a planet comes nearer at its ascending node",
        ),
        Transit::Minus90 => (
            "where true anomaly + argument of pericentre (the planet's) = -90 deg",
            "z points away from the observer, so a planet recedes at its ascending node",
        ),
    };
    vec![
        ("transit", transit),
        ("line of sight", sight),
        ("reference plane", "the sky: inclination 90 deg is edge-on, node from north through east"),
    ]
}
