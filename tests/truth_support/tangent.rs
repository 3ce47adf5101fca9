//! Orbits with tangent vectors followed step by step, in the inertial coordinates of variational-orbits.csv.

use abide::integrate::{Advance, Block, Scheme, State, Tangent, advance};

use super::{Entry, table};

/// One problem of variational-orbits.csv. Units au and yr.
#[derive(Clone)]
pub struct Problem {
    pub name: String,
    pub start: State,
    pub tangent: Tangent,
    /// The norm takes the last body only (a massless particle), or every body with the star.
    pub last_only: bool,
    /// Rows of kind `state` and `megno`.
    pub rows: Vec<Entry>,
}

/// Position, velocity and their displacements of one body: inertial, barycentric.
pub type Inertial = [[f64; 3]; 4];

/// ln(|δ|/|δ₀|), Y and ⟨Y⟩ at a time.
#[derive(Clone, Copy, Debug)]
pub struct Mark {
    pub time: f64,
    pub log: f64,
    pub y: f64,
    pub mean_y: f64,
}

impl Problem {
    pub fn read(name: &str) -> Problem {
        let rows: Vec<Entry> =
            table("variational-orbits.csv").into_iter().filter(|e| e.text("problem") == name).collect();
        let (init, rows): (Vec<Entry>, Vec<Entry>) = rows.into_iter().partition(|e| e.text("part") == "init");
        let star = inertial(&init[0]);
        let minus_star = |e: &Entry, which: usize| [0, 1, 2].map(|k| inertial(e)[which][k] - star[which][k]);
        let planets = &init[1..];
        Problem {
            name: name.to_string(),
            start: State {
                star_gm: init[0].number("gm").unwrap(),
                gm: planets.iter().map(|e| e.number("gm").unwrap()).collect(),
                pos: planets.iter().map(|e| minus_star(e, 0)).collect(),
                vel: planets.iter().map(|e| inertial(e)[1]).collect(),
            },
            tangent: Tangent {
                pos: planets.iter().map(|e| minus_star(e, 2)).collect(),
                vel: planets.iter().map(|e| inertial(e)[3]).collect(),
            },
            last_only: init[0].text("note").contains("of the particle only"),
            rows,
        }
    }

    /// What the table says of a body at a time.
    pub fn stated(&self, time: f64, body: usize) -> Option<Inertial> {
        let mut at = self.rows.iter().filter(|e| e.text("part") == "state" && e.number("t_yr") == Some(time));
        at.nth(body).map(inertial)
    }

    /// The table's growth rows.
    pub fn marks(&self) -> Vec<Mark> {
        let rows = self.rows.iter().filter(|e| e.text("part") == "megno");
        let number = |e: &Entry, column| e.number(column).unwrap();
        rows.map(|e| Mark {
            time: number(e, "t_yr"),
            log: number(e, "ln_growth"),
            y: number(e, "Y"),
            mean_y: number(e, "mean_Y"),
        })
        .collect()
    }
}

fn inertial(entry: &Entry) -> Inertial {
    [["x", "y", "z"], ["vx", "vy", "vz"], ["dx", "dy", "dz"], ["dvx", "dvy", "dvz"]]
        .map(|columns| entry.triple(columns))
}

/// Star first. Heliocentric positions shift by the star's, −Σ mᵢqᵢ/(M + Σ mᵢ); velocities are barycentric already,
/// the star's is −Σ mᵢvᵢ/M. The same for displacements, whose barycentre rests at 0.
pub fn to_inertial(state: &State, tangent: &Tangent) -> Vec<Inertial> {
    let total = state.star_gm + state.gm.iter().sum::<f64>();
    let weighted = |vectors: &[[f64; 3]], over: f64| {
        [0, 1, 2].map(|k| -vectors.iter().zip(&state.gm).map(|(v, gm)| gm * v[k]).sum::<f64>() / over)
    };
    let star = [
        weighted(&state.pos, total),
        weighted(&state.vel, state.star_gm),
        weighted(&tangent.pos, total),
        weighted(&tangent.vel, state.star_gm),
    ];
    let planet = |p: usize| {
        let moved = |v: &[f64; 3], by: &[f64; 3]| [0, 1, 2].map(|k| v[k] + by[k]);
        [moved(&state.pos[p], &star[0]), state.vel[p], moved(&tangent.pos[p], &star[2]), tangent.vel[p]]
    };
    std::iter::once(star).chain((0..state.gm.len()).map(planet)).collect()
}

/// Follows a problem with (10,6,4) at so many steps per year and calls `see` at every whole step.
pub fn follow(problem: &Problem, per_year: u32, years: f64, mut see: impl FnMut(u64, &[Inertial])) {
    let scheme = Scheme::named("(10,6,4)").unwrap();
    let mut block = Block::new(1, problem.start.gm.len());
    block.start(0, &problem.start, &problem.tangent, 1.0 / f64::from(per_year), 1.0);
    see(0, &to_inertial(&block.state(0), &block.tangent(0)));
    for step in 1..=(years * f64::from(per_year)) as u64 {
        advance(Advance { block: &mut block, scheme, steps: 1, tangent: true });
        see(step, &to_inertial(&block.state(0), &block.tangent(0)));
    }
}

/// Y = 2 (L − ∫L/t) and ⟨Y⟩ from L = ln(|δ|/|δ₀|) at even steps, by Simpson's rule over pairs of steps.
pub struct Growth {
    step: f64,
    last_only: bool,
    first: f64,
    /// L and Y one step and two steps ago.
    before: [(f64, f64); 2],
    log_sum: f64,
    y_sum: f64,
}

