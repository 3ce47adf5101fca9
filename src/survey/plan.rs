//! The plan of a study, the same wherever it is needed: scheme and step hold in the corners of the grid too.

use super::axis::cell_system;
use crate::assess::Plan;
use crate::coords::{self, Configuration};
use crate::system::{Study, System};

/// The plan of a study of `system`, whose configuration as stated is `nominal`.
///
/// Scheme and step are chosen from short runs of the stated system and of the cells in the corners of the grid; a
/// corner that cannot be followed says nothing and is left out.
pub fn plan_of(study: &Study, system: &System, nominal: &Configuration) -> Plan {
    let configured = |cell| {
        let configuration = coords::configure(&cell_system(system, study, cell).ok()?).ok()?;
        coords::check_start(&configuration).ok()?;
        Some(configuration)
    };
    let corners: Vec<Configuration> = corner_cells(study).into_iter().filter_map(configured).collect();
    Plan::for_study(study, nominal, &corners)
}

/// The cells with the first or last index on each axis, each once, in order.
fn corner_cells(study: &Study) -> Vec<u64> {
    let mut cells = vec![0_u64];
    let mut stride = 1_u64;
    for axis in &study.axes {
        let count = axis.cells.max(1) as u64;
        let last = stride.saturating_mul(count - 1);
        if last > 0 {
            let far: Vec<u64> = cells.iter().map(|cell| cell.saturating_add(last)).collect();
            cells.extend(far);
        }
        stride = stride.saturating_mul(count);
    }
    cells
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::system::{Axis, BodyRef, Encounter, Engine, Key, Limits, Quantity, Spacing, Span, Target};

    fn study(cells: &[usize]) -> Study {
        let axis = |cells: &usize| Axis {
            path: String::new(),
            target: Target { body: BodyRef::Planet(0), key: Key::Period },
            quantity: Quantity::Value,
            from: 1.0,
            to: 2.0,
            unit: "",
            scale: 1.0,
            cells: *cells,
            spacing: Spacing::Linear,
        };
        Study {
            system_path: "system.toml".into(),
            title: None,
            span: Span::Orbits(1e3),
            measure: Vec::new(),
            angle: None,
            axes: cells.iter().map(axis).collect(),
            limits: Limits { escape_au: None, encounter: Encounter::Off, stop_when_chaotic: false },
            engine: Engine::default(),
        }
    }

    /// By hand, the first axis running fastest.
    #[test]
    fn corners_are_the_ends_of_all_axes_each_once() {
        assert_eq!(corner_cells(&study(&[4])), [0, 3]);
        assert_eq!(corner_cells(&study(&[3, 2])), [0, 2, 3, 5]);
        assert_eq!(corner_cells(&study(&[1, 5])), [0, 4]);
        assert_eq!(corner_cells(&study(&[5, 1])), [0, 4]);
        assert_eq!(corner_cells(&study(&[1, 1])), [0]);
    }
}
