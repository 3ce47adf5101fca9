//! Which readings there are, and which of them are one and the same motion.

use crate::cli::command::inspect::second::has_meaning;
use crate::coords::{self, Configuration, CoordsError};
use crate::system::{Convention, Frame, Key, Measured, Pericentre, System, Transit};
use std::f64::consts::PI;

/// Two motions whose vectors agree to this share of their lengths are one.
const SAME: f64 = 1e-9;

/// One way to read the numbers of a file.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Reading {
    pub elements: Frame,
    pub pericentre: Pericentre,
    /// Whose mean longitudes are stated; the planet's beside the star's arguments is a mixture that papers have.
    pub longitudes: Pericentre,
    pub transit: Transit,
}

/// Readings that are one motion: the first, and those that turn or mirror it as a whole at most.
pub struct Case {
    pub reading: Reading,
    /// Whether the file itself says so.
    pub own: bool,
    pub same: Vec<Reading>,
    pub start: Result<Configuration, CoordsError>,
}

impl Reading {
    fn own(convention: &Convention) -> Reading {
        let Convention { elements, pericentre, transit } = *convention;
        Reading { elements, pericentre, longitudes: pericentre, transit }
    }

    /// The system that the numbers stand for.
    fn of(&self, system: &System) -> System {
        let mut read = system.clone();
        read.convention =
            Convention { elements: self.elements, pericentre: self.pericentre, transit: self.transit };
        if self.longitudes != self.pericentre {
            let bodies = read.planets.iter_mut().chain(&mut read.companion);
            for stated in bodies.map(|body| &mut body.stated) {
                if let Some(longitude) = stated.get(Key::MeanLongitude) {
                    // λ = Ω + ω + M with the other one's ω.
                    let turned = Measured { value: longitude.value + PI, ..longitude };
                    stated.insert(Key::MeanLongitude, turned);
                }
            }
        }
        read
    }
}

/// Every reading, the file's own first; what cannot matter is not varied.
fn all(system: &System, stated: &Configuration) -> Vec<Reading> {
    let states = |key: Key| system.orbiting().any(|body| body.stated.get(key).is_some());
    let own = Reading::own(&system.convention);
    // The file's own words come first, so that they stand for the readings that are the same motion.
    let frames = [own.elements, Frame::Astrocentric, Frame::Jacobi, Frame::Barycentric];
    let frames: Vec<Frame> = once(frames).into_iter().filter(|frame| has_meaning(*frame, stated)).collect();
    let owners = [
        (own.pericentre, own.pericentre),
        (Pericentre::Planet, Pericentre::Planet),
        (Pericentre::Star, Pericentre::Star),
        (Pericentre::Star, Pericentre::Planet),
    ];
    let mut owners = once(owners);
    owners.retain(|(argument, longitude)| argument == longitude || states(Key::MeanLongitude));
    let mut transits = once([own.transit, Transit::Plus90, Transit::Minus90]);
    transits.retain(|rule| *rule == own.transit || states(Key::TransitTime));
    let mut readings = vec![own];
    for elements in frames {
        for (pericentre, longitudes) in &owners {
            for transit in &transits {
                let reading =
                    Reading { elements, pericentre: *pericentre, longitudes: *longitudes, transit: *transit };
                if reading != own {
                    readings.push(reading);
                }
            }
        }
    }
    readings
}

/// Each once, in the order of the first.
fn once<T: PartialEq>(all: impl IntoIterator<Item = T>) -> Vec<T> {
    let mut kept = Vec::new();
    for one in all {
        if !kept.contains(&one) {
            kept.push(one);
        }
    }
    kept
}

/// The readings with those that are one motion taken together.
pub fn distinct(system: &System, stated: &Configuration) -> Vec<Case> {
    let mut cases: Vec<Case> = Vec::new();
    for (index, reading) in all(system, stated).into_iter().enumerate() {
        let start = coords::configure(&reading.of(system))
            .and_then(|configuration| coords::check_start(&configuration).map(|()| configuration));
        let known = start.as_ref().ok().and_then(|start| {
            cases.iter_mut().find(|case| case.start.as_ref().is_ok_and(|other| one_motion(other, start)))
        });
        match known {
            Some(case) => case.same.push(reading),
            None => cases.push(Case { reading, own: index == 0, same: Vec::new(), start }),
        }
    }
    cases
}

/// Whether two configurations move alike: equal masses and sizes, and vectors that a rotation or a reflection of all
/// of them carries into each other, which is so when all their products agree. A star's pole counts with either sign.
fn one_motion(one: &Configuration, other: &Configuration) -> bool {
    let near = |a: f64, b: f64| (a - b).abs() <= SAME * a.abs().max(b.abs());
    let mut bodies = one.planets.iter().zip(&other.planets);
    let alike = bodies.all(|(a, b)| near(a.gm, b.gm) && near(a.radius_au, b.radius_au));
    alike && [1.0, -1.0].into_iter().any(|sign| products_agree(&vectors(one, 1.0), &vectors(other, sign)))
}

fn products_agree(first: &[[f64; 3]], second: &[[f64; 3]]) -> bool {
    let length = |v: &[f64; 3]| product(v, v).sqrt();
    first.iter().zip(second).enumerate().all(|(index, (a, b))| {
        first[..=index].iter().zip(second).all(|(c, d)| {
            let lengths = length(a).max(length(b)) * length(c).max(length(d));
            (product(a, c) - product(b, d)).abs() <= SAME * lengths
        })
    })
}

/// Positions, velocities, and the pole of a flattened star with a sign.
fn vectors(configuration: &Configuration, sign: f64) -> Vec<[f64; 3]> {
    let bodies = configuration.planets.iter().flat_map(|body| [body.position_au, body.velocity_au_day]);
    let pole = configuration.terms.oblateness.map(|star| star.pole.map(|part| sign * part));
    bodies.chain(pole).collect()
}

fn product(one: &[f64; 3], other: &[f64; 3]) -> f64 {
    one.iter().zip(other).map(|(a, b)| a * b).sum()
}
