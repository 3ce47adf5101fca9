//! Every criterion beside long integrations of random configurations on either side of its border.

use std::time::Instant;

use abide::assess::Assessment;
use abide::system::Criterion;

use super::criteria_support::{
    Drawn, Kind, Sampling, chaotic_or_lost, draw, follow, lost, met_or_exchanged, wilson,
};
use super::report::Report;

const WORDS: &str = "
For each criterion random configurations on both sides of its border, followed by `run_batch`. A draw fixes masses (even in the
logarithm), eccentricities (even from 0), inclinations (even from 0) and angles (even over the turn); then the ratio of semi-major axes is found at which
the criterion's margin is 0, and the configuration gets a gap (a₂ − a₁)/a₁ of `gap` times that one, even within the bin. So gaps above 1 lie on the
quiet side and those below 1 on the other, and a quarter of all lies within a tenth of the border on each side. Draws outside a criterion's domain are drawn again.

`trouble` is what the criterion speaks of: *met* (closer than half a mutual Hill radius at the epoch, or the ranges of the two semi-major axes
overlap, as they must when the order is exchanged), *lost* (within one mutual Hill radius, escape, fall into the star), *chaos* (chaotic or lost). `wrong` counts
cells with trouble on the quiet side and cells without on the other; shares have Wilson's 95 % interval. Only Hill stability is a theorem over
all time: there a single wrong call on the quiet side would be a fault, and there is a limit on no other row. What a criterion says of its other side differs: Hill and AMD criteria say
nothing there (`-` under wrong); crossing orbits may be protected by a resonance; an overlap says chaos. `untrusted` cells missed the energy error of 1e-5 and are left out of the shares.

Spans are in periods of the innermost orbit; 3e4 of a planet beside a second star are some 500 … 5000 of the pair, and Holman & Wiegert followed theirs for 1e4
periods of the pair. Sources: Marchal & Bozis (1982), Laskar & Petit (2017), Petit et al. (2017, 2018), Wisdom (1980), Deck
et al. (2013), Hadden & Lithwick (2018; constants from memory), Holman & Wiegert (1999; coefficients seen quoted), Mardling & Aarseth (2001; formula from memory).

What the table of 2026-12-01 says: none of 100 Hill-stable pairs met, nor of 100 AMD-Hill-stable ones, which is the same theorem to leading order. AMD-stability against collision alone is not safety: near its
border 14 % are lost, because resonances do not conserve the AMD; with their overlap included 2 of 100 pairs are lost, but of three planets 15 of 100, 12 of them within a tenth of the border: the
criterion looks at pairs only. Inside the overlap of circular orbits 98 of 100 are chaotic or lost, and the zone does not end sharply (70 % just outside it). The eccentric overlap is right in
80 % inside and 84 % from a tenth outside on. Crossing orbits last only where a resonance or an inclination protects them. Beside two stars the limits of Holman & Wiegert are on the safe side, as meant: they are for the worst phase,
and just inside only 12 … 26 % are lost; Mardling & Aarseth's is safe for planets beside a second star, while around two stars 44 % are lost just outside it.
";

/// Places of the gap over that on the border.
const BINS: [(f64, f64); 4] = [(0.6, 0.9), (0.9, 1.0), (1.0, 1.1), (1.1, 1.6)];
const EACH: usize = 50;

/// What the criterion speaks of.
#[derive(Clone, Copy)]
enum Trouble {
    Met,
    Lost,
    Chaos,
}

struct Trial {
    criterion: Criterion,
    sampling: Sampling,
    /// Ratios of axes between which the border is looked for.
    range: (f64, f64),
    orbits: f64,
    trouble: Trouble,
    /// Whether it says trouble on its other side.
    says_both: bool,
}

const fn planets(count: usize, mass: (f64, f64), eccentricity: f64, inclination: f64) -> Sampling {
    let companion = ((0.0, 0.0), 0.0);
    Sampling { kind: Kind::Planets(count), mass, eccentricity, inclination, companion }
}

const fn beside(kind: Kind, companion: ((f64, f64), f64), planet: (f64, f64, f64)) -> Sampling {
    Sampling { kind, mass: (planet.0, planet.0), eccentricity: planet.1, inclination: planet.2, companion }
}

