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
        let (state, short) = (self.state(elapsed), self.short_state(elapsed));
        match &mut self.face {
            Face::Bar(bar) => {
                bar.set_position(self.tally.total());
                bar.set_message(short);
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

    /// How long it will take from here.
    fn left(&self, rate: Option<f64>) -> Option<Duration> {
        let left = self.total.saturating_sub(self.tally.total());
        rate.filter(|_| left > 0).and_then(|rate| Duration::try_from_secs_f64(left as f64 / rate).ok())
    }

    fn state(&self, elapsed: Duration) -> String {
        let rate = self.rate(elapsed);
        pieces(&[rate_words(rate), ending_words(self.left(rate)), shares(&self.tally)])
    }

    /// What stands beside the bar on a terminal: the shares always, then what else there is room for.
    fn short_state(&self, elapsed: Duration) -> String {
        let rate = self.rate(elapsed);
        let shares = short_shares(&self.tally);
        let (end, left) = short_ending(self.left(rate), SystemTime::now());
        let pace = rate_words(rate);
        let wishes = [vec![&shares, &end, &left, &pace], vec![&shares, &end, &left], vec![&shares, &end]];
        let room = TERMINAL_COLUMNS - bar_columns(self.total);
        let joined = wishes.into_iter().map(|parts| {
            let parts = parts.into_iter().filter(|part| !part.is_empty());
            parts.map(String::as_str).collect::<Vec<_>>().join(" ")
        });
        let fits = joined.into_iter().find(|words| words.chars().count() <= room);
        fits.unwrap_or_else(|| shares.clone())
    }
}

const TERMINAL_COLUMNS: usize = 80;
const BAR_COLUMNS: usize = 5;

/// What the template of [`bar`] takes before the message.
fn bar_columns(total: u64) -> usize {
    BAR_COLUMNS + " 100% of ".len() + HumanCount(total).to_string().len() + 1
}

fn bar(total: u64, before: u64) -> ProgressBar {
    let style = ProgressStyle::with_template(&format!(
        "{{bar:{BAR_COLUMNS}}} {{percent:>3}}% of {{human_len}} {{wide_msg}}"
    ))
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

/// [`shares`] in few letters: "reg 67 cha 20 lost 13%".
fn short_shares(tally: &Tally) -> String {
    let total = tally.total();
    let mut found: Vec<(u64, &str)> =
        Verdict::ALL.iter().map(|v| (tally.of(*v), short_word(*v))).filter(|(n, _)| *n > 0).collect();
    found.sort_by_key(|(count, _)| std::cmp::Reverse(*count));
    let word = |(n, word): &(u64, &str)| format!("{word} {:.0}", 100.0 * *n as f64 / total as f64);
    let words = found.iter().map(word).collect::<Vec<_>>().join(" ");
    if words.is_empty() { words } else { format!("{words}%") }
}

fn short_word(verdict: Verdict) -> &'static str {
    match verdict.word() {
        "lost" => "lost",
        long => &long[..long.len().min(3)],
    }
}

/// "ends 13:45Z" (universal time, as the Z of ISO 8601 says) and "(15 s)"; empty where nobody knows.
fn short_ending(left: Option<Duration>, now: SystemTime) -> (String, String) {
    let Some((left, end)) = left.and_then(|left| Some((left, now.checked_add(left)?))) else {
        return (String::new(), String::new());
    };
    let (end, now) = (utc(end), utc(now));
    // Of "2026-12-01T13:45:07Z" the minutes, another day with its month and date, another year as a date alone.
    let when = match (end.get(..10) == now.get(..10), end.get(..4) == now.get(..4)) {
        (true, _) => format!("{}Z", end.get(11..16).unwrap_or_default()),
        (false, true) => {
            format!("{} {}Z", end.get(5..10).unwrap_or_default(), end.get(11..16).unwrap_or_default())
        }
        (false, false) => end.split('T').next().unwrap_or_default().to_string(),
    };
    (format!("ends {when}"), format!("({})", short_time(left)))
}

/// A time in its largest unit.
fn short_time(time: Duration) -> String {
    let seconds = time.as_secs_f64();
    match seconds {
        ..99.5 => format!("{seconds:.0} s"),
        ..5_970.0 => format!("{:.0} min", seconds / 60.0),
        ..171_000.0 => format!("{:.0} h", seconds / 3600.0),
        _ => format!("{:.0} d", seconds / 86_400.0),
    }
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
    fn the_words_beside_the_bar_are_short_and_the_shares_lead() {
        let mut progress = Progress::new(200, tally(60, 40), true);
        (0..20).for_each(|_| progress.note(Some(Verdict::Regular)));
        let short = progress.short_state(Duration::from_secs(2));
        assert!(short.starts_with("reg 67 lost 33% ends "), "{short}");
        assert!(short.ends_with("Z (8 s) 10 cells/s"), "{short}");
    }

    #[test]
    fn all_verdicts_and_the_ending_fit_the_terminal() {
        let mut tally = Tally::default();
        for (verdict, count) in Verdict::ALL.into_iter().zip([2001, 2002, 2003, 2004, 2005]) {
            (0..count).for_each(|_| tally.add(verdict));
        }
        for (total, hours) in [(50_000, 1), (1_000_000, 30), (1_000_000, 300), (1_000_000, 99_000)] {
            let mut progress = Progress::new(total, Tally::default(), true);
            progress.tally = tally.clone();
            let pace_s = hours as f64 * 3600.0 / (total - 10_015) as f64;
            let short = progress.short_state(Duration::from_secs_f64(10_015.0 * pace_s));
            let columns = bar_columns(total) + short.chars().count();
            assert!(columns <= TERMINAL_COLUMNS, "{columns}: {short}");
            assert!(short.matches(" 20").count() >= 5 && short.contains("ends "), "{short}");
        }
    }

    #[test]
    fn another_day_is_named() {
        let now = SystemTime::UNIX_EPOCH + Duration::from_secs(1_709_251_199); // 2024-02-29T23:59:59Z
        let ending = |seconds| short_ending(Some(Duration::from_secs(seconds)), now);
        assert_eq!(ending(0), ("ends 23:59Z".to_string(), "(0 s)".to_string()));
        assert_eq!(ending(7201), ("ends 03-01 02:00Z".to_string(), "(2 h)".to_string()));
        assert_eq!(ending(400 * 86_400), ("ends 2025-04-04".to_string(), "(400 d)".to_string()));
    }

    #[test]
    fn nothing_is_claimed_before_the_first_cell() {
        let progress = Progress::new(10, Tally::default(), true);
        assert_eq!(progress.state(Duration::from_secs(5)), "");
    }
}
