//! Running the program as a user does: a folder of files, a command line, and what came of it.
//!
//! ```ignore
//! Desk::new().file("pair.toml", PAIR).abide("survey").args(["pair-map.toml"]).run().done().said("12 cells");
//! ```

#![allow(dead_code, reason = "each test file uses its own part")]

use std::ffi::OsStr;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Child, Command, Output, Stdio};
use std::time::{Duration, Instant};

use tempfile::TempDir;

/// An invented pair of planets with uncertainties.
pub const PAIR: &str = r#"
title = "Lanthorn"
epoch = "2460310.5 JD"
[star]
mass = "0.87 ± 0.03 Msun"
radius = "0.82 Rsun"
[[planet]]
name = "b"
period = "11.862 ± 0.004 d"
minimum_mass = "60.1 ± 0.9 Mearth"
eccentricity = "0.05 ± 0.03"
argument_of_pericentre = "75 ± 60 deg"
transit_time = "2460312.417 ± 0.002 JD"
[[planet]]
name = "c"
period = "18.2 ± 0.2 d"
mass = "90 ± 8 Mearth"
eccentricity = "0.03 ± 0.02"
argument_of_pericentre = "190 deg"
mean_anomaly = "40 deg"
"#;

/// A small map of [`PAIR`], to be written as `pair.toml`.
pub const PAIR_MAP: &str = r#"
system = "pair.toml"
span = "200 orbits"
[[axis]]
vary = "c.period"
from = "16 d"
to = "21 d"
cells = 9
[[axis]]
vary = "c.eccentricity"
from = 0.0
to = 0.3
cells = 7
"#;

/// A folder of its own for one test, gone when dropped.
pub struct Desk {
    folder: TempDir,
}

impl Desk {
    pub fn new() -> Desk {
        Desk { folder: tempfile::tempdir().unwrap() }
    }

    /// With [`PAIR`] as `pair.toml` and [`PAIR_MAP`] as `map.toml`.
    pub fn with_pair() -> Desk {
        Desk::new().file("pair.toml", PAIR).file("map.toml", PAIR_MAP)
    }

    /// Writes a file (again).
    pub fn file(self, name: &str, text: impl AsRef<[u8]>) -> Desk {
        self.write(name, text);
        self
    }

    pub fn write(&self, name: &str, text: impl AsRef<[u8]>) {
        fs::write(self.path(name), text).unwrap();
    }

    pub fn path(&self, name: impl AsRef<Path>) -> PathBuf {
        self.folder.path().join(name)
    }

    pub fn read(&self, name: impl AsRef<Path>) -> Vec<u8> {
        let path = self.path(name);
        fs::read(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()))
    }

    pub fn text(&self, name: impl AsRef<Path>) -> String {
        String::from_utf8(self.read(name)).unwrap()
    }

    /// A command of the program, to be run in this folder.
    pub fn abide(&self, command: &str) -> Line {
        let mut line = Command::new(env!("CARGO_BIN_EXE_abide"));
        line.arg(command).current_dir(self.folder.path()).stdin(Stdio::null());
        Line { line }
    }
}

/// A command line being written.
pub struct Line {
    line: Command,
}

impl Line {
    pub fn arg(mut self, word: impl AsRef<OsStr>) -> Line {
        self.line.arg(word);
        self
    }

    pub fn args<W: AsRef<OsStr>>(mut self, words: impl IntoIterator<Item = W>) -> Line {
        self.line.args(words);
        self
    }

    /// With an environment variable.
    pub fn env(mut self, name: &str, value: &str) -> Line {
        self.line.env(name, value);
        self
    }

    pub fn run(mut self) -> Outcome {
        Outcome::of(self.line.output().unwrap())
    }

    /// Starts it and does not wait.
    pub fn start(mut self) -> Running {
        let child = self.line.stdout(Stdio::piped()).stderr(Stdio::piped()).spawn().unwrap();
        Running { child: Some(child) }
    }
}

/// A process that is on its way; killed when dropped.
pub struct Running {
    child: Option<Child>,
}

impl Running {
    /// SIGKILL.
    pub fn kill(mut self) {
        let mut child = self.child.take().unwrap();
        child.kill().unwrap();
        child.wait().unwrap();
    }

    /// SIGINT, as Ctrl-C sends it.
    pub fn interrupt(mut self) -> Outcome {
        let child = self.child.take().unwrap();
        let sent = Command::new("kill").args(["-INT", &child.id().to_string()]).status().unwrap();
        assert!(sent.success());
        Outcome::of(child.wait_with_output().unwrap())
    }

    pub fn wait(mut self) -> Outcome {
        Outcome::of(self.child.take().unwrap().wait_with_output().unwrap())
    }

    pub fn has_ended(&mut self) -> bool {
        self.child.as_mut().unwrap().try_wait().unwrap().is_some()
    }
}

impl Drop for Running {
    fn drop(&mut self) {
        if let Some(child) = &mut self.child {
            let _ = child.kill();
            let _ = child.wait();
        }
    }
}

/// What came of a command line; each check gives it back, and shows everything when it fails.
#[derive(Debug)]
pub struct Outcome {
    pub code: Option<i32>,
    pub stdout: String,
    pub stderr: String,
}

impl Outcome {
    fn of(output: Output) -> Outcome {
        Outcome {
            code: output.status.code(),
            stdout: String::from_utf8(output.stdout).unwrap(),
            stderr: String::from_utf8(output.stderr).unwrap(),
        }
    }

    pub fn code(self, code: i32) -> Outcome {
        assert_eq!(self.code, Some(code), "{self:#?}");
        self
    }

    /// Exit code 0.
    pub fn done(self) -> Outcome {
        self.code(0)
    }

    /// Exit code 2, one message on standard error, nothing on standard output.
    pub fn refused(self) -> Outcome {
        assert!(self.stderr.starts_with("error: ") && self.stdout.is_empty(), "{self:#?}");
        assert_eq!(self.stderr.matches("error:").count(), 1, "{self:#?}");
        self.code(2)
    }

    /// Standard error has these words.
    pub fn said(self, words: &str) -> Outcome {
        assert!(self.stderr.contains(words), "not said: {words}\n{self:#?}");
        self
    }

    pub fn silent(self) -> Outcome {
        assert!(self.stderr.is_empty(), "{self:#?}");
        self
    }

    /// Standard output has these words.
    pub fn printed(self, words: &str) -> Outcome {
        assert!(self.stdout.contains(words), "not printed: {words}\n{self:#?}");
        self
    }
}

/// Waits until something holds, a minute at most.
pub fn wait_until(what: &str, mut holds: impl FnMut() -> bool) {
    let started = Instant::now();
    while !holds() {
        assert!(started.elapsed() < Duration::from_secs(60), "waited in vain: {what}");
        std::thread::sleep(Duration::from_micros(300));
    }
}