fn trials() -> Vec<Trial> {
    use Criterion as C;
    let trial = |criterion, sampling, range, orbits, trouble, says_both| Trial {
        criterion,
        sampling,
        range,
        orbits,
        trouble,
        says_both,
    };
    let wide = (1.02, 12.0);
    let light = (1e-6, 1e-3);
    vec![
        trial(C::Hill, planets(2, (1e-6, 1e-2), 0.4, 20.0), wide, 3e4, Trouble::Met, false),
        trial(C::Crossing, planets(2, light, 0.4, 2.0), wide, 1e4, Trouble::Lost, true),
        trial(C::Intersection, planets(2, light, 0.4, 0.5), (1.001, 12.0), 1e4, Trouble::Lost, true),
        trial(C::AmdCollision, planets(2, light, 0.3, 5.0), wide, 1e4, Trouble::Lost, false),
        trial(C::AmdCollision, planets(3, light, 0.15, 3.0), wide, 1e4, Trouble::Lost, false),
        trial(C::AmdHill, planets(2, light, 0.3, 5.0), wide, 1e4, Trouble::Lost, false),
        trial(C::AmdOverlap, planets(2, light, 0.1, 2.0), wide, 1e4, Trouble::Lost, false),
        trial(C::AmdOverlap, planets(3, light, 0.05, 2.0), wide, 1e4, Trouble::Lost, false),
        trial(C::CircularOverlap, planets(2, light, 0.01, 0.5), (1.001, 2.0), 1e4, Trouble::Chaos, true),
        trial(C::Overlap, planets(2, (1e-6, 3e-4), 0.15, 0.5), (1.001, 1.99), 1e4, Trouble::Chaos, true),
        trial(
            C::Binary,
            beside(Kind::Beside, ((0.12, 3.0), 0.7), (1e-10, 0.01, 2.0)),
            (1.5, 60.0),
            3e4,
            Trouble::Lost,
            true,
        ),
        trial(
            C::Binary,
            beside(Kind::Around, ((0.15, 1.0), 0.6), (1e-10, 0.01, 2.0)),
            (1.2, 9.0),
            1e4,
            Trouble::Lost,
            true,
        ),
        trial(
            C::Hierarchy,
            beside(Kind::Beside, ((0.12, 3.0), 0.7), (1e-3, 0.2, 30.0)),
            (1.2, 90.0),
            3e4,
            Trouble::Lost,
            true,
        ),
        trial(
            C::Hierarchy,
            beside(Kind::Around, ((0.15, 1.0), 0.6), (1e-3, 0.4, 30.0)),
            (1.2, 20.0),
            1e4,
            Trouble::Lost,
            true,
        ),
    ]
}

impl Trial {
    fn troubled(&self, found: &Assessment) -> bool {
        match self.trouble {
            Trouble::Met => met_or_exchanged(found),
            Trouble::Lost => lost(found),
            Trouble::Chaos => chaotic_or_lost(found),
        }
    }

    fn rows(&self, seed: u64) -> Vec<Vec<String>> {
        let begun = Instant::now();
        let drawn = draw(self.criterion, &self.sampling, self.range, &BINS, EACH, seed);
        let hill = if matches!(self.trouble, Trouble::Met) { 0.5 } else { 1.0 };
        let found = follow(&drawn, self.orbits, hill, matches!(self.trouble, Trouble::Chaos));
        eprintln!("{}: {:.0} s", self.criterion.word(), begun.elapsed().as_secs_f64());
        BINS.iter().map(|bin| self.row(*bin, &drawn, &found)).collect()
    }

    fn row(&self, bin: (f64, f64), drawn: &[Drawn], found: &[Assessment]) -> Vec<String> {
        let of_bin = drawn.iter().zip(found).filter(|(d, _)| bin.0 <= d.place && d.place < bin.1);
        let all: Vec<&Assessment> = of_bin.map(|(_, found)| found).collect();
        let word = |found: &&&Assessment| found.verdict.word() == "untrusted";
        let untrusted = all.iter().filter(word).count();
        let judged: Vec<&&Assessment> = all.iter().filter(|found| !word(found)).collect();
        let trouble = judged.iter().filter(|found| self.troubled(found)).count();
        let quiet = bin.0 >= 1.0;
        let says = quiet || self.says_both;
        let wrong = if quiet { trouble } else { judged.len() - trouble };
        let (low, high) = wilson(trouble, judged.len());
        let theorem = matches!(self.trouble, Trouble::Met) && quiet;
        vec![
            self.criterion.word().to_string(),
            self.sampling.words(),
            format!("{:.0e}", self.orbits),
            match self.trouble {
                Trouble::Met => "met",
                Trouble::Lost => "lost",
                Trouble::Chaos => "chaos",
            }
            .to_string(),
            format!("{} … {}", bin.0, bin.1),
            if quiet { "quiet" } else { "other" }.to_string(),
            judged.len().to_string(),
            untrusted.to_string(),
            format!(
                "{trouble} ({:.0} %, {:.0} … {:.0} %)",
                share(trouble, judged.len()),
                100.0 * low,
                100.0 * high
            ),
            if says { wrong.to_string() } else { "-".to_string() },
            match (theorem, wrong) {
                (true, 0) => "0: met",
                (true, _) => "0: MISSED",
                _ => "none",
            }
            .to_string(),
        ]
    }
}

fn share(part: usize, of: usize) -> f64 {
    100.0 * part as f64 / of.max(1) as f64
}

pub fn write() {
    let trials = trials();
    let rows = trials.iter().enumerate().flat_map(|(index, trial)| trial.rows(100 + index as u64));
    Report {
        name: "criteria",
        title: "Analytic criteria beside long integrations",
        words: WORDS.to_string(),
        columns: vec![
            "criterion",
            "drawn from",
            "orbits",
            "trouble",
            "gap",
            "side",
            "cells",
            "untrusted",
            "with trouble",
            "wrong",
            "limit",
        ],
        rows: rows.collect(),
    }
    .write();
}
