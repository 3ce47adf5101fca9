//! The checkpoint of a configuration on its way: a line of what it is, a line of its inputs as JSON, the numbers as
//! 64-bit words, and a SHA-256 of all that.

use std::fs;
use std::path::PathBuf;
use std::time::SystemTime;

use serde::{Deserialize, Serialize};
use sha2::{Digest, Sha256};

use super::wish::{Choice, Wish};
use crate::assess::Follower;
use crate::cli::CliError;
use crate::disk;
use crate::num::Kept;
use crate::survey::{self, VERSION, sha256};

pub const CHECKPOINT: &str = "follow.checkpoint";
pub const SERIES: &str = "series.ecsv";
pub const PICTURE: &str = "series.png";
pub const FREQUENCIES: &str = "frequencies.ecsv";
pub const LINES: &str = "lines.ecsv";
pub const RESONANCES: &str = "resonances.ecsv";
pub const VERDICT: &str = "verdict.json";
/// All that a command leaves.
const FILES: [&str; 7] = [CHECKPOINT, SERIES, PICTURE, FREQUENCIES, LINES, RESONANCES, VERDICT];
const FIRST_LINE: &[u8] = b"abide checkpoint 2\n";
const SEAL_BYTES: usize = 32;

/// Of what the numbers are.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
struct Head {
    version: String,
    /// Of system, options and plan as understood: equal for texts that differ in comments and layout only.
    settings_sha256: String,
    options: Vec<Choice>,
    system_text: String,
    finished: bool,
    share: f64,
    saved: String,
    host: String,
}

/// Where the checkpoint of a wish lies and what it must be of.
pub struct Checkpoint {
    folder: PathBuf,
    path: PathBuf,
    system_name: String,
    settings_sha256: String,
    options: Vec<Choice>,
    system_text: String,
}

/// A checkpoint of the very wish.
pub struct Found {
    pub kept: Kept,
    pub finished: bool,
}

impl Checkpoint {
    pub fn of(wish: &Wish) -> Checkpoint {
        let meanings: Vec<&str> = wish.options.iter().map(|option| option.meaning.as_str()).collect();
        let settings = format!("{:?}\n{meanings:?}\n{:?}", wish.file.system, wish.plan);
        Checkpoint {
            folder: wish.folder.clone(),
            path: wish.folder.join(CHECKPOINT),
            system_name: wish.file.path.display().to_string(),
            settings_sha256: sha256(&settings),
            options: wish.options.clone(),
            system_text: wish.file.text.clone(),
        }
    }

    /// Removes what a killed process left half written; the folder is held by this process.
    pub fn tidy(&self) {
        let Ok(entries) = fs::read_dir(&self.folder) else { return };
        for entry in entries.flatten() {
            let name = entry.file_name().to_string_lossy().into_owned();
            let ours = FILES.iter().any(|file| name.starts_with(&format!(".{file}.")));
            if ours && name.ends_with(".part") {
                // A leftover that stays does no harm.
                let _ = fs::remove_file(entry.path());
            }
        }
    }

    /// Removes checkpoint and outputs of a former command, so that none of them is taken for those of this one.
    pub fn drop_outputs(&self) -> Result<(), CliError> {
        for name in FILES {
            let path = self.folder.join(name);
            match fs::remove_file(&path) {
                Err(error) if error.kind() != std::io::ErrorKind::NotFound => {
                    return Err(CliError::Working(format!("{} cannot be removed: {error}", path.display())));
                }
                _ => {}
            }
        }
        Ok(())
    }

    pub fn write(&self, follower: &Follower) -> Result<(), CliError> {
        let head = Head {
            version: VERSION.to_owned(),
            settings_sha256: self.settings_sha256.clone(),
            options: self.options.clone(),
            system_text: self.system_text.clone(),
            finished: follower.assessment().is_some(),
            share: follower.progress().share,
            saved: survey::utc(SystemTime::now()),
            host: survey::host(),
        };
        let mut bytes = FIRST_LINE.to_vec();
        serde_json::to_writer(&mut bytes, &head).map_err(CliError::working)?;
        bytes.push(b'\n');
        bytes.extend(follower.keep().to_bytes());
        let seal = Sha256::digest(&bytes);
        bytes.extend_from_slice(&seal);
        disk::write_beside_then_rename(&self.path, &bytes).map_err(CliError::working)
    }

    /// The checkpoint that the folder holds; none when it holds none.
    ///
    /// Errors: it is damaged, or of another system, other options or another version.
    pub fn read(&self) -> Result<Option<Found>, CliError> {
        let bytes = match fs::read(&self.path) {
            Ok(bytes) => bytes,
            Err(error) if error.kind() == std::io::ErrorKind::NotFound => return Ok(None),
            Err(error) => {
                return Err(CliError::Input(format!("{} cannot be read: {error}", self.path.display())));
            }
        };
        let (head, kept) = self.parse(&bytes)?;
        self.refuse_changed(&head)?;
        Ok(Some(Found { kept, finished: head.finished }))
    }

    fn parse(&self, bytes: &[u8]) -> Result<(Head, Kept), CliError> {
        let body = bytes
            .strip_prefix(FIRST_LINE)
            .ok_or_else(|| self.damaged("it does not begin as a checkpoint of this version does"))?;
        let sealed = bytes.len().saturating_sub(SEAL_BYTES);
        if body.len() < SEAL_BYTES || Sha256::digest(&bytes[..sealed])[..] != bytes[sealed..] {
            return Err(self.damaged("its checksum differs"));
        }
        let body = &body[..body.len() - SEAL_BYTES];
        let end = body.iter().position(|byte| *byte == b'\n');
        let (head, words) = body.split_at(end.ok_or_else(|| self.damaged("it has no head"))?);
        let head = serde_json::from_slice(head).map_err(|error| self.damaged(&error.to_string()))?;
        let kept = Kept::from_bytes(&words[1..]);
        Ok((head, kept.ok_or_else(|| self.damaged("its numbers are torn"))?))
    }

    pub fn damaged(&self, what: &str) -> CliError {
        CliError::Input(format!(
            "{} cannot be gone on with: {what}; begin again with --anew, or choose another folder with --into",
            self.path.display()
        ))
    }

    fn refuse_changed(&self, found: &Head) -> Result<(), CliError> {
        if found.version == VERSION && found.settings_sha256 == self.settings_sha256 {
            return Ok(());
        }
        let mut list = Vec::new();
        if found.version != VERSION {
            let was = &found.version;
            list.push(format!("the program: version was {was}, is now {VERSION}, which may give other bits"));
        }
        for now in &self.options {
            let was = found.options.iter().find(|was| was.flag == now.flag);
            if was.is_none_or(|was| was.meaning != now.meaning) {
                let was = was.map_or("absent".to_owned(), |was| typed(&was.typed));
                list.push(format!("{}: was {was}, is now {}", now.flag, typed(&now.typed)));
            }
        }
        list.extend(survey::changes(&self.system_name, &found.system_text, &self.system_text));
        if list.is_empty() {
            list.push("the plan that follows from the same words (scheme, step, limits)".to_owned());
        }
        let state = if found.finished {
            "is finished".to_owned()
        } else {
            format!("is {:.1} % done", 100.0 * found.share)
        };
        Err(CliError::Input(format!(
            "{} holds something else, which {state}:\n  {}\n  to do:   choose another folder with --into, drop what is \
             there with --anew, or go back to what was given before",
            self.folder.display(),
            survey::first_few(list).join("\n  ")
        )))
    }
}

fn typed(words: &str) -> String {
    if words.is_empty() { "the default".to_owned() } else { format!("{words:?}") }
}
