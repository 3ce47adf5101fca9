//! One finished cell as one line of text with a checksum, and back.

mod fields;

use serde::{Deserialize, Serialize};

use super::record::{Filled, Record};
use crate::assess::{AngleFound, Approach, Assessment, Extent, Loss, Lyapunov, Range};
use crate::verdict::{LostHow, Verdict};
use fields::{Fields, Line, kept, number, optional, quoted, whole};

/// What the lines of one journal hold.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct Layout {
    /// Paths of the axes, as written in the study.
    pub axes: Vec<String>,
    /// Names of the planets in the order of the system file.
    pub planets: Vec<String>,
    /// Whether the ranges of the elements of each planet are kept.
    pub extent: bool,
    /// Whether the drift of the mean motion of each planet is kept; journals from before there was one have none.
    #[serde(default)]
    pub frequency_drift: bool,
    /// Whether the state of an angle is kept; likewise.
    #[serde(default)]
    pub angle: bool,
    /// Whether the blocks done by the adaptive engine are counted; likewise.
    #[serde(default)]
    pub passages: bool,
    /// Goes into every checksum, so that a line of another run is not taken for one of this.
    pub seal: String,
}

/// Columns between the axes and the planets.
const BEFORE_PLANETS: [&str; 10] = [
    "filled",
    "verdict",
    "end_time_day",
    "lost_time_day",
    "lost_planet",
    "lost_other",
    "lost_how",
    "megno",
    "lyapunov_per_day",
    "lyapunov_error_per_day",
];
/// How many columns after `verdict` the column `lost_how` comes.
const LOST_HOW_AFTER_VERDICT: usize = 5;
/// Columns of one planet.
const OF_PLANET: [&str; 6] = ["a_min_au", "a_max_au", "e_min", "e_max", "i_min_rad", "i_max_rad"];
/// Column of one planet.
const DRIFT_OF_PLANET: &str = "frequency_drift";
/// Columns of the angle.
const OF_ANGLE: [&str; 3] = ["angle_motion", "angle_centre_rad", "angle_amplitude_rad"];
/// Columns of the passages.
const OF_PASSAGES: [&str; 2] = ["passages", "passage_energy_error"];
/// Columns after the planets, the angle and the passages.
const AFTER_PLANETS: [&str; 11] = [
    "approach_au",
    "approach_hill",
    "approach_first",
    "approach_second",
    "energy_error",
    "angular_momentum_error",
    "scheme",
    "step_day",
    "steps",
    "redone",
    "crc32",
];

impl Layout {
    /// Names of all columns, the checksum last.
    pub fn columns(&self) -> Vec<String> {
        let mut names = vec!["cell".to_string()];
        names.extend(self.axes.iter().cloned());
        names.extend(BEFORE_PLANETS.map(String::from));
        if self.extent {
            for planet in &self.planets {
                names.extend(OF_PLANET.map(|column| format!("{planet}.{column}")));
            }
        }
        if self.frequency_drift {
            names.extend(self.planets.iter().map(|planet| format!("{planet}.{DRIFT_OF_PLANET}")));
        }
        if self.angle {
            names.extend(OF_ANGLE.map(String::from));
        }
        if self.passages {
            names.extend(OF_PASSAGES.map(String::from));
        }
        names.extend(AFTER_PLANETS.map(String::from));
        names
    }

    /// The first line of a journal, without its line end.
    pub fn header(&self) -> String {
        let names: Vec<String> = self.columns().iter().map(|name| quoted(name)).collect();
        names.join(",")
    }

