//! One cell on its way: starts, is looked at after every block of steps, ends with an assessment.

mod adaptive;
mod displacement;
mod early;
mod keep;
mod limits;
mod long_watch;
mod loss;

use super::assessment::{Approach, Assessment, Loss};
use super::physics::{barycentric, forces, potential_forces, star_terms, symplectic_start};
use super::plan::{Plan, innermost_period_day, outermost_period_day};
use crate::coords::{Configuration, Shape};
use crate::integrate::forces::Forces;
use crate::integrate::{Block, StarTerms, State, to_map};
use crate::observe::{ConservedWatch, ExtentWatch, GrowthRecord, Moment};
use crate::verdict::{CHAOTIC_FROM, Evidence, LostHow, Verdict, judge};
use displacement::generic_tangent;
pub(super) use limits::RESOLVE_HILL;
use limits::{Limits, Pair};
use long_watch::LongWatch;

/// The name of the adaptive engine where a scheme is named.
pub const ADAPTIVE: &str = "adaptive";

/// A cell between two blocks.
#[derive(Clone, Debug)]
pub(super) struct Cell {
    /// As the symplectic scheme starts it.
    start: State,
    /// As stated, for the adaptive engine.
    stated: State,
    terms: StarTerms,
    /// For the adaptive engine: all of a cell from its stated state, and passages of the symplectic scheme's state.
    forces: Forces,
    passage_forces: Forces,
    limits: Limits,
    outer_period_day: f64,
    metric_day: f64,
    step_day: f64,
    blocks: u64,
    blocks_done: u64,
    /// Steps of the block in which the cell ended.
    part_steps: u64,
    redone: u32,
    conserved: ConservedWatch,
    extent: ExtentWatch,
    growth: GrowthRecord,
    long: LongWatch,
    mean_megno: Option<f64>,
    approach: Option<Approach>,
    /// The adaptive engine does everything.
    adaptive: bool,
    /// Blocks that the adaptive engine did, and its largest relative energy error over one of them.
    passages: u64,
    passage_error: f64,
    /// The cell was lost before its energy could be measured.
    unmeasured: bool,
}

/// What a look at a cell says.
#[derive(Debug)]
pub(super) enum Next {
    GoOn,
    /// Start again in the same lane with the smaller step now set.
    Again,
    End(Box<Assessment>),
}

impl Cell {
    /// Prepares a configuration; or its assessment at once when it cannot even start.
    pub fn new(configuration: &Configuration, plan: &Plan) -> Result<Cell, Box<Assessment>> {
        let start = symplectic_start(configuration);
        let terms = star_terms(configuration);
        let limits = Limits::new(configuration, plan);
        let step_most = plan.step_for(configuration);
        let mut cell = Cell {
            conserved: ConservedWatch::new(&start, &terms),
            extent: ExtentWatch::new(configuration.planets.len()),
            growth: GrowthRecord::new(0.0),
            long: LongWatch::new(configuration),
            outer_period_day: outermost_period_day(configuration),
            metric_day: innermost_period_day(configuration) / std::f64::consts::TAU,
            start,
            stated: barycentric(configuration),
            terms,
            forces: forces(configuration),
            passage_forces: potential_forces(configuration),
            limits,
            step_day: step_most,
            blocks: 0,
            blocks_done: 0,
            part_steps: 0,
            redone: 0,
            mean_megno: None,
            approach: None,
            adaptive: plan.adaptive,
            passages: 0,
            passage_error: 0.0,
            unmeasured: false,
        };
        if let Some(loss) = cell.lost_at_start(plan) {
            return Err(Box::new(cell.assessment(plan, Some(loss))));
        }
        cell.set_step(step_most, plan);
        Ok(cell)
    }

    /// Largest step not above `most` that divides the span into whole blocks.
    fn set_step(&mut self, most: f64, plan: &Plan) {
        let per_block = plan.block_steps as f64;
        let blocks = (plan.span_day / (most * per_block)).ceil().max(1.0);
        self.blocks = blocks as u64;
        self.step_day = plan.span_day / (blocks * per_block);
        self.blocks_done = 0;
        self.part_steps = 0;
        let start = if self.adaptive { &self.stated } else { &self.start };
        self.conserved = ConservedWatch::new(start, &self.terms);
        self.passages = 0;
        self.passage_error = 0.0;
        self.unmeasured = false;
        self.extent = ExtentWatch::new(self.start.gm.len());
        self.growth = GrowthRecord::new(self.step_day * per_block);
        self.long.begin(plan, self.step_day * per_block);
        self.mean_megno = None;
        self.approach = None;
    }

