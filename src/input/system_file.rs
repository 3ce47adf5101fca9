//! The system file: raw entries → a checked [`System`].

use std::ops::Range;

use super::companion;
use super::error::{Fault, InputError};
use super::later;
use super::physics;
use super::raw::{Entry, RawTable, RawValue};
use super::source::{Complaint, Source};
use crate::system::{
    Body, COMPANION, Convention, Frame, Group, Holder, Key, Measured, Pair, Pericentre, Physics, Stated,
    System, Transit, Unsound, is_planet_name,
};
use crate::units::Dimension;

const TOP_KEYS: [&str; 7] = ["title", "epoch", "star", "convention", "physics", "planet", "companion"];
const CONVENTION_KEYS: [&str; 3] = ["elements", "pericentre", "transit"];

/// A date farther than this from the epoch was cut short (as "JD − 2 450 000") on one side only, day.
const FARTHEST_DATE_DAY: f64 = 2e6;

/// Checks a whole system file.
pub(crate) fn check(source: &Source, top: &RawTable) -> Result<System, InputError> {
    later::refuse(source, "", top)?;
    top.check_keys(source, "", &TOP_KEYS)?;
    let title = match top.get("title") {
        Some(entry) => entry.text(source, "", "text in quotes")?.to_string(),
        None => file_stem(source.name),
    };
    let epoch_jd = top.get("epoch").map(|entry| epoch(source, entry)).transpose()?;
    let convention = top.get("convention").map_or(Ok(Convention::default()), |e| convention(source, e))?;
    let star = star(source, top)?;
    let physics =
        top.get("physics").map_or(Ok(Physics::default()), |e| physics::check(source, e, &star.stated))?;
    let planets = planets(source, top, epoch_jd)?;
    let companion = top.get(COMPANION).map(|entry| companion(source, entry, epoch_jd)).transpose()?;
    let system = System { title, epoch_jd, star, planets, companion, convention, physics };
    companion::check(source, top, &system)?;
    Ok(system)
}

fn file_stem(name: &str) -> String {
    std::path::Path::new(name)
        .file_stem()
        .map_or_else(|| name.to_string(), |s| s.to_string_lossy().into_owned())
}

fn epoch(source: &Source, entry: &Entry) -> Result<f64, InputError> {
    let written = entry.exact(source, "")?;
    Ok(written.measured(Dimension::Date).map_err(|fail| entry.fail(source, "", fail))?.value)
}

fn convention(source: &Source, entry: &Entry) -> Result<Convention, InputError> {
    let table = entry.table(source)?;
    let about = "convention";
    table.check_keys(source, about, &CONVENTION_KEYS)?;
    let frames = [
        ("astrocentric", Frame::Astrocentric),
        ("jacobi", Frame::Jacobi),
        ("barycentric", Frame::Barycentric),
    ];
    let owners = [("planet", Pericentre::Planet), ("star", Pericentre::Star)];
    let transits = [("+90 deg", Transit::Plus90), ("-90 deg", Transit::Minus90)];
    let mut convention = Convention::default();
    if let Some(entry) = table.get("elements") {
        convention.elements = entry.choice(source, about, &frames)?;
    }
    if let Some(entry) = table.get("pericentre") {
        convention.pericentre = entry.choice(source, about, &owners)?;
    }
    if let Some(entry) = table.get("transit") {
        convention.transit = entry.choice(source, about, &transits)?;
    }
    Ok(convention)
}

fn star(source: &Source, top: &RawTable) -> Result<Body, InputError> {
    let missing = |at| {
        let complaint = Complaint::new(Fault::MissingKey, "no mass of the star").about("star");
        source.at(
            at,
            complaint.allowed("[star] with mass").advice("add, as an example, mass = \"0.87 ± 0.03 Msun\""),
        )
    };
    let Some(entry) = top.get("star") else { return Err(missing(0..0)) };
    let table = entry.table(source)?;
    let allowed: Vec<&str> = Key::stated_by(Holder::Star).map(Key::word).collect();
    table.check_keys(source, "star", &allowed)?;
    let stated = statements(source, table, "star", Holder::Star)?;
    match stated.get(Key::Mass) {
        Some(_) => Ok(Body { name: "star".to_string(), stated }),
        None => Err(missing(entry.key_at.clone())),
    }
}