    /// The line of a record, without its line end. Floats are the shortest that read back to the same bits.
    pub fn encode(&self, record: &Record) -> String {
        let a = &record.assessment;
        let mut line = Line(record.cell.to_string());
        record.values.iter().for_each(|value| line.put(number(*value)));
        if let Some(filled) = record.filled {
            self.encode_filled(filled, a.verdict, &mut line);
            return self.sealed(line);
        }
        line.put("");
        line.put(a.verdict.word());
        line.put(number(a.end_time_day));
        line.put(optional(a.loss.map(|loss| loss.time_day)));
        line.put(whole(a.loss.map(|loss| loss.planet)));
        line.put(whole(a.loss.and_then(|loss| loss.other)));
        line.put(a.loss.map_or("", |loss| loss.how.word()));
        line.put(optional(a.megno));
        line.put(optional(a.lyapunov.map(|l| l.per_day)));
        line.put(optional(a.lyapunov.map(|l| l.error_per_day)));
        if self.extent {
            self.encode_extent(&a.extent, &mut line);
        }
        if self.frequency_drift {
            (0..self.planets.len())
                .for_each(|planet| line.put(optional(a.frequency_drift.get(planet).copied())));
        }
        if self.angle {
            let libration = a.angle.and_then(AngleFound::libration);
            line.put(a.angle.map_or("", AngleFound::word));
            line.put(optional(libration.map(|[centre, _]| centre)));
            line.put(optional(libration.map(|[_, amplitude]| amplitude)));
        }
        if self.passages {
            line.put(a.passages.map(|blocks| blocks.to_string()).unwrap_or_default());
            line.put(optional(a.passage_energy_error));
        }
        line.put(optional(a.smallest_approach.map(|approach| approach.au)));
        line.put(optional(a.smallest_approach.map(|approach| approach.hill)));
        line.put(whole(a.smallest_approach.map(|approach| approach.pair.0)));
        line.put(whole(a.smallest_approach.map(|approach| approach.pair.1)));
        line.put(optional(a.energy_error));
        line.put(optional(a.angular_momentum_error));
        line.put(quoted(a.scheme));
        line.put(number(a.step_day));
        line.put(a.steps.to_string());
        line.put(a.redone.to_string());
        self.sealed(line)
    }

    fn sealed(&self, mut line: Line) -> String {
        let checksum = self.checksum(&line.0);
        line.put(checksum);
        line.0
    }

    /// A filled cell has a verdict, maybe a way of loss, and nothing else: empty fields, not zeros.
    fn encode_filled(&self, filled: Filled, verdict: Verdict, line: &mut Line) {
        line.put(filled.stride.to_string());
        line.put(verdict.word());
        (0..LOST_HOW_AFTER_VERDICT - 1).for_each(|_| line.put(""));
        line.put(filled.how.map_or("", LostHow::word));
        (0..self.columns_after_how()).for_each(|_| line.put(""));
    }

    /// Columns between `lost_how` and the checksum.
    fn columns_after_how(&self) -> usize {
        let of_planet = if self.extent { OF_PLANET.len() } else { 0 } + usize::from(self.frequency_drift);
        let planets = self.planets.len() * of_planet;
        let angle = if self.angle { OF_ANGLE.len() } else { 0 };
        let passages = if self.passages { OF_PASSAGES.len() } else { 0 };
        BEFORE_PLANETS.len() - 2 - LOST_HOW_AFTER_VERDICT + planets + angle + passages + AFTER_PLANETS.len()
            - 1
    }

    fn encode_extent(&self, extent: &[Extent], line: &mut Line) {
        for planet in 0..self.planets.len() {
            let extent = extent.get(planet);
            let ranges = [
                extent.map(|e| e.semi_major_axis_au),
                extent.map(|e| e.eccentricity),
                extent.map(|e| e.inclination),
            ];
            for range in ranges {
                let range = range.filter(|range| !range.is_empty());
                line.put(optional(range.map(|r| r.min)));
                line.put(optional(range.map(|r| r.max)));
            }
        }
    }

    /// The record of a line, or nothing when the line is torn, damaged or of another run.
    pub fn decode(&self, line: &[u8]) -> Option<Record> {
        let text = std::str::from_utf8(line).ok()?;
        let (body, checksum) = text.rsplit_once(',')?;
        // Compared as written: reading it as a number would let `A` pass for `a`.
        if self.checksum(body) != checksum {
            return None;
        }
        let mut fields = Fields(body);
        let cell = fields.whole()??;
        // Exact capacities here and below: a million records are held at once when the tables are made.
        let mut values = Vec::with_capacity(self.axes.len());
        for _ in &self.axes {
            values.push(fields.number()??);
        }
        let record = match fields.whole()? {
            Some(stride) => self.decode_filled(cell, values, u8::try_from(stride).ok()?, &mut fields)?,
            None => Record::integrated(cell, values, self.decode_assessment(&mut fields)?),
        };
        fields.0.is_empty().then_some(record)
    }

