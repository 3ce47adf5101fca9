//! One cell on its way: starts, is looked at after every block of steps, ends with an assessment.

use super::assessment::{Approach, Assessment, Loss};
use super::plan::{Plan, auto_step_day, innermost_period_day, outermost_period_day};
use crate::coords::{Configuration, Elements};
use crate::criteria::mutual_hill_radius_au;
use crate::integrate::{Advance, Block, State, Tangent, advance, to_map};
use crate::observe::{ConservedWatch, ExtentWatch, GrowthRecord, Moment};
use crate::system::Frame;
use crate::verdict::{CHAOTIC_FROM, Evidence, LostHow, Verdict, judge};

/// How often a cell that misses the energy target is done again with a smaller step.
const MOST_REDONE: u32 = 2;

/// Distances at which a configuration ends.
#[derive(Clone, Debug)]
struct Limits {
    star_radius_au: f64,
    escape_au: f64,
    /// Per pair (i < j, in order): where it ends, where it is a collision, and its mutual Hill radius, au.
    pairs: Vec<Pair>,
}

#[derive(Clone, Copy, Debug)]
struct Pair {
    i: usize,
    j: usize,
    end_au: f64,
    contact_au: f64,
    hill_au: f64,
}

/// A cell between two blocks.
#[derive(Debug)]
pub(super) struct Cell {
    start: State,
    limits: Limits,
    outer_period_day: f64,
    metric_day: f64,
    step_day: f64,
    blocks: u64,
    blocks_done: u64,
    redone: u32,
    conserved: ConservedWatch,
    extent: ExtentWatch,
    growth: GrowthRecord,
    mean_megno: Option<f64>,
    approach: Option<Approach>,
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
        let start = barycentric(configuration);
        let limits = Limits::new(configuration, plan);
        let step_most = plan.step_day.unwrap_or_else(|| auto_step_day(configuration));
        let mut cell = Cell {
            conserved: ConservedWatch::new(&start),
            extent: ExtentWatch::new(configuration.planets.len()),
            growth: GrowthRecord::new(0.0),
            outer_period_day: outermost_period_day(configuration),
            metric_day: innermost_period_day(configuration) / std::f64::consts::TAU,
            start,
            limits,
            step_day: step_most,
            blocks: 0,
            blocks_done: 0,
            redone: 0,
            mean_megno: None,
            approach: None,
        };
        if let Some(loss) = cell.lost_at_start() {
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
        self.conserved = ConservedWatch::new(&self.start);
        self.extent = ExtentWatch::new(self.start.gm.len());
        self.growth = GrowthRecord::new(self.step_day * per_block);
        self.mean_megno = None;
        self.approach = None;
    }

    /// Puts the cell into a lane of `block`, in the map's variables.
    pub fn enter(&self, block: &mut Block, lane: usize, plan: &Plan) {
        let mut alone = Block::in_coordinates(plan.coordinates, 1, self.start.gm.len());
        alone.start(0, &self.start, &generic_tangent(&self.start), self.step_day, self.metric_day);
        to_map(&mut alone, plan.splitting());
        alone.copy_lane(0, block, lane);
    }

    pub fn time_day(&self, plan: &Plan) -> f64 {
        plan.span_day * (self.blocks_done as f64 / self.blocks as f64)
    }

    pub fn share_done(&self) -> f64 {
        self.blocks_done as f64 / self.blocks as f64
    }

    pub fn last_energy_error(&self) -> f64 {
        self.conserved.last_energy
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
        if self.has_ended(after, lane) {
            let loss = self.find_loss(plan, before, lane);
            let error = self.conserved.worst_energy;
            if error > plan.energy_error && self.redone < MOST_REDONE {
                return self.again(error, plan);
            }
            return Next::End(Box::new(self.assessment(plan, Some(loss))));
        }
        self.blocks_done += 1;
        let state = corrected.state(lane);
        let moment = Moment { time_day: self.time_day(plan), state: &state };
        self.conserved.see(&moment);
        let error = self.conserved.worst_energy;
        if error > plan.energy_error {
            if self.redone < MOST_REDONE {
                return self.again(error, plan);
            }
            return Next::End(Box::new(self.assessment(plan, None)));
        }
        let orbits = moment.astrocentric();
        if plan.extent {
            self.extent.see(&orbits);
        }
        self.note_approach(after, lane);
        if let Some(planet) = self.falls_into_star(&orbits) {
            let loss = Loss { time_day: moment.time_day, planet, other: None, how: LostHow::Star };
            return Next::End(Box::new(self.assessment(plan, Some(loss))));
        }
        if plan.megno {
            let growth = after.growth(lane);
            self.growth.see(growth.log);
            self.mean_megno = (growth.samples > 1).then_some(growth.mean_y);
            after.rescale(lane);
        }
        if self.blocks_done == self.blocks {
            return Next::End(Box::new(self.assessment(plan, None)));
        }
        Next::GoOn
    }