/// Reads every key of a body; each number is in its unit and range.
fn statements(source: &Source, table: &RawTable, about: &str, holder: Holder) -> Result<Stated, InputError> {
    let mut stated = Stated::default();
    for entry in &table.entries {
        if let Some(key) = Key::from_word(&entry.key) {
            stated.insert(key, statement(source, entry, about, key, holder)?);
        }
    }
    Ok(stated)
}

fn statement(
    source: &Source,
    entry: &Entry,
    about: &str,
    key: Key,
    holder: Holder,
) -> Result<Measured, InputError> {
    let written = entry.quantity(source, about)?;
    let measured = written.measured(key.dimension()).map_err(|fail| entry.fail(source, about, fail))?;
    let allowed = key.allowed(holder);
    if allowed.contains(measured.value) {
        return Ok(measured);
    }
    let found = format!("{} {}", written.value, written.unit);
    let complaint = Complaint::new(Fault::OutOfRange, found.trim_end()).allowed(allowed.words);
    Err(entry.fail(source, about, (written.value_at, complaint.advice(range_advice(key, written.value)))))
}

fn range_advice(key: Key, value: f64) -> &'static str {
    match key {
        Key::Eccentricity if value >= 1.0 => {
            "if it is a percentage, divide by 100; unbound orbits cannot be stated"
        }
        Key::Eccentricity => "give the size of the eccentricity; its direction is the argument of pericentre",
        Key::Inclination => "give it from 0 to 180 deg; above 90 deg the orbit is retrograde on the sky",
        Key::ECosW | Key::ESinW | Key::SqrtECosW | Key::SqrtESinW => {
            "check the number; squares of a pair add up"
        }
        _ => "check the sign and the number",
    }
}

fn planets(source: &Source, top: &RawTable, epoch_jd: Option<f64>) -> Result<Vec<Body>, InputError> {
    let none = |at| {
        let complaint = Complaint::new(Fault::MissingKey, "no planet").allowed("at least one [[planet]]");
        source.at(
            at,
            complaint.advice("add a [[planet]] table with name, a size of the orbit, a mass and a phase"),
        )
    };
    let Some(entry) = top.get("planet") else { return Err(none(0..0)) };
    let mut bodies: Vec<Body> = Vec::new();
    for table in entry.tables(source)? {
        let body = planet(source, table, epoch_jd)?;
        if bodies.iter().any(|other| other.name == body.name) {
            let complaint =
                Complaint::new(Fault::DuplicateName, format!("a second planet \"{}\"", body.name));
            let at = table.get("name").map_or(table.at.clone(), |entry| entry.value_at.clone());
            let complaint = complaint.allowed("each planet its own name");
            return Err(source.at(at, complaint.advice("give it another name, as \"d\"")));
        }
        bodies.push(body);
    }
    if bodies.is_empty() { Err(none(entry.value_at.clone())) } else { Ok(bodies) }
}

/// Where the name of a planet, or else the header of its table, of the companion or the star stands.
pub(crate) fn place_of(source: &Source, top: &RawTable, body: &str) -> Option<Range<usize>> {
    let tables = top.get("planet").and_then(|entry| entry.tables(source).ok()).unwrap_or_default();
    let names = tables.iter().filter_map(|table| table.get("name"));
    let named = names.clone().find(|name| matches!(&name.value, RawValue::Text(text) if text == body));
    named.map(|name| name.value_at.clone()).or_else(|| Some(top.get(body)?.key_at.clone()))
}

fn planet(source: &Source, table: &RawTable, epoch_jd: Option<f64>) -> Result<Body, InputError> {
    let name = planet_name(source, table)?;
    let about = format!("planet {name}");
    let stated = orbiting(source, table, &about, Holder::Planet, epoch_jd)?;
    Ok(Body { name, stated })
}