    fn decode_filled(&self, cell: u64, values: Vec<f64>, stride: u8, fields: &mut Fields) -> Option<Record> {
        let verdict = Verdict::from_word(&fields.next()?)?;
        for _ in 0..LOST_HOW_AFTER_VERDICT - 1 {
            fields.empty()?;
        }
        let how = fields.next()?;
        let how = if how.is_empty() { None } else { Some(LostHow::from_word(&how)?) };
        for _ in 0..self.columns_after_how() {
            fields.empty()?;
        }
        Some(Record::filled(cell, values, verdict, Filled { stride, how }))
    }

    fn decode_assessment(&self, fields: &mut Fields) -> Option<Assessment> {
        Some(Assessment {
            verdict: Verdict::from_word(&fields.next()?)?,
            end_time_day: fields.number()??,
            loss: decode_loss(fields)?,
            megno: fields.number()?,
            lyapunov: match (fields.number()?, fields.number()?) {
                (Some(per_day), Some(error_per_day)) => Some(Lyapunov { per_day, error_per_day }),
                _ => None,
            },
            extent: self.decode_extent(fields)?,
            frequency_drift: self.decode_drift(fields)?,
            angle: if self.angle { decode_angle(fields)? } else { None },
            passages: if self.passages { fields.whole()? } else { None },
            passage_energy_error: if self.passages { fields.number()? } else { None },
            smallest_approach: decode_approach(fields)?,
            energy_error: fields.number()?,
            angular_momentum_error: fields.number()?,
            scheme: kept(&fields.next()?),
            step_day: fields.number()??,
            steps: fields.whole()??,
            redone: u32::try_from(fields.whole()??).ok()?,
        })
    }

    fn decode_extent(&self, fields: &mut Fields) -> Option<Vec<Extent>> {
        let planets = if self.extent { self.planets.len() } else { 0 };
        let mut extents = Vec::with_capacity(planets);
        for _ in 0..planets {
            let (a, e, i) = (fields.range()?, fields.range()?, fields.range()?);
            if let (Some(eccentricity), Some(inclination)) = (e, i) {
                let semi_major_axis_au = a.unwrap_or(Range::empty());
                extents.push(Extent { semi_major_axis_au, eccentricity, inclination });
            }
        }
        extents.shrink_to_fit();
        Some(extents)
    }

    fn decode_drift(&self, fields: &mut Fields) -> Option<Vec<f64>> {
        let planets = if self.frequency_drift { self.planets.len() } else { 0 };
        let mut drift = Vec::with_capacity(planets);
        for _ in 0..planets {
            drift.extend(fields.number()?);
        }
        drift.shrink_to_fit();
        Some(drift)
    }

    fn checksum(&self, body: &str) -> String {
        let mut hasher = crc32fast::Hasher::new();
        hasher.update(self.seal.as_bytes());
        hasher.update(body.as_bytes());
        format!("{:08x}", hasher.finalize())
    }
}

fn decode_loss(fields: &mut Fields) -> Option<Option<Loss>> {
    let (time_day, planet, other) = (fields.number()?, fields.whole()?, fields.whole()?);
    let how = fields.next()?;
    Some(match (time_day, planet) {
        (Some(time_day), Some(planet)) => Some(Loss {
            time_day,
            planet: usize::try_from(planet).ok()?,
            other: other.map(usize::try_from).transpose().ok()?,
            how: LostHow::from_word(&how)?,
        }),
        _ => None,
    })
}

fn decode_angle(fields: &mut Fields) -> Option<Option<AngleFound>> {
    let word = fields.next()?;
    let (centre, amplitude) = (fields.number()?, fields.number()?);
    if word.is_empty() {
        return Some(None);
    }
    let libration = centre.zip(amplitude).map(|(centre, amplitude)| [centre, amplitude]);
    AngleFound::from_word(&word, libration).map(Some)
}

fn decode_approach(fields: &mut Fields) -> Option<Option<Approach>> {
    let (au, hill) = (fields.number()?, fields.number()?);
    let (first, second) = (fields.whole()?, fields.whole()?);
    Some(match (au, hill, first, second) {
        (Some(au), Some(hill), Some(first), Some(second)) => {
            Some(Approach { au, hill, pair: (usize::try_from(first).ok()?, usize::try_from(second).ok()?) })
        }
        _ => None,
    })
}
