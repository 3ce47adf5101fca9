//! What must hold between a second star and the rest of the system.

use super::error::{Fault, InputError};
use super::raw::{Entry, RawTable};
use super::source::{Complaint, Source};
use crate::system::{COMPANION, CompanionPlace, Frame, System, is_planet_name};

/// The name of a companion that states one; "companion" itself may be written too.
pub(crate) fn name(source: &Source, entry: &Entry) -> Result<String, InputError> {
    let allowed = "letters, digits, _ and -; not \"star\" or \"all\"";
    let name = entry.text(source, COMPANION, allowed)?;
    if name == COMPANION || is_planet_name(name) {
        return Ok(name.to_string());
    }
    let complaint = Complaint::new(Fault::BadName, format!("\"{name}\"")).allowed(allowed);
    Err(entry.refuse(source, COMPANION, complaint.advice("choose a short name, as \"B\"")))
}

/// The companion has a name of its own, its orbit a meaning in the frame of the file, and the terms of the star
/// beside Newton's are wanted only where planets circle the star alone.
pub(crate) fn check(source: &Source, top: &RawTable, system: &System) -> Result<(), InputError> {
    let (Some(companion), Some(entry)) = (&system.companion, top.get(COMPANION)) else { return Ok(()) };
    if system.planets.iter().any(|planet| planet.name == companion.name) {
        let complaint = Complaint::new(Fault::DuplicateName, format!("\"{}\" for both", companion.name));
        let complaint = complaint.about(COMPANION).allowed("each body its own name");
        let own = entry.table(source)?.get("name").map_or(entry.key_at.clone(), |name| name.value_at.clone());
        return Err(source.at(own, complaint.advice("give the companion another name, as \"B\"")));
    }
    let Some(place) = system.companion_place() else { return Ok(()) };
    check_frame(source, top, entry, system.convention.elements, place)?;
    check_physics(source, top, place)
}

/// Elements about the star mean nothing for planets that circle the pair, elements about the centre of mass of
/// everything mean nothing for a body whose mass is like the star's.
fn check_frame(
    source: &Source,
    top: &RawTable,
    companion: &Entry,
    frame: Frame,
    place: CompanionPlace,
) -> Result<(), InputError> {
    let (found, allowed, advice) = match (frame, place.has_circumbinary()) {
        (Frame::Jacobi, _) | (Frame::Astrocentric, false) => return Ok(()),
        (Frame::Astrocentric, true) => (
            "astrocentric elements of planets outside the companion's orbit, which circle the pair",
            "elements = \"jacobi\": planets about the centre of mass of the pair, the companion about the star",
            "write [convention] elements = \"jacobi\"; papers on circumbinary planets state such elements as a rule",
        ),
        (Frame::Barycentric, _) => (
            "barycentric elements with a companion, whose orbit about the centre of mass of the whole \
             system has not the mass parameter of the others",
            "elements = \"jacobi\", or \"astrocentric\" where the companion is outside the planets",
            "state the companion's orbit relative to the star (its semi-major axis is the sum of both stars')",
        ),
    };
    let stated = top.get("convention").and_then(|entry| entry.table(source).ok());
    let stated = stated.and_then(|table| table.get("elements"));
    let complaint = Complaint::new(Fault::Meaning, found).allowed(allowed).advice(advice);
    Err(match stated {
        Some(entry) => entry.refuse(source, "convention", complaint),
        None => source.at(companion.key_at.clone(), complaint.about(COMPANION)),
    })
}

fn check_physics(source: &Source, top: &RawTable, place: CompanionPlace) -> Result<(), InputError> {
    if !place.has_circumbinary() {
        return Ok(());
    }
    let Some(table) = top.get("physics").and_then(|entry| entry.table(source).ok()) else { return Ok(()) };
    let asked = table.entries.iter().find(|entry| entry.key == "oblateness" || is_true(entry));
    let Some(entry) = asked else { return Ok(()) };
    let found = format!("{} of one star, while planets circle two", entry.key);
    let complaint = Complaint::new(Fault::Meaning, found).about("physics");
    let complaint = complaint.allowed("these terms where every planet is inside the companion's orbit");
    let advice = "take it out; the two stars' mutual orbit moves the planets far more";
    Err(source.at(entry.key_at.clone(), complaint.advice(advice)))
}

fn is_true(entry: &Entry) -> bool {
    matches!(entry.value, super::raw::RawValue::Flag(true))
}
