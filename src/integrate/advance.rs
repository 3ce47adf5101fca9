//! Many steps of a block in one go.

use super::Block;
use super::coordinates::Coordinates;
use super::jacobi::{self, Relative};
use super::kick::{Beside, kick, kick_keeping};
use super::megno::Sums;
use super::slots::{D_POS, D_VEL, FAR2, GM, Global, MU, NEAR2, POS, SATELLITE, VEL};
use super::splitting::Scheme;
use super::star_terms::Terms;
use crate::kepler::{Body, Low, Midway, drift, drift_keeping};
use crate::lanes::{Job, Real, WIDTH, run_one, run_wide};

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
/// the same bits whether the block is 1 or 8 wide.
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
    fn run<R: Real>(self) {
        // The commonest counts are compiled as fixed numbers, which lets the compiler keep more in registers.
        let plain = self.block.pulling() == self.block.planets() && !self.block.has_star_terms();
        if self.block.is_compensated() {
            return match self.block.coordinates() {
                Coordinates::Heliocentric => any_count::<R, true, false, true, true>(self),
                Coordinates::Jacobi => any_count::<R, true, true, true, true>(self),
            };
        }
        match (self.block.coordinates(), plain, self.block.planets(), self.tangent) {
            (Coordinates::Heliocentric, true, 2, true) => fixed::<R, 2, 1>(self),
            (Coordinates::Heliocentric, true, 3, true) => fixed::<R, 3, 3>(self),
            (Coordinates::Heliocentric, true, _, true) => any_count::<R, true, false, false, false>(self),
            (Coordinates::Heliocentric, true, _, false) => any_count::<R, false, false, false, false>(self),
            // The rarer kinds always carry the tangent vector: fewer kernels to compile.
            (Coordinates::Heliocentric, false, _, _) => any_count::<R, true, false, true, false>(self),
            (Coordinates::Jacobi, _, _, _) => any_count::<R, true, true, true, false>(self),
        }
    }
}

#[inline(always)]
fn any_count<R: Real, const TANGENT: bool, const JACOBI: bool, const BESIDE: bool, const LOW: bool>(
    call: Advance<'_>,
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
    steps::<R, TANGENT, JACOBI, BESIDE, LOW>(call, rooms);
}

#[inline(always)]
fn fixed<R: Real, const N: usize, const PAIRS: usize>(call: Advance<'_>) {
    let mut bodies = [Body::<R>::still(); N];
    let mut midway = [Midway::<R>::blank(); N];
    let mut pairs = [R::splat(0.0); PAIRS];
    let rooms = Rooms {
        bodies: &mut bodies,
        low: &mut [],
        midway: &mut midway,
        pairs: &mut pairs,
        relative: &mut [],
        satellites: &mut [],
    };
    steps::<R, true, false, false, false>(call, rooms);
}

/// Where the kernel keeps its numbers.
struct Rooms<'a, R: Real> {
    bodies: &'a mut [Body<R>],
    /// Empty without compensated sums.
    low: &'a mut [Low<R>],
    midway: &'a mut [Midway<R>],
    pairs: &'a mut [R],
    relative: &'a mut [Relative<R>],
    satellites: &'a mut [R],
}

#[inline(always)]
fn steps<R: Real, const TANGENT: bool, const JACOBI: bool, const BESIDE: bool, const LOW: bool>(
    call: Advance<'_>,
    rooms: Rooms<'_, R>,
) {
    let Advance { block, scheme, steps, .. } = call;
    let Rooms { bodies, low, midway, pairs, relative, satellites } = rooms;
    read(block, bodies, pairs);
    read_low(block, low);
    let beside = read_beside(block, satellites);
    let pulling = if BESIDE { block.pulling() } else { bodies.len() };
    let star_gm = R::load(block.slot(Global::StarGm as usize));
    let h = R::load(block.slot(Global::Step as usize));
    let active = R::splat(0.5).lt(R::load(block.slot(Global::Active as usize)));
    let mut growth = Sums::<R>::read(block);
    let window = h.abs() * R::splat(0.5 * scheme.longest_drift());
    let (a, b) = (&scheme.a[..], &scheme.b[..]);
    let kicks = steps * b.len();
    let (mut step, mut stage) = (0, 0);
    // One place for drift and one for kick: each is a large piece of code.
    for done in 0..=kicks {
        let merged = stage == 0 && 0 < done && done < kicks;
        let length = if merged { 2.0 * a[0] } else { a[if done == kicks { b.len() } else { stage }] };
        if JACOBI {
            drift_keeping::<R, TANGENT, false, LOW>(bodies, low, midway, h * R::splat(length), active);
        } else {
            drift_keeping::<R, TANGENT, true, LOW>(bodies, low, midway, h * R::splat(length), active);
        }
        if done == kicks {
            break;
        }
        if TANGENT && stage == 0 && step % SAMPLE_EVERY == 0 {
            growth.sample(bodies);
        }
        let length = h * R::splat(b[stage]);
        if JACOBI {
            jacobi::kick::<R, TANGENT, BESIDE, LOW>(
                bodies, low, relative, pairs, star_gm, &beside, length, window,
            );
        } else {
            kick_keeping::<R, TANGENT, true, BESIDE, LOW>(
                bodies, low, pulling, pairs, star_gm, &beside, length, window,
            );
        }
        stage += 1;
        if stage == b.len() {
            (step, stage) = (step + 1, 0);
        }
    }
    if TANGENT {
        growth.write(block);
    }
    write(block, bodies);
    write_low(block, low);
    write_watch(block, bodies, pairs);
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
            read(self.0, &mut bodies, &mut pairs);
            let mut growth = Sums::<R>::read(self.0);
            growth.sample(&bodies);
            growth.write(self.0);
        }
    }
    assert_eq!(block.width(), 1, "only a block of one lane is sampled from outside");
    run_one(Sample(block));
}

