//! What can be said about a configuration without integrating it.

mod hill;
mod neighbours;
mod resonance;

pub use hill::{HillBalance, LOW_MASS_LIMIT, circular_limit, hill_balance, mutual_hill_radius_au};
pub use neighbours::{Neighbours, encounter_radius_au, neighbours, two_planet_balance};
pub use resonance::{NearResonance, near_resonances};
