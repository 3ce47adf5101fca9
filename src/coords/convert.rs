//! Between elements in any frame and star-centred states.
//!
//! The state handed on is always relative to the star. What differs between frames is the point a planet's
//! orbit is about, and the mass parameter of that orbit: see [`Frame`].

use nalgebra::Vector3;

use super::Elements;
use crate::system::Frame;

/// Positions and velocities of all planets, au and au day⁻¹.
pub type States = (Vec<[f64; 3]>, Vec<[f64; 3]>);

/// Osculating elements of every planet in `frame` from star-centred positions and velocities.
///
/// Masses as G × mass in au³ day⁻², positions in au, velocities in au day⁻¹, all slices in one order, which is
/// also the order of the answer. For Jacobi elements the planets are taken by their own Jacobi periods
/// (unbound ones last, by pericentre).
pub fn elements_in(
    frame: Frame,
    star_gm: f64,
    gm: &[f64],
    pos: &[[f64; 3]],
    vel: &[[f64; 3]],
) -> Vec<Elements> {
    let as_given: Vec<usize> = (0..gm.len()).collect();
    if frame != Frame::Jacobi {
        return elements_in_order(frame, &as_given, star_gm, gm, pos, vel);
    }
    let mut found = elements_in_order(Frame::Astrocentric, &as_given, star_gm, gm, pos, vel);
    let mut order = by_period(&found, &mass_parameters(Frame::Astrocentric, &as_given, star_gm, gm));
    // The order decides the elements and they the order; one or two rounds settle all but exchanging pairs.
    for _ in 0..=gm.len() {
        found = elements_in_order(frame, &order, star_gm, gm, pos, vel);
        let next = by_period(&found, &mass_parameters(frame, &order, star_gm, gm));
        if next == order {
            break;
        }
        order = next;
    }
    found
}

/// Star-centred positions and velocities from elements in `frame`; the inverse of [`elements_in`].
pub fn star_centred(frame: Frame, star_gm: f64, gm: &[f64], elements: &[Elements]) -> States {
    let order = settled_order(frame, star_gm, gm, elements);
    star_centred_in_order(frame, &order, star_gm, gm, elements)
}

/// The mass parameter of each planet's orbit, au³ day⁻²; `order` counts for Jacobi elements only.
pub(super) fn mass_parameters(frame: Frame, order: &[usize], star_gm: f64, gm: &[f64]) -> Vec<f64> {
    match frame {
        Frame::Astrocentric => gm.iter().map(|gm| star_gm + gm).collect(),
        Frame::Barycentric => vec![star_gm + gm.iter().sum::<f64>(); gm.len()],
        Frame::Jacobi => {
            let mut within = star_gm;
            let mut parameters = vec![0.0; gm.len()];
            for &planet in order {
                within += gm[planet];
                parameters[planet] = within;
            }
            parameters
        }
    }
}

/// The order in which Jacobi elements take the planets; for other frames the given one.
pub(super) fn settled_order(frame: Frame, star_gm: f64, gm: &[f64], elements: &[Elements]) -> Vec<usize> {
    let mut order: Vec<usize> = (0..gm.len()).collect();
    if frame != Frame::Jacobi {
        return order;
    }
    order = by_period(elements, &mass_parameters(Frame::Astrocentric, &order, star_gm, gm));
    for _ in 0..=gm.len() {
        let next = by_period(elements, &mass_parameters(frame, &order, star_gm, gm));
        if next == order {
            break;
        }
        order = next;
    }
    order
}

fn by_period(elements: &[Elements], mass_parameters: &[f64]) -> Vec<usize> {
    let key = |planet: usize| match elements[planet].period_day(mass_parameters[planet]) {
        Some(period_day) => (false, period_day),
        None => (true, elements[planet].pericentre_au()),
    };
    let mut order: Vec<usize> = (0..elements.len()).collect();
    order.sort_by(|&one, &other| {
        let (one, other) = (key(one), key(other));
        one.0.cmp(&other.0).then(one.1.total_cmp(&other.1))
    });
    order
}

/// [`elements_in`] with the Jacobi order given.
pub(super) fn elements_in_order(
    frame: Frame,
    order: &[usize],
    star_gm: f64,
    gm: &[f64],
    pos: &[[f64; 3]],
    vel: &[[f64; 3]],
) -> Vec<Elements> {
    let pos = about_centres(frame, order, star_gm, gm, pos);
    let vel = about_centres(frame, order, star_gm, gm, vel);
    mass_parameters(frame, order, star_gm, gm)
        .into_iter()
        .zip(pos.into_iter().zip(vel))
        .map(|(parameter, (pos, vel))| Elements::from_state(parameter, pos, vel))
        .collect()
}

/// [`star_centred`] with the Jacobi order given.
pub(super) fn star_centred_in_order(
    frame: Frame,
    order: &[usize],
    star_gm: f64,
    gm: &[f64],
    elements: &[Elements],
) -> States {
    let (pos, vel): States = mass_parameters(frame, order, star_gm, gm)
        .into_iter()
        .zip(elements)
        .map(|(parameter, elements)| elements.to_state(parameter))
        .unzip();
    (about_star(frame, order, star_gm, gm, &pos), about_star(frame, order, star_gm, gm, &vel))
}

/// From vectors about the star to vectors about the centre of each planet's orbit.
fn about_centres(
    frame: Frame,
    order: &[usize],
    star_gm: f64,
    gm: &[f64],
    star: &[[f64; 3]],
) -> Vec<[f64; 3]> {
    match frame {
        Frame::Astrocentric => star.to_vec(),
        Frame::Barycentric => {
            let total = star_gm + gm.iter().sum::<f64>();
            let centre = weighted_sum(gm, star) / total;
            star.iter().map(|vector| (Vector3::from(*vector) - centre).into()).collect()
        }
        Frame::Jacobi => {
            let mut centre = Vector3::zeros();
            let mut within = star_gm;
            let mut answer = star.to_vec();
            for &planet in order {
                let relative = Vector3::from(star[planet]) - centre;
                within += gm[planet];
                centre += relative * (gm[planet] / within);
                answer[planet] = relative.into();
            }
            answer
        }
    }
}

/// The inverse of [`about_centres`].
fn about_star(
    frame: Frame,
    order: &[usize],
    star_gm: f64,
    gm: &[f64],
    centres: &[[f64; 3]],
) -> Vec<[f64; 3]> {
    match frame {
        Frame::Astrocentric => centres.to_vec(),
        Frame::Barycentric => {
            let star = -weighted_sum(gm, centres) / star_gm;
            centres.iter().map(|vector| (Vector3::from(*vector) - star).into()).collect()
        }
        Frame::Jacobi => {
            let mut centre = Vector3::zeros();
            let mut within = star_gm;
            let mut answer = centres.to_vec();
            for &planet in order {
                let relative = Vector3::from(centres[planet]);
                answer[planet] = (centre + relative).into();
                within += gm[planet];
                centre += relative * (gm[planet] / within);
            }
            answer
        }
    }
}

fn weighted_sum(gm: &[f64], vectors: &[[f64; 3]]) -> Vector3<f64> {
    gm.iter().zip(vectors).fold(Vector3::zeros(), |sum, (gm, vector)| sum + Vector3::from(*vector) * *gm)
}