impl Growth {
    pub fn new(step: f64, last_only: bool) -> Growth {
        Growth { step, last_only, first: 0.0, before: [(0.0, 0.0); 2], log_sum: 0.0, y_sum: 0.0 }
    }

    /// The mark at an even count; none at an odd one.
    pub fn see(&mut self, count: u64, bodies: &[Inertial]) -> Option<Mark> {
        let counted = if self.last_only { &bodies[bodies.len() - 1..] } else { bodies };
        let square: f64 = counted.iter().flat_map(|b| &b[2..]).flatten().map(|x| x * x).sum();
        let log = 0.5 * square.ln();
        if count == 0 {
            self.first = log;
            return None;
        }
        let log = log - self.first;
        let time = count as f64 * self.step;
        let [(l1, y1), (l0, y0)] = self.before;
        let third = self.step / 3.0;
        if count % 2 == 1 {
            // Midway: the integral to here from the parabola through this step's ends is not known yet, so Y here is
            // left for the next, even step, and L is kept.
            self.before = [(log, f64::NAN), (l1, y1)];
            return None;
        }
        // Integral to the middle of the pair, from the parabola through its three values.
        let middle = self.log_sum + self.step / 12.0 * (5.0 * l0 + 8.0 * l1 - log);
        self.log_sum += third * (l0 + 4.0 * l1 + log);
        let y_middle = 2.0 * (l1 - middle / (time - self.step));
        let y = 2.0 * (log - self.log_sum / time);
        self.y_sum += third * (y0 + 4.0 * y_middle + y);
        self.before = [(log, y), (0.0, 0.0)];
        Some(Mark { time, log, y, mean_y: self.y_sum / time })
    }
}

/// How one row of the table is met.
#[derive(Clone, Copy, Debug)]
pub struct Comparison {
    pub found: Mark,
    pub stated: Mark,
    /// Relative departures of all positions and of the whole tangent vector.
    pub position: f64,
    pub tangent: f64,
    /// What rounding must be allowed to do to the tangent vector, relative; see [`compare`].
    pub rounding: f64,
    /// Error of the integrals over time: how much they change when every second sample is left out.
    pub quadrature: (f64, f64),
}

/// Follows a problem and compares every row up to `years`.
///
/// Rounding: every substep of every body rounds its energy by about one unit ε, so that after n substeps the orbit has
/// the period of a neighbour √n ε away (Brouwer 1937). How far the tangent vector of such a neighbour is from the
/// true one is measured: a second orbit starts with velocities 1 + 1e-12 times as large. Rounding is allowed four
/// times √n ε over 1e-12 of that distance (and no less than four √n ε).
pub fn compare(problem: &Problem, per_year: u32, years: f64) -> Vec<Comparison> {
    const NEARBY: f64 = 1e-12;
    let times: Vec<f64> = problem.marks().iter().map(|m| m.time).filter(|t| *t <= years).collect();
    let mut neighbour = problem.clone();
    neighbour.start.vel.iter_mut().flatten().for_each(|v| *v *= 1.0 + NEARBY);
    let is_row = |count: u64| times.contains(&(count as f64 / f64::from(per_year)));
    let mut nearby = Vec::new();
    follow(&neighbour, per_year, years, |count, bodies| {
        if count > 0 && is_row(count) {
            nearby.push(flat(bodies, 2..4));
        }
    });
    let step = 1.0 / f64::from(per_year);
    let (mut fine, mut coarse) =
        (Growth::new(step, problem.last_only), Growth::new(2.0 * step, problem.last_only));
    let stages = Scheme::named("(10,6,4)").unwrap().stages() as f64;
    let mut rows = Vec::new();
    follow(problem, per_year, years, |count, bodies| {
        let found = fine.see(count, bodies);
        let rough = if count % 2 == 0 { coarse.see(count / 2, bodies) } else { None };
        let (Some(found), Some(rough), true) = (found, rough, is_row(count)) else { return };
        let stated = *problem.marks().iter().find(|m| m.time == found.time).unwrap();
        let truth: Vec<Inertial> =
            (0..bodies.len()).map(|b| problem.stated(found.time, b).unwrap()).collect();
        let mine = flat(bodies, 2..4);
        let rounded = 4.0 * f64::EPSILON * (stages * count as f64).sqrt();
        rows.push(Comparison {
            found,
            stated,
            position: relative_gap(&flat(bodies, 0..1), &flat(&truth, 0..1)),
            tangent: relative_gap(&mine, &flat(&truth, 2..4)),
            rounding: rounded * (relative_gap(&nearby[rows.len()], &mine) / NEARBY).max(1.0),
            quadrature: ((found.y - rough.y).abs(), (found.mean_y - rough.mean_y).abs()),
        });
    });
    assert_eq!(rows.len(), times.len(), "every row of {} is met at an even step", problem.name);
    rows
}

fn relative_gap(found: &[f64], stated: &[f64]) -> f64 {
    let length = |square: f64| square.sqrt();
    let gap: f64 = found.iter().zip(stated).map(|(a, b)| (a - b).powi(2)).sum();
    length(gap) / length(stated.iter().map(|x| x * x).sum())
}

fn flat(bodies: &[Inertial], which: std::ops::Range<usize>) -> Vec<f64> {
    bodies.iter().flat_map(|b| b[which.clone()].iter().flatten().copied()).collect()
}
