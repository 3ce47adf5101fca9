//! Resonant angles of pairs and chains, and which of them librate.

use super::ElementSeries;
use super::libration::{AngleMotion, angle_motion};
use crate::coords::Elements;
use crate::num::{FourierError, wrap_turn};

/// A combination of mean longitudes and longitudes of pericentre that does not change when the system is turned.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ResonantAngle {
    /// Coefficients of λ and ϖ per planet; all of them together sum to 0 (d'Alembert).
    longitudes: Vec<i32>,
    pericentres: Vec<i32>,
}

/// Coefficients that do not sum to 0.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
#[error("the coefficients of an angle must sum to 0 (d'Alembert's rule), these sum to {sum}")]
pub struct NotInvariant {
    pub sum: i32,
}

impl ResonantAngle {
    /// The angle Σ j λ + Σ k ϖ, coefficients in the order of the planets; the shorter list is filled with 0.
    ///
    /// Errors: [`NotInvariant`].
    pub fn new(mut longitudes: Vec<i32>, mut pericentres: Vec<i32>) -> Result<ResonantAngle, NotInvariant> {
        let sum = longitudes.iter().chain(&pericentres).sum();
        if sum != 0 {
            return Err(NotInvariant { sum });
        }
        let count = longitudes.len().max(pericentres.len());
        longitudes.resize(count, 0);
        pericentres.resize(count, 0);
        Ok(ResonantAngle { longitudes, pericentres })
    }

    /// Coefficients of the mean longitudes, in the order of the planets.
    pub fn longitudes(&self) -> &[i32] {
        &self.longitudes
    }

    /// Its value, rad in [0, 2π).
    pub fn value(&self, row: &[Elements]) -> f64 {
        let parts = self.longitudes.iter().zip(&self.pericentres).zip(row).map(|((j, k), orbit)| {
            f64::from(*j) * orbit.mean_longitude() + f64::from(*k) * orbit.longitude_of_pericentre()
        });
        wrap_turn(parts.sum())
    }

    /// Its value in every row, rad in [0, 2π): only the bodies that it is of are looked at.
    pub fn values(&self, rows: &[Vec<Elements>]) -> Vec<f64> {
        let terms = self.longitudes.iter().zip(&self.pericentres).enumerate();
        let terms: Vec<(usize, f64, f64)> = terms
            .filter(|(_, (j, k))| **j != 0 || **k != 0)
            .map(|(body, (j, k))| (body, f64::from(*j), f64::from(*k)))
            .collect();
        let value = |row: &Vec<Elements>| {
            let parts = terms.iter().map(|(body, j, k)| {
                j * row[*body].mean_longitude() + k * row[*body].longitude_of_pericentre()
            });
            wrap_turn(parts.sum())
        };
        rows.iter().map(value).collect()
    }

    /// Σ j n for mean motions n: the rate of the angle but for its pericentres, in the unit of n.
    pub fn rate(&self, motions: &[f64]) -> f64 {
        self.longitudes.iter().zip(motions).map(|(j, n)| f64::from(*j) * n).sum()
    }

    /// In words, as "3λ_c − 2λ_b − ϖ_b": positive terms first, outer planets before inner ones.
    pub fn words(&self, names: &[String]) -> String {
        let term = |letter: &'static str, list: &[i32]| -> Vec<(i32, String)> {
            let named = list.iter().zip(names).rev().filter(|(k, _)| **k != 0);
            named.map(|(k, name)| (*k, format!("{letter}_{name}"))).collect()
        };
        let mut terms = term("λ", &self.longitudes);
        terms.extend(term("ϖ", &self.pericentres));
        terms.sort_by_key(|(k, _)| *k < 0);
        let mut words = String::new();
        for (k, name) in terms {
            words += match (words.is_empty(), k < 0) {
                (true, true) => "−",
                (true, false) => "",
                (false, true) => " − ",
                (false, false) => " + ",
            };
            if k.unsigned_abs() > 1 {
                words += &k.unsigned_abs().to_string();
            }
            words += &name;
        }
        words
    }
}

/// Which angles to look at.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Candidate {
    /// p periods of the inner planet near q of the outer one, p > q.
    Pair { inner: usize, outer: usize, p: u32, q: u32 },
    /// Σ k n near 0 for three planets.
    Chain { planets: [usize; 3], coefficients: [i32; 3] },
    /// The difference of two longitudes of pericentre.
    Apsides { one: usize, other: usize },
}

impl Candidate {
    /// Whose angles they are, in the order of the candidate.
    pub fn bodies(&self) -> Vec<usize> {
        match *self {
            Candidate::Pair { inner, outer, .. } => vec![inner, outer],
            Candidate::Chain { planets, .. } => planets.to_vec(),
            Candidate::Apsides { one, other } => vec![one, other],
        }
    }