    /// The error of a corrected leapfrog falls with the square of the step; aim at a quarter of the target.
    fn again(&mut self, error: f64, plan: &Plan) -> Next {
        let factor = (0.25 * plan.energy_error / error).sqrt().clamp(0.125, 0.5);
        self.redone += 1;
        self.set_step(self.step_day * factor, plan);
        Next::Again
    }

    fn lost_at_start(&self) -> Option<Loss> {
        let at = |planet, other, how| Some(Loss { time_day: 0.0, planet, other, how });
        let moment = Moment { time_day: 0.0, state: &self.start };
        for (planet, pos) in self.start.pos.iter().enumerate() {
            let distance = length(pos);
            if distance > self.limits.escape_au {
                return at(planet, None, LostHow::Escape);
            }
            if distance < self.limits.star_radius_au {
                return at(planet, None, LostHow::Star);
            }
        }
        if let Some(planet) = self.falls_into_star(&moment.astrocentric()) {
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
    fn falls_into_star(&self, orbits: &[Elements]) -> Option<usize> {
        let inside = |o: &Elements| o.pericentre_au() < self.limits.star_radius_au;
        orbits.iter().position(inside)
    }

    fn has_ended(&self, block: &Block, lane: usize) -> bool {
        let stars = (0..self.start.gm.len()).any(|k| {
            let (near, far) = block.star_distances_au(k, lane);
            // Asked this way round, so that what is not a number has ended too.
            !(near >= self.limits.star_radius_au && far <= self.limits.escape_au)
        });
        let met = |pair: &Pair| {
            block.nearest_pair_au(pair.i, pair.j, lane).is_nan()
                || block.nearest_pair_au(pair.i, pair.j, lane) < pair.end_au
        };
        stars || self.limits.pairs.iter().any(met)
    }

    /// Repeats the block from `before`, alone, to find the first step after which the cell has ended.
    ///
    /// A shorter run of the same steps has the same bits, so the end is found by halving.
    fn find_loss(&mut self, plan: &Plan, before: &Block, lane: usize) -> Loss {
        let run = |steps: usize| {
            let mut alone = Block::in_coordinates(plan.coordinates, 1, self.start.gm.len());
            before.copy_lane(lane, &mut alone, 0);
            advance(Advance { block: &mut alone, scheme: plan.splitting(), steps, tangent: false });
            alone
        };
        let (mut alive, mut ended) = (0, plan.block_steps);
        while ended - alive > 1 {
            let middle = (alive + ended) / 2;
            if self.has_ended(&run(middle), 0) { ended = middle } else { alive = middle }
        }
        let at_end = run(ended);
        let time_day = self.time_day(plan) + ended as f64 * self.step_day;
        self.note_approach(&at_end, 0);
        for pair in &self.limits.pairs {
            let nearest = at_end.nearest_pair_au(pair.i, pair.j, 0);
            if nearest < pair.end_au {
                let (planet, other) = self.lighter_first(pair);
                return Loss { time_day, planet, other: Some(other), how: pair.how(nearest) };
            }
        }
        for planet in 0..self.start.gm.len() {
            let (near, far) = at_end.star_distances_au(planet, 0);
            if near < self.limits.star_radius_au {
                return Loss { time_day, planet, other: None, how: LostHow::Star };
            }
            if far > self.limits.escape_au {
                return Loss { time_day, planet, other: None, how: LostHow::Escape };
            }
        }
        // Only what is not a number is left, and that comes from a passage through the star's centre.
        self.conserved.worst_energy = f64::INFINITY;
        Loss { time_day, planet: 0, other: None, how: LostHow::Star }
    }

    fn note_approach(&mut self, block: &Block, lane: usize) {
        let nearest = |pair: &Pair| {
            let au = block.nearest_pair_au(pair.i, pair.j, lane);
            Approach { au, hill: au / pair.hill_au, pair: (pair.i, pair.j) }
        };
        self.approach = self.limits.pairs.iter().map(nearest).min_by(|a, b| a.hill.total_cmp(&b.hill));
    }

    fn assessment(&self, plan: &Plan, loss: Option<Loss>) -> Assessment {
        let end_time_day = loss.map_or(self.time_day_or_zero(plan), |l| l.time_day);
        let seen = self.blocks_done > 0;
        let energy_error = (seen || self.conserved.worst_energy > 0.0).then_some(self.conserved.worst_energy);
        let evidence = Evidence {
            lost: loss.is_some(),
            energy_error,
            energy_error_asked: plan.energy_error,
            mean_megno: self.mean_megno,
            outer_orbits: end_time_day / self.outer_period_day,
        };
        let verdict = judge(&evidence);
        let chaos = self.mean_megno.is_some_and(|y| y >= CHAOTIC_FROM);
        let ended_early = verdict == Verdict::Untrusted;
        Assessment {
            verdict,
            end_time_day,
            loss: loss.filter(|_| !ended_early),
            megno: self.mean_megno,
            lyapunov: if chaos { self.growth.lyapunov() } else { None },
            extent: if plan.extent { self.extent.finish() } else { Vec::new() },
            smallest_approach: self.approach,
            energy_error,
            angular_momentum_error: energy_error.map(|_| self.conserved.worst_momentum),
            scheme: plan.scheme,
            step_day: self.step_day,
            steps: self.blocks_done * plan.block_steps as u64,
            redone: self.redone,
        }
    }

    fn time_day_or_zero(&self, plan: &Plan) -> f64 {
        if self.blocks == 0 { 0.0 } else { self.time_day(plan) }
    }

    pub fn blocks(&self) -> u64 {
        self.blocks
    }

    pub fn blocks_done(&self) -> u64 {
        self.blocks_done
    }
}

impl Pair {
    fn how(&self, distance_au: f64) -> LostHow {
        if distance_au < self.contact_au { LostHow::Collision } else { LostHow::Encounter }
    }
}

impl Limits {
    fn new(configuration: &Configuration, plan: &Plan) -> Limits {
        let planets = &configuration.planets;
        let orbits = configuration.elements_in(Frame::Astrocentric);
        let mut pairs = Vec::new();
        for i in 0..planets.len() {
            for j in i + 1..planets.len() {
                let axes = [orbits[i].semi_major_axis_au, orbits[j].semi_major_axis_au];
                let hill_au =
                    mutual_hill_radius_au(configuration.star_gm, [planets[i].gm, planets[j].gm], axes);
                let contact_au = planets[i].radius_au + planets[j].radius_au;
                let end_au = plan.encounter_hill.map_or(contact_au, |hill| contact_au.max(hill * hill_au));
                pairs.push(Pair { i, j, end_au, contact_au, hill_au });
            }
        }
        Limits {
            star_radius_au: configuration.star_radius_au,
            escape_au: plan.escape_limit_au(configuration),
            pairs,
        }
    }
}

/// Heliocentric positions with barycentric velocities.
pub(super) fn barycentric(configuration: &Configuration) -> State {
    let total = configuration.star_gm + configuration.planets.iter().map(|p| p.gm).sum::<f64>();
    let mut star = [0.0; 3];
    for planet in &configuration.planets {
        for k in 0..3 {
            star[k] -= planet.gm * planet.velocity_au_day[k] / total;
        }
    }
    State {
        star_gm: configuration.star_gm,
        gm: configuration.planets.iter().map(|p| p.gm).collect(),
        pos: configuration.planets.iter().map(|p| p.position_au).collect(),
        vel: configuration
            .planets
            .iter()
            .map(|p| [0, 1, 2].map(|k| p.velocity_au_day[k] + star[k]))
            .collect(),
    }
}

/// A displacement in no special direction: MEGNO of a regular orbit tends to 2 from it (along constant energy it
/// would tend to 0). The same fixed numbers for every cell, in units of each planet's distance and speed.
fn generic_tangent(state: &State) -> Tangent {
    // Fractional parts of multiples of the golden section: evenly spread, in no simple ratio.
    const GOLDEN: f64 = 0.618_033_988_749_894_9;
    let number = |index: usize| 2.0 * ((index as f64 + 1.0) * GOLDEN).fract() - 1.0;
    let scaled = |vectors: &[[f64; 3]], offset: usize| -> Vec<[f64; 3]> {
        let each = vectors.iter().enumerate();
        each.map(|(p, v)| [0, 1, 2].map(|k| length(v) * number(6 * p + offset + k))).collect()
    };
    Tangent { pos: scaled(&state.pos, 0), vel: scaled(&state.vel, 3) }
}

fn length(v: &[f64; 3]) -> f64 {
    v.iter().map(|x| x * x).sum::<f64>().sqrt()
}
