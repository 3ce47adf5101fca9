//! `abide follow`: one configuration → its series, its figure, and the verdict in words.

mod analysing;
mod checkpoint;
mod motion;
mod outputs;
mod pace;
mod view;
mod why;
mod wish;

use std::path::Path;
use std::process::ExitCode;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::Instant;

use crate::assess::{Analysed, Assessment, Follower, Row};
use crate::cli::CliError;
use crate::cli::args::FollowArgs;
use crate::cli::manners::{INTERRUPTED, print, stop_on_signal};
use crate::disk::{self, DiskError, Lock};
use crate::survey;
use checkpoint::{CHECKPOINT, Checkpoint, PICTURE, SERIES};
use pace::Pace;
use view::View;
use wish::Wish;

const LOCK: &str = ".lock";
/// Writing checkpoints takes at most one part in so many of the time.
const SHARE_OF_TIME: u32 = 20;
/// The clock is asked once in so many blocks, each a fraction of a millisecond.
const BLOCKS_PER_LOOK: u32 = 16;

pub fn run(args: FollowArgs) -> Result<ExitCode, CliError> {
    let wish = Wish::check(&args)?;
    let _lock = take_folder(&wish.folder)?;
    let checkpoint = Checkpoint::of(&wish);
    let follower = begin_or_go_on(&wish, &checkpoint, args.anew)?;
    let stop = stop_on_signal()?;
    let folder = wish.folder.display();
    let Some(follower) = follow(follower, &wish, &checkpoint, &stop)? else {
        wish.say(format_args!(
            "stopped; what was followed is kept in {folder}. The same command goes on from there"
        ));
        return Ok(ExitCode::from(INTERRUPTED));
    };
    let Some(done) = analyse(follower, &wish, &stop)? else {
        wish.say(format_args!(
            "stopped; the whole span was followed and is kept in {folder}, but its frequencies and resonances were not yet \
             told. The same command begins with these and writes the tables"
        ));
        return Ok(ExitCode::from(INTERRUPTED));
    };
    show(&wish, &done)?;
    Ok(ExitCode::SUCCESS)
}

/// A configuration that has come to its end.
struct Done {
    assessment: Assessment,
    rows: Vec<Row>,
    analysed: Analysed,
    /// Of the angles to draw, with their times.
    angles: Vec<outputs::AngleDrawn>,
}

/// Proves the folder writable and claims it for this process.
fn take_folder(folder: &Path) -> Result<Lock, CliError> {
    disk::make_writable_folder(folder).map_err(refused)?;
    if folder.join(survey::JOURNAL).exists() {
        return Err(CliError::Input(format!(
            "{} holds a survey; choose another folder with --into",
            folder.display()
        )));
    }
    let begun = [CHECKPOINT, SERIES].iter().any(|file| folder.join(file).exists());
    if let Some(other) = disk::stranger(folder, &[PICTURE]).filter(|_| !begun) {
        return Err(CliError::Input(format!(
            "{} holds other files, as {other}, and nothing that was followed; choose another folder with --into, a \
             new or an empty one",
            folder.display()
        )));
    }
    let holder = format!("process {} on {}", std::process::id(), survey::host());
    Lock::take(&folder.join(LOCK), &holder).map_err(|error| {
        refused(match error {
            DiskError::Held { holder, .. } => DiskError::Held { path: folder.to_path_buf(), holder },
            other => other,
        })
    })
}

/// The words of a [`DiskError`] hold its cause already.
fn refused(error: DiskError) -> CliError {
    CliError::Input(error.to_string())
}

fn begin_or_go_on(wish: &Wish, checkpoint: &Checkpoint, anew: bool) -> Result<Follower, CliError> {
    checkpoint.tidy();
    let found = if anew { None } else { checkpoint.read()? };
    let Some(found) = found else {
        checkpoint.drop_outputs()?;
        wish.say(format_args!("{}: {} over {}", wish.folder.display(), wish.title(), wish.span_words()));
        return Ok(Follower::new(&wish.configuration, &wish.plan, wish.rows));
    };
    let follower = Follower::restored(&wish.configuration, &wish.plan, wish.rows, &found.kept)
        .ok_or_else(|| checkpoint.damaged("its numbers do not fit what they are numbers of"))?;
    let folder = wish.folder.display();
    if found.finished {
        wish.say(format_args!("{folder} is finished; nothing is left to follow"));
    } else {
        let share = 100.0 * follower.progress().share;
        wish.say(format_args!("{folder}: goes on, {share:.1} % of {} are done", wish.span_words()));
    }
    Ok(follower)
}

/// Follows to the end; none when stopped before it, with all that was done in the checkpoint.
fn follow(
    mut follower: Follower,
    wish: &Wish,
    checkpoint: &Checkpoint,
    stop: &AtomicBool,
) -> Result<Option<Follower>, CliError> {
    let mut pace = Pace::new(wish, &follower.progress());
    let (mut saved, mut pause) = (Instant::now(), wish.pause);
    while follower.assessment().is_none() {
        for _ in 0..BLOCKS_PER_LOOK {
            follower.one_block();
        }
        let stopped = stop.load(Ordering::Relaxed) && follower.assessment().is_none();
        if stopped || saved.elapsed() >= pause {
            let began = Instant::now();
            checkpoint.write(&follower)?;
            saved = Instant::now();
            pause = wish.pause.max((saved - began) * SHARE_OF_TIME);
        }
        if stopped {
            pace.finish(follower.progress().share);
            return Ok(None);
        }
        pace.note(&follower.progress());
    }
    checkpoint.write(&follower)?;
    let end_day = follower.assessment().map_or(0.0, |assessment| assessment.end_time_day);
    pace.finish(end_day / wish.plan.span_day);
    Ok(Some(follower))
}

/// Frequencies and resonances of what was followed; none when stopped before they were told.
fn analyse(follower: Follower, wish: &Wish, stop: &Arc<AtomicBool>) -> Result<Option<Done>, CliError> {
    let Some(analysed) = analysing::analysed(wish, follower.samples(), stop)? else { return Ok(None) };
    let angles =
        analysed.as_ref().map_or(Vec::new(), |found| outputs::drawn(wish, found, follower.samples()));
    Ok(follower.finish().map(|(assessment, rows)| Done { assessment, rows, analysed, angles }))
}

fn show(wish: &Wish, done: &Done) -> Result<(), CliError> {
    let view = View::new(wish, &done.assessment, &done.analysed);
    let written = outputs::write(wish, &view, done)?;
    for path in &written {
        wish.say(format_args!("wrote {}", path.display()));
    }
    if done.rows.len() < 2 {
        wish.say(format_args!("it ended before the second row: there is nothing to draw"));
    }
    if wish.json {
        print(&view.json()?)
    } else if wish.quiet {
        Ok(())
    } else {
        print(&view.text())
    }
}