fn companion(source: &Source, entry: &Entry, epoch_jd: Option<f64>) -> Result<Body, InputError> {
    if let RawValue::List(_) = entry.value {
        let complaint = Complaint::new(Fault::WrongType, "a list").about(COMPANION);
        let complaint = complaint.allowed("one [companion] table");
        return Err(source.at(entry.key_at.clone(), complaint.advice("write [companion]; one can be had")));
    }
    let table = entry.table(source)?;
    let name = match table.get("name") {
        Some(entry) => companion::name(source, entry)?,
        None => COMPANION.to_string(),
    };
    let stated = orbiting(source, table, COMPANION, Holder::Companion, epoch_jd)?;
    Ok(Body { name, stated })
}

/// The statements about a body that circles, each alone and all together in order.
fn orbiting(
    source: &Source,
    table: &RawTable,
    about: &str,
    holder: Holder,
    epoch_jd: Option<f64>,
) -> Result<Stated, InputError> {
    let allowed: Vec<&str> = ["name"].into_iter().chain(Key::stated_by(holder).map(Key::word)).collect();
    table.check_keys(source, about, &allowed)?;
    let stated = statements(source, table, about, holder)?;
    let check = OrbitCheck { source, table, about, stated: &stated };
    check.alternatives()?;
    check.pairs()?;
    check.needed()?;
    check.dates(epoch_jd)?;
    stated.check_together().map_err(|unsound| check.unsound(unsound))?;
    Ok(stated)
}

fn planet_name(source: &Source, table: &RawTable) -> Result<String, InputError> {
    let Some(entry) = table.get("name") else {
        let complaint = Complaint::new(Fault::MissingKey, "a planet without name").about("planet");
        let complaint =
            complaint.allowed("name = \"b\"").advice("add the name; paths such as b.period use it");
        return Err(source.at(table.at.clone(), complaint));
    };
    let allowed = "letters, digits, _ and -; not \"star\", \"companion\" or \"all\"";
    let name = entry.text(source, "planet", allowed)?;
    if is_planet_name(name) {
        return Ok(name.to_string());
    }
    let complaint = Complaint::new(Fault::BadName, format!("\"{name}\"")).allowed(allowed);
    Err(entry.refuse(source, "planet", complaint.advice("choose a short name, as \"b\"")))
}

/// What must hold between the keys of one planet or companion.
struct OrbitCheck<'a> {
    source: &'a Source<'a>,
    table: &'a RawTable,
    about: &'a str,
    stated: &'a Stated,
}

