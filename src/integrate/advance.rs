//! Many steps of a block in one go.

use super::Block;
use super::coordinates::Coordinates;
use super::exchange::{global, read, read_beside, read_low, write, write_low, write_watch};
use super::jacobi::{self, Relative};
use super::kick::{kick, kick_keeping};
use super::megno::Sums;
use super::slots::Global;
use super::splitting::Scheme;
use crate::kepler::{Body, Low, Midway, drift_keeping};
use crate::lanes::{Job, Real, groups_at_once, run_one, run_wide};

/// The tangent vector's length is sampled every so many steps; blocks are whole multiples of it.
pub const SAMPLE_EVERY: usize = 4;

/// One call of the kernel.
pub struct Advance<'a> {
    pub block: &'a mut Block,
    pub scheme: &'a Scheme,
    pub steps: usize,
    /// Carry the tangent vector and its sums.
    pub tangent: bool,
}

/// Advances every lane by `steps` of its own step.
///
/// Successive drifts are merged; the block is synchronised at the end. Lanes do not influence each other and have
/// the same bits whatever the width of the block.
pub fn advance(call: Advance<'_>) {
    if call.steps == 0 {
        return;
    }
    match call.block.width() {
        1 => run_one(call),
        _ => run_wide(call),
    }
}

impl Job for Advance<'_> {
    type Output = ();
    #[inline(always)]
    fn run<R: Real>(mut self) {
        let block = &self.block;
        let plain = block.coordinates() == Coordinates::Heliocentric
            && block.pulling() == block.planets()
            && !block.has_star_terms()
            && !block.is_compensated();
        let planets = block.planets();
        let several = if R::IN_GROUPS { groups_at_once(planets) } else { 1 };
        // The commonest counts are compiled as fixed numbers, which lets the compiler keep more in registers.
        let common = plain && self.tangent && block.width().is_multiple_of(several * R::LANES);
        for from in (0..block.width()).step_by(if common { several * R::LANES } else { R::LANES }) {
            match (common, planets) {
                (true, 2) if R::IN_GROUPS => fixed::<R, 2, 3, 6, 3>(&mut self, from),
                (true, 3) if R::IN_GROUPS => fixed::<R, 3, 2, 6, 6>(&mut self, from),
                (true, 2) => fixed::<R, 2, 1, 2, 1>(&mut self, from),
                (true, 3) => fixed::<R, 3, 1, 3, 3>(&mut self, from),
                _ => one_group::<R>(&mut self, plain, from),
            }
        }
    }
}

/// Any count of planets and any kind of block, one group of lanes.
#[inline(always)]
fn one_group<R: Real>(call: &mut Advance<'_>, plain: bool, from: usize) {
    let compensated = call.block.is_compensated();
    match (call.block.coordinates(), compensated, plain, call.tangent) {
        (Coordinates::Heliocentric, false, true, true) => {
            any_count::<R, true, false, false, false>(call, from);
        }
        (Coordinates::Heliocentric, false, true, false) => {
            any_count::<R, false, false, false, false>(call, from);
        }
        // The rarer kinds always carry the tangent vector: fewer kernels to compile.
        (Coordinates::Heliocentric, false, false, _) => any_count::<R, true, false, true, false>(call, from),
        (Coordinates::Heliocentric, true, _, _) => any_count::<R, true, false, true, true>(call, from),
        (Coordinates::Jacobi, false, _, _) => any_count::<R, true, true, true, false>(call, from),
        (Coordinates::Jacobi, true, _, _) => any_count::<R, true, true, true, true>(call, from),
    }
}

#[inline(always)]
fn any_count<R: Real, const TANGENT: bool, const JACOBI: bool, const BESIDE: bool, const LOW: bool>(
    call: &mut Advance<'_>,
    from: usize,
) {
    let n = call.block.planets();
    let mut bodies = vec![Body::<R>::still(); n];
    let mut midway = vec![Midway::<R>::blank(); n];
    let mut pairs = vec![R::splat(0.0); call.block.pairs()];
    let mut satellites = vec![R::splat(0.0); n];
    let mut relative = vec![Relative::<R>::new(); if JACOBI { n } else { 0 }];
    let mut low = vec![Low::<R>::none(); if LOW { n } else { 0 }];
    let rooms = Rooms {
        bodies: &mut bodies,
        low: &mut low,
        midway: &mut midway,
        pairs: &mut pairs,
        relative: &mut relative,
        satellites: &mut satellites,
    };
    steps::<R, TANGENT, JACOBI, BESIDE, LOW, 1>(call, from, rooms);
}

