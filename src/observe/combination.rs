//! Integer combinations of fundamental frequencies, to name the lines of a signal.

use std::fmt;

/// How a fundamental frequency behaves when the whole system is turned.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// n: turns with the system.
    Motion,
    /// g: turns with the system.
    Pericentre,
    /// s: turns with the system; only an even number of them is seen by quantities of the plane.
    Node,
    /// Of a libration: the same however the system is turned.
    Libration,
}

/// A fundamental frequency with its name.
///
/// They must be independent: in a p:q resonance p n_outer − q n_inner − (p−q) g = 0, and one n has to give way to the
/// frequency of the libration.
#[derive(Clone, Debug, PartialEq)]
pub struct Fundamental {
    pub name: String,
    pub kind: Kind,
    pub rad_day: f64,
    /// The massless body whose own it is: no other body's motion holds it. None for those of the bodies that pull.
    pub own_of: Option<usize>,
}

impl Fundamental {
    /// Whether it can be in the motion of a body: a massless one, or (none) those that pull.
    pub fn is_seen_by(&self, massless: Option<usize>) -> bool {
        self.own_of.is_none() || self.own_of == massless
    }
}

/// Which combinations a signal can have (d'Alembert's rules).
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Rule {
    /// Sum of the coefficients of n, g and s: 1 for exp(iλ), e exp(iϖ) and sin(i/2) exp(iΩ), 0 for a resonant angle.
    pub turns: i32,
    /// Whether the number of s is odd: for sin(i/2) exp(iΩ) only.
    pub odd_nodes: bool,
}

impl Rule {
    pub const PLANE: Rule = Rule { turns: 1, odd_nodes: false };
    pub const NODE: Rule = Rule { turns: 1, odd_nodes: true };
    pub const ANGLE: Rule = Rule { turns: 0, odd_nodes: false };
}

/// Σ k_i ν_i with small integers.
#[derive(Clone, Debug, PartialEq)]
pub struct Combination {
    pub coefficients: Vec<i32>,
    /// The line less the combination, rad/day.
    pub misfit_rad_day: f64,
    /// How many other combinations of no larger Σ|k| fit within the tolerance too: with any, the name is a guess.
    pub rivals: usize,
}

impl Combination {
    /// Σ |k|.
    pub fn size(&self) -> u32 {
        self.coefficients.iter().map(|k| k.unsigned_abs()).sum()
    }

    /// In the names of the fundamentals, a positive term first: "2n_b − 3n_c + g1", "g2 − g1"; "0" for none.
    pub fn words(&self, fundamentals: &[Fundamental]) -> String {
        let named = self.coefficients.iter().copied().zip(fundamentals).filter(|(k, _)| *k != 0);
        let mut terms: Vec<(i32, &Fundamental)> = named.collect();
        if let Some(first) = terms.iter().position(|(k, _)| *k > 0) {
            terms[..=first].rotate_right(1);
        }
        let mut words = String::new();
        for (k, fundamental) in terms {
            let sign = match (words.is_empty(), k < 0) {
                (true, true) => "−",
                (true, false) => "",
                (false, true) => " − ",
                (false, false) => " + ",
            };
            let count = if k.unsigned_abs() == 1 { String::new() } else { k.unsigned_abs().to_string() };
            words += &format!("{sign}{count}{}", fundamental.name);
        }
        if words.is_empty() { "0".into() } else { words }
    }
}

impl fmt::Display for Kind {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Kind::Motion => "mean motion",
            Kind::Pericentre => "pericentre frequency",
            Kind::Node => "node frequency",
            Kind::Libration => "libration frequency",
        })
    }
}
