//! The points table: the knots of tabulated curves, a row each.

use std::collections::HashMap;

use super::amount;
use super::faults::Diagnostics;
use super::header::{ACTIVITY, missing_columns};
use super::names::trimmed;
use super::notes::Readings;
use super::table::Table;
use crate::curves::{CurveError, Knot, Points};

const SPEND: &str = "spend";
const RETURN: &str = "return";

/// The rows of one activity.
#[derive(Debug, Default)]
pub(super) struct Knots {
    /// In the order of the file.
    pub knots: Vec<Knot>,
    /// Where their records begin.
    pub starts: Vec<usize>,
}

/// A points table that has been read: knots by the name of their activity.
pub(super) struct PointsTable<'a> {
    pub table: Table<'a>,
    pub curves: HashMap<String, Knots>,
}

impl<'a> PointsTable<'a> {
    /// Reads all rows.
    ///
    /// # Errors
    /// Every fault of the table.
    pub(super) fn read(file: &str, bytes: &'a [u8]) -> Result<Self, Diagnostics> {
        let mut table = Table::open(file, bytes, SPEND)?;
        let faults = missing_columns(&table, &[ACTIVITY, SPEND, RETURN]);
        let (Some(activity), Some(spend), Some(value)) = (
            table.column(ACTIVITY),
            table.column(SPEND),
            table.column(RETURN),
        ) else {
            return Err(faults);
        };
        let mut faults = Diagnostics::default();
        let mut readings = Readings::default();
        let mut curves: HashMap<String, Knots> = HashMap::new();
        let mut rows = |part| {
            table.records(part, |record, start, _| {
                if record.len() != table.header.len() {
                    faults.add(
                        "a ragged row",
                        || table.row_place(start),
                        format!(
                            "this row has {} cells, the header has {}",
                            record.len(),
                            table.header.len()
                        ),
                        "give every row one cell a column",
                    );
                    return true;
                }
                let name = String::from_utf8_lossy(&record[activity]);
                let name = trimmed(&name);
                let mut number = |column: usize, what: &str| {
                    let cell = String::from_utf8_lossy(&record[column]);
                    if cell.trim().is_empty() {
                        faults.add(
                            "a blank knot",
                            || table.place(start, column, Some(what)),
                            format!("a point of \"{name}\" has no {what}"),
                            "fill it in, or delete the row (blank is not zero)",
                        );
                        return None;
                    }
                    match amount::parse(&cell, table.dialect.decimal_comma) {
                        Ok(found) => {
                            if let Some(how) = found.written {
                                readings.count(how, cell.trim());
                            }
                            Some(found.value)
                        }
                        Err(fault) => {
                            let place = || table.place(start, column, Some(what));
                            faults.add(
                                "a cell that is no number",
                                place,
                                fault.to_string(),
                                fault.mend(),
                            );
                            None
                        }
                    }
                };
                if let (Some(spend), Some(value)) = (number(spend, SPEND), number(value, RETURN)) {
                    let knots = curves.entry(name.to_owned()).or_default();
                    knots.knots.push(Knot { spend, value });
                    knots.starts.push(start);
                }
                true
            })
        };
        for part in table.parts() {
            rows(part)?;
        }
        if !faults.is_empty() {
            return Err(faults);
        }
        table.notes.extend(readings.notes(file));
        Ok(Self { table, curves })
    }

    /// The curve through the rows of `name`.
    pub(super) fn curve_of(&self, name: &str) -> Option<Result<Points, Diagnostics>> {
        let knots = self.curves.get(name)?;
        Some(Points::new(&knots.knots).map_err(|fault| {
            let row = match fault {
                CurveError::BadKnot { row } | CurveError::RepeatedKnot { row, .. } => row,
                _ => 0,
            };
            let place = match knots.starts.get(row) {
                Some(&start) => self.table.row_place(start),
                None => super::place::Place::file(&self.table.file),
            };
            let mend = match fault {
                CurveError::TooFewKnots { .. } => {
                    "add a row for zero spend and one for the greatest spend"
                }
                CurveError::RepeatedKnot { .. } => "keep one row for every spend",
                _ => "write a spend of at least 0 and a finite return",
            };
            Diagnostics::of(
                "points that make no curve",
                place,
                format!("{name}: {fault}"),
                mend,
            )
        }))
    }
}
