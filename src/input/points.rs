//! The points table: the knots of tabulated curves, a row each.

use csv::ByteRecord;
use rustc_hash::FxHashMap;

use super::amount;
use super::currency::Currencies;
use super::faults::{Diagnostics, FoundFaults, Spot};
use super::header::{ACTIVITY, missing_columns};
use super::names::trimmed;
use super::notes::{Note, Readings};
use super::rows::{NAMELESS_ROW, NO_NUMBER, RAGGED_MEND, RAGGED_ROW, ragged};
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
    pub curves: FxHashMap<String, Knots>,
    /// Whether rows were refused, so that a curve may lack some.
    pub is_faulty: bool,
    pub currencies: Currencies,
}

/// What the activities find where they look for points.
#[derive(Clone, Copy)]
pub(super) enum PointsState<'p, 'a> {
    /// The plan names no points table.
    None,
    /// It names one that cannot be read.
    Unreadable,
    /// The table.
    Read(&'p PointsTable<'a>),
}

impl<'a> PointsTable<'a> {
    /// Reads all rows; the faults of rows come along.
    ///
    /// # Errors
    /// Faults of the file as a whole and of its header.
    pub(super) fn read(file: &str, bytes: &'a [u8]) -> Result<(Self, Diagnostics), Diagnostics> {
        let table = Table::open(file, bytes, SPEND)?;
        let (Some(activity), Some(spend), Some(value)) = (
            table.column(ACTIVITY),
            table.column(SPEND),
            table.column(RETURN),
        ) else {
            return Err(missing_columns(&table, &[ACTIVITY, SPEND, RETURN]));
        };
        let mut rows = Rows {
            table: &table,
            faults: FoundFaults::default(),
            readings: Readings::default(),
        };
        let mut curves: FxHashMap<String, Knots> = FxHashMap::default();
        let mut empty_rows = 0;
        for part in table.parts() {
            empty_rows += table.records(part, |record, start, _| {
                if let Some((name, knot)) = rows.knot_of(record, start, [activity, spend, value]) {
                    let knots = match curves.get_mut(&name) {
                        Some(knots) => knots,
                        None => curves.entry(name).or_default(),
                    };
                    knots.knots.push(knot);
                    knots.starts.push(start);
                }
                true
            })?;
        }
        let Rows {
            faults: found,
            readings,
            ..
        } = rows;
        let mut faults = Diagnostics::default();
        faults.append_found(found, |spot| table.place_of(spot));
        if curves.is_empty() && faults.is_empty() {
            return Err(Diagnostics::of(
                "a table without rows",
                table.header_row_place(),
                format!("{file} has a header and no rows"),
                "add a row for every point, or leave the table out",
            ));
        }
        let mut table = table;
        let currencies = readings.currencies.clone();
        table.notes.extend(readings.notes(file));
        table.notes.extend(Note::of_empty_rows(file, empty_rows));
        let idle: Vec<&str> = table
            .header
            .iter()
            .map(String::as_str)
            .filter(|name| ![ACTIVITY, SPEND, RETURN].contains(name))
            .collect();
        if !idle.is_empty() {
            let said = format!("{file}: columns that are not used: {}", idle.join(", "));
            table.notes.push(Note::reading(said));
        }
        let is_faulty = !faults.is_empty();
        Ok((
            Self {
                table,
                curves,
                is_faulty,
                currencies,
            },
            faults,
        ))
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
            let what = match fault {
                CurveError::BadKnot { .. } => "a point lies at a spend below 0".to_owned(),
                _ => fault.to_string(),
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
                format!("{name}: {what}"),
                mend,
            )
        }))
    }
}

/// Rows while they are read.
struct Rows<'t> {
    table: &'t Table<'t>,
    faults: FoundFaults,
    readings: Readings,
}

impl Rows<'_> {
    fn knot_of(
        &mut self,
        record: &ByteRecord,
        start: usize,
        [activity, spend, value]: [usize; 3],
    ) -> Option<(String, Knot)> {
        let needed = self.table.header.len();
        if record.len() != needed {
            let spot = Spot {
                start,
                column: None,
            };
            self.faults.add(RAGGED_ROW, spot, || {
                (ragged(record.len(), needed), RAGGED_MEND.to_owned())
            });
            return None;
        }
        let cell = String::from_utf8_lossy(&record[activity]);
        let name = trimmed(&cell);
        if name.is_empty() {
            let spot = Spot {
                start,
                column: Some(activity),
            };
            self.faults.add(NAMELESS_ROW, spot, || {
                (
                    "this point has no name of an activity".to_owned(),
                    "name the activity in every row, or delete the row".to_owned(),
                )
            });
        }
        let spend = self.number_in(record, start, spend, name);
        let value = self.number_in(record, start, value, name);
        let (spend, value) = (spend?, value?);
        (!name.is_empty()).then(|| (name.to_owned(), Knot { spend, value }))
    }

    fn number_in(
        &mut self,
        record: &ByteRecord,
        start: usize,
        column: usize,
        name: &str,
    ) -> Option<f64> {
        let spot = Spot {
            start,
            column: Some(column),
        };
        let cell = String::from_utf8_lossy(&record[column]);
        if trimmed(&cell).is_empty() {
            let what = &self.table.header[column];
            self.faults.add("a blank point", spot, || {
                (
                    format!("a point of \"{name}\" has no {what}"),
                    "fill it in, or delete the row (blank is not zero)".to_owned(),
                )
            });
            return None;
        }
        match amount::parse(&cell, self.table.dialect.decimal) {
            Ok(found) => {
                self.readings.count_amount(&found, &cell);
                Some(found.value)
            }
            Err(fault) => {
                self.faults
                    .add(NO_NUMBER, spot, || (fault.to_string(), fault.mend()));
                None
            }
        }
    }
}
