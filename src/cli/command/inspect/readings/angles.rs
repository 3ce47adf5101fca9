//! Which angles are looked at, how they move, and which of them are worth a column.

use std::sync::atomic::{AtomicBool, Ordering};

use super::pool::Outcome;
use crate::assess::Row;
use crate::coords::{Configuration, Elements};
use crate::criteria::{near_chains, resonances_to_order};
use crate::observe::{AngleMotion, AngleReport, Candidate, ElementSeries, resonant_motion};

/// Highest order of a resonance of two planets.
const HIGHEST_ORDER: u32 = 6;
/// How many resonances are looked at per pair of one reading.
const MOST: usize = 3;
/// Planets are taken in pairs up to this many places apart.
const FARTHEST: usize = 2;
/// Spacing of rows may differ by this share.
const UNEVEN: f64 = 1e-6;

/// Resonances near the periods of any of the readings, three-body combinations of neighbours, and differences of
/// pericentres.
pub fn candidates(starts: &[&Configuration]) -> Vec<Candidate> {
    let (mut pairs, mut chains, mut apsides) = (Vec::new(), Vec::new(), Vec::new());
    for start in starts {
        let order = by_period(start);
        for (at, &(inner, inner_day)) in order.iter().enumerate() {
            for &(outer, outer_day) in order.iter().skip(at + 1).take(FARTHEST) {
                let near = resonances_to_order(outer_day / inner_day, HIGHEST_ORDER);
                pairs.extend(near.iter().take(MOST).map(|near| Candidate::Pair {
                    inner,
                    outer,
                    p: near.p,
                    q: near.q,
                }));
            }
        }
        for three in order.windows(3) {
            let planets = [three[0].0, three[1].0, three[2].0];
            let near = near_chains([three[0].1, three[1].1, three[2].1]);
            chains.extend(
                near.iter().map(|near| Candidate::Chain { planets, coefficients: near.coefficients }),
            );
        }
        apsides.extend(order.windows(2).map(|two| Candidate::Apsides { one: two[0].0, other: two[1].0 }));
    }
    let mut all: Vec<Candidate> = Vec::new();
    for candidate in pairs.into_iter().chain(chains).chain(apsides) {
        if !all.contains(&candidate) {
            all.push(candidate);
        }
    }
    all
}

/// Bound planets (no companion) with their periods, from the inside out.
fn by_period(start: &Configuration) -> Vec<(usize, f64)> {
    let orbits = start.orbits();
    let period = |planet: usize| orbits[planet].period_day().map(|day| (planet, day));
    let mut order: Vec<(usize, f64)> = start.planet_indices().filter_map(period).collect();
    order.sort_by(|one, other| one.1.total_cmp(&other.1));
    order
}

/// How every angle of every candidate moves; empty where the series cannot be analysed.
pub fn motions(
    start: &Configuration,
    rows: &[Row],
    wanted: &[Candidate],
    stop: &AtomicBool,
) -> Vec<AngleReport> {
    let rows = even(rows);
    let times: Vec<f64> = rows.iter().map(|row| row.time_day).collect();
    let elements: Vec<Vec<Elements>> = rows.iter().map(|row| row.elements.clone()).collect();
    let mass_parameter: Vec<f64> = start.planets.iter().map(|planet| start.star_gm + planet.gm).collect();
    let Ok(series) = ElementSeries::new(&times, &elements, &mass_parameter) else { return Vec::new() };
    let mut reports = Vec::new();
    for candidate in wanted {
        if stop.load(Ordering::Relaxed) {
            break;
        }
        let Ok(found) = resonant_motion(&series, std::slice::from_ref(candidate)) else { return Vec::new() };
        reports.extend(found);
    }
    reports
}

/// The rows of even spacing: the last one may come between two others.
fn even(rows: &[Row]) -> &[Row] {
    let [first, second, .., before, last] = rows else { return rows };
    let (step, at_end) = (second.time_day - first.time_day, last.time_day - before.time_day);
    if (at_end - step).abs() > UNEVEN * step { &rows[..rows.len() - 1] } else { rows }
}

/// The angle of each pair, chain and pair of pericentres that librates in most readings, with the smallest amplitude;
/// indices into [`Outcome::angles`]. Nothing of those that librate in none.
pub fn telling(outcomes: &[&Outcome]) -> Vec<usize> {
    let Some(first) = outcomes.first() else { return Vec::new() };
    let mut best: Vec<(Vec<usize>, usize, Score)> = Vec::new();
    for (index, report) in first.angles.iter().enumerate() {
        let score = Score::of(outcomes.iter().filter_map(|outcome| outcome.angles.get(index)));
        if score.librate + score.alternate == 0 {
            continue;
        }
        let group = group(&report.candidate);
        match best.iter_mut().find(|(known, _, _)| *known == group) {
            Some(known) if score.is_better(&known.2) => (known.1, known.2) = (index, score),
            Some(_) => {}
            None => best.push((group, index, score)),
        }
    }
    best.into_iter().map(|(_, index, _)| index).collect()
}

/// In how many readings an angle librates or changes between both, and its smallest amplitude.
struct Score {
    librate: usize,
    alternate: usize,
    amplitude: f64,
}

impl Score {
    fn of<'a>(reports: impl Iterator<Item = &'a AngleReport>) -> Score {
        let mut score = Score { librate: 0, alternate: 0, amplitude: f64::INFINITY };
        for report in reports {
            match report.motion {
                AngleMotion::Librates(found) => {
                    score.librate += 1;
                    score.amplitude = score.amplitude.min(found.amplitude);
                }
                AngleMotion::Alternates { .. } => score.alternate += 1,
                AngleMotion::Circulates { .. } | AngleMotion::CannotTell(_) => {}
            }
        }
        score
    }

    fn is_better(&self, other: &Score) -> bool {
        (self.librate, self.alternate, -self.amplitude) > (other.librate, other.alternate, -other.amplitude)
    }
}

/// What an angle is about: two planets' longitudes, three planets', or two pericentres.
fn group(candidate: &Candidate) -> Vec<usize> {
    match *candidate {
        Candidate::Pair { inner, outer, .. } => vec![0, inner, outer],
        Candidate::Chain { planets: [first, second, third], .. } => vec![1, first, second, third],
        Candidate::Apsides { one, other } => vec![2, one, other],
    }
}
