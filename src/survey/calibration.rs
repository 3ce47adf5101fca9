//! Which frequency drift predicts loss: cells of a finished survey that survived are followed longer, and a threshold on
//! their drift is fitted to which of them are lost.
//!
//! The idea is that of Stalport et al. (2022; from memory); sample, fit and errors are ours. The threshold changes no
//! verdict.

use std::sync::Arc;

use super::pool::{Made, Source};
use super::{Grid, Record};
use crate::verdict::Verdict;

/// Strata of equal width between the smallest and the largest drift.
const STRATA: usize = 10;
/// Samples drawn again from the sample, for the errors.
const ROUNDS: u64 = 1000;

/// A cell chosen to be followed longer.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Chosen {
    pub cell: u64,
    /// log₁₀ of the relative change of the mean motion, of the worst planet.
    pub drift: f64,
    pub stratum: usize,
    /// Surviving cells of the survey that it stands for.
    pub weight: f64,
}

/// At most `wanted` surviving cells, as evenly over the drift as there are cells.
///
/// The range of the drift is cut into ten strata of equal width; each gives as many cells as the others while it has some,
/// evenly by rank. The same records give the same sample.
pub fn choose(records: &[Record], wanted: usize) -> Vec<Chosen> {
    let survived = |r: &&Record| {
        r.filled.is_none() && !matches!(r.assessment.verdict, Verdict::Lost | Verdict::Untrusted)
    };
    let drift = |r: &Record| r.assessment.worst_drift().filter(|d| d.is_finite()).map(|d| (d, r.cell));
    let mut all: Vec<(f64, u64)> = records.iter().filter(survived).filter_map(drift).collect();
    all.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
    let (Some((low, _)), Some((high, _))) = (all.first().copied(), all.last().copied()) else {
        return Vec::new();
    };
    let width = (high - low) / STRATA as f64;
    let stratum =
        |drift: f64| if width > 0.0 { (((drift - low) / width) as usize).min(STRATA - 1) } else { 0 };
    let mut strata: Vec<Vec<(f64, u64)>> = vec![Vec::new(); STRATA];
    all.iter().for_each(|one| strata[stratum(one.0)].push(*one));
    let takes = shares(&strata.iter().map(Vec::len).collect::<Vec<_>>(), wanted);
    let mut chosen = Vec::new();
    for (index, (cells, take)) in strata.iter().zip(takes).enumerate() {
        for k in 0..take {
            // The middle of the k-th of `take` equal parts of the ranks.
            let (drift, cell) = cells[(2 * k + 1) * cells.len() / (2 * take)];
            chosen.push(Chosen { cell, drift, stratum: index, weight: cells.len() as f64 / take as f64 });
        }
    }
    chosen
}

/// How many each stratum gives: one after the other in turn, while it has some left.
fn shares(sizes: &[usize], wanted: usize) -> Vec<usize> {
    let mut takes = vec![0; sizes.len()];
    let mut left = wanted.min(sizes.iter().sum());
    while left > 0 {
        for (take, size) in takes.iter_mut().zip(sizes) {
            if left > 0 && *take < *size {
                *take += 1;
                left -= 1;
            }
        }
    }
    takes
}

/// The chosen cells as a source of their own, numbered from 0.
#[derive(Debug)]
pub struct ChosenCells {
    pub grid: Arc<Grid>,
    pub cells: Vec<u64>,
}

impl Source for ChosenCells {
    fn cells(&self) -> u64 {
        self.cells.len() as u64
    }

    fn values(&self, cell: u64) -> Vec<f64> {
        self.grid.values(self.cells[cell as usize])
    }

    fn make(&self, cell: u64) -> Made {
        self.grid.make(self.cells[cell as usize])
    }
}

/// A chosen cell and whether it was lost when followed longer.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Outcome {
    pub chosen: Chosen,
    pub lost: bool,
}

/// Right calls among so many.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Calls {
    pub right: u64,
    pub of: u64,
    /// Share of right calls, cells weighted with what they stand for.
    pub share: f64,
}

impl Calls {
    /// The 95 % interval of a share from the counts (Wilson 1927).
    pub fn interval(&self) -> [f64; 2] {
        const Z: f64 = 1.959_963_984_540_054;
        let n = self.of as f64;
        let p = self.right as f64 / n;
        let middle = p + Z * Z / (2.0 * n);
        let half = Z * (p * (1.0 - p) / n + Z * Z / (4.0 * n * n)).sqrt();
        [middle - half, middle + half].map(|edge| (edge / (1.0 + Z * Z / n)).clamp(0.0, 1.0))
    }
}

/// A drift above the threshold predicts loss.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Threshold {
    pub drift: f64,
    /// The middle 95 % of thresholds fitted to samples drawn again.
    pub interval: [f64; 2],
    /// Lost cells above the threshold, surviving cells not above it.
    pub lost: Calls,
    pub surviving: Calls,
    /// Mean shares in cells that were not drawn when the sample was drawn again: of calls about cells that the threshold
    /// has not seen.
    pub unseen: Option<[f64; 2]>,
}

