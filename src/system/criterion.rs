//! The analytic criteria that a map can be compared with, by name; what they say is the room `criteria`'s.

/// A criterion with a border that can be drawn on a map.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Criterion {
    Hill,
    Crossing,
    Intersection,
    AmdCollision,
    AmdHill,
    AmdOverlap,
    CircularOverlap,
    Overlap,
    Binary,
    Hierarchy,
}

impl Criterion {
    pub const ALL: [Criterion; 10] = [
        Criterion::Hill,
        Criterion::Crossing,
        Criterion::Intersection,
        Criterion::AmdCollision,
        Criterion::AmdHill,
        Criterion::AmdOverlap,
        Criterion::CircularOverlap,
        Criterion::Overlap,
        Criterion::Binary,
        Criterion::Hierarchy,
    ];

    /// More borders than these cannot be told apart on one map.
    pub const MOST_ON_A_MAP: usize = 6;

    /// The word in files, on the command line and over columns.
    pub fn word(self) -> &'static str {
        match self {
            Criterion::Hill => "hill",
            Criterion::Crossing => "crossing",
            Criterion::Intersection => "intersection",
            Criterion::AmdCollision => "amd-collision",
            Criterion::AmdHill => "amd-hill",
            Criterion::AmdOverlap => "amd-overlap",
            Criterion::CircularOverlap => "circular-overlap",
            Criterion::Overlap => "overlap",
            Criterion::Binary => "binary",
            Criterion::Hierarchy => "hierarchy",
        }
    }

    pub fn from_word(word: &str) -> Option<Criterion> {
        Criterion::ALL.into_iter().find(|criterion| criterion.word() == word)
    }

    /// What it is called, for a legend.
    pub fn title(self) -> &'static str {
        match self {
            Criterion::Hill => "Hill stability",
            Criterion::Crossing => "apocentre reaches pericentre",
            Criterion::Intersection => "orbits intersect as they lie",
            Criterion::AmdCollision => "AMD, collision",
            Criterion::AmdHill => "AMD, Hill",
            Criterion::AmdOverlap => "AMD, overlap",
            Criterion::CircularOverlap => "overlap, circular orbits",
            Criterion::Overlap => "overlap, eccentric orbits",
            Criterion::Binary => "limit beside or around two stars",
            Criterion::Hierarchy => "limit of hierarchical triples",
        }
    }

    /// Whose it is; empty where it is plain geometry.
    pub fn source(self) -> &'static str {
        match self {
            Criterion::Hill => "Marchal & Bozis 1982",
            Criterion::Crossing | Criterion::Intersection => "",
            Criterion::AmdCollision => "Laskar & Petit 2017",
            Criterion::AmdHill => "Petit et al. 2018",
            Criterion::AmdOverlap => "Petit et al. 2017",
            Criterion::CircularOverlap => "Wisdom 1980, Deck et al. 2013",
            Criterion::Overlap => "Hadden & Lithwick 2018",
            Criterion::Binary => "Holman & Wiegert 1999",
            Criterion::Hierarchy => "Mardling & Aarseth 2001",
        }
    }

    /// What its margin is, for a table: positive on the quiet side, 0 on the border.
    pub fn margin_words(self) -> &'static str {
        match self {
            Criterion::Hill => "-2 M c^2 h/(G^2 M*^3) over its critical value, minus 1",
            Criterion::Crossing => "(outer pericentre - inner apocentre) / outer semi-major axis",
            Criterion::Intersection => "(|p1 - p2| - |p2 e1 - p1 e2|) / (p1 + p2), p = a (1 - e^2)",
            Criterion::AmdCollision | Criterion::AmdHill | Criterion::AmdOverlap => {
                "square root of the critical relative AMD minus that of the relative AMD"
            }
            Criterion::CircularOverlap => "(a2 - a1)/a1 minus the width of the zone of overlap",
            Criterion::Overlap => "critical relative eccentricity minus relative eccentricity",
            Criterion::Binary => "distance of a/a_binary from its critical value",
            Criterion::Hierarchy => "outer pericentre / inner semi-major axis minus its critical value",
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_criterion_has_a_word_of_its_own_and_is_found_by_it() {
        for criterion in Criterion::ALL {
            assert_eq!(Criterion::from_word(criterion.word()), Some(criterion));
        }
        assert_eq!(Criterion::from_word("Hill"), None);
    }
}
