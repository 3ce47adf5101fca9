//! Who pulls and who only feels.

/// The masses of the bodies, the star first, and who of them pulls.
#[derive(Clone, Debug, PartialEq)]
pub struct Cast {
    /// G × mass, au³ day⁻², of every body, the star first.
    pub gm: Vec<f64>,
    pub(super) massive: Vec<usize>,
    pub(super) massless: Vec<usize>,
}

impl Cast {
    /// A body with G × mass 0 is massless; the star always counts as massive.
    pub fn new(gm: Vec<f64>) -> Cast {
        let (massive, massless) = (0..gm.len()).partition(|&body| body == 0 || gm[body] != 0.0);
        Cast { gm, massive, massless }
    }

    /// Bodies in all, the star included.
    pub fn bodies(&self) -> usize {
        self.gm.len()
    }

    /// The pairs of which at least one body is massive, each once, in the order of the evaluation.
    pub fn pairs(&self) -> impl Iterator<Item = (usize, usize)> {
        self.massive.iter().enumerate().flat_map(move |(index, &i)| {
            self.massive[index + 1..].iter().chain(&self.massless).map(move |&j| (i.min(j), i.max(j)))
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn massless_bodies_are_never_paired_with_one_another() {
        let cast = Cast::new(vec![1.0, 0.0, 1e-3, 0.0, 1e-4]);
        let mut pairs: Vec<_> = cast.pairs().collect();
        pairs.sort_unstable();
        assert_eq!(pairs, [(0, 1), (0, 2), (0, 3), (0, 4), (1, 2), (1, 4), (2, 3), (2, 4), (3, 4)]);
    }
}
