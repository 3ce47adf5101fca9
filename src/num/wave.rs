//! exp(iωu) at evenly spaced places, with a sine and a cosine for few of them only.

use super::fourier::Complex;

/// Places from one that is computed outright to the next.
const RUN: usize = 64;

/// exp(iωu) for u = `first`, `first` + 1 …, `count` of them; ω in rad per place.
///
/// Every 64th comes from sine and cosine; those between are its product with one of 64 powers of a single turn, which come from
/// sine and cosine too. So nothing adds up along the way: each is good to two roundings beside those of its phase.
pub(super) fn wave(frequency: f64, first: f64, count: usize) -> Vec<Complex> {
    let turned = |places: f64| Complex::from_polar(1.0, frequency * places);
    let powers: Vec<Complex> = (0..RUN.min(count)).map(|place| turned(place as f64)).collect();
    let mut all = Vec::with_capacity(count);
    for begin in (0..count).step_by(RUN) {
        let at = turned(first + begin as f64);
        all.extend(powers.iter().take(count - begin).map(|power| at * power));
    }
    all
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The slow twin: a sine and a cosine for each place.
    #[test]
    fn as_if_each_were_computed_outright() {
        for (frequency, count) in [(0.0, 5), (1e-3, 63), (0.7, 64), (-3.1, 65), (2.9, 8192), (1e-9, 4097)] {
            let first = -0.5 * (count as f64 - 1.0);
            let all = wave(frequency, first, count);
            assert_eq!(all.len(), count);
            for (place, found) in all.iter().enumerate() {
                let phase = frequency * (first + place as f64);
                // The phase is rounded once or twice, each product and each function once.
                let slack = f64::EPSILON * (3.0 + frequency.abs() * count as f64);
                let gap = (found - Complex::from_polar(1.0, phase)).norm();
                assert!(gap <= slack, "{frequency} {place}: {gap:e}");
            }
        }
    }
}
