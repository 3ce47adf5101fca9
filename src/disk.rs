//! Files written so that nothing is lost: beside, then renamed; folders tried before long work; locks.

use std::fs::{self, File, OpenOptions, TryLockError};
use std::io::{self, Read, Seek, SeekFrom, Write};
use std::path::{Path, PathBuf};

/// What the file system refused.
#[derive(Debug, thiserror::Error)]
pub enum DiskError {
    #[error("folder {} cannot be made: {source}; choose another folder with --into", path.display())]
    Folder { path: PathBuf, source: io::Error },
    #[error("folder {} cannot be written to: {source}; choose another folder with --into", path.display())]
    Unwritable { path: PathBuf, source: io::Error },
    #[error("{} cannot be written: {source}", path.display())]
    Write { path: PathBuf, source: io::Error },
    #[error("{} cannot be read: {source}", path.display())]
    Read { path: PathBuf, source: io::Error },
    #[error("{} is held by another process ({holder}); wait for it or stop it first", path.display())]
    Held { path: PathBuf, holder: String },
    #[error("{} cannot be locked: {source}", path.display())]
    Lock { path: PathBuf, source: io::Error },
}

/// Writes the whole file so that a reader, or a crash, sees the old content or the new one, never a part.
///
/// The bytes go to a hidden neighbour, reach the disk, and take the name in one step.
pub fn write_beside_then_rename(path: &Path, bytes: &[u8]) -> Result<(), DiskError> {
    write_parts_then_rename(path, [Ok::<_, DiskError>(bytes)])
}

/// [`write_beside_then_rename`] for a content that comes in parts, too large to be held whole.
///
/// Errors: those of the disk, and the first of the parts, which leaves the old content.
pub fn write_parts_then_rename<B: AsRef<[u8]>, E: From<DiskError>>(
    path: &Path,
    parts: impl IntoIterator<Item = Result<B, E>>,
) -> Result<(), E> {
    let beside = beside(path);
    let written = write_parts(path, &beside, parts);
    if written.is_err() {
        // The cause is reported; a leftover that cannot be removed adds nothing to it.
        let _ = fs::remove_file(&beside);
    }
    written
}

fn write_parts<B: AsRef<[u8]>, E: From<DiskError>>(
    path: &Path,
    beside: &Path,
    parts: impl IntoIterator<Item = Result<B, E>>,
) -> Result<(), E> {
    let failed = |source| E::from(DiskError::Write { path: path.to_path_buf(), source });
    let mut file = File::create(beside).map_err(failed)?;
    for part in parts {
        file.write_all(part?.as_ref()).map_err(failed)?;
    }
    file.sync_all().and_then(|()| fs::rename(beside, path)).and_then(|()| sync_folder(path)).map_err(failed)
}

/// The hidden neighbour of a file, of this process alone.
pub fn beside(path: &Path) -> PathBuf {
    let name = path.file_name().map(|n| n.to_string_lossy().into_owned()).unwrap_or_default();
    path.with_file_name(format!(".{name}.{}.part", std::process::id()))
}

/// The new name reaches the disk only with the folder that holds it.
fn sync_folder(path: &Path) -> io::Result<()> {
    match path.parent().filter(|p| !p.as_os_str().is_empty()) {
        Some(folder) => File::open(folder)?.sync_all(),
        None => File::open(".")?.sync_all(),
    }
}

/// Makes the folder with its parents and proves, by writing, that it takes files.
pub fn make_writable_folder(path: &Path) -> Result<(), DiskError> {
    fs::create_dir_all(path).map_err(|source| DiskError::Folder { path: path.to_path_buf(), source })?;
    let probe = path.join(format!(".probe.{}.part", std::process::id()));
    let tried = fs::write(&probe, b"probe").and_then(|()| fs::remove_file(&probe));
    tried.map_err(|source| DiskError::Unwritable { path: path.to_path_buf(), source })
}

/// The first by name of what a folder holds beside `ours` and hidden files; none where it holds nothing else.
pub fn stranger(folder: &Path, ours: &[&str]) -> Option<String> {
    let entries = fs::read_dir(folder).ok()?.flatten();
    let names = entries.map(|entry| entry.file_name().to_string_lossy().into_owned());
    names.filter(|name| !name.starts_with('.') && !ours.contains(&name.as_str())).min()
}

/// The text of a file, which must be UTF-8.
pub fn read_text(path: &Path) -> Result<String, DiskError> {
    fs::read_to_string(path).map_err(|source| DiskError::Read { path: path.to_path_buf(), source })
}

/// An exclusive claim on a file, let go when dropped or when the process ends in whatever way; dropped, it takes the
/// file away.
#[derive(Debug)]
pub struct Lock {
    file: File,
    path: PathBuf,
}

impl Lock {
    /// Claims `path` for this process and notes in it who holds it.
    ///
    /// Errors: `Held` with that note when another process has it; nothing is waited for.
    pub fn take(path: &Path, holder: &str) -> Result<Lock, DiskError> {
        let failed = |source| DiskError::Lock { path: path.to_path_buf(), source };
        let mut lock = Lock::claim(path)?;
        // Between opening and claiming, the holder before may have taken the file away: then the name is free again.
        while !still_named(&lock.file, path).map_err(failed)? {
            lock = Lock::claim(path)?;
        }
        lock.file
            .set_len(0)
            .and_then(|()| lock.file.seek(SeekFrom::Start(0)))
            .and_then(|_| lock.file.write_all(holder.as_bytes()))
            .map_err(failed)?;
        Ok(lock)
    }

