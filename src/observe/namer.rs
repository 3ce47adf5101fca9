//! All integer combinations of fundamental frequencies up to a size, to find the one that a line is.

use super::combination::{Combination, Fundamental, Kind, Rule};

/// All combinations that a rule allows, ready to be compared with lines.
#[derive(Clone, Debug)]
pub struct Namer {
    /// Σ k ν and k, by Σ|k|; k of the fundamentals at `places`.
    table: Vec<(f64, Vec<i32>)>,
    /// Where in the list of `all` fundamentals those stand that a name may hold.
    places: Vec<usize>,
    all: usize,
    /// Whole turns per sample, rad/day: lines are known up to these; 0 when sampling folds nothing.
    fold_rad_day: f64,
}

/// Most combinations looked at: the largest Σ|k| is what this allows, and at most [`LARGEST_SIZE`].
const MOST: usize = 100_000;
const LARGEST_SIZE: u32 = 14;
/// A name that a line anywhere would get with more than this chance is not given.
const CHANCE: f64 = 0.1;

impl Namer {
    /// Combinations of these fundamentals with Σ|k| as large as a bound on their number allows (14 for up to four, 6 or so for
    /// eight).
    ///
    /// `fold_rad_day` is 2π over the sampling time when the lines come from samples too sparse for the fastest of them,
    /// else 0.
    pub fn new(fundamentals: &[Fundamental], rule: Rule, fold_rad_day: f64) -> Namer {
        let places = (0..fundamentals.len()).collect();
        Namer::among(fundamentals, places, rule, fold_rad_day)
    }

    /// [`Namer::new`] of the fundamentals that the motion of a massless body can hold (none: of the bodies that pull). A
    /// name still counts through all of them.
    pub fn seen_by(
        massless: Option<usize>,
        fundamentals: &[Fundamental],
        rule: Rule,
        fold_rad_day: f64,
    ) -> Namer {
        let places = (0..fundamentals.len()).filter(|k| fundamentals[*k].is_seen_by(massless)).collect();
        Namer::among(fundamentals, places, rule, fold_rad_day)
    }

    fn among(fundamentals: &[Fundamental], places: Vec<usize>, rule: Rule, fold_rad_day: f64) -> Namer {
        let seen: Vec<&Fundamental> = places.iter().map(|place| &fundamentals[*place]).collect();
        let librations = seen.iter().rposition(|f| f.kind == Kind::Libration).map_or(0, |last| last + 1);
        let mut filler =
            Filler { rule, librations, k: vec![0; seen.len()], fundamentals: seen, table: Vec::new() };
        for size in 0..=LARGEST_SIZE {
            let before = filler.table.len();
            filler.fill(size, 0, 0);
            if filler.table.len() > MOST {
                filler.table.truncate(before);
                break;
            }
        }
        Namer { table: filler.table, places, all: fundamentals.len(), fold_rad_day }
    }

    /// Whole turns per sample, rad/day; 0 where sampling folds nothing.
    pub fn fold_rad_day(&self) -> f64 {
        self.fold_rad_day
    }

    /// A combination that counts through all fundamentals.
    fn named(&self, k: &[i32], misfit_rad_day: f64, rivals: usize) -> Combination {
        let mut coefficients = vec![0; self.all];
        self.places.iter().zip(k).for_each(|(place, k)| coefficients[*place] = *k);
        Combination { coefficients, misfit_rad_day, rivals }
    }

    /// The simplest combination, not all of it 0, that vanishes within `tolerance_rad_day`: fundamentals that are not
    /// independent, as 2n_b − 3n_c + g1 = 0 in a 3:2 resonance. Ask it of a rule for angles; the first coefficient that
    /// is not 0 is positive.
    pub fn relation(&self, tolerance_rad_day: f64) -> Option<Combination> {
        let leading = |k: &[i32]| k.iter().copied().find(|k| *k != 0).unwrap_or(0) > 0;
        let near = |value: &f64| value.abs() <= tolerance_rad_day;
        let mut fitting = self.table.iter().filter(|(value, k)| leading(k) && near(value));
        let (value, coefficients) = fitting.next()?;
        let size: u32 = coefficients.iter().map(|k| k.unsigned_abs()).sum();
        let alike = |k: &[i32]| k.iter().map(|k| k.unsigned_abs()).sum::<u32>() == size;
        let rivals = fitting.take_while(|(_, k)| alike(k)).count();
        Some(self.named(coefficients, -value, rivals))
    }

