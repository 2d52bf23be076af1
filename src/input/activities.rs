//! The activities table: a row an activity.

use std::ops::Range;

use compact_str::CompactString;
use csv::ByteRecord;
use rayon::prelude::*;

use super::amount;
use super::faults::Diagnostics;
use super::header::{Columns, ExtraColumn, nearest};
use super::names::{is_total, repeated, trimmed};
use super::notes::{Note, Readings};
use super::place::cell_of;
use super::points::PointsTable;
use super::table::Table;
use crate::curves::{Curve, CurveError, Family, ParameterSet};
use crate::model::{Activity, Aim, Constraint, Field, ModelError, ObservedRange, Problem};

/// The activities of a plan, and what is needed to point at any of their cells.
pub(super) struct ActivitiesTable<'a> {
    pub table: Table<'a>,
    columns: Columns,
    pub activities: Vec<Activity>,
    /// Where the record of each activity begins.
    starts: Vec<usize>,
    pub extra: Vec<ExtraColumn>,
}

/// What one part of the table holds.
struct Part {
    activities: Vec<Activity>,
    starts: Vec<usize>,
    /// Names of the rows at fault, and where their records begin.
    refused: Vec<(CompactString, usize)>,
    extra: Vec<ExtraColumn>,
    faults: Diagnostics,
    /// Lenient readings in the order of the file: how a cell was written, and the cell.
    readings: Vec<(&'static str, String)>,
    /// Points curves whose cap was left blank.
    capped_at_last_knot: usize,
}

impl<'a> ActivitiesTable<'a> {
    /// Reads all rows; the faults found so far come along, so that those of the model can be
    /// added to them.
    ///
    /// # Errors
    /// Faults of the file as a whole, of its header, and where no row can be read.
    pub(super) fn read(
        file: &str,
        bytes: &'a [u8],
        points: Option<&PointsTable>,
    ) -> Result<(Self, Diagnostics), Diagnostics> {
        let mut table = Table::open(file, bytes, super::header::ACTIVITY)?;
        let (columns, mut faults) = Columns::of(&table)?;
        let parts: Vec<Result<Part, Diagnostics>> = table
            .parts()
            .into_par_iter()
            .map(|part| Part::read(&table, &columns, points, part))
            .collect();
        let rows = parts
            .iter()
            .flatten()
            .map(|part| part.activities.len())
            .sum();
        let mut readings = Readings::default();
        let mut refused = Vec::new();
        let mut activities = Vec::with_capacity(rows);
        let mut starts = Vec::with_capacity(rows);
        let mut extra: Vec<ExtraColumn> = columns
            .extra
            .iter()
            .map(|&column| ExtraColumn::new(&table.header[column]))
            .collect();
        let mut capped_at_last_knot = 0;
        for part in parts {
            let mut part = part?;
            activities.append(&mut part.activities);
            starts.append(&mut part.starts);
            refused.append(&mut part.refused);
            for (column, later) in extra.iter_mut().zip(&part.extra) {
                column.append(later);
            }
            faults.append(part.faults);
            for (how, cell) in part.readings {
                readings.count(how, &cell);
            }
            capped_at_last_knot += part.capped_at_last_knot;
        }
        table.notes.extend(readings.notes(file));
        if capped_at_last_knot > 0 {
            let curves = if capped_at_last_knot == 1 {
                "curve ends"
            } else {
                "curves end"
            };
            table.notes.push(Note::reading(format!(
                "{file}: {capped_at_last_knot} points {curves} at the last knot, since the cap is blank"
            )));
        }
        let read = Self {
            table,
            columns,
            activities,
            starts,
            extra,
        };
        if read.activities.is_empty() && faults.is_empty() {
            return Err(Diagnostics::of(
                "a table without rows",
                read.table.row_place(0),
                format!("{file} has a header and no rows"),
                "add a row for every activity",
            ));
        }
        read.find_repeated_names(&refused, &mut faults);
        Ok((read, faults))
    }