    /// Puts the cell into a lane of `block`, in the map's variables.
    pub fn enter(&self, block: &mut Block, lane: usize, plan: &Plan) {
        let mut alone = self.alone(plan);
        let start = if self.adaptive { &self.stated } else { &self.start };
        alone.start(0, start, &generic_tangent(start), self.step_day, self.metric_day);
        alone.set_star_terms(0, &self.terms);
        to_map(&mut alone, plan.splitting());
        alone.copy_lane(0, block, lane);
    }

    /// A block of one lane of the plan's kind.
    fn alone(&self, plan: &Plan) -> Block {
        plan.block(1, self.start.gm.len())
    }

    pub fn time_day(&self, plan: &Plan) -> f64 {
        plan.span_day * (self.blocks_done as f64 / self.blocks as f64)
    }

    /// Looks at the cell after one more block. `before` and `after` are the block in the map's variables, `corrected`
    /// is `after` as true states.
    pub fn look(
        &mut self,
        plan: &Plan,
        before: &Block,
        after: &mut Block,
        corrected: &Block,
        lane: usize,
    ) -> Next {
        if self.adaptive {
            return self.pass(plan, before, after, lane);
        }
        if self.must_leave(after, lane) {
            if plan.resolve {
                return self.pass(plan, before, after, lane);
            }
            let loss = self.find_loss(plan, before, lane);
            // What tells nothing of its error may be anything: smaller steps will tell.
            let error = if self.unmeasured { f64::INFINITY } else { self.conserved.worst_energy };
            if error > plan.energy_error {
                return self.again(error, plan);
            }
            return Next::End(Box::new(self.assessment(plan, Some(loss))));
        }
        self.note_approach(after, lane);
        self.note_block(plan, after, corrected, lane, lane)
    }

    /// Takes down what a block that was not cut short has shown; `corrected` holds the true state in lane `from`.
    fn note_block(
        &mut self,
        plan: &Plan,
        after: &mut Block,
        corrected: &Block,
        from: usize,
        lane: usize,
    ) -> Next {
        self.blocks_done += 1;
        let (state, time_day) = (corrected.state(from), self.time_day(plan));
        self.conserved.see(&Moment { time_day, state: &state }, &self.terms);
        let error = self.energy_error_seen();
        if error > plan.energy_error {
            return self.again(error, plan);
        }
        let state = self.shown(state);
        let moment = Moment { time_day, state: &state };
        if self.long.is_on() {
            self.long.see(&moment.elements(plan.frame));
        }
        let orbits = moment.shapes(plan.frame);
        if plan.extent {
            self.extent.see(&orbits);
        }
        if let Some(planet) = self.falls_into_star(&orbits) {
            let loss = Loss { time_day: moment.time_day, planet, other: None, how: LostHow::Star };
            return Next::End(Box::new(self.assessment(plan, Some(loss))));
        }
        if plan.megno {
            let growth = after.growth(lane);
            self.growth.see(growth.log);
            self.mean_megno = (growth.samples > 1).then_some(growth.mean_y);
            after.rescale(lane);
            if self.ends_for_chaos(plan, &growth) {
                return Next::End(Box::new(self.assessment(plan, None)));
            }
        }
        if self.blocks_done == self.blocks {
            return Next::End(Box::new(self.assessment(plan, None)));
        }
        Next::GoOn
    }

    /// Largest relative energy error. The adaptive engine's own account is taken where the potentials do not say all.
    fn energy_error_seen(&self) -> f64 {
        if self.adaptive && self.terms.relativity != 0.0 {
            return self.passage_error;
        }
        self.conserved.worst_energy.max(self.passage_error)
    }

    fn lost_at_start(&self, plan: &Plan) -> Option<Loss> {
        let at = |planet, other, how| Some(Loss { time_day: 0.0, planet, other, how });
        let moment = Moment { time_day: 0.0, state: &self.stated };
        for (planet, pos) in self.start.pos.iter().enumerate() {
            let distance = length(pos);
            if distance > self.limits.escape_au {
                return at(planet, None, LostHow::Escape);
            }
            if distance < self.limits.star_radius_au {
                return at(planet, None, LostHow::Star);
            }
        }
        if let Some(planet) = self.falls_into_star(&moment.shapes(plan.frame)) {
            return at(planet, None, LostHow::Star);
        }
        self.limits.pairs.iter().find_map(|pair| {
            let (a, b) = (&self.start.pos[pair.i], &self.start.pos[pair.j]);
            let distance = length(&[a[0] - b[0], a[1] - b[1], a[2] - b[2]]);
            let (planet, other) = self.lighter_first(pair);
            (distance < pair.end_au).then(|| Loss {
                time_day: 0.0,
                planet,
                other: Some(other),
                how: pair.how(distance),
            })
        })
    }

