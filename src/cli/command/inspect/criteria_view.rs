//! The analytic criteria and secular modes of a configuration, as plain data.

use serde::Serialize;

use super::binary::{self, BinaryView};
use crate::coords::Configuration;
use crate::criteria::{self, AmdBudget, Neighbours, OutOfDomain, SecularMode, SecularSystem};
use crate::system::Frame;
use crate::units::{DEGREE, YEAR_DAY};

/// A frequency below this part of the largest is what rounding left of a mode at rest.
const AT_REST: f64 = 1e-12;

#[derive(Debug, Serialize)]
pub struct CriteriaView {
    pub pairs: Vec<PairCriteria>,
    /// Marchal & Bozis (1982), two planets of any eccentricity and inclination.
    pub exact_hill: Option<ExactHill>,
    /// C over Λ of the innermost planet.
    pub innermost_amd: Option<f64>,
    pub chains: Vec<ChainView>,
    pub secular: Option<SecularView>,
    /// Beside a second star only.
    pub binary: Vec<BinaryView>,
    /// Criteria that say nothing here, with their reason.
    pub silent: Vec<String>,
}

#[derive(Debug, Serialize)]
pub struct PairCriteria {
    pub inner: String,
    pub outer: String,
    /// (a₂ − a₁)/a₁.
    pub gap: f64,
    /// Of Deck et al. (2013), to compare with the gap.
    pub first_order_overlap: Option<f64>,
    pub quarter_power_spacing: Option<f64>,
    pub relative_eccentricity: f64,
    /// Of Hadden & Lithwick (2018).
    pub critical_relative_eccentricity: Option<f64>,
    pub outer_eccentricity_at_crossing: Option<f64>,
    pub amd: Option<AmdView>,
}

/// Relative AMD of the system and the critical ones of the pair.
#[derive(Debug, Serialize)]
pub struct AmdView {
    pub relative: f64,
    pub collision: f64,
    pub hill: f64,
    pub overlap: Option<f64>,
}

#[derive(Debug, Serialize)]
pub struct ExactHill {
    pub found: f64,
    pub needed: f64,
    pub stable: bool,
}

#[derive(Debug, Serialize)]
pub struct ChainView {
    pub planets: [String; 3],
    pub coefficients: [i32; 3],
    /// Period of the combination, yr.
    pub period_yr: f64,
}

#[derive(Debug, Serialize)]
pub struct SecularView {
    /// Whether the star's first post-Newtonian term and its J2 are in, as the file states them.
    pub relativity: bool,
    pub oblateness: bool,
    /// Where relativity is left out: by how much it would raise the frequency that it raises most, as a share.
    pub relativity_would_add: Option<f64>,
    /// AMD to second order over the angular momentum of circular orbits, about the invariable plane or, with J2, about
    /// the star's equator.
    pub amd_relative: f64,
    pub pericentres: Vec<ModeView>,
    pub nodes: Vec<ModeView>,
    pub planets: Vec<SecularPlanetView>,
}

#[derive(Debug, Serialize)]
pub struct ModeView {
    pub deg_yr: f64,
    /// Share of the AMD of all modes of its kind.
    pub amd_share: f64,
    /// Part of each planet's e, or of 2 sin(i/2), in this mode.
    pub amplitude: Vec<f64>,
    pub participation: Vec<f64>,
}

#[derive(Debug, Serialize)]
pub struct SecularPlanetView {
    pub name: String,
    pub largest_eccentricity: f64,
    /// Share of the AMD, from eccentricity and from inclination.
    pub amd_of_eccentricity: f64,
    pub amd_of_inclination: f64,
}

impl CriteriaView {
    pub fn new(configuration: &Configuration, pairs: &[Neighbours]) -> CriteriaView {
        if configuration.companion_index().is_some() {
            return CriteriaView::beside_star(configuration);
        }
        let mut silent = Silent::default();
        let budget = silent.heard("", criteria::amd_budget(configuration));
        let exact_hill = (configuration.planets.len() == 2)
            .then(|| silent.heard("", criteria::exact_hill_balance(configuration)))
            .flatten()
            .map(|b| ExactHill { found: b.found, needed: b.needed, stable: b.stable() });
        // The modes are what planets do to one another.
        let secular = (configuration.planets.len() > 1)
            .then(|| silent.heard("", SecularSystem::of_stated(configuration)))
            .flatten()
            .map(|system| secular(configuration, &system));
        let chains = chains(configuration, pairs);
        let pairs =
            pairs.iter().map(|pair| of_pair(configuration, pair, budget.as_ref(), &mut silent)).collect();
        CriteriaView {
            pairs,
            exact_hill,
            innermost_amd: budget.map(|budget| budget.innermost_relative),
            chains,
            secular,
            binary: Vec::new(),
            silent: silent.sentences(),
        }
    }

    /// With a second star only the limits beside it are known.
    fn beside_star(configuration: &Configuration) -> CriteriaView {
        let mut silent = Silent::default();
        let binary = binary::limits(configuration, |planet, said| silent.heard(planet, said));
        let why = "the other criteria are for planets of one star; a second star is not in them".to_string();
        let mut sentences = silent.sentences();
        sentences.push(why);
        let (exact_hill, innermost_amd, secular) = (None, None, None);
        CriteriaView {
            pairs: vec![],
            exact_hill,
            innermost_amd,
            chains: vec![],
            secular,
            binary,
            silent: sentences,
        }
    }
}

/// Why criteria say nothing: each reason once, with what it is the reason for.
#[derive(Default)]
struct Silent {
    reasons: Vec<(String, Vec<String>)>,
}

