//! A source and an engine without physics: a cell's answer is a scramble of its number, so every cell is
//! different and the right answer is known beforehand.

#![allow(dead_code, reason = "each test file uses its own part")]

use std::path::Path;
use std::sync::Arc;
use std::sync::atomic::AtomicBool;
use std::time::Duration;

use abide::assess::{AngleFound, Approach, Assessment, Extent, Loss, Lyapunov, Plan, Range, StepWhy};
use abide::coords::{Configuration, Elements, Planet};
use abide::survey::{
    Desk, Done, Ended, Identity, Made, Next, Policy, Record, Run, Source, SurveyError, fill,
};
use abide::system::Frame;
use abide::verdict::{LostHow, Verdict};

pub const STUDY: &str =
    "system = \"system.toml\"\nspan = \"10 orbits\"\n[[axis]]\nvary = \"c.period\"\ncells = 40\n";
pub const SYSTEM: &str = "title = \"Invented\"\n[star]\nmass = \"1 Msun\"\n";

pub fn plan() -> Plan {
    Plan {
        span_day: 1e4,
        step_day: None,
        step_why: StepWhy::Pericentre { steps_per_passage: 20.0, trial: None },
        scheme: "(2,2)",
        scheme_why: abide::assess::SchemeWhy::Asked,
        energy_error: 1e-7,
        escape_au: Some(100.0),
        encounter_hill: Some(1.0),
        extent: true,
        megno: true,
        frequency_drift: true,
        angle: abide::observe::ResonantAngle::new(vec![-2, 3], vec![-1, 0]).ok(),
        stop_when_chaotic: false,
        block_steps: 508,
        coordinates: abide::integrate::Coordinates::Heliocentric,
        coordinates_why: abide::assess::CoordinatesWhy::Light,
        frame: Frame::Astrocentric,
        resolve: true,
        adaptive: false,
        compensated: false,
        massless: 0,
    }
}

pub fn identity(cells: u64) -> Identity {
    Identity {
        study_text: STUDY.to_string(),
        system_text: SYSTEM.to_string(),
        settings: format!("{:?} {cells}", plan()),
        plan: plan(),
        cells,
        axes: vec!["c.period / b.period".to_string(), "c.eccentricity".to_string()],
        planets: vec!["b".to_string(), "c".to_string()],
    }
}

/// One step of the splitmix generator (Steele, Lea & Flood 2014).
pub fn scramble(seed: u64) -> u64 {
    let mut z = seed.wrapping_add(0x9e37_79b9_7f4a_7c15);
    z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
    z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
    z ^ (z >> 31)
}

/// In [0, 1), one of many per cell.
fn share(cell: u64, which: u64) -> f64 {
    (scramble(cell.wrapping_mul(64) + which) >> 11) as f64 / (1u64 << 53) as f64
}

pub fn answer(cell: u64) -> Assessment {
    let some =
        |which: u64| (!scramble(cell + which * 7919).is_multiple_of(4)).then(|| share(cell, which) * 1e-7);
    let range = |which| Range { min: share(cell, which), max: share(cell, which) + 1e-17 };
    let lost = scramble(cell).is_multiple_of(3);
    let axis = if cell.is_multiple_of(7) { Range::empty() } else { range(5) };
    let extent = Extent { semi_major_axis_au: axis, eccentricity: range(6), inclination: range(7) };
    Assessment {
        verdict: if lost { Verdict::Lost } else { Verdict::ALL[(scramble(cell) % 5) as usize] },
        end_time_day: share(cell, 1) * 1e9,
        loss: lost.then(|| Loss {
            time_day: share(cell, 2) * 1e300,
            planet: (cell % 2) as usize,
            other: cell.is_multiple_of(4).then_some(1),
            how: LostHow::ALL[(cell % 4) as usize],
        }),
        megno: some(3),
        lyapunov: some(4).map(|per_day| Lyapunov { per_day, error_per_day: per_day / 3.0 }),
        extent: if cell.is_multiple_of(5) { Vec::new() } else { vec![extent; 2] },
        frequency_drift: if cell.is_multiple_of(3) { Vec::new() } else { vec![-9.0 * share(cell, 13), -4.5] },
        angle: match cell % 5 {
            0 => None,
            1 => Some(AngleFound::Circulates),
            2 => Some(AngleFound::Alternates),
            3 => Some(AngleFound::CannotTell),
            _ => Some(AngleFound::Librates { centre: share(cell, 14), amplitude: share(cell, 15) }),
        },
        smallest_approach: some(8).map(|au| Approach { au, hill: au / 7.0, pair: (0, 1) }),
        energy_error: some(9),
        angular_momentum_error: some(10),
        scheme: if cell.is_multiple_of(2) { "(2,2)" } else { "" },
        step_day: share(cell, 11),
        steps: scramble(cell),
        redone: (cell % 3) as u32,
        passages: (cell % 4).checked_sub(1),
        passage_energy_error: some(16),
    }
}

