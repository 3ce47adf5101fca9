//! A small integrator of its own for the tests of frequency analysis: Newton's law, fourth-order symplectic composition
//! of the leapfrog (Yoshida 1990) in an inertial frame. It shares nothing with the program's integrator.

use abide::coords::{Elements, star_centred};
use abide::system::Frame;

pub struct Motion {
    pub times_day: Vec<f64>,
    pub rows: Vec<Vec<Elements>>,
    /// G (star + planet).
    pub mass_parameter: Vec<f64>,
}

type Vectors = Vec<[f64; 3]>;

/// Astrocentric elements every `every` steps.
pub fn follow(
    star_gm: f64,
    gm: &[f64],
    frame: Frame,
    orbits: &[Elements],
    step_day: f64,
    every: usize,
    rows: usize,
) -> Motion {
    let (pos, vel) = star_centred(frame, star_gm, gm, orbits);
    let masses: Vec<f64> = std::iter::once(star_gm).chain(gm.iter().copied()).collect();
    let mut places: Vectors = std::iter::once([0.0; 3]).chain(pos).collect();
    let mut speeds: Vectors = std::iter::once([0.0; 3]).chain(vel).collect();
    let mut motion = Motion {
        times_day: Vec::new(),
        rows: Vec::new(),
        mass_parameter: gm.iter().map(|gm| star_gm + gm).collect(),
    };
    let outer = 1.0 / (2.0 - 2f64.cbrt());
    let stages = [outer, 1.0 - 2.0 * outer, outer];
    for row in 0..rows {
        motion.times_day.push((row * every) as f64 * step_day);
        motion.rows.push(elements(&motion.mass_parameter, &places, &speeds));
        for _ in 0..every {
            for stage in stages {
                drift(&mut places, &speeds, 0.5 * stage * step_day);
                kick(&masses, &places, &mut speeds, stage * step_day);
                drift(&mut places, &speeds, 0.5 * stage * step_day);
            }
        }
    }
    motion
}

fn elements(mass_parameter: &[f64], places: &Vectors, speeds: &Vectors) -> Vec<Elements> {
    let relative = |list: &Vectors, body: usize| [0, 1, 2].map(|axis| list[body][axis] - list[0][axis]);
    (1..places.len())
        .map(|body| {
            Elements::from_state(mass_parameter[body - 1], relative(places, body), relative(speeds, body))
        })
        .collect()
}

fn drift(places: &mut Vectors, speeds: &Vectors, time_day: f64) {
    for (place, speed) in places.iter_mut().zip(speeds) {
        for axis in 0..3 {
            place[axis] += speed[axis] * time_day;
        }
    }
}

fn kick(masses: &[f64], places: &Vectors, speeds: &mut Vectors, time_day: f64) {
    for one in 0..masses.len() {
        for other in 0..one {
            let gap = [0, 1, 2].map(|axis| places[other][axis] - places[one][axis]);
            let square: f64 = gap.iter().map(|x| x * x).sum();
            let pull = time_day / (square * square.sqrt());
            for axis in 0..3 {
                speeds[one][axis] += masses[other] * pull * gap[axis];
                speeds[other][axis] -= masses[one] * pull * gap[axis];
            }
        }
    }
}
