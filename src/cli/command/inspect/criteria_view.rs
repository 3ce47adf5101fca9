//! The analytic criteria and secular modes of a configuration, as plain data.

use serde::Serialize;

use crate::coords::Configuration;
use crate::criteria::{self, AmdBudget, Neighbours, OutOfDomain, SecularMode, SecularSystem};
use crate::system::Frame;
use crate::units::{DEGREE, YEAR_DAY};

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
        let mut silent = Vec::new();
        let budget = heard(criteria::amd_budget(configuration), &mut silent);
        let exact_hill = (configuration.planets.len() == 2)
            .then(|| heard(criteria::exact_hill_balance(configuration), &mut silent))
            .flatten()
            .map(|b| ExactHill { found: b.found, needed: b.needed, stable: b.stable() });
        let secular = heard(SecularSystem::of(configuration, true), &mut silent)
            .map(|system| secular(configuration, &system));
        CriteriaView {
            pairs: pairs
                .iter()
                .map(|pair| of_pair(configuration, pair, budget.as_ref(), &mut silent))
                .collect(),
            exact_hill,
            innermost_amd: budget.map(|budget| budget.innermost_relative),
            chains: chains(configuration, pairs),
            secular,
            silent,
        }
    }
}

/// What a criterion says; its reason for saying nothing is kept once.
fn heard<T>(said: Result<T, OutOfDomain>, silent: &mut Vec<String>) -> Option<T> {
    said.map_err(|error| {
        let reason = error.to_string();
        if !silent.contains(&reason) {
            silent.push(reason);
        }
    })
    .ok()
}

fn of_pair(
    configuration: &Configuration,
    pair: &Neighbours,
    budget: Option<&AmdBudget>,
    silent: &mut Vec<String>,
) -> PairCriteria {
    let orbits = configuration.elements_in(Frame::Astrocentric);
    let both = [pair.inner, pair.outer];
    let axes = both.map(|k| orbits[k].semi_major_axis_au);
    let masses = both.map(|k| configuration.planets[k].gm / configuration.star_gm);
    let total = masses[0] + masses[1];
    let name = |k: usize| configuration.planets[k].name.clone();
    let crossing = criteria::outer_eccentricity_at_crossing(axes, orbits[pair.inner].eccentricity);
    PairCriteria {
        inner: name(pair.inner),
        outer: name(pair.outer),
        gap: axes[1] / axes[0] - 1.0,
        first_order_overlap: heard(criteria::first_order_overlap(total), silent),
        quarter_power_spacing: heard(criteria::quarter_power_spacing(masses, axes), silent),
        relative_eccentricity: criteria::relative_eccentricity(&orbits[pair.inner], &orbits[pair.outer]),
        critical_relative_eccentricity: heard(criteria::critical_relative_eccentricity(total, axes), silent),
        outer_eccentricity_at_crossing: heard(crossing, silent),
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
    let view = |mode: &SecularMode| ModeView {
        deg_yr: mode.frequency_rad_day * YEAR_DAY / DEGREE,
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