    /// The angles of this candidate among `count` planets.
    ///
    /// A pair of order m = p − q has p λ_outer − q λ_inner − k ϖ_inner − (m−k) ϖ_outer for k = m … 0 (those of eccentricity
    /// only); a chain of order 0 has Σ k λ, of another order Σ k λ − (Σk) ϖ of each of its planets. Planets are counted
    /// from 0; with p ≤ q, planets beyond `count` or one planet twice there are none.
    pub fn angles(&self, count: usize) -> Vec<ResonantAngle> {
        let sound = |planets: &[usize]| {
            planets.iter().enumerate().all(|(at, p)| *p < count && !planets[..at].contains(p))
        };
        let at = |terms: &[(usize, i32)]| {
            let mut all = vec![0; count];
            for (planet, coefficient) in terms {
                all[*planet] += coefficient;
            }
            all
        };
        match *self {
            Candidate::Pair { inner, outer, p, q } if p > q && sound(&[inner, outer]) => {
                let (p, q) = (p as i32, q as i32);
                let order = p - q;
                (0..=order)
                    .rev()
                    .map(|k| ResonantAngle {
                        longitudes: at(&[(outer, p), (inner, -q)]),
                        pericentres: at(&[(inner, -k), (outer, k - order)]),
                    })
                    .collect()
            }
            Candidate::Chain { planets, coefficients } if sound(&planets) => {
                let terms: Vec<(usize, i32)> = planets.into_iter().zip(coefficients).collect();
                let order: i32 = coefficients.iter().sum();
                let whose = if order == 0 { &planets[..1] } else { &planets[..] };
                whose
                    .iter()
                    .map(|planet| ResonantAngle {
                        longitudes: at(&terms),
                        pericentres: at(&[(*planet, -order)]),
                    })
                    .collect()
            }
            Candidate::Apsides { one, other } if sound(&[one, other]) => {
                vec![ResonantAngle { longitudes: vec![0; count], pericentres: at(&[(one, 1), (other, -1)]) }]
            }
            _ => Vec::new(),
        }
    }
}

/// One angle and how it moves.
#[derive(Clone, Debug, PartialEq)]
pub struct AngleReport {
    pub candidate: Candidate,
    pub angle: ResonantAngle,
    pub motion: AngleMotion,
}

/// Every angle of every candidate over a series of elements.
///
/// Errors: [`FourierError`].
pub fn resonant_motion(
    series: &ElementSeries<'_>,
    candidates: &[Candidate],
) -> Result<Vec<AngleReport>, FourierError> {
    let mut reports = Vec::new();
    for candidate in candidates {
        for angle in candidate.angles(series.planets()) {
            let values = angle.values(series.rows());
            let motion = angle_motion(&values, series.step_day())?;
            reports.push(AngleReport { candidate: *candidate, angle, motion });
        }
    }
    Ok(reports)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn names() -> Vec<String> {
        ["b", "c", "d"].map(String::from).into()
    }

    #[test]
    fn angles_of_a_pair() {
        let pair = Candidate::Pair { inner: 0, outer: 1, p: 3, q: 2 };
        let words: Vec<String> = pair.angles(3).iter().map(|angle| angle.words(&names())).collect();
        assert_eq!(words, ["3λ_c − 2λ_b − ϖ_b", "3λ_c − 2λ_b − ϖ_c"]);
        let second = Candidate::Pair { inner: 0, outer: 2, p: 5, q: 3 };
        let words: Vec<String> = second.angles(3).iter().map(|angle| angle.words(&names())).collect();
        assert_eq!(words, ["5λ_d − 3λ_b − 2ϖ_b", "5λ_d − 3λ_b − ϖ_d − ϖ_b", "5λ_d − 3λ_b − 2ϖ_d"]);
    }

    #[test]
    fn angles_of_chains_and_apsides() {
        let laplace = Candidate::Chain { planets: [0, 1, 2], coefficients: [1, -3, 2] };
        assert_eq!(laplace.angles(3)[0].words(&names()), "2λ_d + λ_b − 3λ_c");
        assert_eq!(laplace.angles(3).len(), 1);
        let first = Candidate::Chain { planets: [0, 1, 2], coefficients: [1, -3, 1] };
        assert_eq!(first.angles(3).len(), 3);
        for angle in first.angles(3) {
            assert_eq!(angle.longitudes.iter().chain(&angle.pericentres).sum::<i32>(), 0);
        }
        let apsides = Candidate::Apsides { one: 0, other: 1 };
        assert_eq!(apsides.angles(2)[0].words(&names()), "ϖ_b − ϖ_c");
        assert!(Candidate::Apsides { one: 0, other: 0 }.angles(2).is_empty());
        assert!(Candidate::Apsides { one: 0, other: 5 }.angles(2).is_empty());
        assert!(Candidate::Pair { inner: 0, outer: 1, p: 2, q: 2 }.angles(2).is_empty());
    }

    #[test]
    fn an_angle_must_not_change_when_the_system_is_turned() {
        assert_eq!(ResonantAngle::new(vec![2, -3], vec![]), Err(NotInvariant { sum: -1 }));
        let angle = ResonantAngle::new(vec![2, -3], vec![1]).unwrap();
        let orbit = |longitude: f64, pericentre: f64| Elements {
            semi_major_axis_au: 1.0,
            eccentricity: 0.1,
            inclination: 0.0,
            ascending_node: 0.0,
            argument_of_pericentre: pericentre,
            mean_anomaly: longitude - pericentre,
        };
        let value = |turn: f64| angle.value(&[orbit(1.0 + turn, 0.3 + turn), orbit(0.5 + turn, 0.8 + turn)]);
        assert!((value(0.0) - (2.0 - 1.5 + 0.3)).abs() < 1e-12);
        assert!((value(2.2) - value(0.0)).abs() < 1e-12);
        let rows: Vec<Vec<Elements>> =
            (0..9).map(|k| vec![orbit(f64::from(k), 0.3), orbit(0.1, 2.0), orbit(0.5, 0.8)]).collect();
        let angle = ResonantAngle::new(vec![2, 0, -3], vec![1]).unwrap();
        let each: Vec<f64> = rows.iter().map(|row| angle.value(row)).collect();
        assert_eq!(angle.values(&rows), each);
    }
}
