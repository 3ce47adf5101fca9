//! Whole numbers.

/// The largest number that divides both; the other one when one is 0.
pub fn greatest_common_divisor(one: u32, other: u32) -> u32 {
    if other == 0 { one } else { greatest_common_divisor(other, one % other) }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn divisors() {
        assert_eq!(greatest_common_divisor(12, 18), 6);
        assert_eq!(greatest_common_divisor(7, 5), 1);
        assert_eq!(greatest_common_divisor(0, 5), 5);
    }
}
