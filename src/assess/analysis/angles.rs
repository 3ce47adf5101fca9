//! Which angles are looked at, and how each of them moves.

use std::f64::consts::TAU;

use super::{AngleAnalysed, NotAnalysed, Watch};
use crate::criteria::{near_chains, resonances_to_order};
use crate::num::{Line, Search};
use crate::observe::{
    AngleSamples, Candidate, ElementSeries, NamedLine, ResonantAngle, ToldFrom, angle_lines, told_angle,
};

/// Highest order p − q of a pair that is looked at, and how many resonances of a pair.
const HIGHEST_ORDER: u32 = 8;
const MOST_OF_PAIR: usize = 3;
/// Lines of an angle.
const ANGLE_LINES: Search = Search { most: 10, window_power: 1 };

/// Candidates from the mean motions, by period from the inside out: pairs, then chains, then apsides.
///
/// Of bodies that pull: all pairs, and chains of three neighbours. Massless bodies do not feel each other, so each makes pairs with
/// those that pull only, and chains with two of them that are its neighbours: so many more for each massless body, however
/// many there are.
pub(super) fn candidates(motions: &[f64], massless: &[bool]) -> Vec<Candidate> {
    let mut order: Vec<usize> = (0..motions.len()).collect();
    order.sort_by(|one, other| motions[*other].total_cmp(&motions[*one]));
    let pulling: Vec<usize> = order.iter().copied().filter(|body| !massless[*body]).collect();
    let place = |body: usize| order.iter().position(|other| *other == body).unwrap_or(0);
    let mut pairs: Vec<(usize, usize)> = Vec::new();
    let mut chains: Vec<[usize; 3]> =
        pulling.windows(3).map(|three| [three[0], three[1], three[2]]).collect();
    for (at, inner) in pulling.iter().enumerate() {
        pairs.extend(pulling[at + 1..].iter().map(|outer| (*inner, *outer)));
    }
    for body in order.iter().copied().filter(|body| massless[*body]) {
        let inside = pulling.iter().filter(|other| place(**other) < place(body)).count();
        pairs.extend(pulling[..inside].iter().map(|inner| (*inner, body)));
        pairs.extend(pulling[inside..].iter().map(|outer| (body, *outer)));
        let mut with_it = pulling.clone();
        with_it.insert(inside, body);
        let three = with_it.windows(3).filter(|three| three.contains(&body));
        chains.extend(three.map(|three| [three[0], three[1], three[2]]));
    }
    let mut found = Vec::new();
    for (inner, outer) in &pairs {
        let near = resonances_to_order(motions[*inner] / motions[*outer], HIGHEST_ORDER);
        let pair = |p, q| Candidate::Pair { inner: *inner, outer: *outer, p, q };
        found.extend(near.iter().take(MOST_OF_PAIR).map(|near| pair(near.p, near.q)));
    }
    for planets in chains {
        let near = near_chains(planets.map(|k| TAU / motions[k]));
        let chain = |coefficients| Candidate::Chain { planets, coefficients };
        found.extend(near.iter().map(|near| chain(near.coefficients)));
    }
    found.extend(pairs.into_iter().map(|(one, other)| Candidate::Apsides { one, other }));
    found
}