/// The threshold with the largest mean of both shares of right calls; in the widest gap of drifts where several are best.
///
/// None unless some cells were lost and some survived. Errors by drawing from each stratum again with replacement
/// (bootstrap, Efron 1979), with the same numbers each time.
pub fn fit(outcomes: &[Outcome]) -> Option<Threshold> {
    let drift = best(outcomes)?;
    let [lost, surviving] = calls(outcomes, drift);
    let mut dice = Dice(0);
    let (mut fitted, mut unseen) = (Vec::new(), [Vec::new(), Vec::new()]);
    for _ in 0..ROUNDS {
        let (again, left) = drawn_again(outcomes, &mut dice);
        let Some(threshold) = best(&again) else { continue };
        fitted.push(threshold);
        for (shares, calls) in unseen.iter_mut().zip(calls(&left, threshold)) {
            shares.extend((calls.of > 0).then_some(calls.share));
        }
    }
    fitted.sort_by(f64::total_cmp);
    let rank = |share: f64| fitted[((share * fitted.len() as f64) as usize).min(fitted.len() - 1)];
    let interval = if fitted.is_empty() { [f64::NAN; 2] } else { [rank(0.025), rank(0.975)] };
    let mean = |all: &Vec<f64>| (!all.is_empty()).then(|| all.iter().sum::<f64>() / all.len() as f64);
    let unseen = mean(&unseen[0]).zip(mean(&unseen[1])).map(|(lost, surviving)| [lost, surviving]);
    Some(Threshold { drift, interval, lost, surviving, unseen })
}

fn best(outcomes: &[Outcome]) -> Option<f64> {
    let total = |lost| outcomes.iter().filter(|o| o.lost == lost).map(|o| o.chosen.weight).sum::<f64>();
    let (all_lost, all_surviving) = (total(true), total(false));
    if all_lost == 0.0 || all_surviving == 0.0 {
        return None;
    }
    let mut sorted: Vec<&Outcome> = outcomes.iter().collect();
    sorted.sort_by(|a, b| a.chosen.drift.total_cmp(&b.chosen.drift).then(a.chosen.cell.cmp(&b.chosen.cell)));
    let (mut lost_above, mut surviving_below) = (all_lost, 0.0);
    // Score, width of the gap, middle of it.
    let mut found = (0.0, 0.0, f64::NAN);
    for pair in sorted.windows(2) {
        let (below, above) = (pair[0], pair[1]);
        if below.lost {
            lost_above -= below.chosen.weight;
        } else {
            surviving_below += below.chosen.weight;
        }
        let gap = above.chosen.drift - below.chosen.drift;
        if gap <= 0.0 {
            continue;
        }
        let score = lost_above / all_lost + surviving_below / all_surviving;
        let better = score > found.0 + 1e-12 || score > found.0 - 1e-12 && gap > found.1;
        if better {
            found = (score, gap, below.chosen.drift + 0.5 * gap);
        }
    }
    Some(found.2).filter(|drift| !drift.is_nan())
}

/// Of lost and of surviving cells.
fn calls(outcomes: &[Outcome], threshold: f64) -> [Calls; 2] {
    [true, false].map(|lost| {
        let mine = || outcomes.iter().filter(move |o| o.lost == lost);
        let right = |o: &&Outcome| (o.chosen.drift > threshold) == lost;
        let weight = |all: &mut dyn Iterator<Item = &Outcome>| all.map(|o| o.chosen.weight).sum::<f64>();
        Calls {
            right: mine().filter(right).count() as u64,
            of: mine().count() as u64,
            share: weight(&mut mine().filter(right)) / weight(&mut mine()),
        }
    })
}

/// As many of each stratum, drawn with replacement; and those not drawn.
fn drawn_again(outcomes: &[Outcome], dice: &mut Dice) -> (Vec<Outcome>, Vec<Outcome>) {
    let (mut again, mut left) = (Vec::new(), Vec::new());
    for stratum in 0..STRATA {
        let mine: Vec<&Outcome> = outcomes.iter().filter(|o| o.chosen.stratum == stratum).collect();
        let mut drawn = vec![false; mine.len()];
        for _ in 0..mine.len() {
            let index = dice.below(mine.len());
            drawn[index] = true;
            again.push(*mine[index]);
        }
        left.extend(mine.iter().zip(drawn).filter(|(_, drawn)| !drawn).map(|(o, _)| **o));
    }
    (again, left)
}

/// Numbers without pattern, the same every time (splitmix; Steele, Lea & Flood 2014, from memory).
struct Dice(u64);

