//! `abide`: which of the planetary systems that the data allow would abide?
//!
//! Floors, lowest first; a room uses rooms on strictly lower floors only (held by `tests/floors.rs`):
//!
//! | floor | rooms |
//! | --- | --- |
//! | 0 | [`units`], [`disk`], [`num`], [`lanes`] |
//! | 1 | [`kepler`], [`system`] |
//! | 2 | [`coords`], [`input`] |
//! | 3 | [`integrate`] |
//! | 4 | [`observe`], [`criteria`] |
//! | 5 | [`verdict`] |
//! | 6 | [`assess`] |
//! | 7 | [`survey`] |
//! | 8 | [`figure`], [`report`] |
//! | 9 | [`cli`] |
//!
//! Main path: TOML file → [`system::System`] → [`coords::Configuration`] → integrator → observers →
//! [`verdict::Verdict`] → [`assess::Assessment`] → journal and tables → figure.
//!
//! Inside the program lengths are au, times are days, angles are radians and masses are G × mass in
//! au³ day⁻²; other units appear only at the border ([`units`]).

pub mod assess;
pub mod cli;
pub mod coords;
pub mod criteria;
pub mod disk;
pub mod figure;
pub mod input;
pub mod integrate;
pub mod kepler;
pub mod lanes;
pub mod num;
pub mod observe;
pub mod report;
pub mod survey;
pub mod system;
pub mod units;
pub mod verdict;
