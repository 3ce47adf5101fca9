//! The growth of the tangent vector, summed inside the kernel.

use super::Block;
use super::slots::Global;
use crate::kepler::Body;
use crate::lanes::{Real, ln};

/// The sums behind MEGNO, in samples: Y = 2 (L − ∫L/t), L = ln(|δ|/|δ₀|), by parts from Y = (2/t)∫(δ̇·δ/δ²) s ds.
///
/// The clock starts at the first sample; between samples L and Y are joined by straight lines.
/// Source: Cincotta & Simó (2000); along a symplectic map, Goździewski, Breiter & Borczyk (2008).
#[derive(Clone, Copy)]
pub(super) struct Sums<R> {
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
    pub fn read(block: &Block, from: usize) -> Sums<R> {
        let [taken, first, last, sum, y, y_sum, samples] =
            Self::SLOTS.map(|g| R::load(block.lanes_of(g as usize, from)));
        let metric = R::load(block.lanes_of(Global::Metric as usize, from));
        Sums { metric, taken, first, last, sum, y, y_sum, samples }
    }

    #[inline(always)]
    pub fn write(self, block: &mut Block, from: usize) {
        let numbers = [self.taken, self.first, self.last, self.sum, self.y, self.y_sum, self.samples];
        for (global, number) in Self::SLOTS.into_iter().zip(numbers) {
            number.store(block.lanes_of_mut(global as usize, from));
        }
    }

    #[inline(always)]
    pub fn sample(&mut self, bodies: &[Body<R>]) {
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
