//! What will be done to every cell of a study, decided before anything runs.

/// Why the step is what it is (a value, so that it can be tested, stored and printed).
#[derive(Clone, Debug, PartialEq)]
pub enum StepWhy {
    /// 20 steps in the shortest pericentre passage time scale of each cell's own orbits.
    Pericentre { steps_per_passage: f64 },
    /// The study asked for it.
    Asked,
}

/// Everything the engine needs beside the configuration; the same for all cells of a study.
#[derive(Clone, Debug, PartialEq)]
pub struct Plan {
    pub span_day: f64,
    /// Largest step; absent: from each cell's own orbits.
    pub step_day: Option<f64>,
    pub step_why: StepWhy,
    /// "(2,2)" with corrector.
    pub scheme: &'static str,
    pub energy_error: f64,
    pub escape_au: Option<f64>,
    /// Stop below this many mutual Hill radii; absent: go through.
    pub encounter_hill: Option<f64>,
    pub extent: bool,
    pub megno: bool,
}

/// The step that the plan gives a configuration when none is asked: 1/20 of the shortest pericentre
/// passage time scale of its planets, day.
pub fn auto_step_day(configuration: &crate::coords::Configuration) -> f64 {
    let _ = configuration;
    f64::NAN
}
