//! Rows of the activities table: cells to activities, part by part.

use std::ops::Range;

use compact_str::CompactString;
use csv::ByteRecord;

use super::amount;
use super::digits::DecimalSign;
use super::faults::{Diagnostics, FoundFaults, Spot};
use super::header::{Columns, ExtraColumn, nearest};
use super::names::{is_total, is_unprintable, trimmed};
use super::notes::Readings;
use super::points::PointsState;
use super::table::Table;
use crate::curves::{Curve, CurveError, Family, ParameterSet};
use crate::model::{Activity, Field, ObservedRange};

/// Kinds of faults that several tables share, and the mend of one.
pub(super) const RAGGED_ROW: &str = "a ragged row";
pub(super) const RAGGED_MEND: &str =
    "give every row one cell a column; a cell with a separator in it needs quotes";
pub(super) const NAMELESS_ROW: &str = "a row without a name";
pub(super) const NO_NUMBER: &str = "a cell that is no number";
const POINTS_MISSING: &str = "a points curve without points";

/// What one part of the table holds.
pub(super) struct Part {
    pub activities: Vec<Activity>,
    /// Where the record of each activity begins.
    pub starts: Vec<usize>,
    /// Names of the rows at fault, and where their records begin.
    pub refused: Vec<(CompactString, usize)>,
    pub extra: Vec<ExtraColumn>,
    pub faults: FoundFaults,
    /// Faults of the points table behind this part's activities.
    pub points_faults: Diagnostics,
    pub readings: Readings,
    /// Points curves whose cap was left blank.
    pub capped_at_last_knot: usize,
    /// Rows with nothing in them.
    pub empty_rows: usize,
}

impl Part {
    /// Reads the rows of a part.
    ///
    /// # Errors
    /// A row that is no row of a table at all.
    pub(super) fn read(
        table: &Table,
        columns: &Columns,
        points: PointsState,
        part: Range<usize>,
    ) -> Result<Self, Diagnostics> {
        let mut read = Self {
            activities: Vec::new(),
            starts: Vec::new(),
            refused: Vec::new(),
            extra: columns
                .extra
                .iter()
                .map(|&column| ExtraColumn::new(&table.header[column]))
                .collect(),
            faults: FoundFaults::default(),
            points_faults: Diagnostics::default(),
            readings: Readings::default(),
            capped_at_last_knot: 0,
            empty_rows: 0,
        };
        let empty_rows = table.records(part, |record, start, _| {
            read.add_row(
                &Row {
                    table,
                    columns,
                    record,
                    start,
                },
                points,
            );
            true
        })?;
        read.empty_rows = empty_rows;
        Ok(read)
    }

    fn fault_count(&self) -> usize {
        self.faults.count() + self.points_faults.count()
    }

    fn add_row(&mut self, row: &Row, points: PointsState) {
        if row.record.len() != row.table.header.len() {
            let (found, needed) = (row.record.len(), row.table.header.len());
            self.faults.add(RAGGED_ROW, row.spot(None), || {
                (ragged(found, needed), RAGGED_MEND.to_owned())
            });
            return;
        }
        let before = self.fault_count();
        let name = self.name_of(row);
        let Some(curve) = self.curve_of(row, &name, points) else {
            // The other cells are still looked at, so that all faults of a row are found at once.
            for &(_, column) in &row.columns.fields {
                self.number_in(row, column);
            }
            self.refused.push((name, row.start));
            return;
        };
        let mut activity = Activity::new(name, curve);
        let mut observed = ObservedRange {
            from: 0.0,
            to: f64::INFINITY,
        };
        let (mut cap_given, mut was_observed) = (false, false);
        for &(field, column) in &row.columns.fields {
            let Some(value) = self.number_in(row, column) else {
                continue;
            };
            match field {
                Field::Base => activity.base = value,
                Field::Floor => activity.floor = value,
                Field::Cap => (activity.cap, cap_given) = (value, true),
                Field::Weight => activity.weight = value,
                Field::Current => activity.current = Some(value),
                Field::ObservedFrom => (observed.from, was_observed) = (value, true),
                Field::ObservedTo => (observed.to, was_observed) = (value, true),
            }
        }
        activity.observed = was_observed.then_some(observed);
        if self.fault_count() > before {
            self.refused.push((activity.name, row.start));
            return;
        }
        if let (Curve::Points(points), false) = (&activity.curve, cap_given) {
            activity.cap = points.last_spend();
            self.capped_at_last_knot += 1;
        }
        self.activities.push(activity);
        self.starts.push(row.start);
        for (extra, &column) in self.extra.iter_mut().zip(&row.columns.extra) {
            extra.push(trimmed(&String::from_utf8_lossy(&row.record[column])));
        }
    }

    fn name_of(&mut self, row: &Row) -> CompactString {
        let cell = String::from_utf8_lossy(&row.record[row.columns.activity]);
        let name = trimmed(&cell);
        let spot = row.spot(Some(row.columns.activity));
        if name.is_empty() {
            self.faults.add(NAMELESS_ROW, spot, || {
                (
                    "this row has values and no name of an activity".to_owned(),
                    "name it, or delete the row".to_owned(),
                )
            });
        } else if is_total(name) {
            self.faults.add("a row of sums", spot, || {
                (
                    format!("\"{name}\" looks like a row that adds up the others"),
                    "delete the row; sums are computed (or rename it if it is an activity)"
                        .to_owned(),
                )
            });
        } else if is_unprintable(name) {
            self.faults
                .add("a name that cannot be seen whole", spot, || {
                    (
                        "this name has a line break or an invisible character in it".to_owned(),
                        "write the name on one line, of characters that can be seen".to_owned(),
                    )
                });
        }
        CompactString::from(name)
    }

