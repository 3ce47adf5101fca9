//! An invented run that looks like a real one: a quiet plain, a resonance island, a chaotic sea and lost regions.
#![allow(dead_code)]

use abide::assess::{Approach, Assessment, Extent, Loss, Lyapunov, Plan, Range};
use abide::figure::render::Page;
use abide::survey::Record;
use abide::system::{
    Axis, Body, BodyRef, Convention, Encounter, Engine, Key, Limits, Measure, Measured, Quantity, Spacing,
    Span, Stated, Study, System, Target,
};
use abide::units::{DEGREE, GM_EARTH, GM_SUN};
use abide::verdict::{LostHow, Verdict};

fn body(name: &str, stated: &[(Key, Measured)]) -> Body {
    let mut words = Stated::default();
    for (key, measured) in stated {
        words.insert(*key, *measured);
    }
    Body { name: name.to_owned(), stated: words }
}

fn measured(value: f64, bar: f64, unit: &'static str) -> Measured {
    Measured { value, plus: Some(bar), minus: Some(bar), unit }
}

pub fn system() -> System {
    let planet = |name: &str, period: Measured, mass: f64, eccentricity: Measured| {
        body(
            name,
            &[
                (Key::Period, period),
                (Key::Mass, Measured::exact(mass * GM_EARTH, "Mearth")),
                (Key::Eccentricity, eccentricity),
                (Key::ArgumentOfPericentre, Measured::exact(75.0 * DEGREE, "deg")),
                (Key::MeanAnomaly, Measured::exact(10.0 * DEGREE, "deg")),
            ],
        )
    };
    System {
        title: "Lanthorn".to_owned(),
        epoch_jd: Some(2_460_310.5),
        star: body("star", &[(Key::Mass, measured(0.87 * GM_SUN, 0.03 * GM_SUN, "Msun"))]),
        planets: vec![
            planet("b", measured(11.862, 0.004, "d"), 6.1, measured(0.05, 0.03, "")),
            planet("c", measured(17.79, 0.12, "d"), 9.4, measured(0.08, 0.03, "")),
        ],
        companion: None,
        convention: Convention::default(),
        physics: Default::default(),
    }
}

pub fn axis(planet: usize, key: Key, (from, to, cells): (f64, f64, usize)) -> Axis {
    let name = ["b", "c"][planet];
    let unit = if key == Key::Period {
        "d"
    } else if key == Key::SemiMajorAxis {
        "au"
    } else {
        ""
    };
    Axis {
        path: format!("{name}.{}", key.word()),
        target: Target { body: BodyRef::Planet(planet), key },
        quantity: Quantity::Value,
        from,
        to,
        unit,
        scale: 1.0,
        cells,
        spacing: Spacing::Linear,
    }
}

pub fn study(columns: usize, rows: usize) -> Study {
    Study {
        title: None,
        system_path: "lanthorn.toml".into(),
        span: Span::Orbits(1e4),
        measure: vec![Measure::Megno, Measure::Lyapunov, Measure::Extent],
        angle: None,
        axes: vec![axis(1, Key::Period, (15.5, 21.0, columns)), axis(1, Key::Eccentricity, (0.0, 0.3, rows))],
        limits: Limits {
            escape_au: None,
            encounter: Encounter::Stop { hill: 1.0 },
            stop_when_chaotic: false,
        },
        engine: Engine { energy_error: 1e-7, ..Engine::default() },
    }
}

pub const SPAN_DAY: f64 = 1e4 * 11.862;

/// What a survey would do with [`study`].
pub fn plan() -> Plan {
    let nominal = abide::coords::configure(&system()).unwrap();
    let plan = Plan::for_study(&study(2, 2), &nominal, &[]);
    assert!((plan.span_day / SPAN_DAY - 1.0).abs() < 1e-9 && plan.extent && plan.megno);
    plan
}

/// Even noise in 0..1 from an index (Steele, Lea & Flood 2014, the mixing step; from memory).
pub fn noise(index: u64) -> f64 {
    let mut z = index.wrapping_mul(0x9E37_79B9_7F4A_7C15).wrapping_add(0x1234_5678);
    z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
    z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
    ((z ^ (z >> 31)) >> 11) as f64 / (1u64 << 53) as f64
}

