//! The folder of a run: begun, gone on with, or finished.

use std::path::{Path, PathBuf};

use super::changes::{changes, first_few};
use super::journal::{self, Journal, Recovered};
use super::manifest::{Identity, Manifest, VERSION, host, sha256};
use super::{Layout, Record, SurveyError};
use crate::disk::{self, DiskError, Lock};

/// Names of the files of a run.
pub const STUDY: &str = "study.toml";
pub const SYSTEM: &str = "system.toml";
pub const MANIFEST: &str = "run.json";
pub const JOURNAL: &str = "journal.csv";
/// Made when every cell is done.
pub const OUTPUTS: [&str; 3] = ["cells.ecsv", "map.png", "summary.txt"];
const LOCK: &str = ".lock";
/// Memory for so many records is taken at once at most; a run that is barely begun needs no more.
const EXPECTED_CELLS: usize = 2_000_000;

/// A run held by this process.
#[derive(Debug)]
pub struct Run {
    pub folder: PathBuf,
    pub manifest: Manifest,
    pub journal: Journal,
    _lock: Lock,
}

/// In what state a run was found.
#[derive(Debug)]
pub struct Found {
    pub recovered: Recovered,
    /// It was begun before.
    pub resumed: bool,
    /// The inputs read differently but mean the same.
    pub only_layout: bool,
}

impl Run {
    /// Takes the folder for this process and begins the run in it, or goes on with the run that it holds.
    ///
    /// The folder is proven writable first. Errors: held by another process, a run of other input or of another
    /// version, a folder that is no run but has files of these names.
    pub fn open(folder: &Path, identity: &Identity) -> Result<(Run, Found), SurveyError> {
        disk::make_writable_folder(folder)?;
        let holder = format!("process {} on {}", std::process::id(), host());
        let lock = Lock::take(&folder.join(LOCK), &holder).map_err(|error| name_folder(error, folder))?;
        let wanted = identity.manifest();
        let path = folder.join(MANIFEST);
        let resumed = path.exists();
        let (manifest, only_layout) = if resumed {
            let stored = Manifest::read(&path)?;
            refuse_changed(folder, &stored, &wanted, identity)?;
            let same_text =
                stored.study_sha256 == wanted.study_sha256 && stored.system_sha256 == wanted.system_sha256;
            (stored, !same_text)
        } else {
            begin(folder, &wanted, identity)?;
            (wanted, false)
        };
        let (journal, recovered) = Journal::open(&folder.join(JOURNAL), &manifest.layout, manifest.cells)?;
        let run = Run { folder: folder.to_path_buf(), manifest, journal, _lock: lock };
        Ok((run, Found { recovered, resumed, only_layout }))
    }

    /// Which outputs are not there.
    pub fn missing_outputs(&self) -> Vec<&'static str> {
        OUTPUTS.into_iter().filter(|name| !self.folder.join(name).exists()).collect()
    }

    /// Every record by cell; see [`read_records`].
    pub fn records(&self) -> Result<Vec<Record>, SurveyError> {
        complete(read_records(&self.folder, &self.manifest)?, self.manifest.cells)
    }
}

/// A run as it lies on the disk, read without taking it.
#[derive(Debug)]
pub struct Stored {
    pub manifest: Manifest,
    pub study_text: String,
    pub system_text: String,
    /// By cell; cells that are not done are not there.
    pub records: Vec<Record>,
}

/// Reads a run that may still be growing.
///
/// Errors: files that are missing, cannot be read, or were edited since the run was begun.
pub fn read_run(folder: &Path) -> Result<Stored, SurveyError> {
    for file in [MANIFEST, STUDY, SYSTEM, JOURNAL] {
        if !folder.join(file).is_file() {
            return Err(SurveyError::NoRun { folder: folder.to_path_buf(), file });
        }
    }
    let manifest = Manifest::read(&folder.join(MANIFEST))?;
    Ok(Stored {
        study_text: unedited(folder, STUDY, &manifest.study_sha256)?,
        system_text: unedited(folder, SYSTEM, &manifest.system_sha256)?,
        records: read_records(folder, &manifest)?,
        manifest,
    })
}

/// The copy of an input: edited, it would lend the cells a meaning that they do not have.
fn unedited(folder: &Path, file: &'static str, stored_sha256: &str) -> Result<String, SurveyError> {
    let text = disk::read_text(&folder.join(file))?;
    if sha256(&text) == stored_sha256 {
        return Ok(text);
    }
    Err(SurveyError::Edited { folder: folder.to_path_buf(), file })
}

