//! The adaptive integrator: order 15 by collocation at Radau's nodes, steps from the force's own series, tangent
//! vectors by the same nodes, events to rounding.
//!
//! It serves inside close encounters ([`pass()`]), as an engine of its own ([`Engine`], [`advance`]) and as the
//! independent check of the symplectic one: it shares no formula with it. Source of the method: Everhart (1985).

mod balance;
mod bodies;
mod control;
mod engine;
mod error;
mod event;
mod nodes;
mod pair;
mod pass;
mod phase;
mod step;
mod weights;

pub use bodies::Bodies;
pub use engine::{Engine, RadauWork, StepLimits, Stop, TOLERANCE};
pub use error::RadauError;
pub use event::{Event, EventKind, Watch};
pub use pass::{Ending, Outcome, Until, advance, pass};
