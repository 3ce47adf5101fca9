//! Why the adaptive integrator gave up.

/// Each names the time from the start of the run and the step it was at; days.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
pub enum RadauError {
    #[error(
        "at day {day}: the motion asks for a step of {step_day:e} d, below the smallest allowed of \
         {smallest_day:e} d; the closest pair, bodies {first} and {second} (0 is the star), is {gap_au:e} au apart; \
         give the bodies radii so that they collide, or allow smaller steps"
    )]
    StepTooSmall { day: f64, step_day: f64, smallest_day: f64, first: usize, second: usize, gap_au: f64 },
    #[error(
        "at day {day}: the force did not settle in {sweeps} sweeps even with a step of {step_day:e} d; \
         the last sweep still changed it by {change:e} of itself"
    )]
    TooManySweeps { day: f64, step_day: f64, sweeps: u32, change: f64 },
    #[error("at day {day}: all of the {most} allowed steps are used; allow more or ask for a shorter span")]
    TooManySteps { day: f64, most: u64 },
    #[error("at day {day}: a position or velocity is no longer a finite number")]
    NotFinite { day: f64 },
    #[error("the state handed in has {found} numbers where {bodies} bodies need {needed}")]
    Shape { bodies: usize, found: usize, needed: usize },
}
