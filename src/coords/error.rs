//! What can go wrong between statements and states.

/// Why a description is not a configuration, or not one that can start.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum CoordsError {
    #[error(
        "planets {first} and {second} are at one place: {gap_au:.3e} au apart, but their radii add up to \
         {radii_au:.3e} au; change the phase or the size of one of them"
    )]
    Coincident { first: String, second: String, gap_au: f64, radii_au: f64 },
    #[error(
        "planet {planet} is inside the star: its pericentre is {pericentre_au:.4e} au, but the star's radius is \
         {star_radius_au:.4e} au; lower the eccentricity or enlarge the orbit"
    )]
    InsideStar { planet: String, pericentre_au: f64, star_radius_au: f64 },
    #[error("the star's mass is not stated; give [star] mass, such as \"0.9 Msun\"")]
    StarMassMissing,
    #[error("the star's mass comes out as {found:e} au^3/day^2 (G × mass); it must be positive")]
    StarMass { found: f64 },
    #[error("planet {planet} states no mass; give one of mass, minimum_mass, mass_ratio, rv_semi_amplitude")]
    MassMissing { planet: String },
    #[error(
        "planet {planet}: the mass comes out as {found:e} au^3/day^2 (G × mass) from {key}; it must be zero or \
         positive and finite"
    )]
    Mass { planet: String, key: &'static str, found: f64 },
    #[error(
        "planet {planet}: no mass fits {key} together with the size of the orbit (after {rounds} rounds the \
         masses still change by {change:e}); state mass or minimum_mass instead"
    )]
    MassNotSolvable { planet: String, key: &'static str, rounds: usize, change: f64 },
    #[error(
        "planet {planet}: {key} says nothing about the mass of an orbit seen face-on (inclination \
         {inclination_deg} deg, sin i = 0); state mass, or an inclination between 0 and 180 deg"
    )]
    FaceOn { planet: String, key: &'static str, inclination_deg: f64 },
    #[error("planet {planet} states no size of its orbit; give period or semi_major_axis")]
    SizeMissing { planet: String },
    #[error("planet {planet}: {key} is {found:e} (inner units); it must be positive and finite")]
    Size { planet: String, key: &'static str, found: f64 },
    #[error(
        "planet {planet}: the eccentricity comes out as {found}, but a bound orbit needs 0 <= e < 1; if it is a \
         percentage, divide by 100"
    )]
    NotBound { planet: String, found: f64 },
    #[error(
        "planet {planet} states {given} without {missing}; the two are one vector, give both or use \
         eccentricity and argument_of_pericentre"
    )]
    HalfVector { planet: String, given: &'static str, missing: &'static str },
    #[error("planet {planet}: {key} is {found}; it must be a finite number")]
    NotFinite { planet: String, key: &'static str, found: f64 },
    #[error(
        "planet {planet} states {key}, but the system has no epoch to count it from; give epoch, such as \
         \"2460310.5 JD\", or use mean_anomaly"
    )]
    NoEpoch { planet: String, key: &'static str },
}
