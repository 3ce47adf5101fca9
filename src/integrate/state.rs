//! One configuration as it goes into a block and comes out of it.

/// One lane's configuration: heliocentric positions (au), barycentric velocities (au/day), masses as GM.
#[derive(Clone, Debug, PartialEq)]
pub struct State {
    pub star_gm: f64,
    pub gm: Vec<f64>,
    pub pos: Vec<[f64; 3]>,
    pub vel: Vec<[f64; 3]>,
}

/// A displacement of a [`State`], up to one common factor.
#[derive(Clone, Debug, PartialEq)]
pub struct Tangent {
    pub pos: Vec<[f64; 3]>,
    pub vel: Vec<[f64; 3]>,
}

/// What the kernel has gathered about the growth of the tangent vector of one lane.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Growth {
    /// ln(|δ|/|δ₀|) at the last sample.
    pub log: f64,
    /// Y and its time average at the last sample; 0 before the second.
    pub y: f64,
    pub mean_y: f64,
    pub samples: u64,
}
