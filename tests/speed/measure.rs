//! Interleaved timing: short chunks of each piece in turn, so that what disturbs the machine disturbs all alike.

#![allow(dead_code, reason = "each bench uses its own part")]

use std::fs;
use std::path::Path;
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

/// What one piece took in units of another, repetition by repetition.
pub fn ratios(these: &[f64], those: &[f64]) -> Vec<f64> {
    these.iter().zip(those).map(|(a, b)| a / b).collect()
}

/// Processor time that this thread has had, seconds: on a machine shared with others the clock on the wall says
/// little about pieces longer than a slice of the scheduler's.
pub fn thread_seconds() -> f64 {
    let text = fs::read_to_string("/proc/thread-self/schedstat").expect("Linux tells the time of a thread");
    let first = text.split_whitespace().next().expect("the first number is the time run");
    first.parse::<f64>().expect("nanoseconds") * 1e-9
}

/// Processor time of the ended child processes, seconds, to a hundredth.
pub fn children_seconds() -> f64 {
    let text = fs::read_to_string("/proc/self/stat").expect("Linux tells the times of a process");
    let after_name = text.rsplit(')').next().expect("the name stands in parentheses");
    let ticks = |at: usize| -> f64 {
        after_name.split_whitespace().nth(at).expect("a field").parse().expect("ticks")
    };
    // Fields 16 and 17 of proc(5), user and system time of children, at 100 ticks a second.
    (ticks(13) + ticks(14)) / 100.0
}

/// Writes the medians of a bench into `reports/speed`.
pub fn write_table(name: &str, header: &str, rows: &[String]) {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("reports/speed").join(name).with_extension("csv");
    fs::create_dir_all(path.parent().expect("a folder")).expect("reports/speed can be made");
    fs::write(&path, format!("{header}\n{}\n", rows.join("\n"))).expect("the table can be written");
    println!("wrote {}", path.display());
}
