//! Laplace coefficients.

use super::OutOfDomain;
use super::domain::Domain;

/// Above this α the series needs more than about a million terms.
const LARGEST: f64 = 0.999_98;

/// Laplace coefficient b_s^{(j)}(α).
///
/// (1/π) ∫₀^{2π} cos jψ (1 − 2α cos ψ + α²)^{−s} dψ = 2 (s)_j/j! α^j F(s, s+j; j+1; α²): the hypergeometric series has
/// positive terms only, so nothing cancels and the result is good to a few roundings, small values too.
/// α is the ratio of two semi-major axes, s > 0. Errors: [`OutOfDomain`] unless 0 ≤ α ≤ 0.99998 and s > 0.
/// Source: Laplace; the series as in Brouwer & Clemence (1961) and Murray & Dermott (1999), section 6.4 (from memory).
pub fn laplace_coefficient(s: f64, j: u32, alpha: f64) -> Result<f64, OutOfDomain> {
    let domain = Domain("the series of a Laplace coefficient");
    domain.need(s > 0.0 && s < 100.0, "s", s, "0 < s < 100")?;
    domain.need((0.0..=LARGEST).contains(&alpha), "alpha", alpha, "0 <= alpha <= 0.99998")?;
    let order = f64::from(j);
    let lead: f64 = (0..j).map(|k| (s + f64::from(k)) / f64::from(k + 1) * alpha).product();
    let square = alpha * alpha;
    let (mut term, mut k) = (1.0, 0.0);
    let mut terms = vec![1.0];
    // The ratio of terms falls to α² from above or rises to it from below; both ends bound the tail.
    while term > 0.0 {
        let ratio = (s + k) * (s + order + k) / ((order + 1.0 + k) * (1.0 + k)) * square;
        term *= ratio;
        k += 1.0;
        terms.push(term);
        if ratio.max(square) < 1.0 && term < 1e-18 * (1.0 - ratio.max(square)) * terms[0] {
            break;
        }
    }
    // Small ones first.
    Ok(2.0 * lead * terms.iter().rev().sum::<f64>())
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    /// tests/truth/laplace-coefficients.csv; its head says how each value was had. 15 digits are printed.
    #[test]
    fn tabulated_to_twelve_digits() {
        let text = include_str!("../../tests/truth/laplace-coefficients.csv");
        let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_reader(text.as_bytes());
        let mut count = 0;
        for record in reader.records() {
            let record = record.unwrap();
            let number = |index: usize| record[index].parse::<f64>().unwrap();
            let found = laplace_coefficient(number(1), record[2].parse().unwrap(), number(0)).unwrap();
            assert!((found / number(3) - 1.0).abs() < 1e-12, "{record:?}: {found}");
            count += 1;
        }
        assert_eq!(count, 156);
    }

    proptest! {
        /// The slow twin: the trapezoidal rule on the definition, whose error falls as α^nodes. What cancels in it is
        /// eps × b^{(0)}.
        #[test]
        fn the_definition_by_quadrature(alpha in 0.0..0.95f64, j in 0u32..9, twice in 1u32..8) {
            let s = 0.5 * f64::from(twice);
            let nodes = 4096;
            let sum: f64 = (0..nodes)
                .map(|k| {
                    let psi = std::f64::consts::TAU * f64::from(k) / f64::from(nodes);
                    (f64::from(j) * psi).cos() / (1.0 - 2.0 * alpha * psi.cos() + alpha * alpha).powf(s)
                })
                .sum();
            let twin = 2.0 * sum / f64::from(nodes);
            let found = laplace_coefficient(s, j, alpha).unwrap();
            let size = laplace_coefficient(s, 0, alpha).unwrap();
            prop_assert!((found - twin).abs() < 1e-13 * size, "{found} {twin}");
        }
    }

    #[test]
    fn outside_its_domain_it_refuses() {
        for (s, alpha) in [(0.5, 1.0), (0.5, -0.1), (0.5, f64::NAN), (0.0, 0.5), (f64::NAN, 0.5)] {
            assert!(laplace_coefficient(s, 1, alpha).is_err(), "{s} {alpha}");
        }
        assert_eq!(laplace_coefficient(1.5, 0, 0.0), Ok(2.0));
        assert_eq!(laplace_coefficient(1.5, 2, 0.0), Ok(0.0));
        assert!(laplace_coefficient(2.5, 3, LARGEST).unwrap().is_finite());
    }
}
