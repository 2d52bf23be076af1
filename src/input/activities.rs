//! The activities table: a row an activity.

use compact_str::CompactString;
use rayon::prelude::*;

use super::faults::Diagnostics;
use super::header::{Columns, ExtraColumn};
use super::names::{repeated, trimmed};
use super::notes::{Note, Readings};
use super::place::cell_of;
use super::points::PointsTable;
use super::rows::Part;
use super::table::Table;
use crate::model::{Activity, Aim, Constraint, ModelError, Problem};

/// The activities of a plan, and what is needed to point at any of their cells.
pub(super) struct ActivitiesTable<'a> {
    pub table: Table<'a>,
    columns: Columns,
    pub activities: Vec<Activity>,
    /// Where the record of each activity begins.
    starts: Vec<usize>,
    pub extra: Vec<ExtraColumn>,
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
