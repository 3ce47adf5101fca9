//! Systems built by hand for tests.

use abide::system::{Body, Convention, Frame, Key, Measured, Pericentre, Stated, System, Transit};
use abide::units::GM_SUN;

pub const EPOCH_JD: f64 = 2_460_310.5;

/// A star of 0.87 solar masses without planets.
pub fn system(elements: Frame, pericentre: Pericentre, transit: Transit) -> System {
    System {
        title: "by hand".to_string(),
        epoch_jd: Some(EPOCH_JD),
        star: planet("star", &[(Key::Mass, 0.87 * GM_SUN)]),
        planets: Vec::new(),
        companion: None,
        convention: Convention { elements, pericentre, transit },
        physics: Default::default(),
    }
}

/// A body with these statements, in inner units.
pub fn planet(name: &str, keys: &[(Key, f64)]) -> Body {
    let mut stated = Stated::default();
    for (key, value) in keys {
        stated.insert(*key, Measured::exact(*value, ""));
    }
    Body { name: name.to_string(), stated }
}
