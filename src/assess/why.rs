//! Why scheme, step and coordinates of a plan are what they are: values, so that they can be tested, stored and printed.

use std::fmt;

use super::plan::FEWEST_STEPS_PER_PASSAGE;

/// Short runs of the stated configuration and of the corners of a grid, under one scheme with one step.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Trial {
    pub scheme: &'static str,
    pub kicks_per_step: usize,
    /// In the shortest pericentre passage of each configuration or, where the step was asked, of the stated one.
    pub steps_per_passage: f64,
    /// How many configurations were followed, and how many of them lived through the runs: only these tell anything.
    pub followed: usize,
    pub told: usize,
    /// Largest relative energy error of those that told.
    pub energy_error: Option<f64>,
    /// What it should not exceed: a share of the target, as short runs see less than long ones.
    pub wanted: f64,
}

impl Trial {
    pub fn met(&self) -> bool {
        self.energy_error.is_some_and(|error| error <= self.wanted)
    }

    /// What a passage costs.
    pub fn kicks_per_passage(&self) -> f64 {
        self.steps_per_passage * self.kicks_per_step as f64
    }

    /// What was found, as the end of a sentence on the step.
    fn outcome(&self) -> String {
        let counted = |count: usize| format!("{count} configuration{}", if count == 1 { "" } else { "s" });
        let Some(error) = self.energy_error else {
            let all = match self.followed {
                1 => "the one configuration was".to_owned(),
                many => format!("all {} were", counted(many)),
            };
            return format!("the short runs told nothing: {all} lost in them");
        };
        let lost = match self.followed - self.told {
            0 => String::new(),
            1 => " (1 more was lost in them)".to_owned(),
            more => format!(" ({more} more were lost in them)"),
        };
        let missed =
            if self.met() { String::new() } else { format!(", which misses the {:.1e} wanted", self.wanted) };
        format!("short runs of {}{lost} err by at most {error:.1e} then{missed}", counted(self.told))
    }
}

/// Why the scheme is what it is.
#[derive(Clone, Debug, PartialEq)]
pub enum SchemeWhy {
    Asked,
    /// From short runs.
    Tried {
        chosen: Trial,
        /// The most accurate trial of every scheme that was tried, the chosen one among them.
        each: Vec<Trial>,
        /// Schemes that would have cost more than the chosen one even at their fewest steps, and those kicks per passage.
        dearer: Vec<(&'static str, f64)>,
        /// The step was asked, so only the scheme was open.
        at_asked_step: bool,
    },
}

impl SchemeWhy {
    /// Whether there was anything to choose.
    pub fn is_choice(&self) -> bool {
        matches!(self, SchemeWhy::Tried { .. })
    }
}

impl fmt::Display for SchemeWhy {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let SchemeWhy::Tried { chosen, each, dearer, at_asked_step } = self else {
            return f.write_str("as asked");
        };
        if chosen.energy_error.is_none() {
            return write!(f, "the usual one, as {}", chosen.outcome());
        }
        let (place, per) = if *at_asked_step { (" at the step asked", "step") } else { ("", "passage") };
        if chosen.met() {
            write!(f, "the fewest kicks per {per} of those that keep {:.1e}", chosen.wanted)?;
        } else {
            write!(f, "none keeps {:.1e}, this one comes nearest", chosen.wanted)?;
        }
        write!(f, " in short runs{place}: ")?;
        let kicks = |trial: &Trial| match at_asked_step {
            true => trial.kicks_per_step as f64,
            false => trial.kicks_per_passage(),
        };
        for (index, trial) in each.iter().enumerate() {
            let comma = if index == 0 { "" } else { ", " };
            let count = kicks(trial);
            let s = if count == 1.0 { "" } else { "s" };
            write!(f, "{comma}{} {count:.0} kick{s}", trial.scheme)?;
            match trial.energy_error {
                Some(error) => write!(f, " err {error:.1e}")?,
                None => f.write_str(" told nothing")?,
            }
        }
        for (index, (scheme, kicks)) in dearer.iter().enumerate() {
            let lead = if index == 0 { "; dearer at their fewest steps: " } else { ", " };
            write!(f, "{lead}{scheme} {kicks:.0}")?;
        }
        match chosen.followed - chosen.told {
            // Where the runs settled the step too, the words on the step say it.
            0 => Ok(()),
            lost if *at_asked_step => {
                write!(f, "; {lost} of {} configurations were lost in them", chosen.followed)
            }
            _ => Ok(()),
        }
    }
}

/// Why the step is what it is.
#[derive(Clone, Debug, PartialEq)]
pub enum StepWhy {
    /// So many steps in the shortest pericentre passage time scale of each cell's own orbits; with the short runs that
    /// settled it.
    Pericentre { steps_per_passage: f64, trial: Option<Trial> },
    /// The study asked for it; how many steps it makes per passage in the stated configuration.
    Asked { steps_per_passage: f64 },
}

impl StepWhy {
    /// What short runs said of the step, where they settled it.
    pub fn outcome(&self) -> Option<String> {
        match self {
            StepWhy::Pericentre { trial, .. } => trial.map(|trial| trial.outcome()),
            StepWhy::Asked { .. } => None,
        }
    }
}

impl fmt::Display for StepWhy {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            StepWhy::Pericentre { steps_per_passage, .. } => {
                write!(
                    f,
                    "{steps_per_passage:.0} steps in the shortest pericentre passage of each configuration"
                )?;
                match self.outcome() {
                    Some(outcome) => write!(f, "; {outcome}"),
                    None => Ok(()),
                }
            }
            StepWhy::Asked { steps_per_passage } => {
                write!(f, "as asked; {steps_per_passage:.1} steps in the shortest pericentre passage")?;
                if *steps_per_passage < FEWEST_STEPS_PER_PASSAGE {
                    write!(f, "; below {FEWEST_STEPS_PER_PASSAGE} step resonance can feign chaos")?;
                }
                Ok(())
            }
        }
    }
}

/// Above this share of the star's mass the star's own motion (the jump) is no small part of B.
pub(super) const HEAVY: f64 = 0.03;

/// Why the coordinates are what they are.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum CoordinatesWhy {
    Asked,
    /// A second star makes a hierarchy.
    Companion,
    /// The heaviest planet has this share of the star's mass, as stated or in a corner of the grid.
    Heavy {
        share: f64,
        in_a_corner: bool,
    },
    /// Every planet is much lighter than the star, where heliocentric coordinates are as exact and cheaper.
    Light,
}

impl fmt::Display for CoordinatesWhy {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            CoordinatesWhy::Asked => f.write_str("as asked"),
            CoordinatesWhy::Companion => f.write_str("a second star makes a hierarchy"),
            CoordinatesWhy::Heavy { share, in_a_corner } => {
                let place = if *in_a_corner { " in a corner of the grid" } else { "" };
                let decimals = if *share < 0.1 { 4 } else { 3 };
                write!(f, "a planet has {share:.decimals$} of the star's mass{place}, more than {HEAVY}")
            }
            CoordinatesWhy::Light => f.write_str("the planets are light, and these are the cheaper"),
        }
    }
}