    fn curve_of(&mut self, row: &Row, name: &str, points: PointsState) -> Option<Curve> {
        let family = self.family_of(row, name);
        let before = self.faults.count();
        let mut given = ParameterSet::default();
        for &(parameter, column) in &row.columns.parameters {
            if let Some(value) = self.number_in(row, column) {
                given = given.with(parameter, value);
            }
        }
        let family = family?;
        let fault = match Curve::from_parameters(family, &given) {
            Ok(curve) => {
                self.refuse_idle_points(row, name, family, points);
                return Some(curve);
            }
            Err(CurveError::NoTable) => return self.tabulated(row, name, points),
            Err(fault) => fault,
        };
        let unread = self.faults.count() > before;
        self.explain(row, name, family, &given, &fault, unread);
        None
    }

    /// The family of a row, in whichever letters.
    fn family_of(&mut self, row: &Row, name: &str) -> Option<Family> {
        let cell = &row.record[row.columns.curve];
        let exact = std::str::from_utf8(cell)
            .ok()
            .and_then(|cell| cell.parse().ok());
        if exact.is_some() {
            return exact;
        }
        let cell = String::from_utf8_lossy(cell);
        let written = trimmed(&cell);
        if let Ok(family) = written.to_lowercase().parse() {
            self.readings
                .count("a family in capital letters or with spaces", &cell);
            return Some(family);
        }
        if written.is_empty() && is_total(name) {
            // The row of sums has been reported, and is to go.
            return None;
        }
        let spot = row.spot(Some(row.columns.curve));
        self.faults.add("an unknown family", spot, || {
            let families = Family::ALL.map(Family::name);
            let mend = match nearest(written, families.iter().copied()) {
                Some(meant) => format!("did you mean \"{meant}\"?"),
                None => format!("write one of {}", families.join(", ")),
            };
            let what = if written.is_empty() {
                format!("\"{name}\" has no family of curves")
            } else {
                format!("\"{written}\" is not a family of curves")
            };
            (what, mend)
        });
        None
    }

    fn tabulated(&mut self, row: &Row, name: &str, points: PointsState) -> Option<Curve> {
        let spot = row.spot(Some(row.columns.curve));
        let points = match points {
            PointsState::Read(points) => points,
            // What is at fault has been said.
            PointsState::Unreadable => return None,
            PointsState::None => {
                self.faults.add(POINTS_MISSING, spot, || {
                    (
                        format!("\"{name}\" is a points curve, and there is no points table"),
                        "name it with --points FILE or points = \"…\" in the plan file".to_owned(),
                    )
                });
                return None;
            }
        };
        match points.curve_of(name) {
            Some(Ok(curve)) => Some(Curve::Points(curve)),
            // Rows that could not be read may have been of this activity.
            Some(Err(_)) if points.is_faulty => None,
            Some(Err(fault)) => {
                self.points_faults.append(fault);
                None
            }
            None if points.is_faulty => None,
            None => {
                self.faults.add(POINTS_MISSING, spot, || {
                    (
                        format!(
                            "\"{name}\" is a points curve, and {} has no row for it",
                            points.table.file
                        ),
                        "add its rows; names must agree to the letter".to_owned(),
                    )
                });
                None
            }
        }
    }

    /// Rows of the points table for an activity of another family would be ignored.
    fn refuse_idle_points(&mut self, row: &Row, name: &str, family: Family, points: PointsState) {
        let PointsState::Read(points) = points else {
            return;
        };
        if points.curves.contains_key(name) {
            let spot = row.spot(Some(row.columns.curve));
            self.faults.add("points that are not used", spot, || {
                (
                    format!("\"{name}\" is {family}, and the points table has rows for it"),
                    "write points as its curve, or delete the rows".to_owned(),
                )
            });
        }
    }

    /// The number in a cell; `None` where it is blank or no number (which is a fault).
    #[inline]
    fn number_in(&mut self, row: &Row, column: usize) -> Option<f64> {
        let cell = &row.record[column];
        if cell.is_empty() {
            return None;
        }
        if row.table.dialect.decimal == DecimalSign::Point
            && let Ok(value) = fast_float2::parse::<f64, _>(cell)
            && value.is_finite()
        {
            return Some(value);
        }
        self.unusual_number_in(row, column)
    }

    #[cold]
    fn unusual_number_in(&mut self, row: &Row, column: usize) -> Option<f64> {
        let cell = String::from_utf8_lossy(&row.record[column]);
        if trimmed(&cell).is_empty() {
            return None;
        }
        match amount::parse(&cell, row.table.dialect.decimal) {
            Ok(found) => {
                self.readings.count_amount(&found, &cell);
                Some(found.value)
            }
            Err(fault) => {
                let spot = row.spot(Some(column));
                self.faults
                    .add(NO_NUMBER, spot, || (fault.to_string(), fault.mend()));
                None
            }
        }
    }
}

/// One record and what its cells mean.
pub(super) struct Row<'a> {
    pub table: &'a Table<'a>,
    pub columns: &'a Columns,
    record: &'a ByteRecord,
    start: usize,
}

impl Row<'_> {
    pub(super) fn spot(&self, column: Option<usize>) -> Spot {
        Spot {
            start: self.start,
            column,
        }
    }
}

/// What a row with too few or too many cells is told.
pub(super) fn ragged(found: usize, needed: usize) -> String {
    let cells = if found == 1 { "cell" } else { "cells" };
    format!("this row has {found} {cells}, the header has {needed}")
}
