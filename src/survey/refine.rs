//! Coarse grid first: which cells of a grid are integrated, and which take the verdict on which all around them agree.
//!
//! A level is a lattice of cells `stride` apart (and the last column and row); each level halves the stride and holds
//! the one before. A new cell of a level lies between two or four cells of the level before. It is **filled** when
//! these agree in verdict and way of loss, are decided, and, if regular, have an indicator that is flat there;
//! else it is **wanted**, to be integrated. A filled cell is wanted after all when
//! - a cell beside it on the lattice does not share its verdict (so boundaries are followed along their whole
//!   length once they were met anywhere, and lie in a seam of integrated cells);
//! - its number says so: one in [`Policy::probe`] filled cells is a probe into calm ground, for what is thinner than the
//!   lattice;
//! - the study asks for it ([`Policy::always`]).
//!
//! What is wanted follows from the answers alone. Within a level the wants only grow, each from a fill that no longer
//! changes and an answer that is a function of its cell, so the same cells are integrated whatever the order of
//! answers: any threads, kills and restarts. Between levels every answer is awaited.

use super::view::{Calm, View};

/// The coarsest stride, cells.
pub const COARSEST: usize = 16;
/// Of so many filled cells about one is integrated as a probe.
pub const PROBE_ONE_IN: u64 = 32;
/// A grid of two axes with at least so many cells is filled unless every cell is asked for.
pub const LARGE: u64 = 40_000;

/// What may be filled.
#[derive(Clone, Debug, PartialEq)]
pub struct Policy {
    /// Absent: nothing is filled; the levels only give the order.
    pub calm: Option<Calm>,
    /// One in so many filled cells is integrated; 0 for none.
    pub probe: u64,
    /// Cells that are integrated in any case.
    pub always: Vec<u64>,
}

impl Policy {
    /// Integrates all cells, coarse grid first.
    pub fn every_cell() -> Policy {
        Policy { calm: None, probe: 0, always: Vec::new() }
    }

    /// Fills where surroundings are calm and agree.
    pub fn filling(calm: Calm, always: Vec<u64>) -> Policy {
        Policy { calm: Some(calm), probe: PROBE_ONE_IN, always }
    }
}

/// One cell: what it was filled with and what it answered.
#[derive(Clone, Copy, Debug, Default)]
struct Place {
    fill: Option<View>,
    answer: Option<View>,
    /// Stride of the lattice around which it was filled.
    stride: u8,
    wanted: bool,
}

impl Place {
    fn value(&self) -> Option<View> {
        self.answer.or(self.fill)
    }
}

/// A filled cell.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Fill {
    pub cell: u64,
    pub view: View,
    /// Distance in cells of those that agreed.
    pub stride: u8,
}

/// The state of the rule.
#[derive(Debug)]
pub struct Refine {
    shape: [usize; 2],
    policy: Policy,
    places: Vec<Place>,
    stride: usize,
    lattice: [Vec<usize>; 2],
    /// Wanted and not handed out.
    backlog: Vec<u64>,
    /// Wanted and not answered, handed out or not.
    awaited: u64,
}

impl Refine {
    /// The rule for a grid of `shape` cells (the first axis runs fastest), with its coarsest level wanted.
    pub fn new(shape: [usize; 2], policy: Policy) -> Refine {
        let longest = shape[0].max(shape[1]).max(2);
        let stride = COARSEST.min(longest.next_power_of_two() / 2);
        let mut rule = Refine {
            shape,
            places: vec![Place::default(); shape[0] * shape[1]],
            stride,
            lattice: shape.map(|cells| lattice(cells, stride)),
            backlog: Vec::new(),
            awaited: 0,
            policy,
        };
        rule.each_on_lattice(Refine::want);
        for cell in rule.policy.always.clone() {
            if let Some(index) = usize::try_from(cell).ok().filter(|index| *index < rule.places.len()) {
                rule.want(index);
            }
        }
        rule
    }

    /// Up to `most` wanted cells, to be answered.
    pub fn take(&mut self, most: usize) -> Vec<u64> {
        let rest = self.backlog.split_off(most.min(self.backlog.len()));
        std::mem::replace(&mut self.backlog, rest)
    }

    /// What a wanted cell was found to be.
    pub fn answer(&mut self, cell: u64, view: View) {
        let index = cell as usize;
        if self.places[index].answer.is_some() || !self.places[index].wanted {
            return;
        }
        self.places[index].answer = Some(view);
        self.awaited -= 1;
        self.for_neighbours(index, |rule, beside| {
            if rule.places[beside].fill.is_some_and(|fill| !fill.same(view)) {
                rule.want(beside);
            }
        });
    }