    fn claim(path: &Path) -> Result<Lock, DiskError> {
        let failed = |source| DiskError::Lock { path: path.to_path_buf(), source };
        let mut options = OpenOptions::new();
        let options = options.read(true).write(true).create(true).truncate(false);
        let mut file = options.open(path).map_err(failed)?;
        match file.try_lock() {
            Ok(()) => Ok(Lock { file, path: path.to_path_buf() }),
            Err(TryLockError::WouldBlock) => {
                let mut holder = String::new();
                file.read_to_string(&mut holder).map_err(failed)?;
                Err(DiskError::Held { path: path.to_path_buf(), holder: holder.trim().to_string() })
            }
            Err(TryLockError::Error(source)) => Err(failed(source)),
        }
    }
}

#[cfg(unix)]
impl Drop for Lock {
    /// The file goes while it is still claimed, so that nobody's claim is on a name that is gone ([`still_named`]).
    fn drop(&mut self) {
        if still_named(&self.file, &self.path).is_ok_and(|named| named) {
            // A lock file that stays does no harm.
            let _ = fs::remove_file(&self.path);
        }
    }
}

/// Whether the path still leads to this very file.
#[cfg(unix)]
fn still_named(file: &File, path: &Path) -> io::Result<bool> {
    use std::os::unix::fs::MetadataExt;
    let own = file.metadata()?;
    match fs::metadata(path) {
        Ok(named) => Ok((own.dev(), own.ino()) == (named.dev(), named.ino())),
        Err(error) if error.kind() == io::ErrorKind::NotFound => Ok(false),
        Err(error) => Err(error),
    }
}

/// Elsewhere the file stays after use.
#[cfg(not(unix))]
fn still_named(_file: &File, _path: &Path) -> io::Result<bool> {
    Ok(true)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn replaces_the_whole_file_and_leaves_no_neighbour() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("table");
        write_beside_then_rename(&path, b"a long first content").unwrap();
        write_beside_then_rename(&path, b"short").unwrap();
        assert_eq!(fs::read(&path).unwrap(), b"short");
        assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1);
    }

    #[test]
    fn a_failed_write_keeps_the_old_content() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("table");
        fs::create_dir(&path).unwrap();
        fs::write(path.join("inside"), b"old").unwrap();
        // A file cannot take the name of a folder with something in it.
        let error = write_beside_then_rename(&path, b"new").unwrap_err();
        assert!(error.to_string().contains("table"), "{error}");
        assert_eq!(fs::read(path.join("inside")).unwrap(), b"old");
        assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1);
    }

    #[test]
    fn a_part_that_fails_keeps_the_old_content() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("table");
        write_parts_then_rename(&path, [Ok::<_, DiskError>("ab"), Ok("cd")]).unwrap();
        assert_eq!(fs::read(&path).unwrap(), b"abcd");
        let held = DiskError::Held { path: path.clone(), holder: "a test".to_string() };
        write_parts_then_rename(&path, [Ok("new"), Err(held)]).unwrap_err();
        assert_eq!(fs::read(&path).unwrap(), b"abcd");
        assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1);
    }

    #[test]
    fn a_file_in_the_way_of_a_folder_is_named() {
        let folder = tempfile::tempdir().unwrap();
        let blocked = folder.path().join("taken");
        fs::write(&blocked, b"").unwrap();
        let error = make_writable_folder(&blocked.join("run")).unwrap_err();
        assert!(matches!(error, DiskError::Folder { .. }), "{error}");
        assert!(error.to_string().contains("--into"));
    }

    #[test]
    fn a_lock_is_held_once_and_names_its_holder() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join(".lock");
        let first = Lock::take(&path, "process 17 on lanthorn").unwrap();
        let error = Lock::take(&path, "process 18").unwrap_err();
        assert!(error.to_string().contains("process 17 on lanthorn"), "{error}");
        drop(first);
        assert!(!path.exists(), "a lock let go leaves no file");
        let second = Lock::take(&path, "process 18").unwrap();
        assert_eq!(fs::read_to_string(&path).unwrap(), "process 18");
        drop(second);
        // What a killed process left is taken over.
        fs::write(&path, "process 19, which is gone").unwrap();
        let third = Lock::take(&path, "process 20").unwrap();
        assert_eq!(fs::read_to_string(&path).unwrap(), "process 20");
        drop(third);
    }

    #[test]
    fn a_stranger_is_neither_ours_nor_hidden() {
        let folder = tempfile::tempdir().unwrap();
        for name in ["study.toml", ".lock"] {
            fs::write(folder.path().join(name), "").unwrap();
        }
        assert_eq!(stranger(folder.path(), &["study.toml"]), None);
        assert_eq!(stranger(folder.path(), &[]), Some("study.toml".to_string()));
    }
}
