//! The analysis of what was followed, in a thread of its own: so it can be left at once, and is told of while it lasts.

use std::io::IsTerminal;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::mpsc::{Receiver, RecvTimeoutError, channel};
use std::thread;
use std::time::{Duration, Instant, SystemTime};

use indicatif::{HumanDuration, ProgressBar, ProgressStyle};

use super::wish::Wish;
use crate::assess::{Analysed, AnalysisProgress, Samples, analyse};
use crate::cli::CliError;
use crate::survey::utc;

/// Between two looks at what is told and at whether to stop.
const LOOK: Duration = Duration::from_millis(50);
/// Nothing is said of an analysis that takes no longer.
const SILENT: Duration = Duration::from_secs(3);
/// Between the first two lines of a log; each later pause is longer by half.
const FIRST_PAUSE: Duration = Duration::from_secs(10);
const LONGEST_PAUSE: Duration = Duration::from_secs(600);

enum News {
    At(AnalysisProgress),
    Done(Box<Analysed>),
}

/// Analyses the samples; none when stopped before the end. What is left behind then ends with the process.
pub fn analysed(
    wish: &Wish,
    samples: &Samples,
    stop: &Arc<AtomicBool>,
) -> Result<Option<Analysed>, CliError> {
    let (tell, told) = channel();
    let (samples, configuration, stopped) = (samples.clone(), wish.configuration.clone(), Arc::clone(stop));
    let work = move || {
        let mut go_on = |at| tell.send(News::At(at)).is_ok() && !stopped.load(Ordering::Relaxed);
        let found = analyse(&samples, &configuration, &mut go_on);
        // Whoever has stopped listening has stopped waiting.
        let _ = tell.send(News::Done(Box::new(found)));
    };
    thread::Builder::new().name("analysis".to_owned()).spawn(work).map_err(CliError::working)?;
    wait(&told, Face::new(wish.quiet), stop)
}

fn wait(told: &Receiver<News>, mut face: Face, stop: &AtomicBool) -> Result<Option<Analysed>, CliError> {
    let mut last = AnalysisProgress::default();
    loop {
        let found = match told.recv_timeout(LOOK) {
            Ok(News::At(at)) => {
                last = at;
                None
            }
            Ok(News::Done(found)) => Some(*found),
            Err(RecvTimeoutError::Timeout) => None,
            Err(RecvTimeoutError::Disconnected) => {
                return Err(CliError::Working(
                    "the analysis of the motion ended without a result".to_owned(),
                ));
            }
        };
        if stop.load(Ordering::Relaxed) {
            face.leave();
            return Ok(None);
        }
        match found {
            Some(found) => {
                face.finish();
                return Ok(Some(found));
            }
            None => face.note(last),
        }
    }
}

/// What shows how far it is.
struct Face {
    kind: Kind,
    started: Instant,
    next: Duration,
    pause: Duration,
}

enum Kind {
    Bar(Option<ProgressBar>),
    Log,
    None,
}

impl Face {
    fn new(quiet: bool) -> Face {
        let kind = match (quiet, std::io::stderr().is_terminal()) {
            (true, _) => Kind::None,
            (_, true) => Kind::Bar(None),
            _ => Kind::Log,
        };
        Face { kind, started: Instant::now(), next: SILENT, pause: FIRST_PAUSE }
    }

    fn note(&mut self, at: AnalysisProgress) {
        let elapsed = self.started.elapsed();
        if elapsed < self.next {
            return;
        }
        match &mut self.kind {
            Kind::Bar(bar) => {
                let bar = bar.get_or_insert_with(line);
                bar.set_message(state(at));
                self.next = elapsed + LOOK;
            }
            Kind::Log => {
                eprintln!("{}  {}", utc(SystemTime::now()), state(at));
                self.next = elapsed + self.pause;
                self.pause = (self.pause * 3 / 2).min(LONGEST_PAUSE);
            }
            Kind::None => self.next = Duration::MAX,
        }
    }

    fn leave(&self) {
        if let Kind::Bar(Some(bar)) = &self.kind {
            bar.finish_and_clear();
        }
    }

    fn finish(self) {
        self.leave();
        let elapsed = self.started.elapsed();
        if elapsed >= SILENT && !matches!(self.kind, Kind::None) {
            eprintln!("frequencies and resonances in {}", HumanDuration(elapsed));
        }
    }
}

fn line() -> ProgressBar {
    let style =
        ProgressStyle::with_template("{wide_msg}").unwrap_or_else(|_| ProgressStyle::default_spinner());
    ProgressBar::new_spinner().with_style(style)
}

fn state(at: AnalysisProgress) -> String {
    let mut words = format!("frequencies and resonances: signal {} of {}", at.signals, at.signals_of);
    if at.angles_of > 0 {
        words.push_str(&format!(", angle {} of {}", at.angles, at.angles_of));
    }
    words
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::assess::NotAnalysed;

    #[test]
    fn what_is_stopped_is_not_waited_for() {
        let (tell, told) = channel();
        tell.send(News::At(AnalysisProgress::default())).unwrap();
        let began = Instant::now();
        // The sender still lives and never says that it is done.
        assert!(wait(&told, Face::new(true), &AtomicBool::new(true)).unwrap().is_none());
        assert!(began.elapsed() < Duration::from_secs(1));
        let few = NotAnalysed::Few { found: 3, needed: 32 };
        tell.send(News::Done(Box::new(Err(few)))).unwrap();
        let found = wait(&told, Face::new(true), &AtomicBool::new(false)).unwrap();
        assert!(matches!(found, Some(Err(why)) if why == few));
        drop(tell);
        let error = wait(&told, Face::new(true), &AtomicBool::new(false)).unwrap_err();
        assert!(error.to_string().contains("without a result"), "{error}");
    }

    #[test]
    fn it_is_said_how_far_it_is() {
        let mut at = AnalysisProgress { signals: 7, signals_of: 51, ..AnalysisProgress::default() };
        assert_eq!(state(at), "frequencies and resonances: signal 7 of 51");
        (at.signals, at.angles, at.angles_of) = (51, 3, 240);
        assert_eq!(state(at), "frequencies and resonances: signal 51 of 51, angle 3 of 240");
    }
}
