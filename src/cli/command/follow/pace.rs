//! How far one configuration has been followed: a bar on a terminal, a line at growing intervals elsewhere.

use std::io::IsTerminal;
use std::time::{Duration, Instant, SystemTime};

use indicatif::{HumanDuration, ProgressBar, ProgressStyle};

use super::wish::{Wish, count};
use crate::assess::FollowProgress;
use crate::cli::progress::ending_words;
use crate::report::short;
use crate::survey::utc;

const FIRST_PAUSE: Duration = Duration::from_secs(10);
const LONGEST_PAUSE: Duration = Duration::from_secs(600);
/// Between two changes of the bar.
const BAR_PAUSE: Duration = Duration::from_millis(100);
const BAR_LENGTH: u64 = 1000;

pub struct Pace {
    face: Face,
    orbits: f64,
    planet: String,
    energy_error: f64,
    last: FollowProgress,
    /// When and where this process began, or began again.
    since: (Instant, f64),
    started: Instant,
    next: Duration,
    pause: Duration,
}

enum Face {
    Bar(ProgressBar),
    Log,
    None,
}

impl Pace {
    pub fn new(wish: &Wish, at: &FollowProgress) -> Pace {
        let (planet, period) = wish.innermost();
        let (face, pause) = if wish.quiet {
            (Face::None, LONGEST_PAUSE)
        } else if std::io::stderr().is_terminal() {
            (Face::Bar(bar()), BAR_PAUSE)
        } else {
            (Face::Log, FIRST_PAUSE)
        };
        let now = Instant::now();
        Pace {
            face,
            orbits: wish.plan.span_day / period,
            planet: wish.planet(planet).to_owned(),
            energy_error: wish.plan.energy_error,
            last: *at,
            since: (now, at.share),
            started: now,
            next: pause,
            pause,
        }
    }

    pub fn note(&mut self, at: &FollowProgress) {
        if at.redone > self.last.redone {
            self.say_again(at);
            self.since = (Instant::now(), at.share);
        }
        self.last = *at;
        let elapsed = self.started.elapsed();
        if elapsed < self.next {
            return;
        }
        let state = self.state(self.since.0.elapsed());
        match &self.face {
            Face::Bar(bar) => {
                bar.set_position((at.share * BAR_LENGTH as f64) as u64);
                bar.set_message(state);
            }
            Face::Log => {
                eprintln!("{}  {:.1} % {state}", utc(SystemTime::now()), 100.0 * at.share);
                self.pause = (self.pause * 3 / 2).min(LONGEST_PAUSE);
            }
            Face::None => {}
        }
        self.next = elapsed + self.pause;
    }

    /// Takes the bar away and says how far this process came, as a share of the span, and how long it took.
    pub fn finish(self, share: f64) {
        let done = count(share * self.orbits);
        let elapsed = self.started.elapsed();
        let line = format!(
            "{done} of {} orbits of {} in {}",
            count(self.orbits),
            self.planet,
            HumanDuration(elapsed)
        );
        match &self.face {
            Face::Bar(bar) => bar.finish_and_clear(),
            Face::Log => {}
            Face::None => return,
        }
        if elapsed >= Duration::from_secs(1) {
            eprintln!("{line}");
        }
    }

    fn say_again(&self, at: &FollowProgress) {
        let how = match at.adaptive {
            true => "the adaptive engine".to_owned(),
            false => format!("a step of {} d", short(at.step_day)),
        };
        let line = format!(
            "the energy error passed {}, or could not be told before a loss; begins again with {how}",
            short(self.energy_error)
        );
        match &self.face {
            Face::Bar(bar) => bar.println(line),
            Face::Log => eprintln!("{line}"),
            Face::None => {}
        }
    }

    /// What is known after working for so long since the share that this process began at.
    fn state(&self, worked: Duration) -> String {
        let gained = self.last.share - self.since.1;
        let mut parts =
            vec![format!("{} of {} orbits", count(self.last.share * self.orbits), count(self.orbits))];
        if gained > 0.0 {
            let seconds = worked.as_secs_f64();
            parts.push(format!("{}/s", short(gained * self.orbits / seconds)));
            let left = seconds * (1.0 - self.last.share) / gained;
            parts.push(ending_words(Duration::try_from_secs_f64(left).ok()));
        }
        parts.push(format!("energy error {}", short(self.last.energy_error)));
        parts.extend(self.last.mean_megno.map(|y| format!("⟨Y⟩ {y:.3}")));
        parts.retain(|part| !part.is_empty());
        parts.join("; ")
    }
}

fn bar() -> ProgressBar {
    let style = ProgressStyle::with_template("{bar:16} {percent:>3}% {wide_msg}")
        .unwrap_or_else(|_| ProgressStyle::default_bar());
    ProgressBar::new(BAR_LENGTH).with_style(style)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_rate_counts_from_where_this_process_began() {
        let at = FollowProgress {
            share: 0.5,
            time_day: 0.0,
            step_day: 1.0,
            energy_error: 2e-9,
            mean_megno: Some(2.0004),
            redone: 0,
            adaptive: false,
        };
        let now = Instant::now();
        let pace = Pace {
            face: Face::None,
            orbits: 1e9,
            planet: "b".to_owned(),
            energy_error: 1e-6,
            last: at,
            since: (now, 0.4),
            started: now,
            next: FIRST_PAUSE,
            pause: FIRST_PAUSE,
        };
        let state = pace.state(Duration::from_secs(100));
        assert!(state.starts_with("5e8 of 1e9 orbits; 1e6/s; ends about "), "{state}");
        assert!(state.ends_with("UTC (in 8 minutes); energy error 2e-9; ⟨Y⟩ 2.000"), "{state}");
    }
}