    /// The simplest combination within `tolerance_rad_day` of a frequency; the nearest of those equally simple.
    ///
    /// None where combinations so simple are so many that one in ten lines anywhere would meet one.
    pub fn name(&self, rad_day: f64, tolerance_rad_day: f64) -> Option<Combination> {
        let misfit = |value: f64| {
            let gap = rad_day - value;
            if self.fold_rad_day > 0.0 {
                gap - (gap / self.fold_rad_day).round() * self.fold_rad_day
            } else {
                gap
            }
        };
        let size = |k: &[i32]| k.iter().map(|k| k.unsigned_abs()).sum::<u32>();
        let mut fitting = self.table.iter().filter(|(value, _)| misfit(*value).abs() <= tolerance_rad_day);
        let first = fitting.next()?;
        let simplest = size(&first.1);
        let alike: Vec<&(f64, Vec<i32>)> =
            std::iter::once(first).chain(fitting.take_while(|(_, k)| size(k) == simplest)).collect();
        if self.chance(simplest, tolerance_rad_day) > CHANCE {
            return None;
        }
        let best = alike.iter().min_by(|one, other| misfit(one.0).abs().total_cmp(&misfit(other.0).abs()))?;
        Some(self.named(&best.1, misfit(best.0), alike.len() - 1))
    }

    /// Share of the band that lies within the tolerance of a combination no larger than `size`.
    fn chance(&self, size: u32, tolerance_rad_day: f64) -> f64 {
        let small = |k: &[i32]| k.iter().map(|k| k.unsigned_abs()).sum::<u32>() <= size;
        let (mut count, mut low, mut high) = (0.0, f64::INFINITY, f64::NEG_INFINITY);
        for (value, _) in self.table.iter().take_while(|(_, k)| small(k)) {
            (count, low, high) = (count + 1.0, value.min(low), value.max(high));
        }
        let band = if self.fold_rad_day > 0.0 { self.fold_rad_day } else { high - low };
        // The few simplest are themselves however narrow their band is.
        if count <= 2.0 { 0.0 } else { 2.0 * tolerance_rad_day * count / band }
    }
}

/// A table of combinations on its way.
struct Filler<'a> {
    fundamentals: Vec<&'a Fundamental>,
    rule: Rule,
    /// From here on there are no librations.
    librations: usize,
    k: Vec<i32>,
    table: Vec<(f64, Vec<i32>)>,
}

impl Filler<'_> {
    /// Adds the combinations whose coefficients from `at` on have Σ|k| = `left` exactly; those before it sum to `turns`.
    fn fill(&mut self, left: u32, at: usize, turns: i32) {
        if self.table.len() > MOST {
            return;
        }
        // What is left must make up what the rule asks for; each turn too many must be taken back.
        let missing = (self.rule.turns - turns).unsigned_abs();
        let even = left.wrapping_sub(missing).is_multiple_of(2);
        if missing > left || (at >= self.librations && !even) {
            return;
        }
        if left == 0 || at == self.k.len() {
            if left == 0 && allowed(&self.fundamentals, self.rule, &self.k) {
                let terms = self.k.iter().zip(&self.fundamentals);
                let value = terms.map(|(k, f)| f64::from(*k) * f.rad_day).sum();
                self.table.push((value, self.k.clone()));
            }
            return;
        }
        let turning = i32::from(self.fundamentals[at].kind != Kind::Libration);
        for size in 0..=left {
            for sign in [1, -1] {
                if size == 0 && sign < 0 {
                    continue;
                }
                self.k[at] = sign * size as i32;
                self.fill(left - size, at + 1, turns + turning * self.k[at]);
            }
        }
        self.k[at] = 0;
    }
}

fn allowed(fundamentals: &[&Fundamental], rule: Rule, k: &[i32]) -> bool {
    let of = |wanted: fn(Kind) -> bool| -> i32 {
        k.iter().zip(fundamentals).filter(|(_, f)| wanted(f.kind)).map(|(k, _)| k).sum()
    };
    let turns = of(|kind| kind != Kind::Libration);
    let nodes = of(|kind| kind == Kind::Node);
    turns == rule.turns && (nodes.rem_euclid(2) == 1) == rule.odd_nodes
}

#[cfg(test)]
mod tests {
    use super::*;

    fn two_planets() -> Vec<Fundamental> {
        [
            ("n_b", Kind::Motion, 0.713),
            ("n_c", Kind::Motion, 0.3131),
            ("g1", Kind::Pericentre, 1.17e-3),
            ("g2", Kind::Pericentre, 3.31e-4),
        ]
        .map(|(name, kind, rad_day)| Fundamental { name: name.into(), kind, rad_day, own_of: None })
        .into()
    }

    #[test]
    fn a_combination_is_found_and_written() {
        let fundamentals = two_planets();
        let namer = Namer::new(&fundamentals, Rule::PLANE, 0.0);
        let line = 2.0 * 0.713 - 3.0 * 0.3131 + 2.0 * 1.17e-3;
        let found = namer.name(line + 1e-9, 1e-8).unwrap();
        assert_eq!(found.coefficients, [2, -3, 2, 0]);
        assert_eq!(found.words(&fundamentals), "2n_b − 3n_c + 2g1");
        assert_eq!((found.size(), found.rivals), (7, 0));
        assert!((found.misfit_rad_day - 1e-9).abs() < 1e-14);
        assert_eq!(namer.name(1.17e-3, 1e-9).unwrap().words(&fundamentals), "g1");
        assert!(namer.name(0.05, 1e-12).is_none());
    }

