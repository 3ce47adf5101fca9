//! What can be said about a configuration without integrating it.

mod amd;
mod binary;
mod chain;
mod crossing;
mod domain;
mod hill;
mod hill_exact;
mod invariable;
mod laplace;
mod margin;
mod modes;
mod neighbours;
mod overlap;
mod resonance;
mod secular;
mod spacing;

pub use amd::{
    AmdPair, CriticalAmd, amd_pair, collision_critical_amd, hill_critical_amd, overlap_critical_amd,
};
pub use binary::{
    BinaryLimit, CriticalAxis, PlanetLimits, binary_limits, circumbinary_limit, circumstellar_limit,
    hierarchical_limit,
};
pub use chain::{NearChain, near_chains};
pub use crossing::{coplanar_orbits_cross, outer_eccentricity_at_crossing};
pub use domain::OutOfDomain;
pub use hill::{HillBalance, LOW_MASS_LIMIT, circular_limit, hill_balance, mutual_hill_radius_au};
pub use hill_exact::exact_hill_balance;
pub use invariable::{AmdBudget, amd_budget, invariable_elements};
pub use laplace::laplace_coefficient;
pub use margin::margin;
pub use modes::{SecularMode, SecularModes};
pub use neighbours::{Neighbours, encounter_radius_au, neighbours, two_planet_balance};
pub use overlap::{
    chaotic_zone, critical_relative_eccentricity, eccentric_chaotic_zone, first_order_overlap,
    relative_eccentricity,
};
pub use resonance::{NearResonance, near_resonances, resonances_to_order};
pub use secular::{Oblateness, SecularPlanet, SecularSystem, StarTerms};
pub use spacing::{hill_spacing, quarter_power_spacing};
