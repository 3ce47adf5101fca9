//! The keys a body may state, their dimensions, and which of them exclude one another.

use crate::units::Dimension;

/// One key of a body in a system file. The word in files is the snake_case name.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Key {
    Mass,
    MinimumMass,
    MassRatio,
    RvSemiAmplitude,
    Radius,
    /// Star only.
    Age,
    Period,
    SemiMajorAxis,
    Eccentricity,
    ECosW,
    ESinW,
    SqrtECosW,
    SqrtESinW,
    ArgumentOfPericentre,
    LongitudeOfPericentre,
    MeanAnomaly,
    MeanLongitude,
    TrueAnomaly,
    PericentreTime,
    TransitTime,
    Inclination,
    AscendingNode,
    /// Mass of a planet's satellite over the mass of the planet alone.
    SatelliteMassRatio,
    /// Of the satellite's orbit about the planet.
    SatelliteSemiMajorAxis,
}

/// Keys of one group answer the same question; a body states one answer (the vector shapes take two keys).
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Group {
    Mass,
    Radius,
    Age,
    Size,
    /// `eccentricity`, or a pair of vector components (which then also answer `Pericentre`).
    Shape,
    Pericentre,
    Phase,
    Inclination,
    Node,
    SatelliteMass,
    SatelliteSize,
}

impl Key {
    pub const ALL: [Key; 24] = [
        Key::Mass,
        Key::MinimumMass,
        Key::MassRatio,
        Key::RvSemiAmplitude,
        Key::Radius,
        Key::Age,
        Key::Period,
        Key::SemiMajorAxis,
        Key::Eccentricity,
        Key::ECosW,
        Key::ESinW,
        Key::SqrtECosW,
        Key::SqrtESinW,
        Key::ArgumentOfPericentre,
        Key::LongitudeOfPericentre,
        Key::MeanAnomaly,
        Key::MeanLongitude,
        Key::TrueAnomaly,
        Key::PericentreTime,
        Key::TransitTime,
        Key::Inclination,
        Key::AscendingNode,
        Key::SatelliteMassRatio,
        Key::SatelliteSemiMajorAxis,
    ];

    /// The word used in files, tables and output.
    pub fn word(self) -> &'static str {
        match self {
            Key::Mass => "mass",
            Key::MinimumMass => "minimum_mass",
            Key::MassRatio => "mass_ratio",
            Key::RvSemiAmplitude => "rv_semi_amplitude",
            Key::Radius => "radius",
            Key::Age => "age",
            Key::Period => "period",
            Key::SemiMajorAxis => "semi_major_axis",
            Key::Eccentricity => "eccentricity",
            Key::ECosW => "e_cos_w",
            Key::ESinW => "e_sin_w",
            Key::SqrtECosW => "sqrt_e_cos_w",
            Key::SqrtESinW => "sqrt_e_sin_w",
            Key::ArgumentOfPericentre => "argument_of_pericentre",
            Key::LongitudeOfPericentre => "longitude_of_pericentre",
            Key::MeanAnomaly => "mean_anomaly",
            Key::MeanLongitude => "mean_longitude",
            Key::TrueAnomaly => "true_anomaly",
            Key::PericentreTime => "pericentre_time",
            Key::TransitTime => "transit_time",
            Key::Inclination => "inclination",
            Key::AscendingNode => "ascending_node",
            Key::SatelliteMassRatio => "satellite_mass_ratio",
            Key::SatelliteSemiMajorAxis => "satellite_semi_major_axis",
        }
    }

    pub fn from_word(word: &str) -> Option<Key> {
        Key::ALL.into_iter().find(|key| key.word() == word)
    }

    pub fn dimension(self) -> Dimension {
        match self {
            Key::Mass | Key::MinimumMass => Dimension::Mass,
            Key::RvSemiAmplitude => Dimension::Speed,
            Key::Radius | Key::SemiMajorAxis | Key::SatelliteSemiMajorAxis => Dimension::Length,
            Key::Age | Key::Period => Dimension::Time,
            Key::PericentreTime | Key::TransitTime => Dimension::Date,
            Key::MassRatio
            | Key::SatelliteMassRatio
            | Key::Eccentricity
            | Key::ECosW
            | Key::ESinW
            | Key::SqrtECosW
            | Key::SqrtESinW => Dimension::Number,
            Key::ArgumentOfPericentre
            | Key::LongitudeOfPericentre
            | Key::MeanAnomaly
            | Key::MeanLongitude
            | Key::TrueAnomaly
            | Key::Inclination
            | Key::AscendingNode => Dimension::Angle,
        }
    }

    pub fn group(self) -> Group {
        match self {
            Key::Mass | Key::MinimumMass | Key::MassRatio | Key::RvSemiAmplitude => Group::Mass,
            Key::Radius => Group::Radius,
            Key::Age => Group::Age,
            Key::Period | Key::SemiMajorAxis => Group::Size,
            Key::Eccentricity | Key::ECosW | Key::ESinW | Key::SqrtECosW | Key::SqrtESinW => Group::Shape,
            Key::ArgumentOfPericentre | Key::LongitudeOfPericentre => Group::Pericentre,
            Key::MeanAnomaly
            | Key::MeanLongitude
            | Key::TrueAnomaly
            | Key::PericentreTime
            | Key::TransitTime => Group::Phase,
            Key::Inclination => Group::Inclination,
            Key::AscendingNode => Group::Node,
            Key::SatelliteMassRatio => Group::SatelliteMass,
            Key::SatelliteSemiMajorAxis => Group::SatelliteSize,
        }
    }
}