/// A finished cell from what became of it.
pub fn assessment(verdict: Verdict, how: Option<LostHow>, megno: f64, share_lived: f64) -> Assessment {
    let extent = |a: f64, e: f64| Extent {
        semi_major_axis_au: Range { min: a * (1.0 - 0.001 * megno), max: a * (1.0 + 0.001 * megno) },
        eccentricity: Range { min: 0.5 * e, max: e },
        inclination: Range { min: 1.5, max: 1.6 },
    };
    let chaotic = matches!(verdict, Verdict::Chaotic | Verdict::Lost);
    Assessment {
        verdict,
        end_time_day: SPAN_DAY * share_lived,
        loss: how.map(|how| Loss { time_day: SPAN_DAY * share_lived, planet: 0, other: Some(1), how }),
        megno: (verdict != Verdict::Lost).then_some(megno),
        lyapunov: chaotic
            .then(|| Lyapunov { per_day: megno / SPAN_DAY, error_per_day: 0.1 * megno / SPAN_DAY }),
        extent: vec![extent(0.0972, 0.06), extent(0.1274, 0.03 * megno)],
        frequency_drift: Vec::new(),
        angle: None,
        smallest_approach: Some(Approach { au: 0.03 / megno, hill: 12.0 / megno, pair: (0, 1) }),
        energy_error: Some(1e-10 * megno * megno),
        angular_momentum_error: Some(3e-15),
        passages: None,
        passage_energy_error: None,
        scheme: "(2,2)",
        step_day: 0.42,
        steps: (SPAN_DAY * share_lived / 0.42) as u64,
        redone: 0,
    }
}

/// What became of the configuration at a period (d) and an eccentricity; `dice` in 0..1.
fn fate(period: f64, e: f64, dice: f64, second: f64) -> Assessment {
    let island = ((period - 17.79) / 0.28).powi(2) + ((e - 0.06) / 0.17).powi(2);
    let edge = 0.07 + 0.035 * (period - 16.0) + 0.02 * (6.0 * period).sin();
    let crossing = (period / 11.862).powf(2.0 / 3.0) * (1.0 - e) - 1.02;
    let depth = if island < 1.0 { -1.0 } else { (e - edge) / 0.12 + 0.25 * (dice - 0.5) };
    if crossing < 0.0 {
        let how = if e > 0.27 { LostHow::Collision } else { LostHow::Encounter };
        return assessment(Verdict::Lost, Some(how), 40.0, 10f64.powf(-3.5 + dice));
    }
    if period > 20.0 && e > 0.24 {
        return assessment(Verdict::Lost, Some(LostHow::Escape), 30.0, 10f64.powf(-1.0 - dice));
    }
    if period > 19.2 && e > 0.27 {
        return assessment(Verdict::Lost, Some(LostHow::Star), 30.0, 10f64.powf(-0.5 - dice));
    }
    if depth < 0.0 {
        let ripple = 0.004 * (dice - 0.5) + 0.35 * (-8.0 * depth.abs()).exp() * second;
        let border = if island < 1.0 { 0.5 * island.powi(12) } else { 0.0 };
        return assessment(Verdict::Regular, None, 1.998 + ripple + border, 1.0);
    }
    if depth < 0.05 && second < 0.25 {
        return assessment(Verdict::Undecided, None, 2.3, 1.0);
    }
    if second > 0.995 {
        return assessment(Verdict::Untrusted, None, 9.0, 1.0);
    }
    if second < 0.7 * depth - 0.25 {
        return assessment(Verdict::Lost, Some(LostHow::Encounter), 40.0, 10f64.powf(-1.5 * dice));
    }
    assessment(Verdict::Chaotic, None, 2.2 + 14.0 * depth * (0.3 + dice), 1.0)
}

pub fn records(study: &Study) -> Vec<Record> {
    let value = |axis: &Axis, index: u64| {
        axis.from + (axis.to - axis.from) * index as f64 / (axis.cells as f64 - 1.0)
    };
    let columns = study.axes[0].cells as u64;
    let rows = study.axes.get(1).map_or(1, |a| a.cells as u64);
    (0..columns * rows)
        .map(|cell| {
            let period = value(&study.axes[0], cell % columns);
            let e = study.axes.get(1).map(|a| value(a, cell / columns));
            let assessment = fate(period, e.unwrap_or(0.14), noise(2 * cell), noise(2 * cell + 1));
            Record { cell, values: std::iter::once(period).chain(e).collect(), assessment, filled: None }
        })
        .collect()
}

/// A decoded picture.
pub struct Pixels {
    pub info: png::Info<'static>,
    pub rgb: Vec<u8>,
}

impl Pixels {
    pub fn of(bytes: &[u8]) -> Pixels {
        let mut reader = png::Decoder::new(std::io::Cursor::new(bytes)).read_info().unwrap();
        let mut rgb = vec![0; reader.output_buffer_size().unwrap()];
        reader.next_frame(&mut rgb).unwrap();
        Pixels { info: reader.info().clone(), rgb }
    }

    /// At a place in points.
    pub fn at(&self, page: &Page, (x, y): (f64, f64)) -> [u8; 3] {
        let pixel = |points: f64| (points / 72.0 * f64::from(page.pixels_per_inch)) as usize;
        let start = (pixel(y) * self.info.width as usize + pixel(x)) * 3;
        self.rgb[start..start + 3].try_into().unwrap()
    }
}
