//! The numbers of several configurations side by side, as the kernels read and write them.
//!
//! States come and go in democratic heliocentric canonical coordinates (Duncan, Levison & Lee 1998): heliocentric
//! positions and barycentric velocities; inside, a block holds them or Jacobi coordinates.

use super::coordinates::Coordinates;
use super::slots::{
    D_POS, D_VEL, FAR2, GLOBALS, GM, Global, MU, NEAR2, PER_LOW, PER_PLANET, POS, SATELLITE, VEL,
};
use super::{Growth, StarTerms, State, Tangent, jacobi};
use crate::lanes::WIDTH;
use crate::num::{Kept, KeptReader};

/// Several configurations with the same number of planets, one in each lane.
#[derive(Clone, Debug)]
pub struct Block {
    width: usize,
    planets: usize,
    coordinates: Coordinates,
    /// Per lane: which planet stands at each place. The order of the state, but for Jacobi chains.
    orders: Vec<Vec<usize>>,
    /// How many places can hold a body with mass; the others are massless (heliocentric only).
    pulling: usize,
    star_terms: bool,
    compensated: bool,
    data: Vec<f64>,
}

impl Block {
    /// A block in heliocentric coordinates; `width` is 1 or a multiple of 8; every lane starts unused.
    pub fn new(width: usize, planets: usize) -> Block {
        Block::in_coordinates(Coordinates::Heliocentric, width, planets)
    }

    /// A block in the coordinates given.
    pub fn in_coordinates(coordinates: Coordinates, width: usize, planets: usize) -> Block {
        Block::with_massless(coordinates, width, planets, 0)
    }

    /// A block whose configurations have at least `massless` planets without mass. These feel the others but do not
    /// pull; in heliocentric coordinates they are not paired with one another.
    pub fn with_massless(coordinates: Coordinates, width: usize, planets: usize, massless: usize) -> Block {
        assert!(
            width == 1 || width.is_multiple_of(WIDTH),
            "a block has 1 lane or a multiple of {WIDTH}, not {width}"
        );
        let pulling = if coordinates == Coordinates::Heliocentric { planets - massless } else { planets };
        let slots = GLOBALS + planets * PER_PLANET + pairs(pulling, planets);
        let orders = vec![(0..planets).collect(); width];
        let data = vec![0.0; slots * width];
        let (star_terms, compensated) = (false, false);
        let mut block = Block { width, planets, coordinates, orders, pulling, star_terms, compensated, data };
        let idle = State {
            star_gm: 1.0,
            gm: vec![0.0; planets],
            pos: (0..planets).map(|k| [1.0 + k as f64, 0.0, 0.0]).collect(),
            vel: vec![[0.0, 0.5, 0.0]; planets],
        };
        let tangent = Tangent { pos: vec![[1.0, 0.0, 0.0]; planets], vel: vec![[0.0; 3]; planets] };
        for lane in 0..width {
            block.start(lane, &idle, &tangent, 0.0, 1.0);
            block.retire(lane);
        }
        block
    }

    /// The block with compensated sums: each position and velocity has a low part that keeps what rounding cuts off, so
    /// that rounding errors of very long runs grow more slowly. Costs some time; its bits are others.
    #[must_use]
    pub fn compensated(mut self) -> Block {
        if !self.compensated {
            self.data.resize(self.data.len() + self.planets * PER_LOW * self.width, 0.0);
        }
        self.compensated = true;
        self
    }

    pub fn is_compensated(&self) -> bool {
        self.compensated
    }

    pub fn width(&self) -> usize {
        self.width
    }

    pub fn coordinates(&self) -> Coordinates {
        self.coordinates
    }

    pub fn planets(&self) -> usize {
        self.planets
    }

    /// How many bodies may pull; they stand first.
    pub(super) fn pulling(&self) -> usize {
        self.pulling
    }

    pub(super) fn has_star_terms(&self) -> bool {
        self.star_terms
    }

    /// How many pairs are computed, each once.
    pub fn pairs(&self) -> usize {
        pairs(self.pulling, self.planets)
    }