    fn lighter_first(&self, pair: &Pair) -> (usize, usize) {
        if self.start.gm[pair.i] < self.start.gm[pair.j] { (pair.i, pair.j) } else { (pair.j, pair.i) }
    }

    /// A bound planet whose pericentre lies inside the star will reach it within one orbit.
    fn falls_into_star(&self, orbits: &[Shape]) -> Option<usize> {
        if !self.limits.orbits_tell {
            return None;
        }
        let inside = |o: &Shape| o.pericentre_au() < self.limits.star_radius_au;
        orbits.iter().position(inside)
    }

    /// Whether the symplectic scheme has gone where it must not, or where the configuration ends.
    fn must_leave(&self, block: &Block, lane: usize) -> bool {
        let stars = (0..self.start.gm.len()).any(|k| {
            let (near, far) = block.star_distances_au(k, lane);
            // Asked this way round, so that what is not a number has ended too.
            !(near >= self.limits.star_radius_au && far <= self.limits.escape_au)
        });
        let met = |pair: &Pair| {
            block.nearest_pair_au(pair.i, pair.j, lane).is_nan()
                || block.nearest_pair_au(pair.i, pair.j, lane) < pair.leave_au
        };
        stars || self.limits.pairs.iter().any(met)
    }

    fn note_approach(&mut self, block: &Block, lane: usize) {
        self.note_distances(|pair| block.nearest_pair_au(pair.i, pair.j, lane));
    }

    /// Keeps the smallest approach, with the distance of each pair at one time or over some.
    fn note_distances(&mut self, distance_au: impl Fn(&Pair) -> f64) {
        let nearest = |pair: &Pair| {
            let au = distance_au(pair);
            Approach { au, hill: au / pair.hill_au, pair: (pair.i, pair.j) }
        };
        let now = self.limits.pairs.iter().map(nearest).min_by(|a, b| a.hill.total_cmp(&b.hill));
        self.approach = match (self.approach, now) {
            (Some(old), Some(new)) if old.hill <= new.hill => Some(old),
            (old, new) => new.or(old),
        };
    }

    fn assessment(&self, plan: &Plan, loss: Option<Loss>) -> Assessment {
        let end_time_day = loss.map_or(self.time_day_or_zero(plan), |l| l.time_day);
        let seen = self.blocks_done + self.part_steps > 0 && !self.unmeasured;
        let passages = (plan.resolve && !self.adaptive).then_some(self.passages);
        let energy_error = seen.then_some(self.energy_error_seen());
        let evidence = Evidence {
            lost: loss.is_some(),
            energy_error,
            energy_error_asked: plan.energy_error,
            mean_megno: self.mean_megno,
            outer_orbits: end_time_day / self.outer_period_day,
        };
        let verdict = judge(&evidence);
        let chaos = self.mean_megno.is_some_and(|y| y >= CHAOTIC_FROM);
        let untrusted = verdict == Verdict::Untrusted;
        let whole = loss.is_none() && !untrusted && self.blocks > 0 && self.blocks_done == self.blocks;
        Assessment {
            verdict,
            end_time_day,
            loss: loss.filter(|_| !untrusted),
            megno: self.mean_megno,
            lyapunov: if chaos { self.growth.lyapunov() } else { None },
            extent: if plan.extent { self.extent.finish() } else { Vec::new() },
            frequency_drift: if whole { self.long.drift() } else { Vec::new() },
            angle: if whole { self.long.angle() } else { None },
            smallest_approach: self.approach,
            energy_error,
            // The adaptive engine's own account of a block in which a cell ends has the energy only.
            angular_momentum_error: energy_error
                .filter(|_| self.blocks_done > 0 || !(self.adaptive || plan.resolve))
                .map(|_| self.conserved.worst_momentum),
            passages,
            passage_energy_error: passages.filter(|blocks| *blocks > 0).map(|_| self.passage_error),
            scheme: if self.adaptive { ADAPTIVE } else { plan.scheme },
            step_day: self.step_day,
            steps: self.blocks_done * plan.block_steps as u64 + self.part_steps,
            redone: self.redone,
        }
    }

    fn time_day_or_zero(&self, plan: &Plan) -> f64 {
        if self.blocks == 0 { 0.0 } else { self.time_day(plan) }
    }
}

fn length(v: &[f64; 3]) -> f64 {
    v.iter().map(|x| x * x).sum::<f64>().sqrt()
}
