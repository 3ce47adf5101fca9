//! Which cells are done: one bit each.

/// A set of cell indices below a bound.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Bitmap {
    words: Vec<u64>,
    length: u64,
    set: u64,
}

impl Bitmap {
    /// None of `length` cells.
    pub fn new(length: u64) -> Bitmap {
        let words = usize::try_from(length.div_ceil(64)).expect("a bitmap of cells fits into memory");
        Bitmap { words: vec![0; words], length, set: 0 }
    }

    /// The bound.
    pub fn len(&self) -> u64 {
        self.length
    }

    /// Whether there are no cells at all.
    pub fn is_empty(&self) -> bool {
        self.length == 0
    }

    /// How many cells are in the set.
    pub fn count(&self) -> u64 {
        self.set
    }

    pub fn has(&self, cell: u64) -> bool {
        self.words[(cell / 64) as usize] >> (cell % 64) & 1 == 1
    }

    /// Adds a cell; whether it is new.
    pub fn set(&mut self, cell: u64) -> bool {
        let new = !self.has(cell);
        self.words[(cell / 64) as usize] |= 1 << (cell % 64);
        self.set += u64::from(new);
        new
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn holds_what_was_set_and_counts_it_once() {
        let mut cells = Bitmap::new(130);
        assert!(cells.set(0) && cells.set(64) && cells.set(129));
        assert!(!cells.set(64));
        assert_eq!(cells.count(), 3);
        let held: Vec<u64> = (0..cells.len()).filter(|cell| cells.has(*cell)).collect();
        assert_eq!(held, [0, 64, 129]);
    }
}
