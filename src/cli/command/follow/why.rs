//! Why the verdict is what it is, as a value and in words with their papers.

use std::fmt;

use crate::assess::{Assessment, Plan};
use crate::report::short;
use crate::verdict::{CHAOTIC_FROM, LEAST_OUTER_ORBITS, LostHow, REGULAR_UP_TO, Verdict};

/// Below this no step keeps the energy over a long span: each operation rounds by 1.1e-16.
const ROUND_OFF: f64 = 1e-13;

/// What decided.
#[derive(Clone, Debug, PartialEq)]
pub enum Why {
    Regular { mean_megno: f64, outer_orbits: f64, outer: String },
    Chaotic { mean_megno: f64 },
    Lost { planet: String, other: Option<String>, how: LostHow, limit: Limit },
    FewOrbits { outer_orbits: f64, outer: String },
    Between { mean_megno: f64 },
    Unmeasured,
    Untrusted { energy_error: f64, asked: f64, redone: u32 },
}

/// The distance that a lost planet passed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Limit {
    /// From the star.
    Au { au: f64, asked: bool },
    /// Of two planets.
    Hill(f64),
    /// The sum of the radii, or the radius of the star.
    Contact,
}

impl Why {
    /// `names` are the planets', `escape_au` the escape limit in force, `outer` the planet of the longest period.
    pub fn of(
        assessment: &Assessment,
        plan: &Plan,
        names: &[&str],
        escape_au: f64,
        (outer, outer_orbits): (usize, f64),
    ) -> Why {
        let outer = names[outer].to_owned();
        match (assessment.verdict, assessment.megno) {
            (Verdict::Untrusted, _) => Why::Untrusted {
                energy_error: assessment.energy_error.unwrap_or(f64::INFINITY),
                asked: plan.energy_error,
                redone: assessment.redone,
            },
            (Verdict::Lost, _) => lost(assessment, plan, names, escape_au),
            (Verdict::Regular, Some(mean_megno)) => Why::Regular { mean_megno, outer_orbits, outer },
            (Verdict::Chaotic, Some(mean_megno)) => Why::Chaotic { mean_megno },
            (_, Some(mean_megno)) if mean_megno > REGULAR_UP_TO => Why::Between { mean_megno },
            (_, Some(_)) => Why::FewOrbits { outer_orbits, outer },
            (_, None) => Why::Unmeasured,
        }
    }
}

fn lost(assessment: &Assessment, plan: &Plan, names: &[&str], escape_au: f64) -> Why {
    let Some(loss) = assessment.loss else { return Why::Unmeasured };
    let limit = match (loss.how, plan.encounter_hill) {
        (LostHow::Escape, _) => Limit::Au { au: escape_au, asked: plan.escape_au.is_some() },
        (LostHow::Encounter, Some(hill)) => Limit::Hill(hill),
        _ => Limit::Contact,
    };
    let other = loss.other.map(|other| names[other].to_owned());
    Why::Lost { planet: names[loss.planet].to_owned(), other, how: loss.how, limit }
}

impl fmt::Display for Why {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Why::Regular { mean_megno, outer_orbits, outer } => write!(
                f,
                "⟨Y⟩ = {mean_megno:.3} after {outer_orbits:.0} orbits of {outer}. Up to {REGULAR_UP_TO} after at least \
                 {LEAST_OUTER_ORBITS} counts as regular: ⟨Y⟩ tends to 2 on quasi-periodic orbits (Cincotta & Simó \
                 2000; Cincotta, Giordano & Simó 2003; Goździewski, Breiter & Borczyk 2008). Chaos slower than the \
                 span does not show"
            ),
            Why::Chaotic { mean_megno } => write!(
                f,
                "⟨Y⟩ = {}. From {CHAOTIC_FROM} on counts as chaotic: on a chaotic orbit ⟨Y⟩ grows as half the span \
                 over the Lyapunov time (Cincotta & Simó 2000). No planet was lost within the span; chaos alone is \
                 no instability",
                megno(*mean_megno)
            ),
            Why::Lost { planet, other, how, limit } => write_lost(f, planet, other.as_deref(), *how, *limit),
            Why::FewOrbits { outer_orbits, outer } => write!(
                f,
                "only {outer_orbits:.1} orbits of {outer}; before {LEAST_OUTER_ORBITS} the transient of ⟨Y⟩ hides all \
                 but violent chaos (Goździewski, Breiter & Borczyk 2008). Raise --span"
            ),
            Why::Between { mean_megno } => write!(
                f,
                "⟨Y⟩ = {mean_megno:.3} lies between {REGULAR_UP_TO}, up to which it counts as regular, and \
                 {CHAOTIC_FROM}, from which it counts as chaotic (Cincotta & Simó 2000; Goździewski, Breiter & Borczyk \
                 2008). Raise --span"
            ),
            Why::Unmeasured => f.write_str("⟨Y⟩ could not be measured. Raise --span"),
            Why::Untrusted { energy_error, asked, redone } => {
                let (reached, asked_words) = (short(*energy_error), short(*asked));
                write!(f, "the relative energy error reached {reached}, but {asked_words} was asked for; ")?;
                match redone {
                    0 => f.write_str("no smaller step was tried. ")?,
                    1 => f.write_str("beginning again with a smaller step did not help. ")?,
                    2 => f.write_str("beginning again twice with smaller steps did not help. ")?,
                    _ => f.write_str("neither smaller steps nor the adaptive engine did better. ")?,
                }
                f.write_str(if *asked < ROUND_OFF {
                    "So little is at the round-off of double precision: accept more with --energy-error"
                } else {
                    "Give a smaller --step, a scheme of higher order such as --scheme \"(10,6,4)\", or accept more \
                     with --energy-error"
                })
            }
        }
    }
}

fn write_lost(
    f: &mut fmt::Formatter<'_>,
    planet: &str,
    other: Option<&str>,
    how: LostHow,
    limit: Limit,
) -> fmt::Result {
    let other = other.unwrap_or("another planet");
    match (how, limit) {
        (LostHow::Escape, Limit::Au { au, asked }) => {
            let whose = if asked { "as asked with --escape" } else { "20 times the largest apocentre" };
            write!(f, "{planet} came farther than {} au from the star ({whose})", short(au))
        }
        (LostHow::Encounter, Limit::Hill(hill)) => {
            let radii = if hill == 1.0 { "radius" } else { "radii" };
            write!(f, "{planet} and {other} came closer than {hill} mutual Hill {radii} (--encounter)")
        }
        (LostHow::Star, _) => write!(f, "{planet} fell into the star"),
        (LostHow::Collision | LostHow::Encounter, _) => {
            write!(f, "{planet} and {other} came closer than the sum of their radii")
        }
        (LostHow::Escape, _) => write!(f, "{planet} escaped"),
    }
}

/// ⟨Y⟩ to three decimals where they say something.
pub fn megno(value: f64) -> String {
    if value.abs() < 100.0 { format!("{value:.3}") } else { short(value) }
}
