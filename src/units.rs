//! Constants with their sources, and the units a file may use.
//!
//! Inner units: au, day, rad, and G × mass in au³ day⁻².

/// Seconds in a day, by definition.
pub const DAY_S: f64 = 86_400.0;
/// Julian year, days, by definition.
pub const YEAR_DAY: f64 = 365.25;
/// Astronomical unit, m. Exact by definition: IAU 2012 Resolution B2.
pub const AU_M: f64 = 149_597_870_700.0;
/// Speed of light, m s⁻¹. Exact by definition: SI (BIPM 2019).
pub const LIGHT_M_S: f64 = 299_792_458.0;
/// Nominal G × mass of the Sun, m³ s⁻²: IAU 2015 Resolution B3.
pub const GM_SUN_M3_S2: f64 = 1.327_124_4e20;
/// Nominal G × mass of Jupiter, m³ s⁻²: IAU 2015 Resolution B3.
pub const GM_JUPITER_M3_S2: f64 = 1.266_865_3e17;
/// Nominal G × mass of the Earth, m³ s⁻²: IAU 2015 Resolution B3.
pub const GM_EARTH_M3_S2: f64 = 3.986_004e14;
/// Newtonian constant, m³ kg⁻¹ s⁻²: CODATA 2018 (relative uncertainty 2.2e-5; only used for masses given in kg).
pub const G_M3_KG_S2: f64 = 6.674_30e-11;
/// Nominal solar radius, m: IAU 2015 Resolution B3.
pub const SUN_RADIUS_M: f64 = 6.957e8;
/// Nominal equatorial radius of Jupiter, m: IAU 2015 Resolution B3.
pub const JUPITER_RADIUS_M: f64 = 7.1492e7;
/// Nominal equatorial radius of the Earth, m: IAU 2015 Resolution B3.
pub const EARTH_RADIUS_M: f64 = 6.3781e6;

/// m³ s⁻² → au³ day⁻²; derived.
pub const GM_INNER: f64 = DAY_S * DAY_S / (AU_M * AU_M * AU_M);
/// G × mass of the Sun, au³ day⁻²; derived.
pub const GM_SUN: f64 = GM_SUN_M3_S2 * GM_INNER;
/// G × mass of Jupiter, au³ day⁻²; derived.
pub const GM_JUPITER: f64 = GM_JUPITER_M3_S2 * GM_INNER;
/// G × mass of the Earth, au³ day⁻²; derived.
pub const GM_EARTH: f64 = GM_EARTH_M3_S2 * GM_INNER;
/// Radians in a degree; derived.
pub const DEGREE: f64 = std::f64::consts::PI / 180.0;

/// What kind of number a quantity is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Dimension {
    /// Inner unit day.
    Time,
    /// Inner unit au.
    Length,
    /// Inner unit au³ day⁻² (G × mass).
    Mass,
    /// Inner unit rad.
    Angle,
    /// Inner unit au day⁻¹.
    Speed,
    /// A date, Julian days (TDB); written with the unit `JD`.
    Date,
    /// A plain number.
    Number,
}

/// A unit that a file may name: its word, its dimension, and one of it in inner units.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Unit {
    pub word: &'static str,
    pub dimension: Dimension,
    pub inner: f64,
}