    /// Sets the star's terms of a lane, after [`Block::start`].
    pub fn set_star_terms(&mut self, lane: usize, terms: &StarTerms) {
        self.star_terms |= !terms.none();
        self.set(Global::Relativity, lane, terms.relativity);
        self.set(Global::Oblateness, lane, terms.oblateness);
        for (global, x) in [Global::PoleX, Global::PoleY, Global::PoleZ].into_iter().zip(terms.pole) {
            self.set(global, lane, x);
        }
        for planet in 0..self.planets {
            let satellite = terms.satellites.get(planet).copied().unwrap_or(0.0);
            let place = self.place_of(planet, lane);
            self.set_planet(place, SATELLITE, lane, satellite);
        }
    }

    /// Puts a configuration into a lane: state, tangent vector, step (day) and the metric time (day).
    pub fn start(&mut self, lane: usize, state: &State, tangent: &Tangent, step: f64, metric_day: f64) {
        for g in 0..GLOBALS {
            self.data[g * self.width + lane] = 0.0;
        }
        self.set(Global::StarGm, lane, state.star_gm);
        self.set(Global::Step, lane, step);
        self.set(Global::Active, lane, 1.0);
        self.set(Global::Metric, lane, metric_day * metric_day);
        let heliocentric = self.coordinates == Coordinates::Heliocentric;
        let order = if heliocentric { massive_first(&state.gm) } else { jacobi::chain_order(state) };
        let massive = state.gm.iter().filter(|gm| **gm != 0.0).count();
        assert!(
            massive <= self.pulling || !heliocentric,
            "{massive} bodies with mass in {} places",
            self.pulling
        );
        let gm = jacobi::pick(&order, &state.gm);
        let mut inside = state.star_gm;
        for (k, gm) in gm.iter().enumerate() {
            inside += gm;
            self.set_planet(k, GM, lane, *gm);
            self.set_planet(k, MU, lane, if heliocentric { state.star_gm } else { inside });
        }
        self.orders[lane] = order;
        self.replace(lane, state, tangent);
        self.forget_watch(lane);
    }

    /// Freezes a lane: its step becomes 0 and it causes no more work.
    pub fn retire(&mut self, lane: usize) {
        self.set(Global::Step, lane, 0.0);
        self.set(Global::Active, lane, 0.0);
    }

    /// Forgets the smallest and largest distances seen.
    pub fn forget_watch(&mut self, lane: usize) {
        for k in 0..self.planets {
            self.set_planet(k, NEAR2, lane, f64::MAX);
            self.set_planet(k, FAR2, lane, 0.0);
        }
        for p in 0..self.pairs() {
            let at = self.pair_slot(p) * self.width + lane;
            self.data[at] = f64::MAX;
        }
    }

    /// Forgets the smallest distances of pairs only.
    pub fn forget_pairs(&mut self, lane: usize) {
        for p in 0..self.pairs() {
            let at = self.pair_slot(p) * self.width + lane;
            self.data[at] = f64::MAX;
        }
    }

    /// Puts another state and tangent vector into a lane and keeps its masses, step, sums and watch.
    pub fn replace(&mut self, lane: usize, state: &State, tangent: &Tangent) {
        let order = self.orders[lane].clone();
        let pick = |from: &[[f64; 3]]| jacobi::pick(&order, from);
        let (mut pos, mut vel) = (pick(&state.pos), pick(&state.vel));
        let (mut d_pos, mut d_vel) = (pick(&tangent.pos), pick(&tangent.vel));
        if self.coordinates == Coordinates::Jacobi {
            let gm = jacobi::pick(&order, &state.gm);
            (pos, vel) = jacobi::to_jacobi(state.star_gm, &gm, &pos, &vel);
            (d_pos, d_vel) = jacobi::to_jacobi(state.star_gm, &gm, &d_pos, &d_vel);
        }
        for k in 0..self.planets {
            for (field, from) in [(POS, &pos), (VEL, &vel), (D_POS, &d_pos), (D_VEL, &d_vel)] {
                for axis in 0..3 {
                    self.set_planet(k, field + axis, lane, from[k][axis]);
                }
            }
            for part in 0..if self.compensated { PER_LOW } else { 0 } {
                let at = self.low_slot(k, part) * self.width + lane;
                self.data[at] = 0.0;
            }
        }
    }

