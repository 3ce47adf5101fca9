//! The symplectic integrator: H = A + εB with A the Kepler motions and B the planets' pull on one another.
//!
//! In democratic heliocentric coordinates B is a kick (pair forces) and a jump (Σp)²/2M that commute, since pair
//! forces keep the total momentum; so B is exact and every A-B splitting applies.

mod advance;
mod block;
mod conserved;
mod coordinates;
mod corrector;
mod exchange;
pub mod forces;
mod jacobi;
mod kick;
mod megno;
pub mod radau;
mod slots;
mod splitting;
mod star_terms;
mod state;

pub use advance::{Advance, SAMPLE_EVERY, advance};
pub use block::Block;
pub use conserved::{angular_momentum, energy};
pub use coordinates::Coordinates;
pub use corrector::{from_map, to_map};
pub use kick::{Beside, kick};
pub use splitting::Scheme;
pub use star_terms::StarTerms;
pub use state::{Growth, State, Tangent};
