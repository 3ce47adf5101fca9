//! The fifty random compact systems, drawn once for all.

use abide::coords::{Configuration, configure};
use abide::input::parse_system;

use super::random::Random;

pub const SYSTEMS: usize = 50;
const SEED: u64 = 4711;

/// The systems in their order.
pub fn systems() -> Vec<Configuration> {
    let mut random = Random::new(SEED);
    (0..SYSTEMS).map(|_| system(&mut random)).collect()
}

fn system(random: &mut Random) -> Configuration {
    let planets = random.between(2.0, 5.0) as usize;
    let mut period = random.between(5.0, 30.0);
    let mut text = format!(
        "title = \"Drawn\"\n[star]\nmass = \"{} Msun\"\nradius = \"1 Rsun\"\n",
        random.between(0.7, 1.2)
    );
    for k in 0..planets {
        let mass = random.between(0.0, 40f64.ln()).exp();
        text += &format!(
            "[[planet]]\nname = \"{}\"\nperiod = \"{period} d\"\nmass = \"{mass} Mearth\"\nradius = \"2 Rearth\"\n\
             eccentricity = {}\ninclination = \"{} deg\"\nascending_node = \"{} deg\"\nargument_of_pericentre = \"{} deg\"\n\
             mean_anomaly = \"{} deg\"\n",
            ["b", "c", "d", "e"][k],
            random.between(0.0, 0.12),
            90.0 + random.between(-2.0, 2.0),
            random.between(-2.0, 2.0),
            random.between(0.0, 360.0),
            random.between(0.0, 360.0),
        );
        period *= random.between(1.25, 2.1);
    }
    configure(&parse_system("drawn.toml", &text).unwrap_or_else(|e| panic!("{e}")).system).unwrap()
}
