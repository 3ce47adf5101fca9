//! Rows of numbers at even times; when full, every second row is dropped, so memory is bounded.

use crate::num::{Kept, KeptReader};

/// Rows kept of those that were seen: the last of every `stride` calls.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct EvenRows {
    width: usize,
    most: usize,
    stride: u64,
    calls: u64,
    numbers: Vec<f64>,
}

impl EvenRows {
    /// Rows of `width` numbers, at most `most` of them.
    pub fn new(width: usize, most: usize) -> EvenRows {
        EvenRows { width, most, stride: 1, calls: 0, numbers: Vec::new() }
    }

    pub fn see(&mut self, row: impl Iterator<Item = f64>) {
        self.calls += 1;
        if !self.calls.is_multiple_of(self.stride) {
            return;
        }
        self.numbers.extend(row);
        if self.len() > self.most {
            let kept = self.numbers.chunks_exact(self.width).skip(1).step_by(2);
            self.numbers = kept.flatten().copied().collect();
            self.stride *= 2;
        }
    }

    pub fn len(&self) -> usize {
        self.numbers.len() / self.width
    }

    /// Calls between two rows.
    pub fn stride(&self) -> f64 {
        self.stride as f64
    }

    pub fn calls(&self) -> u64 {
        self.calls
    }

    pub fn rows(&self) -> impl Iterator<Item = &[f64]> {
        self.numbers.chunks_exact(self.width)
    }

    pub fn keep(&self, kept: &mut Kept) {
        kept.count(self.stride);
        kept.count(self.calls);
        kept.count(self.len() as u64);
        kept.floats(&self.numbers);
    }

    /// Takes up what was put down of rows of the same width.
    pub fn restore(&mut self, kept: &mut KeptReader<'_>) -> Option<()> {
        self.stride = kept.count().filter(|stride| *stride > 0)?;
        self.calls = kept.count()?;
        let rows = kept.size().filter(|rows| *rows <= self.most)?;
        self.numbers = kept.floats(rows * self.width)?;
        Some(())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rows_stay_even_and_few() {
        for calls in [3u64, 16, 17, 100, 12_345] {
            let mut rows = EvenRows::new(2, 16);
            (1..=calls).for_each(|call| rows.see([call as f64, -(call as f64)].into_iter()));
            let stride = rows.stride();
            assert!(rows.len() <= 16 && (calls < 17 || rows.len() >= 8), "{calls}: {}", rows.len());
            for (index, row) in rows.rows().enumerate() {
                let call = (index + 1) as f64 * stride;
                assert_eq!(row, [call, -call]);
            }
            assert!(calls as f64 - rows.len() as f64 * stride < stride);
            let mut kept = Kept::default();
            rows.keep(&mut kept);
            let mut again = EvenRows::new(2, 16);
            again.restore(&mut kept.reader()).unwrap();
            assert_eq!(again, rows);
        }
    }
}
