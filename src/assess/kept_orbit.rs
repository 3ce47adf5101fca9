//! Elements put down in a checkpoint and taken up again, to the bit.

use crate::coords::Elements;
use crate::num::{Kept, KeptReader};

pub(super) fn keep_orbit(e: &Elements, kept: &mut Kept) {
    kept.floats(&[
        e.semi_major_axis_au,
        e.eccentricity,
        e.inclination,
        e.ascending_node,
        e.argument_of_pericentre,
        e.mean_anomaly,
    ]);
}

pub(super) fn restored_orbit(kept: &mut KeptReader<'_>) -> Option<Elements> {
    Some(Elements {
        semi_major_axis_au: kept.float()?,
        eccentricity: kept.float()?,
        inclination: kept.float()?,
        ascending_node: kept.float()?,
        argument_of_pericentre: kept.float()?,
        mean_anomaly: kept.float()?,
    })
}