    #[test]
    fn the_rule_holds_for_everything_offered() {
        for (rule, turns) in [(Rule::PLANE, 1), (Rule::ANGLE, 0)] {
            let namer = Namer::new(&two_planets(), rule, 0.0);
            assert!(namer.table.len() > 500);
            assert!(namer.table.iter().all(|(_, k)| k.iter().sum::<i32>() == turns));
        }
        // The difference of two lines of the plane is a line of an angle, and a line alone is not.
        let angle = Namer::new(&two_planets(), Rule::ANGLE, 0.0);
        assert!(angle.name(0.713, 1e-10).is_none());
        assert_eq!(angle.name(0.713 - 0.3131, 1e-10).unwrap().coefficients, [1, -1, 0, 0]);
    }

    #[test]
    fn nodes_come_in_pairs_in_the_plane() {
        let mut fundamentals = two_planets();
        fundamentals.push(Fundamental {
            name: "s2".into(),
            kind: Kind::Node,
            rad_day: -9.1e-4,
            own_of: None,
        });
        let plane = Namer::new(&fundamentals, Rule::PLANE, 0.0);
        let line = 2.0 * -9.1e-4 - 1.17e-3;
        assert_eq!(plane.name(line, 1e-10).unwrap().words(&fundamentals), "2s2 − g1");
        assert!(plane.name(-9.1e-4, 1e-12).is_none());
        let node = Namer::new(&fundamentals, Rule::NODE, 0.0);
        assert_eq!(node.name(-9.1e-4, 1e-10).unwrap().words(&fundamentals), "s2");
    }

    #[test]
    fn librations_do_not_count_as_turns() {
        let fundamentals = [
            Fundamental { name: "g1".into(), kind: Kind::Pericentre, rad_day: 1e-3, own_of: None },
            Fundamental { name: "l".into(), kind: Kind::Libration, rad_day: 0.0301, own_of: None },
        ];
        let namer = Namer::new(&fundamentals, Rule::PLANE, 0.0);
        assert_eq!(namer.name(1e-3 + 2.0 * 0.0301, 1e-10).unwrap().words(&fundamentals), "g1 + 2l");
    }

    /// With so wide a tolerance nearly any line meets some combination: only the simple ones are given.
    #[test]
    fn a_name_that_anything_would_get_is_not_given() {
        let fundamentals = two_planets();
        let namer = Namer::new(&fundamentals, Rule::PLANE, 0.0);
        assert!(namer.name(0.713, 1e-3).is_some());
        assert_eq!(namer.name(2.0 * 0.713 - 3.0 * 0.3131 + 1e-3, 5e-2), None);
    }

    #[test]
    fn folded_lines_are_found_too() {
        let namer = Namer::new(&two_planets(), Rule::PLANE, 0.2);
        assert_eq!(namer.name(0.713 - 0.8, 1e-10).unwrap().coefficients, [1, 0, 0, 0]);
    }

    /// The slow twin of the table: every list of small whole numbers, asked of the rule.
    #[test]
    fn the_table_leaves_nothing_out() {
        let mut fundamentals = two_planets();
        fundamentals.push(Fundamental {
            name: "s2".into(),
            kind: Kind::Node,
            rad_day: -9.1e-4,
            own_of: None,
        });
        fundamentals.push(Fundamental {
            name: "l".into(),
            kind: Kind::Libration,
            rad_day: 0.03,
            own_of: None,
        });
        for rule in [Rule::PLANE, Rule::NODE, Rule::ANGLE] {
            let namer = Namer::new(&fundamentals, rule, 0.0);
            let small = |k: &[i32]| k.iter().map(|k| k.abs()).sum::<i32>() <= 3;
            let listed: std::collections::BTreeSet<Vec<i32>> =
                namer.table.iter().map(|(_, k)| k.clone()).filter(|k| small(k)).collect();
            let every = (0..7i32.pow(6)).map(|code| (0..6).map(|at| code / 7i32.pow(at) % 7 - 3).collect());
            let of = fundamentals.iter().collect::<Vec<_>>();
            let expected = every.filter(|k: &Vec<i32>| small(k) && allowed(&of, rule, k)).collect();
            assert_eq!(listed, expected);
        }
    }

    /// A name holds what the body can see, and counts through all.
    #[test]
    fn what_is_anothers_own_is_in_no_name() {
        let mut fundamentals = two_planets();
        for (body, rad_day) in [(2, 2.03e-3), (3, 2.41e-3)] {
            let name = format!("g{}", body + 1);
            fundamentals.push(Fundamental { name, kind: Kind::Pericentre, rad_day, own_of: Some(body) });
        }
        let seen_by = |body| Namer::seen_by(body, &fundamentals, Rule::PLANE, 0.0);
        let own = seen_by(Some(3)).name(2.41e-3, 1e-10).unwrap();
        assert_eq!(own.words(&fundamentals), "g4");
        for other in [None, Some(2)] {
            let found = seen_by(other).name(2.41e-3, 1e-10);
            assert!(found.is_none_or(|name| name.coefficients[5] == 0), "{other:?}");
        }
    }
}
