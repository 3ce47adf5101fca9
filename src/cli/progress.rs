//! How far long work is: a bar on a terminal, a line at growing intervals elsewhere.

use std::io::IsTerminal;
use std::time::{Duration, Instant, SystemTime};

use indicatif::{HumanCount, HumanDuration, ProgressBar, ProgressStyle};

use crate::survey::{News, Stage, Tally, utc};
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
    /// Cells that were filled at the end.
    filled: u64,
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
        Progress { face, before: tally.total(), filled: 0, tally, total, started: Instant::now() }
    }

    /// What the pool tells.
    pub fn note(&mut self, news: News) {
        let stage = match news {
            News::Integrated(verdict) => return self.tally.add(verdict),
            News::Filled(cells) => return self.filled += cells,
            News::Passing(stage) => stage,
        };
        let elapsed = self.started.elapsed();
        let state = self.state(elapsed, stage);
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
            count(self.tally.total() + self.filled, self.total),
            HumanDuration(elapsed),
            pieces(&[rate_words(self.rate(elapsed)), filled_words(self.filled), shares(&self.tally)])
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

    fn state(&self, elapsed: Duration, stage: Stage) -> String {
        let rate = self.rate(elapsed);
        let all = self.total.saturating_sub(self.tally.total());
        let left = if stage.filling { all.min(expected(stage)) } else { all };
        let ending = match rate {
            Some(rate) if left > 0 => ending_words(Duration::try_from_secs_f64(left as f64 / rate).ok()),
            _ => String::new(),
        };
        pieces(&[stage_words(stage), rate_words(rate), ending, shares(&self.tally)])
    }
}

/// Cells still to be integrated: those of this level, and twice as many on each level after it (what is integrated
/// lies along lines, and these have twice the cells when the cells are half as wide).
fn expected(stage: Stage) -> u64 {
    stage.awaited.saturating_mul((2u64 << stage.levels_left.min(32)) - 1)
}

fn stage_words(stage: Stage) -> String {
    match stage.stride {
        0 | 1 => String::new(),
        stride => format!("grid of every {stride}th cell").replace("2th", "2nd"),
    }
}

fn filled_words(filled: u64) -> String {
    if filled == 0 { String::new() } else { format!("{} filled", HumanCount(filled)) }
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
        (0..20).for_each(|_| progress.note(News::Integrated(Verdict::Regular)));
        assert_eq!(progress.rate(Duration::from_secs(2)), Some(10.0));
        let stage = Stage { stride: 1, levels_left: 0, awaited: 80, filling: false };
        let state = progress.state(Duration::from_secs(2), stage);
        assert!(state.starts_with("10 cells/s; ends about "), "{state}");
        assert!(state.ends_with("UTC (in 8 seconds); regular 67 %, lost 33 %"), "{state}");
    }

    #[test]
    fn a_level_is_named_and_those_after_it_are_reckoned_in() {
        let mut progress = Progress::new(1000, Tally::default(), true);
        (0..20).for_each(|_| progress.note(News::Integrated(Verdict::Regular)));
        let stage = Stage { stride: 4, levels_left: 2, awaited: 10, filling: true };
        // 10 cells on this level, 20 and 40 on the next two.
        let state = progress.state(Duration::from_secs(2), stage);
        assert!(state.starts_with("grid of every 4th cell; 10 cells/s; ends about "), "{state}");
        assert!(state.contains("(in 7 seconds)"), "{state}");
    }

    #[test]
    fn nothing_is_claimed_before_the_first_cell() {
        let progress = Progress::new(10, Tally::default(), true);
        let stage = Stage { stride: 1, levels_left: 0, awaited: 10, filling: true };
        assert_eq!(progress.state(Duration::from_secs(5), stage), "");
    }
}
