//! What the tables about the Solar System share: the symplectic scheme run for several starts side by side, and tables of
//! stated places.

use std::collections::{BTreeSet, HashMap};

use abide::integrate::{Advance, Block, Scheme, StarTerms, State, Tangent, advance};
use abide::lanes::WIDTH;

use super::radau_support::planets::{EARTH, MOON_K_AU2};
use super::radau_support::{LIGHT, Row, SUN_GM, distance, table, triple};

/// Semi-major axes, au, Mercury to Pluto.
pub const AXES_AU: [f64; 9] = [0.387, 0.723, 1.0, 1.524, 5.203, 9.58, 19.2, 30.1, 39.5];

/// (index of the start, years) → heliocentric places of all bodies, au.
pub type Places = HashMap<(usize, i32), Vec<[f64; 3]>>;

/// One start with its terms.
pub struct Lane {
    pub state: State,
    pub terms: StarTerms,
}

/// Relativity's potential, and the averaged lunar orbit on the Earth.
pub fn light_terms(relativity: bool, satellite: bool) -> StarTerms {
    let mut satellites = vec![0.0; 9];
    satellites[EARTH] = if satellite { MOON_K_AU2 * SUN_GM } else { 0.0 };
    let relativity = if relativity { 6.0 * (SUN_GM / LIGHT).powi(2) } else { 0.0 };
    StarTerms { relativity, satellites, ..StarTerms::default() }
}

/// Up to four starts, each run both ways in time in the lanes of one block.
pub struct Symplectic {
    pub lanes: Vec<Lane>,
    pub scheme: &'static Scheme,
    /// Asked for; made a little shorter so that a century is a whole number of steps.
    pub step_day: f64,
}

impl Symplectic {
    /// Places at years that are whole centuries.
    pub fn places(&self, years: &BTreeSet<i32>) -> Places {
        let count = self.lanes.len();
        assert!(2 * count <= WIDTH);
        let steps = (36_525.0 / self.step_day).ceil();
        let mut block = Block::new(WIDTH, self.lanes[0].state.gm.len()).compensated();
        for (index, lane) in self.lanes.iter().enumerate() {
            let tangent = Tangent { pos: lane.state.pos.clone(), vel: lane.state.vel.clone() };
            for (slot, way) in [(index, -1.0), (count + index, 1.0)] {
                block.start(slot, &lane.state, &tangent, way * 36_525.0 / steps, 1.0);
                block.set_star_terms(slot, &lane.terms);
            }
        }
        let mut places = Places::new();
        let most = years.iter().map(|y| y.abs()).max().unwrap();
        for year in (0..=most).step_by(100) {
            if year > 0 {
                let call =
                    Advance { block: &mut block, scheme: self.scheme, steps: steps as usize, tangent: false };
                advance(call);
            }
            for index in 0..count {
                places.insert((index, -year), block.state(index).pos);
                places.insert((index, year), block.state(count + index).pos);
            }
        }
        places
    }
}

/// A table of stated places by model and years.
pub struct Truth {
    rows: HashMap<(String, i32, String), Row>,
    names: Vec<String>,
    pub years: BTreeSet<i32>,
}

impl Truth {
    /// The four models of reference-integrations.csv, and [`matched_model`] of those with relativity in full.
    pub fn read(names: &[String]) -> Truth {
        let key = |r: &Row| (r["model"].clone(), r["years"].parse().unwrap(), r["body"].clone());
        let files = ["reference-integrations.csv", "rate-matched-integrations.csv"];
        let rows: HashMap<_, _> = files.iter().flat_map(|file| table(file)).map(|r| (key(&r), r)).collect();
        let years = rows.keys().map(|k| k.1).collect();
        Truth { rows, names: names.to_vec(), years }
    }

    /// The years of one sign, nearest first.
    #[allow(dead_code, reason = "the table asks, the test does not")]
    pub fn outwards(&self, way: i32) -> Vec<i32> {
        let mut years: Vec<i32> = self.years.iter().copied().filter(|y| y * way > 0).collect();
        years.sort_by_key(|y| y.abs());
        years
    }

    fn stated(&self, model: &str, year: i32) -> Vec<[f64; 3]> {
        let one = |name: &String| {
            let row = &self.rows[&(model.to_string(), year, name.clone())];
            triple(row, ["x_au", "y_au", "z_au"])
        };
        self.names.iter().map(one).collect()
    }

    /// How far each body is from its stated place, au.
    pub fn off(&self, model: &str, year: i32, at: &[[f64; 3]]) -> Vec<f64> {
        self.stated(model, year).iter().zip(at).map(|(stated, at)| distance(stated, at)).collect()
    }

    /// What rate-matched velocities leave of relativity in full, au: the distance of the independent integrations of both, and
    /// a tenth more.
    pub fn unmatched_au(&self, model: &str, year: i32) -> Vec<f64> {
        let left = self.off(model, year, &self.stated(&matched_model(model), year));
        left.iter().map(|au| 1.1 * au).collect()
    }
}

/// The model that the symplectic scheme has for one with relativity in full.
pub fn matched_model(model: &str) -> String {
    format!("{}|rate-matched-start", model.replace("1pn", "potential"))
}

/// Revolutions of a body in so many years.
pub fn turns(body: usize, year: i32) -> f64 {
    f64::from(year.abs()) / AXES_AU[body].powf(1.5)
}
