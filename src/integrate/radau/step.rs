//! One step: the force as a polynomial through the nodes, found by sweeps.
//!
//! F(s) = F₀ + Σ Bₖ s^{k+1} with s from 0 to 1 over the step; equal to Newton's form F₀ + Σ Gₖ ∏_{i ≤ k}(s − hᵢ), whose
//! coefficients are divided differences that a new force value changes one at a time (Everhart 1985).

use super::super::forces::{Cast, Forces};
use super::nodes::{STAGES, TABLE, WEIGHTS};
use super::phase::{Phase, two_sum};
use super::weights::{AT_NODE, END, Series, Weights};

/// More sweeps than this in one step and the step is too long.
const MOST_SWEEPS: u32 = 16;
/// What a further sweep would still change of the force, relative, where sweeping ends: a tenth of a rounding, since
/// what is left is much the same in every step and adds up.
const SETTLED: f64 = 1e-17;
/// A change that no longer shrinks is rounding when it is below this.
const ROUNDING: f64 = 1e-6;
/// A prediction over more than so many lengths of the last step is worse than none.
const FARTHEST: f64 = 6.0;

/// What acts on whom.
#[derive(Clone, Debug)]
pub(super) struct Physics {
    pub forces: Forces,
    pub cast: Cast,
}

/// How the sweeps of a step ended.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Settling {
    pub settled: bool,
    pub sweeps: u32,
    /// Largest relative change of a force in the last sweep.
    pub change: f64,
}

#[derive(Clone, Debug)]
pub(super) struct Step {
    /// Signed, day.
    pub length: f64,
    /// Force at the start, au/day².
    force: Vec<f64>,
    b: [Vec<f64>; STAGES],
    g: [Vec<f64>; STAGES],
    /// The b that this step was begun with; absent: none was predicted.
    predicted: Option<[Vec<f64>; STAGES]>,
    node: Phase,
    /// Forces at the nodes beside 0, of the last sweep.
    node_force: [Vec<f64>; STAGES],
    /// Last change of a divided difference.
    change: Vec<f64>,
    pub evaluations: u64,
    pub pairs: u64,
}

impl Step {
    pub fn new(len: usize) -> Step {
        let none = || [(); STAGES].map(|()| vec![0.0; len]);
        Step {
            length: 0.0,
            force: vec![0.0; len],
            b: none(),
            g: none(),
            predicted: None,
            node: Phase::zero(len),
            node_force: none(),
            change: vec![0.0; len],
            evaluations: 0,
            pairs: 0,
        }
    }

    /// Takes the force at the start of a step.
    pub fn begin(&mut self, physics: &Physics, start: &Phase) {
        self.evaluations += 1;
        self.pairs +=
            physics.forces.evaluate(&physics.cast, &start.at, &start.at_low, &start.vel, &mut self.force);
    }

    /// Sets the length; the polynomial at hand, over the same start, becomes the guess for the new length.
    pub fn stretch(&mut self, length: f64) {
        if self.length != 0.0 {
            let ratio = length / self.length;
            let kept = if ratio.abs() <= FARTHEST { ratio } else { 0.0 };
            let mut power = kept;
            for k in 0..STAGES {
                self.b[k].iter_mut().for_each(|x| *x *= power);
                if let Some(predicted) = &mut self.predicted {
                    predicted[k].iter_mut().for_each(|x| *x *= power);
                }
                power *= kept;
            }
            self.differences_from_powers();
        }
        self.length = length;
    }

    /// Moves the polynomial on: what it says about a step of `length` from its end, plus what the last such guess
    /// was wrong by (Everhart 1985).
    pub fn predict(&mut self, length: f64) {
        let ratio = length / self.length;
        self.length = length;
        // Not `>`: a ratio that is no number predicts nothing either.
        if !(0.0..=FARTHEST).contains(&ratio) {
            self.forget();
            return;
        }
        let mut power = [1.0; STAGES];
        for k in 0..STAGES {
            power[k] = ratio * if k > 0 { power[k - 1] } else { 1.0 };
        }
        let mut predicted = self.predicted.take();
        let mut guess = [(); STAGES].map(|()| vec![0.0; self.force.len()]);
        for c in 0..self.force.len() {
            let old: [f64; STAGES] = std::array::from_fn(|k| self.b[k][c]);
            for k in 0..STAGES {
                let mut sum = 0.0;
                for j in (k..STAGES).rev() {
                    sum += CHOOSE[j + 1][k + 1] * old[j];
                }
                guess[k][c] = power[k] * sum;
                let missed = predicted.as_ref().map_or(0.0, |p| power[k] * (old[k] - p[k][c]));
                self.b[k][c] = guess[k][c] + missed;
            }
        }
        predicted.replace(guess);
        self.predicted = predicted;
        self.differences_from_powers();
    }

