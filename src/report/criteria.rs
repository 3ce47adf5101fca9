//! The margins of analytic criteria in every cell of a study.

use std::ops::Range;

use super::VERSION;
use super::table::{Column, Datatype, Entry, Meta, Table};
use crate::criteria::margin;
use crate::survey::{cell_values, configuration_at};
use crate::system::{Criterion, Study, System};

/// One row per cell of a range, in order, one column per criterion: its margin, positive on the quiet side; absent where
/// the cell has no configuration or the criterion says nothing about it.
pub fn criteria_table(study: &Study, system: &System, criteria: &[Criterion], cells: Range<u64>) -> Table {
    let mut columns =
        vec![Column::new("cell", "", Datatype::Count, "index of the cell; the first axis runs fastest")];
    for axis in &study.axes {
        let meaning = format!("value of the axis {}", axis.path);
        columns.push(Column::new(&axis.path, axis.unit, Datatype::Float, meaning));
    }
    for criterion in criteria {
        let source = match criterion.source() {
            "" => String::new(),
            source => format!(" ({source})"),
        };
        let meaning = format!("{}{source}: {}", criterion.title(), criterion.margin_words());
        columns.push(Column::new(criterion.word(), "", Datatype::Float, meaning));
    }
    let row = |cell: u64| {
        let values = cell_values(study, cell);
        let configuration = configuration_at(system, study, &values);
        let of = |criterion: &Criterion| -> Entry {
            let found = configuration.as_ref().and_then(|c| margin(*criterion, c).ok());
            found.filter(|value| value.is_finite()).into()
        };
        let places = values.iter().map(|value| Entry::Float(*value));
        std::iter::once(Entry::Count(cell)).chain(places).chain(criteria.iter().map(of)).collect()
    };
    let meaning = "margins of analytic criteria: positive on the quiet side, 0 on the border".to_owned();
    let meta = vec![
        ("what".to_owned(), Meta::Text(meaning)),
        ("version".to_owned(), Meta::Text(VERSION.to_owned())),
    ];
    Table { meta, columns, rows: cells.map(row).collect() }
}