    /// The name in the record that begins at `start`.
    fn name_at(&self, start: usize) -> String {
        let cell = cell_of(
            &self.table.text,
            start,
            self.columns.activity,
            self.table.dialect.separator,
        );
        trimmed(self.table.text[cell].trim_matches('"')).to_owned()
    }

    /// Looks through the names of all rows, the refused ones among them.
    fn find_repeated_names(&self, refused: &[(CompactString, usize)], faults: &mut Diagnostics) {
        let read = self.activities.len();
        let name = |i: usize| match i.checked_sub(read) {
            Some(i) => refused[i].0.as_str(),
            None => self.activities[i].name.as_str(),
        };
        let start = |i: usize| {
            i.checked_sub(read)
                .map_or_else(|| self.starts[i], |i| refused[i].1)
        };
        for (one, other) in repeated(read + refused.len(), name) {
            let (first, again) = if start(one) < start(other) {
                (one, other)
            } else {
                (other, one)
            };
            let line = self.table.row_place(start(first)).line.unwrap_or(0);
            let how = if name(first) == name(again) {
                ""
            } else {
                " but for case or spaces"
            };
            faults.add(
                "a name twice",
                || {
                    self.table
                        .place(start(again), self.columns.activity, Some("activity"))
                },
                format!("\"{}\" has the same name as line {line}{how}", name(again)),
                "give every activity a name of its own, or join the rows",
            );
        }
    }

    /// The validated problem and the columns beside the known ones; the model's faults are added
    /// to the others.
    pub(super) fn into_problem(
        mut self,
        aim: Aim,
        constraints: Vec<Constraint>,
        faults: &mut Diagnostics,
    ) -> Option<(Problem, Vec<ExtraColumn>)> {
        let activities = std::mem::take(&mut self.activities);
        match Problem::new(aim, activities, constraints) {
            Ok(problem) => Some((problem, self.extra)),
            Err(found) => {
                for fault in &found {
                    self.explain(fault, faults);
                }
                None
            }
        }
    }

    /// Points at the cells that a fault of the model is about.
    fn explain(&self, fault: &ModelError, faults: &mut Diagnostics) {
        let (i, column, kind, mend) = match fault {
            ModelError::Number {
                activity, field, ..
            } => (
                *activity,
                field.name(),
                "a number out of range",
                "correct it".to_owned(),
            ),
            ModelError::FloorAboveCap { activity, .. } => {
                let mend = "lower the floor or raise the cap".to_owned();
                (*activity, "floor", "a floor above its cap", mend)
            }
            ModelError::OutsideTable {
                activity,
                floor,
                first,
                last,
                ..
            } if floor < first => {
                let mend = format!(
                    "add a point for a spend of 0, or give it a floor of at least {first} (the \
                     points run from {first} to {last})"
                );
                (*activity, "floor", "bounds beyond the points", mend)
            }
            ModelError::OutsideTable { activity, last, .. } => {
                let mend = format!("lower the cap to {last}, or add points beyond it");
                (*activity, "cap", "bounds beyond the points", mend)
            }
            ModelError::Shape(shape) => (
                shape.activity,
                super::header::CURVE,
                "a curve of the wrong shape",
                shape.mend(),
            ),
            _ => return,
        };
        let what = match fault {
            ModelError::Shape(shape) => shape.reason(),
            other => other.to_string(),
        };
        let start = self.starts[i];
        let place = || match self.table.column(column) {
            Some(at) => self.table.place(start, at, Some(column)),
            None => self.table.row_place(start),
        };
        faults.add(
            kind,
            place,
            format!("{}: {what}", self.name_at(start)),
            mend,
        );
    }
}

impl Part {
    fn read(
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
    fn place(&self, column: usize) -> super::place::Place {
        self.table
            .place(self.start, column, Some(&self.table.header[column]))
    }
}
