//! Which coordinates.

/// The coordinates in which the Hamiltonian is split.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Coordinates {
    /// Democratic heliocentric: cheapest, for planets much lighter than their star.
    Heliocentric,
    /// Jacobi: for hierarchies and any mass ratio.
    Jacobi,
}

impl Coordinates {
    /// The word that files and output use.
    pub fn word(self) -> &'static str {
        match self {
            Coordinates::Heliocentric => "heliocentric",
            Coordinates::Jacobi => "jacobi",
        }
    }

    /// For running text.
    pub fn words(self) -> &'static str {
        match self {
            Coordinates::Heliocentric => "democratic heliocentric",
            Coordinates::Jacobi => "Jacobi",
        }
    }
}