    /// Goes to the next level if this one is answered. False while answers are awaited and after the last level.
    pub fn advance(&mut self) -> bool {
        let ready = self.backlog.is_empty() && (self.awaited == 0 || self.policy.calm.is_none());
        if !ready || self.stride == 1 {
            return false;
        }
        let coarse = std::mem::take(&mut self.lattice);
        self.stride /= 2;
        self.lattice = self.shape.map(|cells| lattice(cells, self.stride));
        // All fills before any wants: what is filled follows from the level before alone.
        let mut wants = Vec::new();
        for &y in &self.lattice[1].clone() {
            let rows = around(&coarse[1], y);
            for &x in &self.lattice[0].clone() {
                let index = y * self.shape[0] + x;
                if self.places[index].fill.is_some() || self.places[index].wanted {
                    continue;
                }
                match self.agreement(around(&coarse[0], x), rows) {
                    Some(view) => {
                        self.places[index].fill = Some(view);
                        self.places[index].stride = (2 * self.stride) as u8;
                        if self.is_probe(index) {
                            wants.push(index);
                        }
                    }
                    None => wants.push(index),
                }
            }
        }
        self.each_on_lattice(|rule, index| {
            if rule.stands_out(index) {
                wants.push(index);
            }
        });
        wants.sort_unstable();
        wants.into_iter().for_each(|index| self.want(index));
        true
    }

    /// Whether every level is answered.
    pub fn is_complete(&self) -> bool {
        self.stride == 1 && self.awaited == 0
    }

    /// Stride of the level at work, and how many levels follow.
    pub fn level(&self) -> (usize, u32) {
        (self.stride, self.stride.trailing_zeros())
    }

    /// Whether any cell may be filled.
    pub fn is_filling(&self) -> bool {
        self.policy.calm.is_some()
    }

    /// Wanted cells without an answer.
    pub fn awaited(&self) -> u64 {
        self.awaited
    }

    /// Cells that are not wanted; all of them once the rule is complete.
    pub fn fills(&self) -> impl Iterator<Item = Fill> {
        self.places.iter().enumerate().filter(|(_, place)| !place.wanted).filter_map(|(index, place)| {
            place.fill.map(|view| Fill { cell: index as u64, view, stride: place.stride })
        })
    }

    /// What the cells around vouch for, if they do.
    fn agreement(&self, columns: [usize; 2], rows: [usize; 2]) -> Option<View> {
        let calm = self.policy.calm.as_ref()?;
        let view = |x: usize, y: usize| self.places[y * self.shape[0] + x].value();
        let mut shared = view(columns[0], rows[0])?;
        for y in rows {
            for x in columns {
                shared = shared.with(view(x, y)?, calm)?;
            }
        }
        Some(shared)
    }

    /// A filled cell beside another verdict.
    fn stands_out(&self, index: usize) -> bool {
        let place = &self.places[index];
        let Some(fill) = place.fill.filter(|_| !place.wanted) else { return false };
        self.neighbours(index).any(|beside| self.places[beside].value().is_some_and(|v| !v.same(fill)))
    }

    fn is_probe(&self, index: usize) -> bool {
        self.policy.probe > 0 && scrambled(index as u64).is_multiple_of(self.policy.probe)
    }

    fn want(&mut self, index: usize) {
        if !self.places[index].wanted {
            self.places[index].wanted = true;
            self.backlog.push(index as u64);
            self.awaited += 1;
        }
    }

    fn each_on_lattice(&mut self, mut each: impl FnMut(&mut Refine, usize)) {
        let [columns, rows] = self.lattice.clone();
        for y in rows {
            for &x in &columns {
                each(self, y * self.shape[0] + x);
            }
        }
    }

    fn for_neighbours(&mut self, index: usize, mut each: impl FnMut(&mut Refine, usize)) {
        let beside: Vec<usize> = self.neighbours(index).collect();
        beside.into_iter().for_each(|beside| each(self, beside));
    }

    /// The up to eight cells beside a cell of the lattice; none for a cell that is not on it.
    fn neighbours(&self, index: usize) -> impl Iterator<Item = usize> + use<> {
        let width = self.shape[0];
        let columns = self.beside(0, index % width);
        let rows = self.beside(1, index / width);
        let all = rows.into_iter().flat_map(move |y| columns.clone().into_iter().map(move |x| y * width + x));
        all.filter(move |beside| *beside != index)
    }

    /// The place before, itself and the place after on one axis of the lattice.
    fn beside(&self, axis: usize, at: usize) -> Vec<usize> {
        let lattice = &self.lattice[axis];
        match lattice.binary_search(&at) {
            Ok(found) => lattice[found.saturating_sub(1)..lattice.len().min(found + 2)].to_vec(),
            Err(_) => Vec::new(),
        }
    }
}

/// Multiples of `stride` and the last of `cells`.
fn lattice(cells: usize, stride: usize) -> Vec<usize> {
    let mut places: Vec<usize> = (0..cells).step_by(stride).collect();
    if cells > 0 && places.last() != Some(&(cells - 1)) {
        places.push(cells - 1);
    }
    places
}

/// The places of a lattice at or beside `at`: twice the same when it is on the lattice.
fn around(lattice: &[usize], at: usize) -> [usize; 2] {
    match lattice.binary_search(&at) {
        Ok(found) => [lattice[found]; 2],
        // The first and the last cell are on every lattice, so that there is one on both sides.
        Err(after) => [lattice[after - 1], lattice[after]],
    }
}

/// Even bits from a number: the mixing step of splitmix64 (Steele, Lea & Flood 2014).
fn scrambled(number: u64) -> u64 {
    let mut z = number.wrapping_add(0x9e37_79b9_7f4a_7c15);
    z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
    z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
    z ^ (z >> 31)
}
