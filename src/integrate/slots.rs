//! Where in a block each number stands.

/// Per-lane numbers that are not of a planet.
#[derive(Clone, Copy, Debug)]
pub(super) enum Global {
    StarGm,
    Step,
    /// 1 where the lane is in use.
    Active,
    /// Square of the time that makes velocities comparable with positions in the length of the tangent vector.
    Metric,
    /// What rescaling has taken out of the logarithm of that length.
    LogTaken,
    /// Logarithm at the first sample.
    LogFirst,
    LogLast,
    /// ∫ (ln|δ| − ln|δ₀|) dt, Y and ∫ Y dt, in samples.
    LogSum,
    Y,
    YSum,
    Samples,
    /// The star's terms.
    Relativity,
    Oblateness,
    PoleX,
    PoleY,
    PoleZ,
}

pub(super) const GLOBALS: usize = 16;
pub(super) const PER_PLANET: usize = 17;

/// Where in a planet's numbers each begins.
pub(super) const GM: usize = 0;
pub(super) const POS: usize = 1;
pub(super) const VEL: usize = 4;
pub(super) const D_POS: usize = 7;
pub(super) const D_VEL: usize = 10;
pub(super) const NEAR2: usize = 13;
pub(super) const FAR2: usize = 14;
/// Mass parameter of its Kepler motion.
pub(super) const MU: usize = 15;
pub(super) const SATELLITE: usize = 16;

/// Low parts of position and velocity, in a block that has them.
pub(super) const PER_LOW: usize = 6;