impl Dice {
    fn below(&mut self, count: usize) -> usize {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        ((u128::from(z ^ (z >> 31)) * count as u128) >> 64) as usize
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::assess::Assessment;

    fn record(cell: u64, drift: Option<f64>, verdict: Verdict) -> Record {
        let mut assessment = Assessment::unseen(verdict, None);
        assessment.frequency_drift = drift.into_iter().flat_map(|d| [d - 1.0, d]).collect();
        Record::integrated(cell, vec![0.0], assessment)
    }

    fn outcome(cell: u64, drift: f64, lost: bool, weight: f64) -> Outcome {
        let stratum = (drift + 10.0) as usize;
        Outcome { chosen: Chosen { cell, drift, stratum, weight }, lost }
    }

    #[test]
    fn rare_drifts_are_chosen_as_often_as_common_ones() {
        // 990 quiet cells, 10 wild ones, and cells that must not be chosen.
        let mut records: Vec<Record> =
            (0..990).map(|k| record(k, Some(-10.0 + 1e-4 * k as f64), Verdict::Regular)).collect();
        records.extend((0..10).map(|k| record(990 + k, Some(-2.0 + 0.05 * k as f64), Verdict::Chaotic)));
        records.push(record(1000, Some(-1.0), Verdict::Lost));
        records.push(record(1001, Some(-1.0), Verdict::Untrusted));
        records.push(record(1002, None, Verdict::Undecided));
        let chosen = choose(&records, 40);
        assert_eq!(chosen.len(), 40);
        assert_eq!(chosen.iter().filter(|c| c.cell >= 990).count(), 10);
        assert!(chosen.iter().all(|c| c.cell < 1000));
        let stands_for: f64 = chosen.iter().map(|c| c.weight).sum();
        assert!((stands_for - 1000.0).abs() < 1e-9);
        let mut cells: Vec<u64> = chosen.iter().map(|c| c.cell).collect();
        cells.sort_unstable();
        cells.dedup();
        assert_eq!(cells.len(), 40, "each once");
        assert_eq!(choose(&records, 5000).len(), 1000);
        assert!(choose(&records[1000..], 10).is_empty());
        assert_eq!(choose(&records[..1], 10).len(), 1);
    }

    #[test]
    fn a_clean_cut_is_found_in_the_middle_of_the_gap() {
        let all: Vec<Outcome> = (0..50)
            .map(|k| {
                let drift = -9.0 + 0.1 * k as f64 + if k >= 30 { 0.5 } else { 0.0 };
                outcome(k, drift, k >= 30, 1.0 + (k % 3) as f64)
            })
            .collect();
        let found = fit(&all).unwrap();
        assert!((found.drift - (-5.8)).abs() < 1e-12, "{found:?}");
        assert_eq!((found.lost.right, found.lost.of, found.surviving.right), (20, 20, 30));
        assert_eq!((found.lost.share, found.surviving.share), (1.0, 1.0));
        assert!(found.interval[0] <= found.drift && found.drift <= found.interval[1]);
        assert!(found.unseen.unwrap().iter().all(|share| (0.9..=1.0).contains(share)), "{found:?}");
        assert_eq!(fit(&all), Some(found), "the same every time");
        assert_eq!(fit(&all[..30]), None);
        assert_eq!(fit(&[]), None);
    }

    /// The slow twin: every threshold tried.
    #[test]
    fn no_threshold_is_better() {
        let mut dice = Dice(7);
        let all: Vec<Outcome> = (0..80)
            .map(|k| {
                let drift = -9.0 + 6.0 * dice.below(1000) as f64 / 1000.0;
                let odds = ((drift + 9.0) / 6.0 * 100.0) as usize;
                outcome(k, drift, dice.below(100) < odds, 1.0 + dice.below(5) as f64)
            })
            .collect();
        let found = fit(&all).unwrap();
        let score = |t: f64| calls(&all, t).iter().map(|c| c.share).sum::<f64>();
        let most = (0..=6000).map(|k| score(-9.0 + 0.001 * f64::from(k))).fold(0.0, f64::max);
        assert!(score(found.drift) >= most - 1e-9, "{} {most}", score(found.drift));
        // Calls about unseen cells are no better than about those the threshold was fitted to.
        let seen = found.lost.share + found.surviving.share;
        assert!(found.unseen.unwrap().iter().sum::<f64>() <= seen + 0.02, "{found:?}");
    }

    #[test]
    fn intervals_are_those_of_wilson() {
        // Worked by hand from the formula with z = 1.96: 8 of 10 gives 0.490 to 0.943; 0 of 10 gives 0 to 0.278.
        let eight = Calls { right: 8, of: 10, share: 0.8 }.interval();
        assert!((eight[0] - 0.490).abs() < 5e-4 && (eight[1] - 0.943).abs() < 5e-4, "{eight:?}");
        let none = Calls { right: 0, of: 10, share: 0.0 }.interval();
        assert!(none[0] < 1e-12 && (none[1] - 0.278).abs() < 5e-4, "{none:?}");
    }
}
