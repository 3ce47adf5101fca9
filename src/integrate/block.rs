//! The numbers of up to eight configurations side by side, as the kernels read and write them.
//!
//! State: democratic heliocentric canonical coordinates (Duncan, Levison & Lee 1998): heliocentric positions and
//! barycentric velocities.

use crate::lanes::WIDTH;
use crate::num::{Kept, KeptReader};

/// Per-lane numbers that are not of a planet.
#[derive(Clone, Copy, Debug)]
pub(super) enum Global {
    StarGm,
    Step,
    /// 1 where the lane is in use.
    Active,
    /// Square of the time that makes velocities comparable with positions in the length of the tangent vector.
    Metric,
    /// What rescaling has taken out of the logarithm of that length.
    LogTaken,
    /// Logarithm at the first sample.
    LogFirst,
    LogLast,
    /// ∫ (ln|δ| − ln|δ₀|) dt, Y and ∫ Y dt, in samples.
    LogSum,
    Y,
    YSum,
    Samples,
}

pub(super) const GLOBALS: usize = 11;
pub(super) const PER_PLANET: usize = 15;

/// Where in a planet's numbers each begins.
pub(super) const GM: usize = 0;
pub(super) const POS: usize = 1;
pub(super) const VEL: usize = 4;
pub(super) const D_POS: usize = 7;
pub(super) const D_VEL: usize = 10;
pub(super) const NEAR2: usize = 13;
pub(super) const FAR2: usize = 14;

/// One lane's configuration: heliocentric positions (au), barycentric velocities (au/day), masses as GM.
#[derive(Clone, Debug, PartialEq)]
pub struct State {
    pub star_gm: f64,
    pub gm: Vec<f64>,
    pub pos: Vec<[f64; 3]>,
    pub vel: Vec<[f64; 3]>,
}

/// A displacement of a [`State`], up to one common factor.
#[derive(Clone, Debug, PartialEq)]
pub struct Tangent {
    pub pos: Vec<[f64; 3]>,
    pub vel: Vec<[f64; 3]>,
}

/// What the kernel has gathered about the growth of the tangent vector of one lane.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Growth {
    /// ln(|δ|/|δ₀|) at the last sample.
    pub log: f64,
    /// Y and its time average at the last sample; 0 before the second.
    pub y: f64,
    pub mean_y: f64,
    pub samples: u64,
}

/// Up to eight configurations with the same number of planets.
#[derive(Clone, Debug)]
pub struct Block {
    width: usize,
    planets: usize,
    data: Vec<f64>,
}

impl Block {
    /// `width` is 1 or 8; every lane starts unused.
    pub fn new(width: usize, planets: usize) -> Block {
        assert!(width == 1 || width == WIDTH, "a block has 1 or {WIDTH} lanes, not {width}");
        let slots = GLOBALS + planets * PER_PLANET + planets * planets.saturating_sub(1) / 2;
        let mut block = Block { width, planets, data: vec![0.0; slots * width] };
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

    pub fn width(&self) -> usize {
        self.width
    }

    pub fn planets(&self) -> usize {
        self.planets
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
        for k in 0..self.planets {
            self.set_planet(k, GM, lane, state.gm[k]);
            for axis in 0..3 {
                self.set_planet(k, POS + axis, lane, state.pos[k][axis]);
                self.set_planet(k, VEL + axis, lane, state.vel[k][axis]);
                self.set_planet(k, D_POS + axis, lane, tangent.pos[k][axis]);
                self.set_planet(k, D_VEL + axis, lane, tangent.vel[k][axis]);
            }
        }
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
        for p in 0..self.planets * self.planets.saturating_sub(1) / 2 {
            let at = self.pair_slot(p) * self.width + lane;
            self.data[at] = f64::MAX;
        }
    }

    /// The state in a lane.
    pub fn state(&self, lane: usize) -> State {
        State {
            star_gm: self.get(Global::StarGm, lane),
            gm: (0..self.planets).map(|k| self.planet(k, GM, lane)).collect(),
            pos: (0..self.planets).map(|k| self.triple(k, POS, lane)).collect(),
            vel: (0..self.planets).map(|k| self.triple(k, VEL, lane)).collect(),
        }
    }

    /// The tangent vector in a lane; multiply by exp([`Block::log_taken`]) for its true length.
    pub fn tangent(&self, lane: usize) -> Tangent {
        Tangent {
            pos: (0..self.planets).map(|k| self.triple(k, D_POS, lane)).collect(),
            vel: (0..self.planets).map(|k| self.triple(k, D_VEL, lane)).collect(),
        }
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

    /// Smallest distance of the pair `(i, j)`, i < j, since the watch was last forgotten, au.
    pub fn nearest_pair_au(&self, i: usize, j: usize, lane: usize) -> f64 {
        debug_assert!(i < j);
        let index = i * self.planets - i * (i + 1) / 2 + (j - i - 1);
        self.data[self.pair_slot(index) * self.width + lane].sqrt()
    }

    /// Smallest and largest distance of a planet from the star seen at the starts of drifts, au.
    pub fn star_distances_au(&self, planet: usize, lane: usize) -> (f64, f64) {
        (self.planet(planet, NEAR2, lane).sqrt(), self.planet(planet, FAR2, lane).sqrt())
    }

    /// Copies one lane into lane `to` of another block.
    pub fn copy_lane(&self, lane: usize, other: &mut Block, to: usize) {
        debug_assert_eq!(self.planets, other.planets);
        for slot in 0..self.data.len() / self.width {
            other.data[slot * other.width + to] = self.data[slot * self.width + lane];
        }
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

    pub(super) fn slot(&self, slot: usize) -> &[f64] {
        &self.data[slot * self.width..(slot + 1) * self.width]
    }

    pub(super) fn slot_mut(&mut self, slot: usize) -> &mut [f64] {
        &mut self.data[slot * self.width..(slot + 1) * self.width]
    }

    pub(super) fn planet_slot(&self, planet: usize, field: usize) -> usize {
        GLOBALS + planet * PER_PLANET + field
    }

    pub(super) fn pair_slot(&self, pair: usize) -> usize {
        GLOBALS + self.planets * PER_PLANET + pair
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