pub fn values(cell: u64) -> Vec<f64> {
    vec![1.0 + share(cell, 12), 0.1 * (cell % 7) as f64]
}

pub fn record(cell: u64) -> Record {
    Record { cell, values: values(cell), assessment: answer(cell), filled: None }
}

/// Every 13th cell is settled without the engine.
pub struct Fake {
    pub cells: u64,
}

impl Source for Fake {
    fn cells(&self) -> u64 {
        self.cells
    }

    fn values(&self, cell: u64) -> Vec<f64> {
        values(cell)
    }

    fn make(&self, cell: u64) -> Made {
        if cell % 13 == 12 { Made::Settled(answer(cell)) } else { Made::ToFollow(configuration(cell)) }
    }
}

fn configuration(cell: u64) -> Configuration {
    let elements = Elements {
        semi_major_axis_au: 1.0,
        eccentricity: 0.0,
        inclination: 0.0,
        ascending_node: 0.0,
        argument_of_pericentre: 0.0,
        mean_anomaly: 0.0,
    };
    let planet = Planet {
        name: "b".to_string(),
        kind: Default::default(),
        gm: cell as f64,
        radius_au: 0.0,
        position_au: [1.0, 0.0, 0.0],
        velocity_au_day: [0.0; 3],
        elements,
        satellite_k_au2: None,
    };
    Configuration {
        star_gm: 1.0,
        star_radius_au: 0.0,
        frame: Frame::Jacobi,
        planets: vec![planet],
        terms: Default::default(),
    }
}

/// Keeps eight cells in flight, ends them in a scrambled order, and knows a cell by its configuration only.
pub fn engine(pause: Duration, fault: impl Fn(u64) + Send + Sync + 'static) -> impl abide::survey::Engine {
    move |_: &Plan, next: Next<'_>, done: Done<'_>| {
        let mut lanes: Vec<(u64, Configuration)> = Vec::new();
        let mut round = 0;
        loop {
            while lanes.len() < 8 {
                match next() {
                    Some(cell) => lanes.push(cell),
                    None => break,
                }
            }
            if lanes.is_empty() {
                return;
            }
            lanes.iter().for_each(|(cell, _)| fault(*cell));
            std::thread::sleep(pause);
            round += 1;
            let (cell, configuration) = lanes.swap_remove((scramble(round) % lanes.len() as u64) as usize);
            if !done(cell, answer(configuration.planets[0].gm as u64)) {
                return;
            }
        }
    }
}

/// Opens the run in `folder` and fills it.
pub fn run(
    folder: &Path,
    cells: u64,
    threads: usize,
    engine: impl abide::survey::Engine,
) -> Result<Ended, SurveyError> {
    let (mut run, found) = Run::open(folder, &identity(cells))?;
    let desk = Desk { journal: &mut run.journal, stop: Arc::new(AtomicBool::new(false)), watch: &mut |_| {} };
    let source = Arc::new(Fake { cells });
    fill(source, engine, &plan(), Policy::every_cell(), found.recovered, threads, desk)
}

/// The table that stands for all that is made from a complete run.
pub fn table(folder: &Path, cells: u64) -> String {
    let (run, _) = Run::open(folder, &identity(cells)).unwrap();
    run.records().unwrap().iter().map(|record| run.manifest.layout.encode(record) + "\n").collect()
}

pub fn right_table(cells: u64) -> String {
    let layout = identity(cells).manifest().layout;
    (0..cells).map(|cell| layout.encode(&record(cell)) + "\n").collect()
}