    /// The state in a lane.
    pub fn state(&self, lane: usize) -> State {
        let (pos, vel) = self.unpacked(POS, VEL, lane);
        let gm: Vec<f64> = (0..self.planets).map(|k| self.planet(k, GM, lane)).collect();
        State { star_gm: self.get(Global::StarGm, lane), gm: self.placed(lane, gm), pos, vel }
    }

    /// The tangent vector in a lane, as a displacement of [`Block::state`]; multiply by exp([`Block::log_taken`]) for
    /// its true length.
    pub fn tangent(&self, lane: usize) -> Tangent {
        let (pos, vel) = self.unpacked(D_POS, D_VEL, lane);
        Tangent { pos, vel }
    }

    /// Positions and velocities (or displacements) of a lane in the program's coordinates and the state's order.
    fn unpacked(&self, pos: usize, vel: usize, lane: usize) -> (Vec<[f64; 3]>, Vec<[f64; 3]>) {
        let all = |field: usize| (0..self.planets).map(|k| self.triple(k, field, lane)).collect::<Vec<_>>();
        let (mut pos, mut vel) = (all(pos), all(vel));
        if self.coordinates == Coordinates::Jacobi {
            let gm: Vec<f64> = (0..self.planets).map(|k| self.planet(k, GM, lane)).collect();
            (pos, vel) = jacobi::from_jacobi(self.get(Global::StarGm, lane), &gm, &pos, &vel);
        }
        (self.placed(lane, pos), self.placed(lane, vel))
    }

    /// From the places of the lane to the order of the state.
    fn placed<T: Copy + Default>(&self, lane: usize, from: Vec<T>) -> Vec<T> {
        if self.orders[lane].is_sorted() {
            return from;
        }
        let mut out = vec![T::default(); from.len()];
        for (place, planet) in self.orders[lane].iter().enumerate() {
            out[*planet] = from[place];
        }
        out
    }

    fn place_of(&self, planet: usize, lane: usize) -> usize {
        self.orders[lane].iter().position(|p| *p == planet).unwrap_or(planet)
    }

    /// Logarithm of the factor that rescaling has taken out of the tangent vector.
    pub fn log_taken(&self, lane: usize) -> f64 {
        self.get(Global::LogTaken, lane)
    }

    pub fn growth(&self, lane: usize) -> Growth {
        let samples = self.get(Global::Samples, lane);
        let spans = samples - 1.0;
        Growth {
            log: self.get(Global::LogLast, lane),
            y: self.get(Global::Y, lane),
            mean_y: if spans > 0.0 { self.get(Global::YSum, lane) / spans } else { 0.0 },
            samples: samples as u64,
        }
    }

    /// Smallest distance of the pair of planets `(i, j)` since the watch was last forgotten, au; the largest number
    /// there is for two massless ones, which are not watched.
    pub fn nearest_pair_au(&self, i: usize, j: usize, lane: usize) -> f64 {
        let (i, j) = (self.place_of(i, lane), self.place_of(j, lane));
        let (i, j) = (i.min(j), i.max(j));
        if i >= self.pulling {
            return f64::MAX;
        }
        let index = i * self.planets - i * (i + 1) / 2 + (j - i - 1);
        self.data[self.pair_slot(index) * self.width + lane].sqrt()
    }

    /// Smallest and largest distance of a planet from the star seen at the starts of
    /// drifts (heliocentric) or at kicks (Jacobi), au.
    pub fn star_distances_au(&self, planet: usize, lane: usize) -> (f64, f64) {
        let place = self.place_of(planet, lane);
        (self.planet(place, NEAR2, lane).sqrt(), self.planet(place, FAR2, lane).sqrt())
    }

    /// Takes everything from a block of the same kind and size, in the memory there is.
    pub fn copy_from(&mut self, other: &Block) {
        self.orders.clone_from(&other.orders);
        self.star_terms = other.star_terms;
        self.data.copy_from_slice(&other.data);
    }

