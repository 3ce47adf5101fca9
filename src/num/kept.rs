//! Numbers put down to the last bit, and taken up again in the same order.

/// What was put down.
///
/// Each number is one word of 64 bits, so that infinities, signed zeros and every NaN come back as they were.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Kept(Vec<u64>);

impl Kept {
    pub fn float(&mut self, value: f64) {
        self.0.push(value.to_bits());
    }

    pub fn floats(&mut self, values: &[f64]) {
        self.0.extend(values.iter().map(|value| value.to_bits()));
    }

    pub fn count(&mut self, value: u64) {
        self.0.push(value);
    }

    /// Little-endian bytes, eight per number.
    pub fn to_bytes(&self) -> Vec<u8> {
        self.0.iter().flat_map(|word| word.to_le_bytes()).collect()
    }

    /// None when the bytes are no whole number of words.
    pub fn from_bytes(bytes: &[u8]) -> Option<Kept> {
        let (words, rest) = bytes.as_chunks::<8>();
        rest.is_empty().then(|| Kept(words.iter().map(|word| u64::from_le_bytes(*word)).collect()))
    }

    /// Takes up from the beginning.
    pub fn reader(&self) -> KeptReader<'_> {
        KeptReader(&self.0)
    }
}

/// Takes up what was put down; none where nothing is left.
#[derive(Clone, Debug)]
pub struct KeptReader<'a>(&'a [u64]);

impl KeptReader<'_> {
    pub fn count(&mut self) -> Option<u64> {
        let (word, rest) = self.0.split_first()?;
        self.0 = rest;
        Some(*word)
    }

    pub fn float(&mut self) -> Option<f64> {
        self.count().map(f64::from_bits)
    }

    pub fn floats(&mut self, count: usize) -> Option<Vec<f64>> {
        let (words, rest) = self.0.split_at_checked(count)?;
        self.0 = rest;
        Some(words.iter().map(|word| f64::from_bits(*word)).collect())
    }

    /// A count that fits into memory here.
    pub fn size(&mut self) -> Option<usize> {
        usize::try_from(self.count()?).ok()
    }

    pub fn is_empty(&self) -> bool {
        self.0.is_empty()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_bit_comes_back_in_order() {
        let odd = f64::from_bits(0x7ff8_0000_dead_beef);
        let mut kept = Kept::default();
        kept.float(-0.0);
        kept.count(u64::MAX);
        kept.floats(&[f64::INFINITY, odd, 5e-324]);
        let bytes = kept.to_bytes();
        assert_eq!(bytes.len(), 40);
        let again = Kept::from_bytes(&bytes).unwrap();
        let mut reader = again.reader();
        assert_eq!(reader.float().unwrap().to_bits(), (-0.0f64).to_bits());
        assert_eq!(reader.count(), Some(u64::MAX));
        let floats = reader.floats(3).unwrap();
        assert_eq!((floats[0], floats[1].to_bits(), floats[2]), (f64::INFINITY, odd.to_bits(), 5e-324));
        assert!(reader.is_empty() && reader.count().is_none() && reader.floats(1).is_none());
    }

    #[test]
    fn a_torn_word_is_noticed() {
        assert_eq!(Kept::from_bytes(&[0; 15]), None);
    }
}