#[inline(always)]
fn read<R: Real>(block: &Block, bodies: &mut [Body<R>], pairs: &mut [R]) {
    for (p, body) in bodies.iter_mut().enumerate() {
        let get = |field: usize| R::load(block.slot(block.planet_slot(p, field)));
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
        *pair = R::load(block.slot(block.pair_slot(p)));
    }
}

/// Low parts; none where `low` is empty.
#[inline(always)]
fn read_low<R: Real>(block: &Block, low: &mut [Low<R>]) {
    for (p, low) in low.iter_mut().enumerate() {
        for k in 0..3 {
            low.pos[k] = R::load(block.slot(block.low_slot(p, k)));
            low.vel[k] = R::load(block.slot(block.low_slot(p, 3 + k)));
        }
    }
}

#[inline(always)]
fn write_low<R: Real>(block: &mut Block, low: &[Low<R>]) {
    for (p, low) in low.iter().enumerate() {
        for k in 0..3 {
            for (part, number) in [(k, low.pos[k]), (3 + k, low.vel[k])] {
                let slot = block.low_slot(p, part);
                number.store(block.slot_mut(slot));
            }
        }
    }
}

/// The star's terms; none where `satellites` is empty.
#[inline(always)]
fn read_beside<'a, R: Real>(block: &Block, satellites: &'a mut [R]) -> Beside<'a, R> {
    let get = |global: Global| R::load(block.slot(global as usize));
    for (p, satellite) in satellites.iter_mut().enumerate() {
        *satellite = R::load(block.slot(block.planet_slot(p, SATELLITE)));
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
fn write<R: Real>(block: &mut Block, bodies: &[Body<R>]) {
    let width = R::LANES;
    debug_assert!(width == 1 || width == WIDTH);
    for (p, body) in bodies.iter().enumerate() {
        for k in 0..3 {
            for (field, number) in
                [(POS, body.pos[k]), (VEL, body.vel[k]), (D_POS, body.d_pos[k]), (D_VEL, body.d_vel[k])]
            {
                let slot = block.planet_slot(p, field + k);
                number.store(block.slot_mut(slot));
            }
        }
    }
}

/// Writes the distances seen back.
#[inline(always)]
fn write_watch<R: Real>(block: &mut Block, bodies: &[Body<R>], pairs: &[R]) {
    for (p, body) in bodies.iter().enumerate() {
        for (field, number) in [(NEAR2, body.near2), (FAR2, body.far2)] {
            let slot = block.planet_slot(p, field);
            number.store(block.slot_mut(slot));
        }
    }
    for (p, pair) in pairs.iter().enumerate() {
        let slot = block.pair_slot(p);
        pair.store(block.slot_mut(slot));
    }
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
    fn run<R: Real>(self) {
        match self.block.coordinates() {
            Coordinates::Heliocentric => sequence::<R, false>(self),
            Coordinates::Jacobi => sequence::<R, true>(self),
        }
    }
}

#[inline(always)]
fn sequence<R: Real, const JACOBI: bool>(call: Sequence<'_>) {
    let Sequence { block, stages } = call;
    let n = block.planets();
    let mut bodies = vec![Body::<R>::still(); n];
    let mut midway = vec![Midway::<R>::blank(); n];
    let mut pairs = vec![R::splat(0.0); block.pairs()];
    let mut satellites = vec![R::splat(0.0); n];
    let mut relative = vec![Relative::<R>::new(); if JACOBI { n } else { 0 }];
    read(block, &mut bodies, &mut pairs);
    let beside = read_beside(block, &mut satellites);
    let pulling = block.pulling();
    let star_gm = R::load(block.slot(Global::StarGm as usize));
    let h = R::load(block.slot(Global::Step as usize));
    let active = R::splat(0.5).lt(R::load(block.slot(Global::Active as usize)));
    for (a, b) in stages {
        drift::<R, false, false>(&mut bodies, &mut midway, h * R::splat(*a), active);
        let length = h * R::splat(*b);
        if JACOBI {
            jacobi::kick::<R, false, true, false>(
                &mut bodies,
                &mut [],
                &mut relative,
                &mut pairs,
                star_gm,
                &beside,
                length,
                h,
            );
        } else {
            kick::<R, false, false, true>(&mut bodies, pulling, &mut pairs, star_gm, &beside, length, h);
        }
    }
    // What was met on the way to other times is not part of the motion: the watch is not written.
    write(block, &bodies);
}

/// Runs a [`Sequence`] at the width of its block.
pub(super) fn run_sequence(sequence: Sequence<'_>) {
    match sequence.block.width() {
        1 => run_one(sequence),
        _ => run_wide(sequence),
    }
}