    /// Drops a polynomial that is worth nothing as a guess.
    pub fn forget(&mut self) {
        self.b.iter_mut().for_each(|b| b.fill(0.0));
        self.g.iter_mut().for_each(|g| g.fill(0.0));
        self.predicted = None;
    }

    fn differences_from_powers(&mut self) {
        for c in 0..self.force.len() {
            let b: [f64; STAGES] = std::array::from_fn(|k| self.b[k][c]);
            for k in 0..STAGES {
                self.g[k][c] = (k..STAGES).rev().map(|j| b[j] * TABLE.newton[j][k]).sum();
            }
        }
    }

    /// Sweeps over the nodes until the forces no longer change.
    pub fn solve(&mut self, physics: &Physics, start: &Phase) -> Settling {
        let (mut before, mut best) = (f64::INFINITY, 1.0f64);
        for sweeps in 1..=MOST_SWEEPS {
            let change = self.sweep(physics, start);
            let rate = change / before;
            let end = |settled| Settling { settled, sweeps, change };
            if !change.is_finite() || (sweeps > 2 && rate > 4.0 && change > ROUNDING) {
                return end(false);
            }
            // The rate at which the sweeps close in, before rounding hides it.
            if sweeps > 1 {
                best = best.min(rate);
            }
            if sweeps > 1 && (change * best <= SETTLED || (rate >= 0.5 && change < ROUNDING)) {
                return end(true);
            }
            before = change;
        }
        Settling { settled: false, sweeps: MOST_SWEEPS, change: before }
    }

    /// One pass over the nodes; returns the largest change of a force, relative to that body's force (for tangent
    /// vectors: to the largest in the vector).
    fn sweep(&mut self, physics: &Physics, start: &Phase) -> f64 {
        let mut largest: f64 = 0.0;
        for (i, weights) in AT_NODE.iter().enumerate().skip(1) {
            self.place(weights, start, physics.forces.needs_velocity());
            self.evaluations += 1;
            let node = &self.node;
            self.pairs += physics.forces.evaluate(
                &physics.cast,
                &node.at,
                &node.at_low,
                &node.vel,
                &mut self.node_force[i - 1],
            );
            self.take(i);
            let change = self.relative_change(i, physics.cast.bodies());
            largest = largest.max(change * TABLE.product[i]);
        }
        largest
    }

    /// Positions, and velocities where asked, at s of the step.
    fn place(&mut self, weights: &Weights, start: &Phase, velocities: bool) {
        let len = self.force.len();
        let (length, square) = (self.length, self.length * self.length);
        let drift = weights.s * length;
        let b: [&[f64]; STAGES] = self.b.each_ref().map(|b| &b[..len]);
        let force = &self.force[..len];
        let (at, at_low) = (&start.at[..len], &start.at_low[..len]);
        let (vel, vel_low) = (&start.vel[..len], &start.vel_low[..len]);
        let (to, to_low) = (&mut self.node.at[..len], &mut self.node.at_low[..len]);
        for c in 0..len {
            let bent = square * weights.at.sum(force, &b, c);
            let moved = drift * vel[c] + (drift * vel_low[c] + bent);
            (to[c], to_low[c]) = two_sum(at[c], moved + at_low[c]);
        }
        if velocities {
            let to = &mut self.node.vel[..len];
            for c in 0..len {
                to[c] = vel[c] + (length * weights.vel.sum(force, &b, c) + vel_low[c]);
            }
        }
    }

    /// Takes the force at node `i` into the polynomial.
    fn take(&mut self, i: usize) {
        let len = self.force.len();
        let gaps = &TABLE.inverse_gap[i];
        let force = &self.force[..len];
        let now = &self.node_force[i - 1][..len];
        let change = &mut self.change[..len];
        for c in 0..len {
            change[c] = (now[c] - force[c]) * gaps[0];
        }
        for (g, gap) in self.g.iter().zip(&gaps[1..i]) {
            let g = &g[..len];
            for c in 0..len {
                change[c] = (change[c] - g[c]) * gap;
            }
        }
        let g = &mut self.g[i - 1][..len];
        for c in 0..len {
            let new = change[c];
            change[c] = new - g[c];
            g[c] = new;
        }
        for (b, power) in self.b.iter_mut().zip(TABLE.power[i - 1]).take(i) {
            let b = &mut b[..len];
            for c in 0..len {
                b[c] += change[c] * power;
            }
        }
    }

