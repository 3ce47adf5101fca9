//! Interleaved timing: short chunks of each piece in turn, so that what disturbs the machine disturbs all alike.

use std::time::Instant;

/// Times each piece `repeat` times in turn; seconds, `[piece][repetition]`. The first round is not kept.
pub fn interleave(repeat: usize, pieces: &mut [&mut dyn FnMut()]) -> Vec<Vec<f64>> {
    let mut times = vec![Vec::with_capacity(repeat); pieces.len()];
    for round in 0..=repeat {
        for (piece, times) in pieces.iter_mut().zip(times.iter_mut()) {
            let start = Instant::now();
            piece();
            let seconds = start.elapsed().as_secs_f64();
            if round > 0 {
                times.push(seconds);
            }
        }
    }
    times
}

pub fn median(values: &[f64]) -> f64 {
    let mut sorted = values.to_vec();
    sorted.sort_by(f64::total_cmp);
    sorted[sorted.len() / 2]
}

/// Half the distance between the quartiles, percent of the median.
pub fn spread(values: &[f64]) -> f64 {
    let mut sorted = values.to_vec();
    sorted.sort_by(f64::total_cmp);
    let n = sorted.len();
    50.0 * (sorted[3 * n / 4] - sorted[n / 4]) / median(values)
}