impl Silent {
    /// What a criterion says about a pair, or with an empty name about the whole system.
    fn heard<T>(&mut self, about: &str, said: Result<T, OutOfDomain>) -> Option<T> {
        let reason = match said {
            Ok(said) => return Some(said),
            Err(error) => error.to_string(),
        };
        let known = self.reasons.iter().position(|(other, _)| *other == reason);
        let index = known.unwrap_or_else(|| {
            self.reasons.push((reason, Vec::new()));
            self.reasons.len() - 1
        });
        let named = &mut self.reasons[index].1;
        if !about.is_empty() && !named.iter().any(|other| other == about) {
            named.push(about.to_string());
        }
        None
    }

    fn sentences(self) -> Vec<String> {
        let sentence = |(reason, named): (String, Vec<String>)| {
            if named.is_empty() { reason } else { format!("{}: {reason}", named.join(", ")) }
        };
        self.reasons.into_iter().map(sentence).collect()
    }
}

fn of_pair(
    configuration: &Configuration,
    pair: &Neighbours,
    budget: Option<&AmdBudget>,
    silent: &mut Silent,
) -> PairCriteria {
    let orbits = configuration.elements_in(Frame::Astrocentric);
    let both = [pair.inner, pair.outer];
    let axes = both.map(|k| orbits[k].semi_major_axis_au);
    let masses = both.map(|k| configuration.planets[k].gm / configuration.star_gm);
    let total = masses[0] + masses[1];
    let name = |k: usize| configuration.planets[k].name.clone();
    let about = format!("{} and {}", name(pair.inner), name(pair.outer));
    let crossing = criteria::outer_eccentricity_at_crossing(axes, orbits[pair.inner].eccentricity);
    PairCriteria {
        inner: name(pair.inner),
        outer: name(pair.outer),
        gap: axes[1] / axes[0] - 1.0,
        first_order_overlap: silent.heard(&about, criteria::first_order_overlap(total)),
        quarter_power_spacing: silent.heard(&about, criteria::quarter_power_spacing(masses, axes)),
        relative_eccentricity: criteria::relative_eccentricity(&orbits[pair.inner], &orbits[pair.outer]),
        critical_relative_eccentricity: silent
            .heard(&about, criteria::critical_relative_eccentricity(total, axes)),
        outer_eccentricity_at_crossing: silent.heard(&about, crossing),
        amd: budget.and_then(|budget| budget.pairs.iter().find(|(a, b, _)| [*a, *b] == both)).map(
            |(_, _, amd)| AmdView {
                relative: amd.relative,
                collision: amd.collision,
                hill: amd.hill,
                overlap: amd.overlap,
            },
        ),
    }
}

fn chains(configuration: &Configuration, pairs: &[Neighbours]) -> Vec<ChainView> {
    let periods = configuration.periods_day();
    let mut found = Vec::new();
    for two in pairs.windows(2) {
        let planets = [two[0].inner, two[0].outer, two[1].outer];
        let [Some(first), Some(second), Some(third)] = planets.map(|planet| periods[planet]) else {
            continue;
        };
        found.extend(criteria::near_chains([first, second, third]).iter().map(|near| ChainView {
            planets: planets.map(|planet| configuration.planets[planet].name.clone()),
            coefficients: near.coefficients,
            period_yr: std::f64::consts::TAU / near.drift_rad_day.abs() / YEAR_DAY,
        }));
    }
    found
}

fn secular(configuration: &Configuration, system: &SecularSystem) -> SecularView {
    let modes = system.modes();
    let all = modes.pericentres.iter().chain(&modes.nodes);
    let fastest = all.map(|mode| mode.frequency_rad_day.abs()).fold(0.0, f64::max);
    let view = |mode: &SecularMode| ModeView {
        deg_yr: if mode.frequency_rad_day.abs() < AT_REST * fastest {
            0.0
        } else {
            mode.frequency_rad_day * YEAR_DAY / DEGREE
        },
        amd_share: mode.amd_share,
        amplitude: mode.amplitude.clone(),
        participation: mode.participation.clone(),
    };
    SecularView {
        relativity: configuration.terms.relativity,
        oblateness: configuration.terms.oblateness.is_some(),
        relativity_would_add: relativity_would_add(configuration),
        amd_relative: modes.amd_relative,
        pericentres: modes.pericentres.iter().map(view).collect(),
        nodes: modes.nodes.iter().map(view).collect(),
        planets: configuration
            .planets
            .iter()
            .enumerate()
            .map(|(planet, body)| SecularPlanetView {
                name: body.name.clone(),
                largest_eccentricity: modes.largest_eccentricity(planet),
                amd_of_eccentricity: modes.amd_of_planets[planet].0,
                amd_of_inclination: modes.amd_of_planets[planet].1,
            })
            .collect(),
    }
}

/// None where relativity is in.
fn relativity_would_add(configuration: &Configuration) -> Option<f64> {
    if configuration.terms.relativity {
        return None;
    }
    let modes = |relativity| SecularSystem::of(configuration, relativity).ok().map(|system| system.modes());
    let (without, with) = (modes(false)?, modes(true)?);
    let share = |(one, other): (&SecularMode, &SecularMode)| {
        (other.frequency_rad_day - one.frequency_rad_day) / one.frequency_rad_day.abs()
    };
    let shares = without.pericentres.iter().zip(&with.pericentres).map(share);
    Some(shares.fold(0.0, f64::max)).filter(|share| share.is_finite())
}