    /// The last change of a divided difference relative to the force, the largest of all bodies and tangent vectors.
    fn relative_change(&self, i: usize, bodies: usize) -> f64 {
        // `poison` becomes NaN when any change is no number, which a maximum would lose.
        let (mut largest, mut poison) = (0.0f64, 0.0);
        let now = &self.node_force[i - 1];
        let mut see = |from: usize, to: usize| {
            let (mut moved, mut size) = (0.0f64, 0.0f64);
            for ((change, now), first) in
                self.change[from..to].iter().zip(&now[from..to]).zip(&self.force[from..to])
            {
                moved = moved.max(change.abs());
                size = size.max(now.abs()).max(first.abs());
                poison += change * 0.0;
            }
            if moved > 0.0 {
                largest = largest.max(moved / size);
            }
        };
        let block = 3 * bodies;
        (0..block).step_by(3).for_each(|c| see(c, c + 3));
        (block..self.force.len()).step_by(block).for_each(|c| see(c, c + block));
        if poison.is_nan() { f64::INFINITY } else { largest }
    }

    /// The state at the end of the step.
    pub fn finish(&self, start: &Phase, end: &mut Phase) {
        let (length, square) = (self.length, self.length * self.length);
        let b: [&[f64]; STAGES] = self.b.each_ref().map(|b| b.as_slice());
        for c in 0..self.force.len() {
            let bent = square * END.at.sum(&self.force, &b, c);
            let moved = length * start.vel[c] + (length * start.vel_low[c] + bent);
            (end.at[c], end.at_low[c]) = two_sum(start.at[c], moved + start.at_low[c]);
            let change = length * END.vel.sum(&self.force, &b, c);
            (end.vel[c], end.vel_low[c]) = two_sum(start.vel[c], change + start.vel_low[c]);
        }
    }

    /// Puts the middle of the step, by the polynomial, where [`Step::node`] shows it.
    pub fn place_middle(&mut self, start: &Phase) {
        const MIDDLE: Weights = Weights::plain(0.5);
        self.place(&MIDDLE, start, true);
    }

    /// Where the bodies were put last.
    pub fn node(&self) -> &Phase {
        &self.node
    }

    /// Separation and relative velocity of two bodies at s of the step, by the polynomial.
    pub fn apart(&self, start: &Phase, i: usize, j: usize, s: f64) -> ([f64; 3], [f64; 3]) {
        let weights = Weights::plain(s);
        let b: [&[f64]; STAGES] = self.b.each_ref().map(|b| b.as_slice());
        let (d, v) = start.apart(i, j);
        let between =
            |w: &Series, k: usize| w.sum(&self.force, &b, 3 * j + k) - w.sum(&self.force, &b, 3 * i + k);
        let (length, square) = (self.length, self.length * self.length);
        (
            [0, 1, 2].map(|k| d[k] + (s * length * v[k] + square * between(&weights.at, k))),
            [0, 1, 2].map(|k| v[k] + length * between(&weights.vel, k)),
        )
    }

    /// Acceleration of body `j` minus that of body `i` at the end of the step, by the polynomial.
    pub fn end_pull(&self, i: usize, j: usize) -> [f64; 3] {
        let at = |c: usize| self.force[c] + self.b.iter().map(|b| b[c]).sum::<f64>();
        [0, 1, 2].map(|k| at(3 * j + k) - at(3 * i + k))
    }

    /// What the terms beside Newton's did to the energy over the step, by quadrature at the nodes.
    pub fn work_done(&mut self, physics: &Physics, start: &Phase) -> f64 {
        if physics.forces.star.is_empty() {
            return 0.0;
        }
        let mut total = 0.0;
        for i in 0..=STAGES {
            self.place(&AT_NODE[i], start, true);
            total += WEIGHTS[i] * physics.forces.power(&physics.cast, &self.node.at, &self.node.vel);
        }
        self.length * total
    }

    /// Per body: sizes of the highest two coefficients relative to the force; the largest of each.
    pub fn tail(&self, bodies: usize) -> (f64, f64) {
        let mut tail = (0.0f64, 0.0f64);
        for body in 0..bodies {
            let size = |x: &[f64]| (0..3).fold(0.0f64, |most, k| most.max(x[3 * body + k].abs()));
            let force = size(&self.force).max(size(&self.node_force[STAGES - 1]));
            if force > 0.0 {
                tail.0 = tail.0.max(size(&self.g[STAGES - 2]) / force);
                tail.1 = tail.1.max(size(&self.g[STAGES - 1]) / force);
            }
        }
        tail
    }
}

/// Binomial coefficients.
const CHOOSE: [[f64; STAGES + 1]; STAGES + 1] = {
    let mut all = [[0.0; STAGES + 1]; STAGES + 1];
    let mut n = 0;
    while n <= STAGES {
        all[n][0] = 1.0;
        let mut k = 1;
        while k <= n {
            all[n][k] = all[n - 1][k - 1] + if k < n { all[n - 1][k] } else { 0.0 };
            k += 1;
        }
        n += 1;
    }
    all
};
