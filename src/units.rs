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

/// m s⁻¹ → au day⁻¹; derived.
pub const M_S: f64 = DAY_S / AU_M;
/// G × mass of one kilogram, au³ day⁻²; derived.
pub const GM_KILOGRAM: f64 = G_M3_KG_S2 * GM_INNER;
/// Speed of light, au day⁻¹; derived.
pub const LIGHT: f64 = LIGHT_M_S * M_S;

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

impl Dimension {
    /// The kind of number in words, as "a time".
    pub fn words(self) -> &'static str {
        match self {
            Dimension::Time => "a time",
            Dimension::Length => "a length",
            Dimension::Mass => "a mass",
            Dimension::Angle => "an angle",
            Dimension::Speed => "a speed",
            Dimension::Date => "a date",
            Dimension::Number => "a plain number",
        }
    }

    /// The same without its article, as "time".
    pub fn noun(self) -> &'static str {
        self.words().split_once(' ').map_or("", |(_, noun)| noun)
    }

    /// The unit that an example is given in; empty for plain numbers.
    pub fn usual_unit(self) -> &'static str {
        match self {
            Dimension::Time => "d",
            Dimension::Length => "au",
            Dimension::Mass => "Mearth",
            Dimension::Angle => "deg",
            Dimension::Speed => "m/s",
            Dimension::Date => "JD",
            Dimension::Number => "",
        }
    }

    /// The units that a number of this kind may be written in, as "s, min, h"; empty for plain numbers.
    pub fn unit_words(self) -> String {
        let words: Vec<&str> = Unit::of(self).map(|unit| unit.word).collect();
        words.join(", ")
    }
}

const fn unit(word: &'static str, dimension: Dimension, inner: f64) -> Unit {
    Unit { word, dimension, inner }
}

impl Unit {
    /// Every unit that a file may name.
    pub const ALL: [Unit; 24] = [
        unit("s", Dimension::Time, 1.0 / DAY_S),
        unit("min", Dimension::Time, 60.0 / DAY_S),
        unit("h", Dimension::Time, 3600.0 / DAY_S),
        unit("d", Dimension::Time, 1.0),
        unit("yr", Dimension::Time, YEAR_DAY),
        unit("kyr", Dimension::Time, 1e3 * YEAR_DAY),
        unit("Myr", Dimension::Time, 1e6 * YEAR_DAY),
        unit("Gyr", Dimension::Time, 1e9 * YEAR_DAY),
        unit("m", Dimension::Length, 1.0 / AU_M),
        unit("km", Dimension::Length, 1e3 / AU_M),
        unit("au", Dimension::Length, 1.0),
        unit("Rsun", Dimension::Length, SUN_RADIUS_M / AU_M),
        unit("Rjup", Dimension::Length, JUPITER_RADIUS_M / AU_M),
        unit("Rearth", Dimension::Length, EARTH_RADIUS_M / AU_M),
        unit("kg", Dimension::Mass, GM_KILOGRAM),
        unit("Msun", Dimension::Mass, GM_SUN),
        unit("Mjup", Dimension::Mass, GM_JUPITER),
        unit("Mearth", Dimension::Mass, GM_EARTH),
        unit("deg", Dimension::Angle, DEGREE),
        unit("rad", Dimension::Angle, 1.0),
        unit("arcsec", Dimension::Angle, DEGREE / 3600.0),
        unit("m/s", Dimension::Speed, M_S),
        unit("km/s", Dimension::Speed, 1e3 * M_S),
        unit("JD", Dimension::Date, 1.0),
    ];

    /// The unit of that word; case matters (`min`, `Myr`).
    pub fn from_word(word: &str) -> Option<Unit> {
        Unit::ALL.into_iter().find(|unit| unit.word == word)
    }

    /// The units of one dimension, smallest first.
    pub fn of(dimension: Dimension) -> impl Iterator<Item = Unit> {
        Unit::ALL.into_iter().filter(move |unit| unit.dimension == dimension)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Relative difference.
    fn apart(found: f64, expected: f64) -> f64 {
        ((found - expected) / expected).abs()
    }

    /// The square of the Gaussian constant, 0.01720209895 (IAU 1976), was G × Sun by definition; the nominal
    /// value of 2015 is rounded to 8 digits (1.3271244e20), so it may differ by half a unit of the last, 4e-9.
    #[test]
    fn sun_is_the_gaussian_constant_squared() {
        let gaussian: f64 = 0.017_202_098_95;
        assert!(apart(GM_SUN, gaussian * gaussian) < 4e-9, "{}", apart(GM_SUN, gaussian * gaussian));
    }

    /// Sun / Earth without the Moon is 332946.0487 (IAU 2009 system of constants, from memory). Sun / Jupiter
    /// with its moons is 1047.348644 (the same list), and the four large moons hold 3.931e23 kg against the
    /// 1.89813e27 kg of the planet (planetary fact sheets, from memory). Limits: rounding of the nominal values.
    #[test]
    fn mass_ratios_are_the_published_ones() {
        assert!(apart(GM_SUN / GM_EARTH, 332_946.048_7) < 2e-7);
        assert!(apart(GM_SUN / GM_JUPITER, 1_047.348_644 * (1.0 + 3.931e23 / 1.898_13e27)) < 1e-6);
    }

    /// Light needs 499.004784 s for one au (IAU 2009 system: 499.004 783 84 s, from memory).
    #[test]
    fn light_time_for_one_au() {
        assert!(apart(DAY_S / LIGHT, 499.004_783_84) < 1e-10);
    }

    /// 1 au/day is 1731.456836 km/s (a common table value, from memory); one Gaussian year of a massless planet
    /// at 1 au is 365.2568983 d.
    #[test]
    fn au_and_day() {
        let km_s = Unit::from_word("km/s").expect("listed");
        assert!(apart(1.0 / km_s.inner, 1_731.456_836) < 1e-9);
        let year_day = std::f64::consts::TAU / GM_SUN.sqrt();
        assert!(apart(year_day, 365.256_898_3) < 3e-9);
    }

    /// Mass of the Sun in kg from G and GM: 1.98841e30 (CODATA 2018 G); of the Earth 5.9722e24.
    #[test]
    fn kilograms() {
        assert!(apart(GM_SUN / GM_KILOGRAM, 1.988_41e30) < 3e-6);
        assert!(apart(GM_EARTH / GM_KILOGRAM, 5.972_17e24) < 3e-6);
    }

    #[test]
    fn words_are_unique_and_found() {
        for unit in Unit::ALL {
            assert_eq!(Unit::from_word(unit.word), Some(unit));
            assert_eq!(Unit::ALL.iter().filter(|other| other.word == unit.word).count(), 1);
        }
        assert_eq!(Unit::from_word("myr"), None);
        assert_eq!(Dimension::Angle.unit_words(), "deg, rad, arcsec");
        assert_eq!(Dimension::Number.unit_words(), "");
        for unit in Unit::ALL {
            let usual = Unit::from_word(unit.dimension.usual_unit()).expect("listed");
            assert_eq!(usual.dimension, unit.dimension);
        }
    }
}