impl OrbitCheck<'_> {
    fn unsound(&self, unsound: Unsound) -> InputError {
        if let Unsound::HalfSatellite { absent, .. } = unsound {
            let complaint = Complaint::new(Fault::MissingPartner, unsound.to_string());
            let complaint = complaint.allowed("both keys of a satellite, or none");
            return self.at_key(unsound.key(), complaint.advice(format!("add {}", absent.word())));
        }
        let complaint = Complaint::new(Fault::OutOfRange, unsound.to_string());
        let complaint = complaint.allowed("a bound orbit and a finite mass").advice("check these numbers");
        self.at_key(unsound.key(), complaint)
    }

    fn at_key(&self, key: Key, complaint: Complaint) -> InputError {
        let at = self.table.get(key.word()).map_or(self.table.at.clone(), |entry| entry.key_at.clone());
        self.source.at(at, complaint.about(self.about))
    }

    fn at_name(&self, complaint: Complaint) -> InputError {
        let at = self.table.get("name").map_or(self.table.at.clone(), |entry| entry.value_at.clone());
        self.source.at(at, complaint.about(self.about))
    }

    /// The stated keys in the order of the file.
    fn keys(&self) -> impl Iterator<Item = Key> + '_ {
        self.table.entries.iter().filter_map(|entry| Key::from_word(&entry.key))
    }

    /// No two keys answer the same question.
    fn alternatives(&self) -> Result<(), InputError> {
        let clash = |first: Key, second: Key| {
            let pairs = (Pair::of(first), Pair::of(second));
            match pairs {
                (Some(one), Some(other)) => one != other,
                (Some(_), None) | (None, Some(_)) => {
                    let single = if pairs.0.is_some() { second } else { first };
                    matches!(single.group(), Group::Shape | Group::Pericentre)
                }
                (None, None) => first.group() == second.group(),
            }
        };
        for (index, second) in self.keys().enumerate() {
            if let Some(first) = self.keys().take(index).find(|first| clash(*first, second)) {
                let found = format!("both {} and {}", first.word(), second.word());
                let complaint = Complaint::new(Fault::Conflict, found).allowed(group_words(second.group()));
                return Err(self.at_key(
                    second,
                    complaint.advice("keep the one that the paper states, take out the other"),
                ));
            }
        }
        Ok(())
    }

    /// Both components of a pair.
    fn pairs(&self) -> Result<(), InputError> {
        let Some(pair) = self.stated.pair() else { return Ok(()) };
        let (cosine, sine) = pair.keys();
        let (there, absent) = match (self.stated.get(cosine), self.stated.get(sine)) {
            (Some(_), Some(_)) => return Ok(()),
            (Some(_), None) => (cosine, sine),
            _ => (sine, cosine),
        };
        let found = format!("{} without {}", there.word(), absent.word());
        let complaint = Complaint::new(Fault::MissingPartner, found).allowed("both components");
        Err(self.at_key(there, complaint.advice(format!("add {}", absent.word()))))
    }

    /// A size, a mass and a phase; the rest has defaults.
    fn needed(&self) -> Result<(), InputError> {
        let needs = [
            (Group::Size, "no size of the orbit", "add, as an example, period = \"11.862 d\""),
            (Group::Mass, "no mass", "add, as an example, mass = \"6.1 Mearth\""),
            (
                Group::Phase,
                "no phase: where the body is on its orbit",
                "add, as an example, mean_anomaly = \"0 deg\"",
            ),
        ];
        for (group, found, advice) in needs {
            if !self.keys().any(|key| key.group() == group) {
                let complaint = Complaint::new(Fault::MissingKey, found).allowed(group_words(group));
                return Err(self.at_name(complaint.advice(advice)));
            }
        }
        Ok(())
    }

    /// A date needs an epoch, and lies within reach of it.
    fn dates(&self, epoch_jd: Option<f64>) -> Result<(), InputError> {
        let dates = self.stated.iter().filter(|(key, _)| key.dimension() == Dimension::Date);
        for (key, measured) in dates {
            let Some(epoch_jd) = epoch_jd else {
                let complaint =
                    Complaint::new(Fault::DateWithoutEpoch, format!("{} without epoch", key.word()));
                let complaint = complaint.allowed("epoch = \"2460310.5 JD\" at the top of the file");
                return Err(self.at_key(key, complaint.advice("add the date (TDB) at which the orbits hold")));
            };
            let away_day = measured.value - epoch_jd;
            if away_day.abs() > FARTHEST_DATE_DAY {
                let found = format!("a date {:.0} years from the epoch", away_day / crate::units::YEAR_DAY);
                let complaint =
                    Complaint::new(Fault::OutOfRange, found).allowed("full Julian dates for both");
                let advice = "add what was cut off, as 2450000 or 2400000.5 (modified Julian date), to this or the epoch";
                return Err(self.at_key(key, complaint.advice(advice)));
            }
        }
        Ok(())
    }
}

fn group_words(group: Group) -> String {
    let words: Vec<&str> =
        Key::stated_by(Holder::Planet).filter(|k| k.group() == group).map(Key::word).collect();
    match group {
        Group::Shape | Group::Pericentre => {
            "eccentricity with argument_of_pericentre or longitude_of_pericentre; or \
             e_cos_w and e_sin_w; or sqrt_e_cos_w and sqrt_e_sin_w"
                .to_string()
        }
        _ => format!("one of {}", words.join(", ")),
    }
}
