//! The rows of the activities table: from cells to activities, or to faults.

use std::ops::Range;

use compact_str::CompactString;
use csv::ByteRecord;

use super::amount;
use super::faults::Diagnostics;
use super::header::{Columns, ExtraColumn, nearest};
use super::names::{is_total, trimmed};
use super::place::Place;
use super::points::PointsTable;
use super::table::Table;
use crate::curves::{Curve, CurveError, Family, ParameterSet};
use crate::model::{Activity, Field, ObservedRange};

/// What one part of the table holds.
pub(super) struct Part {
    pub activities: Vec<Activity>,
    pub starts: Vec<usize>,
    /// Names of the rows at fault, and where their records begin.
    pub refused: Vec<(CompactString, usize)>,
    pub extra: Vec<ExtraColumn>,
    pub faults: Diagnostics,
    /// Lenient readings in the order of the file: how a cell was written, and the cell.
    pub readings: Vec<(&'static str, String)>,
    /// Points curves whose cap was left blank.
    pub capped_at_last_knot: usize,
}

impl Part {
    /// Reads the records of one part of the table's text.
    ///
    /// # Errors
    /// What makes the rest of the file unreadable; faults of single rows are collected.
    pub(super) fn read(
        table: &Table,
        columns: &Columns,
        points: Option<&PointsTable>,
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
            faults: Diagnostics::default(),
            readings: Vec::new(),
            capped_at_last_knot: 0,
        };
        table.records(part, |record, start, _| {
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
        Ok(read)
    }

    fn add_row(&mut self, row: &Row, points: Option<&PointsTable>) {
        if row.record.len() != row.table.header.len() {
            let (found, needed) = (row.record.len(), row.table.header.len());
            self.faults.add(
                "a ragged row",
                || row.table.row_place(row.start),
                format!("this row has {found} cells, the header has {needed}"),
                "give every row one cell a column; a cell with a separator in it needs quotes",
            );
            return;
        }
        let before = self.faults.count();
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
        if self.faults.count() > before {
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
        let place = || row.place(row.columns.activity);
        if name.is_empty() {
            let what = "this row has values and no name of an activity";
            self.faults.add(
                "a row without a name",
                place,
                what,
                "name it, or delete the row",
            );
        } else if is_total(name) {
            self.faults.add(
                "a row of sums",
                place,
                format!("\"{name}\" looks like a row that adds up the others"),
                "delete the row; sums are computed (or rename it if it is an activity)",
            );
        }
        CompactString::from(name)
    }

    fn curve_of(&mut self, row: &Row, name: &str, points: Option<&PointsTable>) -> Option<Curve> {
        let cell = String::from_utf8_lossy(&row.record[row.columns.curve]);
        let written = cell.trim();
        let family: Option<Family> = written
            .parse()
            .ok()
            .or_else(|| written.to_lowercase().parse().ok());
        let Some(family) = family else {
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
            self.faults.add(
                "an unknown family",
                || row.place(row.columns.curve),
                what,
                mend,
            );
            return None;
        };
        let mut given = ParameterSet::default();
        let before = self.faults.count();
        for &(parameter, column) in &row.columns.parameters {
            if let Some(value) = self.number_in(row, column) {
                given = given.with(parameter, value);
            }
        }
        let unread = self.faults.count() > before;
        let fault = match Curve::from_parameters(family, &given) {
            Ok(curve) => {
                self.refuse_idle_points(row, name, family, points);
                return Some(curve);
            }
            Err(CurveError::NoTable) => return self.tabulated(row, name, points),
            Err(fault) => fault,
        };
        // A cell that could not be read has been reported, and is not missing.
        if unread && matches!(fault, CurveError::Missing { .. }) {
            return None;
        }
        let needed: Vec<&str> = family
            .parameters()
            .iter()
            .map(|parameter| parameter.name())
            .collect();
        let mend = match fault {
            CurveError::Missing { parameter, .. } => format!("fill in the column {parameter}"),
            CurveError::NotUsed { .. } if needed.is_empty() => {
                "leave the cell blank; a points curve is read from the points table".to_owned()
            }
            CurveError::NotUsed { .. } => {
                format!(
                    "leave the cell blank; a {family} curve has {}",
                    needed.join(" and ")
                )
            }
            _ => "correct it".to_owned(),
        };
        let column = fault
            .parameter()
            .and_then(|parameter| row.table.column(parameter.name()));
        let place = || match column {
            Some(column) => row.place(column),
            None => row.place(row.columns.curve),
        };
        self.faults.add(
            "a parameter at fault",
            place,
            format!("{name}: {fault}"),
            mend,
        );
        None
    }

    fn tabulated(&mut self, row: &Row, name: &str, points: Option<&PointsTable>) -> Option<Curve> {
        let place = || row.place(row.columns.curve);
        let Some(points) = points else {
            self.faults.add(
                "a points curve without points",
                place,
                format!("\"{name}\" is a points curve, and there is no points table"),
                "name it with --points FILE or points = \"…\" in the plan file",
            );
            return None;
        };
        match points.curve_of(name) {
            Some(Ok(curve)) => Some(Curve::Points(curve)),
            Some(Err(fault)) => {
                self.faults.append(fault);
                None
            }
            None => {
                self.faults.add(
                    "a points curve without points",
                    place,
                    format!(
                        "\"{name}\" is a points curve, and {} has no row for it",
                        points.table.file
                    ),
                    "add its rows; names must agree to the letter",
                );
                None
            }
        }
    }

    /// Rows of the points table for an activity of another family would be ignored.
    fn refuse_idle_points(
        &mut self,
        row: &Row,
        name: &str,
        family: Family,
        points: Option<&PointsTable>,
    ) {
        if points.is_some_and(|points| points.curves.contains_key(name)) {
            self.faults.add(
                "points that are not used",
                || row.place(row.columns.curve),
                format!("\"{name}\" is a {family} curve, and the points table has rows for it"),
                "write points as its curve, or delete the rows",
            );
        }
    }

    /// The number in a cell; `None` where it is blank or no number (which is a fault).
    #[inline]
    fn number_in(&mut self, row: &Row, column: usize) -> Option<f64> {
        let cell = &row.record[column];
        if cell.is_empty() {
            return None;
        }
        if !row.table.dialect.decimal_comma
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
        match amount::parse(&cell, row.table.dialect.decimal_comma) {
            Ok(found) => {
                if let Some(how) = found.written {
                    self.readings.push((how, cell.trim().to_owned()));
                }
                Some(found.value)
            }
            Err(fault) => {
                let place = || row.place(column);
                self.faults.add(
                    "a cell that is no number",
                    place,
                    fault.to_string(),
                    fault.mend(),
                );
                None
            }
        }
    }
}

/// One record and what its cells mean.
struct Row<'a> {
    table: &'a Table<'a>,
    columns: &'a Columns,
    record: &'a ByteRecord,
    start: usize,
}

impl Row<'_> {
    fn place(&self, column: usize) -> Place {
        self.table
            .place(self.start, column, Some(&self.table.header[column]))
    }
}
