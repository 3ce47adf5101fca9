//! How far an analysis is, what it took, and whether it is to go on.

use super::NotAnalysed;

/// What an analysis took: counts that do not depend on the machine.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct AnalysisWork {
    /// Signals taken apart into lines.
    pub signals: usize,
    /// Angles looked at.
    pub angles: usize,
    /// Fourier fits that these needed.
    pub fits: usize,
}

/// How far an analysis is.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct AnalysisProgress {
    /// Signals and angles begun, and how many of each are known to be wanted; angles are counted once the signals are done.
    pub signals: usize,
    pub signals_of: usize,
    pub angles: usize,
    pub angles_of: usize,
}

/// Tells the caller and counts.
pub(super) struct Watch<'a> {
    go_on: &'a mut dyn FnMut(AnalysisProgress) -> bool,
    expected: AnalysisProgress,
    pub work: AnalysisWork,
}

impl Watch<'_> {
    pub fn new(go_on: &mut dyn FnMut(AnalysisProgress) -> bool) -> Watch<'_> {
        Watch { go_on, expected: AnalysisProgress::default(), work: AnalysisWork::default() }
    }

    pub fn expect_signals(&mut self, more: usize) {
        self.expected.signals_of += more;
    }

    pub fn expect_angles(&mut self, more: usize) {
        self.expected.angles_of += more;
    }

    /// A signal is begun. Errors: `Stopped`.
    pub fn signal(&mut self) -> Result<(), NotAnalysed> {
        self.work.signals += 1;
        self.tell()
    }

    /// An angle is begun. Errors: `Stopped`.
    pub fn angle(&mut self) -> Result<(), NotAnalysed> {
        self.work.angles += 1;
        self.tell()
    }

    fn tell(&mut self) -> Result<(), NotAnalysed> {
        let (signals, angles) = (self.work.signals, self.work.angles);
        let at = AnalysisProgress { signals, angles, ..self.expected };
        if (self.go_on)(at) { Ok(()) } else { Err(NotAnalysed::Stopped) }
    }
}