/// `N` planets with `PAIRS` / `GROUPS` pairs in each of `GROUPS` groups of lanes: `BODIES` bodies.
#[inline(always)]
fn fixed<R: Real, const N: usize, const GROUPS: usize, const BODIES: usize, const PAIRS: usize>(
    call: &mut Advance<'_>,
    from: usize,
) {
    const { assert!(N * GROUPS == BODIES && GROUPS * N * (N - 1) / 2 == PAIRS) };
    let mut bodies = [Body::<R>::still(); BODIES];
    let mut midway = [Midway::<R>::blank(); BODIES];
    let mut pairs = [R::splat(0.0); PAIRS];
    let rooms = Rooms {
        bodies: &mut bodies,
        low: &mut [],
        midway: &mut midway,
        pairs: &mut pairs,
        relative: &mut [],
        satellites: &mut [],
    };
    steps::<R, true, false, false, false, GROUPS>(call, from, rooms);
}

/// Where the kernel keeps its numbers, one group of lanes after the other.
struct Rooms<'a, R: Real> {
    bodies: &'a mut [Body<R>],
    /// Empty without compensated sums.
    low: &'a mut [Low<R>],
    midway: &'a mut [Midway<R>],
    pairs: &'a mut [R],
    relative: &'a mut [Relative<R>],
    satellites: &'a mut [R],
}

/// What one group of lanes needs beside its bodies.
#[derive(Clone, Copy)]
struct Own<R: Real> {
    h: R,
    inv_star_gm: R,
    star_gm: R,
    window: R,
    active: R::Mask,
    growth: Sums<R>,
}

impl<R: Real> Own<R> {
    #[inline(always)]
    fn read(block: &Block, from: usize, longest_drift: f64) -> Own<R> {
        let star_gm: R = global(block, from, Global::StarGm);
        let h: R = global(block, from, Global::Step);
        Own {
            h,
            inv_star_gm: R::splat(1.0) / star_gm,
            star_gm,
            window: h.abs() * R::splat(0.5 * longest_drift),
            active: R::splat(0.5).lt(global(block, from, Global::Active)),
            growth: Sums::read(block, from),
        }
    }
}

/// `GROUPS` groups of lanes from lane `from` on; more than one only of plain heliocentric blocks.
#[inline(always)]
fn steps<
    R: Real,
    const TANGENT: bool,
    const JACOBI: bool,
    const BESIDE: bool,
    const LOW: bool,
    const GROUPS: usize,
>(
    call: &mut Advance<'_>,
    from: usize,
    rooms: Rooms<'_, R>,
) {
    let Advance { block, scheme, steps, .. } = call;
    let Rooms { bodies, low, midway, pairs, relative, satellites } = rooms;
    let (planets, pairs_each) = (bodies.len() / GROUPS, pairs.len() / GROUPS);
    let mut own = [Own::<R>::read(block, from, scheme.longest_drift()); GROUPS];
    for (g, own) in own.iter_mut().enumerate() {
        let from = from + g * R::LANES;
        *own = Own::read(block, from, scheme.longest_drift());
        let (bodies, pairs) = (of_group(bodies, g, planets), of_group(pairs, g, pairs_each));
        read(block, from, bodies, pairs);
    }
    read_low(block, from, low);
    let beside = read_beside(block, from, satellites);
    let pulling = if BESIDE { block.pulling() } else { planets };
    let stages = scheme.stages();
    let rounds = *steps * stages;
    let (mut step, mut stage) = (0, 0);
    let active = own.map(|own| own.active);
    // One place for drift and one for kick: each is a large piece of code.
    for round in 0..=rounds {
        let (drift, kick) = scheme.round(stage, round == 0, round == rounds);
        if let Some(length) = drift {
            let mut h = [R::splat(length); GROUPS];
            for g in 0..GROUPS {
                h[g] = own[g].h * h[g];
            }
            if JACOBI {
                drift_keeping::<R, TANGENT, false, LOW>(bodies, low, midway, &h, &active);
            } else {
                drift_keeping::<R, TANGENT, true, LOW>(bodies, low, midway, &h, &active);
            }
        }
        let Some(impulse) = kick else { break };
        // After the first drift of a step, so always at the same place within it.
        let sampled = TANGENT && drift.is_some() && stage == 0 && step % SAMPLE_EVERY == 0;
        for (g, own) in own.iter_mut().enumerate() {
            let (bodies, pairs) = (of_group(bodies, g, planets), of_group(pairs, g, pairs_each));
            if sampled {
                own.growth.sample(bodies);
            }
            let h = own.h * R::splat(impulse);
            if JACOBI {
                let star_gm = own.star_gm;
                jacobi::kick::<R, TANGENT, BESIDE, LOW>(
                    bodies, low, relative, pairs, star_gm, &beside, h, own.window,
                );
            } else {
                let inv_star_gm = own.inv_star_gm;
                kick_keeping::<R, TANGENT, true, BESIDE, LOW>(
                    bodies,
                    low,
                    pulling,
                    pairs,
                    inv_star_gm,
                    &beside,
                    h,
                    own.window,
                );
            }
        }
        if drift.is_none() {
            continue;
        }
        stage += 1;
        if stage == stages {
            (step, stage) = (step + 1, 0);
        }
    }
    for (g, own) in own.into_iter().enumerate() {
        let from = from + g * R::LANES;
        if TANGENT {
            own.growth.write(block, from);
        }
        let (bodies, pairs) = (of_group(bodies, g, planets), of_group(pairs, g, pairs_each));
        write(block, from, bodies);
        write_watch(block, from, bodies, pairs);
    }
    write_low(block, from, low);
}

