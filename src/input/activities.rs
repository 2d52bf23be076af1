//! The activities table: a row an activity.

use compact_str::CompactString;
use rayon::prelude::*;

use super::currency::Currencies;
use super::faults::{Diagnostics, Spot};
use super::header::{Columns, ExtraColumn};
use super::names::{repeated, trimmed};
use super::notes::{Note, Readings};
use super::place::cell_of;
use super::points::PointsState;
use super::rows::Part;
use super::table::Table;
use crate::model::{Activity, Aim, Constraint, Problem};

/// Parts of the text that are read side by side before they are joined: enough for any number of
/// threads that this is run on, and few enough to stay in a cache.
const PARTS_A_WAVE: usize = 8;

/// The activities of a plan, and what is needed to point at any of their cells.
pub(super) struct ActivitiesTable<'a> {
    pub table: Table<'a>,
    columns: Columns,
    pub activities: Vec<Activity>,
    /// Where the record of each activity begins.
    pub starts: Vec<usize>,
    /// Names of the rows at fault, and where their records begin.
    pub refused: Vec<(CompactString, usize)>,
    pub extra: Vec<ExtraColumn>,
    pub currencies: Currencies,
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
        points: PointsState,
    ) -> Result<(Self, Diagnostics), Diagnostics> {
        let mut table = Table::open(file, bytes, super::header::ACTIVITY)?;
        let (columns, mut faults) = Columns::of(&table)?;
        let parts = table.parts();
        let mut readings = Readings::default();
        let mut refused = Vec::new();
        let mut activities = Vec::new();
        let mut starts = Vec::new();
        let mut extra: Vec<ExtraColumn> = columns
            .extra
            .iter()
            .map(|&column| ExtraColumn::new(&table.header[column]))
            .collect();
        let (mut capped_at_last_knot, mut empty_rows) = (0, 0);
        // A wave of parts at a time, so that their memory is used again while it is warm.
        for wave in parts.chunks(PARTS_A_WAVE) {
            let read: Vec<Result<Part, Diagnostics>> = wave
                .par_iter()
                .map(|part| Part::read(&table, &columns, points, part.clone()))
                .collect();
            if activities.is_empty() {
                let rows: usize = read
                    .iter()
                    .flatten()
                    .map(|part| part.activities.len())
                    .sum();
                let expected = rows * parts.len().div_ceil(wave.len());
                activities.reserve(expected);
                starts.reserve(expected);
            }
            for part in read {
                let mut part = part?;
                activities.append(&mut part.activities);
                starts.append(&mut part.starts);
                refused.append(&mut part.refused);
                for (column, later) in extra.iter_mut().zip(&part.extra) {
                    column.append(later);
                }
                faults.append_found(part.faults, |spot| table.place_of(spot));
                faults.append(part.points_faults);
                readings.append(part.readings);
                empty_rows += part.empty_rows;
                capped_at_last_knot += part.capped_at_last_knot;
            }
        }
        let currencies = readings.currencies.clone();
        table.notes.extend(readings.notes(file));
        table.notes.extend(Note::of_empty_rows(file, empty_rows));
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
            refused,
            extra,
            currencies,
        };
        if read.activities.is_empty() && read.refused.is_empty() && faults.is_empty() {
            return Err(Diagnostics::of(
                "a table without rows",
                read.table.header_row_place(),
                format!("{file} has a header and no rows"),
                "add a row for every activity",
            ));
        }
        read.find_repeated_names(&mut faults);
        Ok((read, faults))
    }

    /// The name in the record that begins at `start`.
    pub(super) fn name_at(&self, start: usize) -> String {
        let cell = cell_of(
            &self.table.text,
            start,
            self.columns.activity,
            self.table.dialect.separator,
        );
        trimmed(self.table.text[cell].trim_matches('"')).to_owned()
    }

    /// Looks through the names of all rows, the refused ones among them.
    fn find_repeated_names(&self, faults: &mut Diagnostics) {
        const NAME_TWICE: &str = "a name twice";
        let (read, refused) = (self.activities.len(), &self.refused);
        let name = |i: usize| match i.checked_sub(read) {
            Some(i) => refused[i].0.as_str(),
            None => self.activities[i].name.as_str(),
        };
        let start = |i: usize| {
            i.checked_sub(read)
                .map_or_else(|| self.starts[i], |i| refused[i].1)
        };
        for (one, other) in repeated(read + refused.len(), name) {
            if !faults.keeps(NAME_TWICE) {
                faults.count_one(NAME_TWICE);
                continue;
            }
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
                NAME_TWICE,
                || {
                    self.table.place_of(Spot {
                        start: start(again),
                        column: Some(self.columns.activity),
                    })
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
}
