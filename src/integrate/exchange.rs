//! What goes between a block and the numbers of a kernel: the lanes from one on, as many as a number has.

use super::Block;
use super::kick::Beside;
use super::slots::{D_POS, D_VEL, FAR2, GM, Global, MU, NEAR2, POS, SATELLITE, VEL};
use super::star_terms::Terms;
use crate::kepler::{Body, Low};
use crate::lanes::Real;

/// One number of each lane that does not belong to a planet.
#[inline(always)]
pub(super) fn global<R: Real>(block: &Block, from: usize, global: Global) -> R {
    R::load(block.lanes_of(global as usize, from))
}

/// Masses, motion, tangent vectors and the watch of `R::LANES` lanes from `from` on.
#[inline(always)]
pub(super) fn read<R: Real>(block: &Block, from: usize, bodies: &mut [Body<R>], pairs: &mut [R]) {
    for (p, body) in bodies.iter_mut().enumerate() {
        let get = |field: usize| R::load(block.lanes_of(block.planet_slot(p, field), from));
        body.mu = get(MU);
        body.gm = get(GM);
        for k in 0..3 {
            body.pos[k] = get(POS + k);
            body.vel[k] = get(VEL + k);
            body.d_pos[k] = get(D_POS + k);
            body.d_vel[k] = get(D_VEL + k);
        }
        body.near2 = get(NEAR2);
        body.far2 = get(FAR2);
    }
    for (p, pair) in pairs.iter_mut().enumerate() {
        *pair = R::load(block.lanes_of(block.pair_slot(p), from));
    }
}

/// Low parts; none where `low` is empty.
#[inline(always)]
pub(super) fn read_low<R: Real>(block: &Block, from: usize, low: &mut [Low<R>]) {
    for (p, low) in low.iter_mut().enumerate() {
        for k in 0..3 {
            low.pos[k] = R::load(block.lanes_of(block.low_slot(p, k), from));
            low.vel[k] = R::load(block.lanes_of(block.low_slot(p, 3 + k), from));
        }
    }
}

/// Writes low parts back.
#[inline(always)]
pub(super) fn write_low<R: Real>(block: &mut Block, from: usize, low: &[Low<R>]) {
    for (p, low) in low.iter().enumerate() {
        for k in 0..3 {
            for (part, number) in [(k, low.pos[k]), (3 + k, low.vel[k])] {
                let slot = block.low_slot(p, part);
                number.store(block.lanes_of_mut(slot, from));
            }
        }
    }
}

/// The star's terms; none where `satellites` is empty.
#[inline(always)]
pub(super) fn read_beside<'a, R: Real>(block: &Block, from: usize, satellites: &'a mut [R]) -> Beside<'a, R> {
    let get = |number: Global| global::<R>(block, from, number);
    for (p, satellite) in satellites.iter_mut().enumerate() {
        *satellite = R::load(block.lanes_of(block.planet_slot(p, SATELLITE), from));
    }
    let terms = Terms {
        relativity: get(Global::Relativity),
        oblateness: get(Global::Oblateness),
        pole: [get(Global::PoleX), get(Global::PoleY), get(Global::PoleZ)],
    };
    Beside { acting: block.has_star_terms(), terms, satellites }
}

/// Writes positions, velocities and the tangent vector back.
#[inline(always)]
pub(super) fn write<R: Real>(block: &mut Block, from: usize, bodies: &[Body<R>]) {
    for (p, body) in bodies.iter().enumerate() {
        for k in 0..3 {
            for (field, number) in
                [(POS, body.pos[k]), (VEL, body.vel[k]), (D_POS, body.d_pos[k]), (D_VEL, body.d_vel[k])]
            {
                let slot = block.planet_slot(p, field + k);
                number.store(block.lanes_of_mut(slot, from));
            }
        }
    }
}

/// Writes the distances seen back.
#[inline(always)]
pub(super) fn write_watch<R: Real>(block: &mut Block, from: usize, bodies: &[Body<R>], pairs: &[R]) {
    for (p, body) in bodies.iter().enumerate() {
        for (field, number) in [(NEAR2, body.near2), (FAR2, body.far2)] {
            let slot = block.planet_slot(p, field);
            number.store(block.lanes_of_mut(slot, from));
        }
    }
    for (p, pair) in pairs.iter().enumerate() {
        let slot = block.pair_slot(p);
        pair.store(block.lanes_of_mut(slot, from));
    }
}