    /// Copies one lane into lane `to` of another block.
    pub fn copy_lane(&self, lane: usize, other: &mut Block, to: usize) {
        debug_assert_eq!(self.data.len() / self.width, other.data.len() / other.width);
        for slot in 0..self.data.len() / self.width {
            other.data[slot * other.width + to] = self.data[slot * self.width + lane];
        }
        other.orders[to].clone_from(&self.orders[lane]);
        other.star_terms |= self.star_terms;
    }

    /// Puts down every number of every lane.
    pub fn keep(&self, kept: &mut Kept) {
        kept.floats(&self.data);
    }

    /// Takes up what [`Block::keep`] put down of a block of the same width and number of planets.
    pub fn restore(&mut self, kept: &mut KeptReader<'_>) -> Option<()> {
        self.data = kept.floats(self.data.len())?;
        Some(())
    }

    /// Divides a tangent vector that has grown beyond 2^±200 by a power of two; exact.
    pub fn rescale(&mut self, lane: usize) {
        let log = self.get(Global::LogLast, lane) + self.get(Global::LogFirst, lane) - self.log_taken(lane);
        let twos = (log / std::f64::consts::LN_2).round();
        if !(200.0..1000.0).contains(&twos.abs()) {
            return;
        }
        let factor = 2f64.powi(-(twos as i32));
        for k in 0..self.planets {
            for axis in 0..3 {
                for slot in [D_POS + axis, D_VEL + axis] {
                    let number = self.planet(k, slot, lane) * factor;
                    self.set_planet(k, slot, lane, number);
                }
            }
        }
        let taken = self.log_taken(lane) + twos * std::f64::consts::LN_2;
        self.set(Global::LogTaken, lane, taken);
    }

    /// Takes one sample of the tangent vector's length in a block of one lane, as the kernel does.
    pub fn sample(&mut self) {
        super::advance::sample(self);
    }

    /// One number of the lanes from `from` on.
    pub(super) fn lanes_of(&self, slot: usize, from: usize) -> &[f64] {
        &self.data[slot * self.width + from..(slot + 1) * self.width]
    }

    pub(super) fn lanes_of_mut(&mut self, slot: usize, from: usize) -> &mut [f64] {
        &mut self.data[slot * self.width + from..(slot + 1) * self.width]
    }

    pub(super) fn planet_slot(&self, planet: usize, field: usize) -> usize {
        GLOBALS + planet * PER_PLANET + field
    }

    pub(super) fn pair_slot(&self, pair: usize) -> usize {
        GLOBALS + self.planets * PER_PLANET + pair
    }

    pub(super) fn low_slot(&self, planet: usize, part: usize) -> usize {
        GLOBALS + self.planets * PER_PLANET + self.pairs() + planet * PER_LOW + part
    }

    fn get(&self, global: Global, lane: usize) -> f64 {
        self.data[global as usize * self.width + lane]
    }

    fn set(&mut self, global: Global, lane: usize, value: f64) {
        self.data[global as usize * self.width + lane] = value;
    }

    fn planet(&self, planet: usize, field: usize, lane: usize) -> f64 {
        self.data[self.planet_slot(planet, field) * self.width + lane]
    }

    fn set_planet(&mut self, planet: usize, field: usize, lane: usize, value: f64) {
        let at = self.planet_slot(planet, field) * self.width + lane;
        self.data[at] = value;
    }

    fn triple(&self, planet: usize, field: usize, lane: usize) -> [f64; 3] {
        [0, 1, 2].map(|axis| self.planet(planet, field + axis, lane))
    }
}

/// Pairs of `planets` bodies of which the first `pulling` have mass: each once, massless ones not with each other.
fn pairs(pulling: usize, planets: usize) -> usize {
    (0..pulling).map(|i| planets - 1 - i).sum()
}

/// Places for planets with mass first, in their order, then the massless ones.
fn massive_first(gm: &[f64]) -> Vec<usize> {
    let (massive, massless): (Vec<usize>, Vec<usize>) = (0..gm.len()).partition(|k| gm[*k] != 0.0);
    massive.into_iter().chain(massless).collect()
}