/// The numbers of one group.
#[inline(always)]
fn of_group<T>(all: &mut [T], group: usize, each: usize) -> &mut [T] {
    &mut all[group * each..(group + 1) * each]
}

/// One sample of a block of one lane outside the kernel.
pub(super) fn sample(block: &mut Block) {
    struct Sample<'a>(&'a mut Block);
    impl Job for Sample<'_> {
        type Output = ();
        #[inline(always)]
        fn run<R: Real>(self) {
            let mut bodies = vec![Body::<R>::still(); self.0.planets()];
            let mut pairs = vec![R::splat(0.0); self.0.pairs()];
            read(self.0, 0, &mut bodies, &mut pairs);
            let mut growth = Sums::<R>::read(self.0, 0);
            growth.sample(&bodies);
            growth.write(self.0, 0);
        }
    }
    assert_eq!(block.width(), 1, "only a block of one lane is sampled from outside");
    run_one(Sample(block));
}

/// Runs a list of (drift, kick) pairs, in steps, without tangent vector or watch.
pub(super) struct Sequence<'a> {
    pub block: &'a mut Block,
    /// The last kick is 0.
    pub stages: &'a [(f64, f64)],
}

impl Job for Sequence<'_> {
    type Output = ();
    #[inline(always)]
    fn run<R: Real>(mut self) {
        let block = &self.block;
        let alike = block.coordinates() == Coordinates::Heliocentric && !block.has_star_terms();
        let several = if R::IN_GROUPS && alike { groups_at_once(block.planets()) } else { 1 };
        let groups = if block.width().is_multiple_of(several * R::LANES) { several } else { 1 };
        for from in (0..block.width()).step_by(groups * R::LANES) {
            match self.block.coordinates() {
                Coordinates::Heliocentric => sequence::<R, false>(&mut self, from, groups),
                Coordinates::Jacobi => sequence::<R, true>(&mut self, from, groups),
            }
        }
    }
}

/// The groups of lanes from lane `from` on; one only where the star has terms of its own or in Jacobi coordinates.
#[inline(always)]
fn sequence<R: Real, const JACOBI: bool>(call: &mut Sequence<'_>, from: usize, groups: usize) {
    let Sequence { block, stages } = call;
    let (n, pairs_each) = (block.planets(), block.pairs());
    let mut bodies = vec![Body::<R>::still(); groups * n];
    let mut midway = vec![Midway::<R>::blank(); groups * n];
    let mut pairs = vec![R::splat(0.0); groups * pairs_each];
    let mut satellites = vec![R::splat(0.0); n];
    let mut relative = vec![Relative::<R>::new(); if JACOBI { n } else { 0 }];
    let first = Own::<R>::read(block, from, 0.0);
    let mut own = vec![first; groups];
    let mut active = vec![first.active; groups];
    for g in 0..groups {
        let from = from + g * R::LANES;
        own[g] = Own::read(block, from, 0.0);
        active[g] = own[g].active;
        read(block, from, of_group(&mut bodies, g, n), of_group(&mut pairs, g, pairs_each));
    }
    let beside = read_beside(block, from, &mut satellites);
    let pulling = block.pulling();
    let mut h = vec![first.h; groups];
    for (a, b) in *stages {
        for (h, own) in h.iter_mut().zip(&own) {
            *h = own.h * R::splat(*a);
        }
        drift_keeping::<R, false, false, false>(&mut bodies, &mut [], &mut midway, &h, &active);
        for (g, own) in own.iter().enumerate() {
            let (bodies, pairs) = (of_group(&mut bodies, g, n), of_group(&mut pairs, g, pairs_each));
            let (impulse, star_gm) = (own.h * R::splat(*b), own.star_gm);
            if JACOBI {
                let low = &mut [];
                jacobi::kick::<R, false, true, false>(
                    bodies,
                    low,
                    &mut relative,
                    pairs,
                    star_gm,
                    &beside,
                    impulse,
                    own.h,
                );
            } else {
                kick::<R, false, false, true>(bodies, pulling, pairs, star_gm, &beside, impulse, own.h);
            }
        }
    }
    // What was met on the way to other times is not part of the motion: the watch is not written.
    for g in 0..groups {
        write(block, from + g * R::LANES, of_group(&mut bodies, g, n));
    }
}

/// Runs a [`Sequence`] at the width of its block.
pub(super) fn run_sequence(sequence: Sequence<'_>) {
    match sequence.block.width() {
        1 => run_one(sequence),
        _ => run_wide(sequence),
    }
}
