//! The analytic criteria and secular modes of a configuration, as plain data.

use serde::Serialize;

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
            let why = "these criteria are for planets of one star; a second star is not in them".to_string();
            let (exact_hill, innermost_amd, secular) = (None, None, None);
            return CriteriaView {
                pairs: vec![],
                exact_hill,
                innermost_amd,
                chains: vec![],
                secular,
                silent: vec![why],
            };
        }
        let mut silent = Silent::default();
        let budget = silent.heard("", criteria::amd_budget(configuration));
        let exact_hill = (configuration.planets.len() == 2)
            .then(|| silent.heard("", criteria::exact_hill_balance(configuration)))
            .flatten()
            .map(|b| ExactHill { found: b.found, needed: b.needed, stable: b.stable() });
        // The modes are what planets do to one another.
        let secular = (configuration.planets.len() > 1)
            .then(|| silent.heard("", SecularSystem::of(configuration, true)))
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
            silent: silent.sentences(),
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
