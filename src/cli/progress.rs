//! How far long work is: a bar on a terminal, a line at growing intervals elsewhere.

use std::io::IsTerminal;
use std::time::{Duration, Instant, SystemTime};

use indicatif::{HumanCount, HumanDuration, ProgressBar, ProgressStyle};

use crate::survey::{Tally, utc};
use crate::verdict::Verdict;

/// Pause before the first line of a log; each later pause is longer by half.
const FIRST_PAUSE: Duration = Duration::from_secs(10);
const LONGEST_PAUSE: Duration = Duration::from_secs(600);

/// Shows counts, rate, verdicts and the time of ending on standard error.
pub struct Progress {
    face: Face,
    tally: Tally,
    total: u64,
    /// Done before this process began: no part of its rate.
    before: u64,
    started: Instant,
}

enum Face {
    Bar(ProgressBar),
    Log { next: Duration, pause: Duration },
    None,
}

impl Progress {
    /// `tally` counts what was done before.
    pub fn new(total: u64, tally: Tally, quiet: bool) -> Progress {
        let face = if quiet {
            Face::None
        } else if std::io::stderr().is_terminal() {
            Face::Bar(bar(total, tally.total()))
        } else {
            Face::Log { next: FIRST_PAUSE, pause: FIRST_PAUSE }
        };
        Progress { face, before: tally.total(), tally, total, started: Instant::now() }
    }

    /// One more cell, or just the passing of time.
    pub fn note(&mut self, verdict: Option<Verdict>) {
        if let Some(verdict) = verdict {
            self.tally.add(verdict);
            return;
        }
        let elapsed = self.started.elapsed();
        let state = self.state(elapsed);
        match &mut self.face {
            Face::Bar(bar) => {
                bar.set_position(self.tally.total());
                bar.set_message(state);
            }
            Face::Log { next, pause } if elapsed >= *next => {
                let (done, total) = (self.tally.total(), self.total);
                eprintln!("{}  {}  {state}", utc(SystemTime::now()), count(done, total));
                *pause = (*pause * 3 / 2).min(LONGEST_PAUSE);
                *next = elapsed + *pause;
            }
            Face::Log { .. } | Face::None => {}
        }
    }

    /// Takes the bar away and says what this process did.
    pub fn finish(self) {
        let elapsed = self.started.elapsed();
        let line = format!(
            "{} in {}: {}",
            count(self.tally.total(), self.total),
            HumanDuration(elapsed),
            pieces(&[rate_words(self.rate(elapsed)), shares(&self.tally)])
        );
        match self.face {
            Face::Bar(bar) => {
                bar.finish_and_clear();
                eprintln!("{line}");
            }
            Face::Log { .. } => eprintln!("{line}"),
            Face::None => {}
        }
    }

    fn rate(&self, elapsed: Duration) -> Option<f64> {
        let done = self.tally.total() - self.before;
        (done > 0 && elapsed > Duration::ZERO).then(|| done as f64 / elapsed.as_secs_f64())
    }

    fn state(&self, elapsed: Duration) -> String {
        let rate = self.rate(elapsed);
        let left = self.total.saturating_sub(self.tally.total());
        let ending = match rate {
            Some(rate) if left > 0 => ending_words(Duration::try_from_secs_f64(left as f64 / rate).ok()),
            _ => String::new(),
        };
        pieces(&[rate_words(rate), ending, shares(&self.tally)])
    }
}

fn bar(total: u64, before: u64) -> ProgressBar {
    let style = ProgressStyle::with_template("{bar:16} {percent:>3}% {human_pos}/{human_len}  {wide_msg}")
        .unwrap_or_else(|_| ProgressStyle::default_bar());
    ProgressBar::new(total).with_style(style).with_position(before)
}

fn count(done: u64, total: u64) -> String {
    let share = if total == 0 { 100.0 } else { 100.0 * done as f64 / total as f64 };
    format!("{} of {} cells ({share:.0} %)", HumanCount(done), HumanCount(total))
}

fn rate_words(rate: Option<f64>) -> String {
    match rate {
        None => String::new(),
        Some(rate) if rate >= 10.0 => format!("{rate:.0} cells/s"),
        Some(rate) if rate >= 0.1 => format!("{rate:.2} cells/s"),
        Some(rate) => format!("{:.1} cells/h", rate * 3600.0),
    }
}

/// Shares of the verdicts that occur, largest first.
fn shares(tally: &Tally) -> String {
    let total = tally.total();
    let mut found: Vec<(u64, &str)> =
        Verdict::ALL.iter().map(|v| (tally.of(*v), v.word())).filter(|(n, _)| *n > 0).collect();
    found.sort_by_key(|(count, _)| std::cmp::Reverse(*count));
    let word = |(n, word): &(u64, &str)| format!("{word} {:.0} %", 100.0 * *n as f64 / total as f64);
    found.iter().map(word).collect::<Vec<_>>().join(", ")
}

/// When something ends that has so long to go.
pub(super) fn ending_words(left: Option<Duration>) -> String {
    let Some((left, end)) = left.and_then(|l| Some((l, SystemTime::now().checked_add(l)?))) else {
        return String::new();
    };
    let end = utc(end);
    let (date, time) = end.split_once('T').unwrap_or((&end, ""));
    let today = utc(SystemTime::now()).starts_with(date);
    let minutes = &time[..time.len().min(5)];
    let when = if today { minutes.to_string() } else { format!("{date} {minutes}") };
    format!("ends about {when} UTC (in {})", HumanDuration(left))
}

fn pieces(parts: &[String]) -> String {
    parts.iter().filter(|p| !p.is_empty()).cloned().collect::<Vec<_>>().join("; ")
}

#[cfg(test)]
mod tests {
    use super::*;

    fn tally(regular: u64, lost: u64) -> Tally {
        let mut tally = Tally::default();
        (0..regular).for_each(|_| tally.add(Verdict::Regular));
        (0..lost).for_each(|_| tally.add(Verdict::Lost));
        tally
    }

    #[test]
    fn shares_are_of_all_cells_and_the_largest_leads() {
        assert_eq!(shares(&tally(1, 3)), "lost 75 %, regular 25 %");
        assert_eq!(shares(&tally(0, 0)), "");
    }

    #[test]
    fn the_rate_counts_only_what_this_process_did() {
        let mut progress = Progress::new(200, tally(60, 40), true);
        (0..20).for_each(|_| progress.note(Some(Verdict::Regular)));
        assert_eq!(progress.rate(Duration::from_secs(2)), Some(10.0));
        let state = progress.state(Duration::from_secs(2));
        assert!(state.starts_with("10 cells/s; ends about "), "{state}");
        assert!(state.ends_with("UTC (in 8 seconds); regular 67 %, lost 33 %"), "{state}");
    }

    #[test]
    fn nothing_is_claimed_before_the_first_cell() {
        let progress = Progress::new(10, Tally::default(), true);
        assert_eq!(progress.state(Duration::from_secs(5)), "");
    }
}
