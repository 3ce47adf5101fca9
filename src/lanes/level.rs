//! The one place that asks what the processor can do.

use std::sync::OnceLock;

use super::WIDTH;

/// How many groups of lanes keep the units of a processor with AVX-512 busy: it takes the chains of operations of about six
/// bodies, and those of four alone are near enough.
pub fn groups_at_once(bodies: usize) -> usize {
    match bodies {
        2 => 3,
        3 => 2,
        _ => 1,
    }
}

/// What a wide number is made of.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Level {
    /// One `f64`, on any processor.
    Scalar,
    /// Two registers of four: AVX2 and FMA.
    Avx2,
    /// One register of eight: AVX-512 F, DQ and VL.
    Avx512,
}

impl Level {
    /// The levels this processor has, lowest first.
    pub fn available() -> Vec<Level> {
        [Level::Scalar, Level::Avx2, Level::Avx512].into_iter().filter(|l| l.is_available()).collect()
    }

    /// The level in use: the highest, or the one named by the environment variable `ABIDE_LANES`
    /// (`scalar`, `avx2`, `avx512`; meant for tests; ignored where the processor lacks it).
    pub fn chosen() -> Level {
        static CHOSEN: OnceLock<Level> = OnceLock::new();
        *CHOSEN.get_or_init(|| {
            let asked = std::env::var("ABIDE_LANES").ok();
            let best = Level::available().pop().unwrap_or(Level::Scalar);
            Level::available().into_iter().find(|l| asked.as_deref() == Some(l.word())).unwrap_or(best)
        })
    }

    /// How many lanes a wide number has.
    pub fn width(self) -> usize {
        match self {
            Level::Scalar => 1,
            Level::Avx2 | Level::Avx512 => WIDTH,
        }
    }

    /// How many wide numbers a kernel of so many bodies takes at once.
    pub fn groups(self, bodies: usize) -> usize {
        if self == Level::Avx512 { groups_at_once(bodies) } else { 1 }
    }

    /// The word that `ABIDE_LANES` and reports use.
    pub fn word(self) -> &'static str {
        match self {
            Level::Scalar => "scalar",
            Level::Avx2 => "avx2",
            Level::Avx512 => "avx512",
        }
    }

    #[cfg(target_arch = "x86_64")]
    pub(super) fn is_available(self) -> bool {
        let avx2 = is_x86_feature_detected!("avx2") && is_x86_feature_detected!("fma");
        match self {
            Level::Scalar => true,
            Level::Avx2 => avx2,
            Level::Avx512 => {
                avx2 && is_x86_feature_detected!("avx512f")
                    && is_x86_feature_detected!("avx512dq")
                    && is_x86_feature_detected!("avx512vl")
            }
        }
    }

    #[cfg(not(target_arch = "x86_64"))]
    pub(super) fn is_available(self) -> bool {
        self == Level::Scalar
    }
}