/// The records of a journal by cell, each cell once; damaged lines are left out.
fn read_records(folder: &Path, manifest: &Manifest) -> Result<Vec<Record>, SurveyError> {
    records_of(&folder.join(JOURNAL), &manifest.layout, manifest.cells)
}

/// Every record of a journal of `cells` cells, by cell. Errors: some are missing.
pub fn read_journal(path: &Path, layout: &Layout, cells: u64) -> Result<Vec<Record>, SurveyError> {
    complete(records_of(path, layout, cells)?, cells)
}

fn records_of(path: &Path, layout: &Layout, cells: u64) -> Result<Vec<Record>, SurveyError> {
    let mut records = Vec::with_capacity(usize::try_from(cells).unwrap_or(0).min(EXPECTED_CELLS));
    journal::read(path, layout, |record| {
        let known = record.cell < cells;
        if known {
            records.push(record);
        }
        known
    })?;
    // Lines of one cell are equal, but that one may have been filled before it was integrated.
    records.sort_unstable_by_key(|record: &Record| (record.cell, record.filled.is_some()));
    records.dedup_by_key(|record| record.cell);
    Ok(records)
}

fn complete(records: Vec<Record>, cells: u64) -> Result<Vec<Record>, SurveyError> {
    let missing = cells - records.len() as u64;
    if missing == 0 { Ok(records) } else { Err(SurveyError::Incomplete { missing, total: cells }) }
}

/// The manifest comes last: a folder with one has everything that goes before it.
fn begin(folder: &Path, manifest: &Manifest, identity: &Identity) -> Result<(), SurveyError> {
    for (file, text) in
        [(STUDY, Some(&identity.study_text)), (SYSTEM, Some(&identity.system_text)), (JOURNAL, None)]
    {
        let path = folder.join(file);
        if path.exists() && std::fs::read_to_string(&path).ok().as_ref() != text {
            return Err(SurveyError::Foreign { folder: folder.to_path_buf(), file });
        }
    }
    if let Some(other) = disk::stranger(folder, &[STUDY, SYSTEM, JOURNAL]) {
        return Err(SurveyError::Occupied { folder: folder.to_path_buf(), other });
    }
    disk::write_beside_then_rename(&folder.join(STUDY), identity.study_text.as_bytes())?;
    disk::write_beside_then_rename(&folder.join(SYSTEM), identity.system_text.as_bytes())?;
    manifest.write(&folder.join(MANIFEST))
}

/// Refuses unless program and checked settings are those of the run.
fn refuse_changed(
    folder: &Path,
    stored: &Manifest,
    wanted: &Manifest,
    identity: &Identity,
) -> Result<(), SurveyError> {
    let same_version = stored.version == VERSION;
    if same_version && stored.settings_sha256 == wanted.settings_sha256 && stored.layout == wanted.layout {
        return Ok(());
    }
    let mut list = Vec::new();
    if !same_version {
        let was = &stored.version;
        list.push(format!("the program: version was {was}, is now {VERSION}, which may give other bits"));
    }
    list.extend(changed_file(folder, STUDY, &stored.study_sha256, &identity.study_text)?);
    list.extend(changed_file(folder, SYSTEM, &stored.system_sha256, &identity.system_text)?);
    if list.is_empty() {
        list.push("the plan that follows from the same files (scheme, step, limits)".to_string());
    }
    Err(SurveyError::Changed { folder: folder.to_path_buf(), changes: first_few(list) })
}

/// What differs between the stored file and the text read now.
fn changed_file(
    folder: &Path,
    file: &str,
    stored_sha256: &str,
    now: &str,
) -> Result<Vec<String>, SurveyError> {
    if sha256(now) == stored_sha256 {
        return Ok(Vec::new());
    }
    let before = disk::read_text(&folder.join(file))?;
    let mut list = changes(file, &before, now);
    if sha256(&before) != stored_sha256 {
        list.push(format!("{file}: the copy in the run was edited since the run was begun"));
    }
    Ok(list)
}

/// The user knows the folder, not the file that carries the lock.
fn name_folder(error: DiskError, folder: &Path) -> SurveyError {
    SurveyError::Disk(match error {
        DiskError::Held { holder, .. } => DiskError::Held { path: folder.to_path_buf(), holder },
        other => other,
    })
}
