//! Which body circles what, where a second star is there.

use super::convert::{mass_parameters, settled_order};
use super::{BodyKind, Configuration, Elements};
use crate::system::{CompanionPlace, Frame};

/// An orbit about what a body really circles.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Orbit {
    pub elements: Elements,
    /// G × mass of the orbit, au³ day⁻².
    pub mass_parameter: f64,
}

impl Orbit {
    /// None where unbound.
    pub fn period_day(&self) -> Option<f64> {
        self.elements.period_day(self.mass_parameter)
    }
}

impl Configuration {
    /// Index of the companion in `planets`.
    pub fn companion_index(&self) -> Option<usize> {
        self.planets.iter().position(|body| body.kind == BodyKind::Companion)
    }

    /// Indices of the planets proper.
    pub fn planet_indices(&self) -> impl Iterator<Item = usize> + '_ {
        (0..self.planets.len()).filter(|&index| self.planets[index].kind == BodyKind::Planet)
    }

    /// Whether a planet circles star and companion together: its stated Jacobi orbit has the longer period.
    /// Elements in other frames stand for planets that circle the star.
    pub fn circles_pair(&self, planet: usize) -> bool {
        if self.frame != Frame::Jacobi {
            return false;
        }
        let Some(companion) = self.companion_index().filter(|companion| *companion != planet) else {
            return false;
        };
        let periods = self.periods_day();
        match (periods[planet], periods[companion]) {
            (Some(own), Some(pair)) => own > pair,
            (own, _) => own.is_none(),
        }
    }

    /// Where the companion stands among the planets; none without one.
    pub fn companion_place(&self) -> Option<CompanionPlace> {
        self.companion_index()?;
        let planets: Vec<usize> = self.planet_indices().collect();
        let outside = planets.iter().filter(|planet| self.circles_pair(**planet)).count();
        Some(CompanionPlace::of(outside, planets.len()))
    }

    /// The frame in which every orbit is nearly a Kepler ellipse: Jacobi where a planet circles a pair of stars,
    /// else astrocentric.
    pub fn own_frame(&self) -> Frame {
        match self.companion_place() {
            Some(place) if place.has_circumbinary() => Frame::Jacobi,
            _ => Frame::Astrocentric,
        }
    }

    /// The orbit of every body in [`Configuration::own_frame`], in the order of `planets`, from the states.
    pub fn orbits(&self) -> Vec<Orbit> {
        let frame = self.own_frame();
        let elements = self.elements_in(frame);
        let gm: Vec<f64> = self.planets.iter().map(|planet| planet.gm).collect();
        let order = settled_order(frame, self.star_gm, &gm, &elements);
        let parameters = mass_parameters(frame, &order, self.star_gm, &gm);
        let both = elements.into_iter().zip(parameters);
        both.map(|(elements, mass_parameter)| Orbit { elements, mass_parameter }).collect()
    }

    /// G × mass of the star or the stars that a body circles, au³ day⁻².
    pub fn central_gm(&self, planet: usize) -> f64 {
        match self.companion_index() {
            Some(companion) if self.circles_pair(planet) => self.star_gm + self.planets[companion].gm,
            _ => self.star_gm,
        }
    }
}
