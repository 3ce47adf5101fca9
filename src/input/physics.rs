//! The table `[physics]`: what acts beside Newton's pull of point masses.

use super::error::{Fault, InputError};
use super::raw::{Entry, RawTable};
use super::source::{Complaint, Source};
use crate::system::{Holder, Key, Oblateness, Physics, Stated};
use crate::units::Dimension;

const PHYSICS_KEYS: [&str; 2] = ["relativity", "oblateness"];
const OBLATENESS_KEYS: [&str; 4] = ["j2", "radius", "inclination", "ascending_node"];
const OBLATENESS: &str = "physics, oblateness";

/// Reads `[physics]` of a system whose star states these numbers.
pub(crate) fn check(source: &Source, entry: &Entry, star: &Stated) -> Result<Physics, InputError> {
    let table = entry.table(source)?;
    table.check_keys(source, "physics", &PHYSICS_KEYS)?;
    let relativity = table.get("relativity").map_or(Ok(false), |entry| entry.flag(source, "physics"))?;
    let oblateness = table.get("oblateness").map(|entry| oblateness(source, entry, star)).transpose()?;
    Ok(Physics { relativity, oblateness })
}

fn oblateness(source: &Source, entry: &Entry, star: &Stated) -> Result<Oblateness, InputError> {
    let table = entry.table(source)?;
    table.check_keys(source, OBLATENESS, &OBLATENESS_KEYS)?;
    let missing = |found: &str, allowed: &str, advice: &str| {
        let complaint = Complaint::new(Fault::MissingKey, found).about(OBLATENESS);
        Err(source.at(entry.key_at.clone(), complaint.allowed(allowed).advice(advice)))
    };
    let Some(j2) = table.get("j2") else {
        return missing("no j2", "j2, the star's second zonal harmonic", "add, as an example, j2 = 2e-7");
    };
    let radius_au = key_of(source, table, "radius", Key::Radius)?;
    if radius_au.is_none() && star.get(Key::Radius).is_none() {
        return missing(
            "no radius that j2 refers to",
            "radius here, or radius of the star",
            "add, as an example, radius = \"1 Rsun\"",
        );
    }
    Ok(Oblateness {
        j2: j2_of(source, j2)?,
        radius_au,
        inclination: key_of(source, table, "inclination", Key::Inclination)?
            .unwrap_or(std::f64::consts::FRAC_PI_2),
        ascending_node: key_of(source, table, "ascending_node", Key::AscendingNode)?.unwrap_or(0.0),
    })
}

/// |J₂| < 1: more is no star but a unit gone wrong. A long star (J₂ < 0) may be asked for.
fn j2_of(source: &Source, entry: &Entry) -> Result<f64, InputError> {
    let written = entry.exact(source, OBLATENESS)?;
    let number = written.measured(Dimension::Number).map_err(|fail| entry.fail(source, OBLATENESS, fail))?;
    if number.value.abs() < 1.0 {
        return Ok(number.value);
    }
    let complaint = Complaint::new(Fault::OutOfRange, written.value.to_string()).allowed("-1 < j2 < 1");
    Err(entry.refuse(source, OBLATENESS, complaint.advice("write, as an example, 2e-7 (the Sun's)")))
}

/// A number with the unit and range of a key of the same meaning, in inner units.
fn key_of(source: &Source, table: &RawTable, word: &str, key: Key) -> Result<Option<f64>, InputError> {
    let Some(entry) = table.get(word) else { return Ok(None) };
    let written = entry.exact(source, OBLATENESS)?;
    let measured = written.measured(key.dimension()).map_err(|fail| entry.fail(source, OBLATENESS, fail))?;
    let allowed = key.allowed(Holder::Planet);
    let zero_radius = key == Key::Radius && measured.value == 0.0;
    if allowed.contains(measured.value) && !zero_radius {
        return Ok(Some(measured.value));
    }
    let found = format!("{} {}", written.value, written.unit);
    let words = if zero_radius { "a radius above 0" } else { allowed.words };
    let complaint = Complaint::new(Fault::OutOfRange, found.trim_end()).allowed(words);
    Err(entry.refuse(source, OBLATENESS, complaint.advice("check the sign and the number")))
}
