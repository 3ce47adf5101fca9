//! The journal: one line per finished cell, appended, each with its own checksum.

use std::fs::{File, OpenOptions};
use std::io::{self, BufRead, BufReader, BufWriter, Write};
use std::path::{Path, PathBuf};
use std::time::{Duration, Instant};

use super::bitmap::Bitmap;
use super::view::View;
use super::{Layout, Record, Tally};
use crate::disk::{self, DiskError};

/// How much work a power cut may cost beyond what a killed process loses.
const SYNC_EVERY: Duration = Duration::from_secs(1);

/// A journal open for appending.
#[derive(Debug)]
pub struct Journal {
    path: PathBuf,
    layout: Layout,
    file: BufWriter<File>,
    synced: Instant,
}

/// What an existing journal held.
#[derive(Debug)]
pub struct Recovered {
    /// Integrated cells.
    pub done: Bitmap,
    /// These and the filled ones.
    pub settled: Bitmap,
    /// What the integrated cells were found to be, by cell.
    pub views: Vec<Option<View>>,
    /// Of the integrated cells.
    pub tally: Tally,
    /// Lines (and the header, if it was damaged) that did not pass and are dropped.
    pub dropped: u64,
}

impl Recovered {
    /// Of a run of `cells` cells that is just begun.
    pub fn nothing(cells: u64) -> Recovered {
        let length = usize::try_from(cells).expect("cells that are computed are countable in memory");
        Recovered {
            done: Bitmap::new(cells),
            settled: Bitmap::new(cells),
            views: vec![None; length],
            tally: Tally::default(),
            dropped: 0,
        }
    }

    /// Whether this line says something new about its cell.
    fn note(&mut self, record: &Record) -> bool {
        if record.cell >= self.done.len() {
            return false;
        }
        if record.filled.is_some() {
            return self.settled.set(record.cell);
        }
        let new = self.done.set(record.cell);
        if new {
            self.settled.set(record.cell);
            self.views[record.cell as usize] = Some(View::of(&record.assessment));
            self.tally.add(record.assessment.verdict);
        }
        new
    }
}

impl Journal {
    /// Opens or makes the journal of a run of `cells` cells.
    ///
    /// Lines that fail their checksum, a torn last line and second lines of one cell are dropped (but an integrated
    /// cell may follow its own filled line, which it replaces); if there were any, the good lines are first written to a new file that takes the journal's name.
    pub fn open(path: &Path, layout: &Layout, cells: u64) -> Result<(Journal, Recovered), DiskError> {
        let failed = |source| DiskError::Write { path: path.to_path_buf(), source };
        let mut recovered = Recovered::nothing(cells);
        if path.exists() {
            recover(path, layout, &mut recovered)?;
        }
        let new = !path.exists() || path.metadata().map_err(failed)?.len() == 0;
        let file = OpenOptions::new().append(true).create(true).open(path).map_err(failed)?;
        let mut journal = Journal {
            path: path.to_path_buf(),
            layout: layout.clone(),
            file: BufWriter::with_capacity(1 << 16, file),
            synced: Instant::now(),
        };
        if new {
            let header = layout.header();
            journal.file.write_all(format!("{header}\n").as_bytes()).map_err(failed)?;
            journal.close()?;
        }
        Ok((journal, recovered))
    }

    /// Adds a line. It may stay in memory until [`Journal::flush`].
    pub fn append(&mut self, record: &Record) -> Result<(), DiskError> {
        let mut line = self.layout.encode(record);
        line.push('\n');
        self.file.write_all(line.as_bytes()).map_err(|source| self.failed(source))
    }

    /// Hands what was appended to the system, where a killed process does not lose it; about once a second
    /// also to the disk.
    pub fn flush(&mut self) -> Result<(), DiskError> {
        self.file.flush().map_err(|source| self.failed(source))?;
        if self.synced.elapsed() >= SYNC_EVERY {
            self.close()?;
        }
        Ok(())
    }

    /// Brings everything to the disk.
    pub fn close(&mut self) -> Result<(), DiskError> {
        let brought = self.file.flush().and_then(|()| self.file.get_ref().sync_data());
        brought.map_err(|source| self.failed(source))?;
        self.synced = Instant::now();
        Ok(())
    }

    fn failed(&self, source: io::Error) -> DiskError {
        DiskError::Write { path: self.path.clone(), source }
    }
}

/// Reads every good line of a journal, in the order of the file. Returns how many lines were bad.
///
/// `take` says whether it wants the record; one that it does not want counts as bad.
pub fn read(path: &Path, layout: &Layout, mut take: impl FnMut(Record) -> bool) -> Result<u64, DiskError> {
    let mut bad = 0;
    scan(path, layout, |_, record| {
        let good = record.is_some_and(&mut take);
        bad += u64::from(!good);
        Ok(good)
    })?;
    Ok(bad)
}

fn recover(path: &Path, layout: &Layout, recovered: &mut Recovered) -> Result<(), DiskError> {
    let fresh = disk::beside(path);
    let failed = |source| DiskError::Write { path: fresh.clone(), source };
    recovered.dropped = read(path, layout, |record| recovered.note(&record))?;
    let whole = starts_with_header(path, layout)?;
    if whole && recovered.dropped == 0 {
        return Ok(());
    }
    recovered.dropped += u64::from(!whole && recovered.dropped == 0);
    let mut kept = BufWriter::new(File::create(&fresh).map_err(failed)?);
    writeln!(kept, "{}", layout.header()).map_err(failed)?;
    let mut seen = Recovered::nothing(recovered.done.len());
    scan(path, layout, |line, record| {
        let wanted = record.is_some_and(|r| seen.note(&r));
        if wanted {
            kept.write_all(line)?;
            kept.write_all(b"\n")?;
        }
        Ok(wanted)
    })?;
    kept.flush().and_then(|()| kept.get_ref().sync_all()).map_err(failed)?;
    std::fs::rename(&fresh, path).map_err(failed)
}

fn starts_with_header(path: &Path, layout: &Layout) -> Result<bool, DiskError> {
    let failed = |source| DiskError::Read { path: path.to_path_buf(), source };
    let mut line = Vec::new();
    BufReader::new(File::open(path).map_err(failed)?).read_until(b'\n', &mut line).map_err(failed)?;
    Ok(line == format!("{}\n", layout.header()).as_bytes())
}

/// Every line but a good header, with its record if it is whole and passes its checksum.
fn scan(
    path: &Path,
    layout: &Layout,
    mut each: impl FnMut(&[u8], Option<Record>) -> io::Result<bool>,
) -> Result<(), DiskError> {
    let failed = |source| DiskError::Read { path: path.to_path_buf(), source };
    let header = layout.header();
    let mut file = BufReader::with_capacity(1 << 16, File::open(path).map_err(failed)?);
    let mut line = Vec::new();
    let mut first = true;
    loop {
        line.clear();
        if file.read_until(b'\n', &mut line).map_err(failed)? == 0 {
            return Ok(());
        }
        // Without its line end a last line may lack digits that no checksum of a prefix would miss, or a
        // later append would be glued to it: it counts as torn even when the checksum fits.
        let whole = line.last() == Some(&b'\n');
        let text = &line[..line.len() - usize::from(whole)];
        if !(first && whole && text == header.as_bytes()) {
            each(text, if whole { layout.decode(text) } else { None }).map_err(failed)?;
        }
        first = false;
    }
}
