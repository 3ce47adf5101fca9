//! Where a criterion holds; outside it nothing is said.

/// A criterion was asked about something it was not made for.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[error("{criterion} says nothing for {quantity} = {}; it holds for {allowed}", six_digits(*found))]
pub struct OutOfDomain {
    pub criterion: &'static str,
    pub quantity: &'static str,
    pub found: f64,
    /// The domain in words, as "0 <= e < 1".
    pub allowed: &'static str,
}

/// The number to six digits: what rounding left behind helps nobody to see what is wrong.
fn six_digits(value: f64) -> f64 {
    format!("{value:.5e}").parse().unwrap_or(value)
}

/// One criterion checking its arguments.
pub(super) struct Domain(pub &'static str);

impl Domain {
    /// Errors: [`OutOfDomain`] unless `holds`. NaN must fail `holds`: write the condition the right way round.
    pub fn need(
        &self,
        holds: bool,
        quantity: &'static str,
        found: f64,
        allowed: &'static str,
    ) -> Result<(), OutOfDomain> {
        if holds { Ok(()) } else { Err(OutOfDomain { criterion: self.0, quantity, found, allowed }) }
    }
}
