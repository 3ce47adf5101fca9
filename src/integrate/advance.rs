//! Many steps of a block in one go.

use super::block::{Block, D_POS, D_VEL, FAR2, GM, Global, MU, NEAR2, POS, SATELLITE, VEL};
use super::coordinates::Coordinates;
use super::jacobi::{self, Relative};
use super::kick::{Beside, kick};
use super::splitting::Scheme;
use super::star_terms::Terms;
use crate::kepler::{Body, Midway, drift};
use crate::lanes::{Job, Real, WIDTH, ln, run_one, run_wide};

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
        match (self.block.coordinates(), plain, self.block.planets(), self.tangent) {
            (Coordinates::Heliocentric, true, 2, true) => fixed::<R, 2, 1>(self),
            (Coordinates::Heliocentric, true, 3, true) => fixed::<R, 3, 3>(self),
            (Coordinates::Heliocentric, true, _, true) => any_count::<R, true, false, false>(self),
            (Coordinates::Heliocentric, true, _, false) => any_count::<R, false, false, false>(self),
            // The rarer kinds always carry the tangent vector: fewer kernels to compile.
            (Coordinates::Heliocentric, false, _, _) => any_count::<R, true, false, true>(self),
            (Coordinates::Jacobi, _, _, _) => any_count::<R, true, true, true>(self),
        }
    }
}

#[inline(always)]
fn any_count<R: Real, const TANGENT: bool, const JACOBI: bool, const BESIDE: bool>(call: Advance<'_>) {
    let n = call.block.planets();
    let mut bodies = vec![Body::<R>::still(); n];
    let mut midway = vec![Midway::<R>::blank(); n];
    let mut pairs = vec![R::splat(0.0); call.block.pairs()];
    let mut satellites = vec![R::splat(0.0); n];
    let mut relative = vec![Relative::<R>::new(); if JACOBI { n } else { 0 }];
    let rooms = Rooms {
        bodies: &mut bodies,
        midway: &mut midway,
        pairs: &mut pairs,
        relative: &mut relative,
        satellites: &mut satellites,
    };
    steps::<R, TANGENT, JACOBI, BESIDE>(call, rooms);
}

#[inline(always)]
fn fixed<R: Real, const N: usize, const PAIRS: usize>(call: Advance<'_>) {
    let mut bodies = [Body::<R>::still(); N];
    let mut midway = [Midway::<R>::blank(); N];
    let mut pairs = [R::splat(0.0); PAIRS];
    let rooms = Rooms {
        bodies: &mut bodies,
        midway: &mut midway,
        pairs: &mut pairs,
        relative: &mut [],
        satellites: &mut [],
    };
    steps::<R, true, false, false>(call, rooms);
}

/// Where the kernel keeps its numbers.
struct Rooms<'a, R: Real> {
    bodies: &'a mut [Body<R>],
    midway: &'a mut [Midway<R>],
    pairs: &'a mut [R],
    relative: &'a mut [Relative<R>],
    satellites: &'a mut [R],
}

#[inline(always)]
fn steps<R: Real, const TANGENT: bool, const JACOBI: bool, const BESIDE: bool>(
    call: Advance<'_>,
    rooms: Rooms<'_, R>,
) {
    let Advance { block, scheme, steps, .. } = call;
    let Rooms { bodies, midway, pairs, relative, satellites } = rooms;
    read(block, bodies, pairs);
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
            drift::<R, TANGENT, false>(bodies, midway, h * R::splat(length), active);
        } else {
            drift::<R, TANGENT, true>(bodies, midway, h * R::splat(length), active);
        }
        if done == kicks {
            break;
        }
        if TANGENT && stage == 0 && step % SAMPLE_EVERY == 0 {
            growth.sample(bodies);
        }
        let length = h * R::splat(b[stage]);
        if JACOBI {
            jacobi::kick::<R, TANGENT, BESIDE>(bodies, relative, pairs, star_gm, &beside, length, window);
        } else {
            kick::<R, TANGENT, true, BESIDE>(bodies, pulling, pairs, star_gm, &beside, length, window);
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
    write_watch(block, bodies, pairs);
}

/// The sums behind MEGNO, in samples: Y = 2 (L − ∫L/t), L = ln(|δ|/|δ₀|), by parts from Y = (2/t)∫(δ̇·δ/δ²) s ds.
///
/// The clock starts at the first sample; between samples L and Y are joined by straight lines.
/// Source: Cincotta & Simó (2000); along a symplectic map, Goździewski, Breiter & Borczyk (2008).
#[derive(Clone, Copy)]
struct Sums<R> {
    metric: R,
    taken: R,
    first: R,
    last: R,
    sum: R,
    y: R,
    y_sum: R,
    samples: R,
}

impl<R: Real> Sums<R> {
    const SLOTS: [Global; 7] = [
        Global::LogTaken,
        Global::LogFirst,
        Global::LogLast,
        Global::LogSum,
        Global::Y,
        Global::YSum,
        Global::Samples,
    ];

    #[inline(always)]
    fn read(block: &Block) -> Sums<R> {
        let [taken, first, last, sum, y, y_sum, samples] =
            Self::SLOTS.map(|g| R::load(block.slot(g as usize)));
        let metric = R::load(block.slot(Global::Metric as usize));
        Sums { metric, taken, first, last, sum, y, y_sum, samples }
    }

    #[inline(always)]
    fn write(self, block: &mut Block) {
        let numbers = [self.taken, self.first, self.last, self.sum, self.y, self.y_sum, self.samples];
        for (global, number) in Self::SLOTS.into_iter().zip(numbers) {
            number.store(block.slot_mut(global as usize));
        }
    }

    #[inline(always)]
    fn sample(&mut self, bodies: &[Body<R>]) {
        let zero = R::splat(0.0);
        let half = R::splat(0.5);
        let mut pos2 = zero;
        let mut vel2 = zero;
        for b in bodies {
            for k in 0..3 {
                pos2 = b.d_pos[k].mul_add(b.d_pos[k], pos2);
                vel2 = b.d_vel[k].mul_add(b.d_vel[k], vel2);
            }
        }
        let log = half * ln(self.metric.mul_add(vel2, pos2)) + self.taken;
        let at_start = self.samples.lt(half);
        self.first = R::select(at_start, log, self.first);
        let log = log - self.first;
        let time = R::select(at_start, R::splat(1.0), self.samples);
        self.sum = half.mul_add(log + self.last, self.sum);
        let y = R::splat(2.0) * (log - self.sum / time);
        self.y_sum = half.mul_add(y + self.y, self.y_sum);
        self.y = y;
        self.last = log;
        self.samples = self.samples + R::splat(1.0);
    }
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
            jacobi::kick::<R, false, true>(
                &mut bodies,
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