/// Every angle of every candidate, with the lines (not yet named) of those that librate.
pub(super) fn angles(
    series: &ElementSeries<'_>,
    dense: &[ElementSeries<'_>],
    motions: &[f64],
    massless: &[bool],
    watch: &mut Watch<'_>,
) -> Result<Vec<AngleAnalysed>, NotAnalysed> {
    let of =
        |candidate: Candidate| candidate.angles(series.planets()).into_iter().map(move |a| (candidate, a));
    let all: Vec<(Candidate, ResonantAngle)> =
        candidates(motions, massless).into_iter().flat_map(of).collect();
    watch.expect_angles(all.len());
    let mut found = Vec::with_capacity(all.len());
    for (candidate, angle) in all {
        watch.angle()?;
        let seen = one_angle(series, dense, motions, candidate, angle)?;
        watch.work.fits += seen.told.fits + usize::from(seen.told.libration().is_some());
        found.push(seen);
    }
    Ok(found)
}

fn one_angle(
    series: &ElementSeries<'_>,
    dense: &[ElementSeries<'_>],
    motions: &[f64],
    candidate: Candidate,
    angle: ResonantAngle,
) -> Result<AngleAnalysed, NotAnalysed> {
    let whole = angle.values(series.rows());
    let windows: Vec<Vec<f64>> = dense.iter().map(|window| angle.values(window.rows())).collect();
    let samples = |values, step_day| AngleSamples { values, step_day };
    let in_windows: Vec<AngleSamples<'_>> =
        windows.iter().zip(dense).map(|(values, w)| samples(values.as_slice(), w.step_day())).collect();
    let told = told_angle(samples(&whole, series.step_day()), &in_windows, angle.rate(motions))?;
    let (values, step_day) = match (told.from, in_windows.first()) {
        (ToldFrom::Windows, Some(first)) => (first.values, first.step_day),
        _ => (whole.as_slice(), series.step_day()),
    };
    let lines = match told.libration() {
        Some(libration) => angle_lines(values, libration.centre, step_day, ANGLE_LINES)?,
        None => Vec::new(),
    };
    let plain = |line: Line| NamedLine { line, name: None };
    Ok(AngleAnalysed { candidate, angle, told, lines: lines.into_iter().map(plain).collect() })
}

/// Of the bodies of every pair and chain that librates: the angle with the smallest swing.
pub(super) fn calmest(angles: &[AngleAnalysed]) -> Vec<(Vec<usize>, AngleAnalysed)> {
    let swing = |found: &AngleAnalysed| found.told.libration().map_or(f64::INFINITY, |l| l.amplitude);
    let mut all: Vec<(Vec<usize>, AngleAnalysed)> = Vec::new();
    for found in angles.iter().filter(|found| found.told.libration().is_some()) {
        if matches!(found.candidate, Candidate::Apsides { .. }) {
            continue;
        }
        let bodies = found.candidate.bodies();
        match all.iter_mut().find(|(known, _)| *known == bodies) {
            Some((_, known)) if swing(found) < swing(known) => *known = found.clone(),
            Some(_) => {}
            None => all.push((bodies, found.clone())),
        }
    }
    all
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Motions in falling order with bodies that pull at some places.
    fn of(count: usize, pulling: &[usize]) -> Vec<Candidate> {
        let motions: Vec<f64> = (0..count).map(|body| 1.0 / (1.0 + 0.07 * body as f64)).collect();
        let massless: Vec<bool> = (0..count).map(|body| !pulling.contains(&body)).collect();
        candidates(&motions, &massless)
    }

    #[test]
    fn of_bodies_that_pull_all_pairs_are_looked_at() {
        let apsides =
            of(6, &[0, 1, 2, 3, 4, 5]).into_iter().filter(|c| matches!(c, Candidate::Apsides { .. }));
        assert_eq!(apsides.count(), 15);
    }

    #[test]
    fn massless_bodies_are_never_looked_at_together() {
        let pulling = [3, 9];
        let found = of(14, &pulling);
        assert!(found.iter().any(|c| matches!(c, Candidate::Chain { .. })), "{found:?}");
        for candidate in &found {
            let bodies = candidate.bodies();
            let massless = bodies.iter().filter(|body| !pulling.contains(body)).count();
            assert!(massless <= 1, "{candidate:?}");
        }
        let apsides = found.iter().filter(|c| matches!(c, Candidate::Apsides { .. })).count();
        assert_eq!(apsides, 1 + 2 * 12);
        // From the inside out, whichever of the two pulls.
        let in_order = |c: &Candidate| c.bodies().is_sorted();
        assert!(found.iter().all(in_order), "{found:?}");
    }
}
