//! The columns of the activities table: known ones, and the tags and resources beside them.

use super::faults::Diagnostics;
use super::table::Table;
use crate::curves::Parameter;
use crate::model::Field;

/// Names of the columns that say what the others mean.
pub(super) const ACTIVITY: &str = "activity";
pub(super) const CURVE: &str = "curve";

const FIELDS: [Field; 7] = [
    Field::Base,
    Field::Floor,
    Field::Cap,
    Field::Weight,
    Field::Current,
    Field::ObservedFrom,
    Field::ObservedTo,
];

/// What a column is that the tool itself does not know.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ExtraKind {
    /// Text, to group and filter by.
    Tag,
    /// A number in every row that is not blank: what a unit of spend uses of something.
    Resource,
}

/// A column beside the known ones. Its cells stand in one text, row after row.
#[derive(Debug, Clone, PartialEq)]
pub struct ExtraColumn {
    /// Its name.
    pub name: String,
    text: String,
    ends: Vec<usize>,
}

impl ExtraColumn {
    pub(super) fn new(name: &str) -> Self {
        Self {
            name: name.to_owned(),
            text: String::new(),
            ends: Vec::new(),
        }
    }

    pub(super) fn push(&mut self, cell: &str) {
        self.text.push_str(cell);
        self.ends.push(self.text.len());
    }

    /// Adds the rows of a later part.
    pub(super) fn append(&mut self, later: &Self) {
        let before = self.text.len();
        self.text.push_str(&later.text);
        self.ends.extend(later.ends.iter().map(|end| before + end));
    }

    /// The cells, one an activity, in their order.
    pub fn cells(&self) -> impl ExactSizeIterator<Item = &str> + '_ {
        (0..self.ends.len()).map(|row| {
            let start = if row == 0 { 0 } else { self.ends[row - 1] };
            &self.text[start..self.ends[row]]
        })
    }

    /// A resource if every cell that is not blank is a number and there is one, else a tag.
    pub fn kind(&self) -> ExtraKind {
        let mut numbers = 0;
        for cell in self.cells().filter(|cell| !cell.is_empty()) {
            if super::amount::plain(cell).is_none() {
                return ExtraKind::Tag;
            }
            numbers += 1;
        }
        if numbers > 0 {
            ExtraKind::Resource
        } else {
            ExtraKind::Tag
        }
    }
}

/// Where the known columns stand.
#[derive(Debug, Clone)]
pub(super) struct Columns {
    pub activity: usize,
    pub curve: usize,
    /// In the order of [`Parameter::ALL`].
    pub parameters: Vec<(Parameter, usize)>,
    pub fields: Vec<(Field, usize)>,
    pub extra: Vec<usize>,
}

impl Columns {
    /// Finds the known columns of an activities table; a fault for every unknown one that looks
    /// like a known one misspelt comes along.
    ///
    /// # Errors
    /// The same, where a column is missing without which no row can be read.
    pub(super) fn of(table: &Table) -> Result<(Self, Diagnostics), Diagnostics> {
        let mut faults = missing_columns(table, &[ACTIVITY, CURVE]);
        let parameters = Parameter::ALL
            .into_iter()
            .filter_map(|parameter| Some((parameter, table.column(parameter.name())?)))
            .collect();
        let fields = FIELDS
            .into_iter()
            .filter_map(|field| Some((field, table.column(field.name())?)))
            .collect();
        let known: Vec<&str> = [ACTIVITY, CURVE]
            .into_iter()
            .chain(Parameter::ALL.iter().map(|parameter| parameter.name()))
            .chain(FIELDS.iter().map(|field| field.name()))
            .collect();
        let mut extra = Vec::new();
        for (column, name) in table.header.iter().enumerate() {
            if known.contains(&name.as_str()) {
                continue;
            }
            extra.push(column);
            // That of a column which must be there has been said.
            let absent = known[2..]
                .iter()
                .copied()
                .filter(|known| table.column(known).is_none());
            // A unit in brackets behind a known name: cap_(eur).
            let bare = name.split(['(', '[']).next().unwrap_or(name);
            let bare = bare.trim_end_matches('_');
            if let Some(meant) = nearest(bare, absent) {
                faults.add(
                    "a misspelt column",
                    || table.header_place(column),
                    format!(
                        "\"{name}\" is not a column that isomargin knows; did you mean \"{meant}\"?"
                    ),
                    format!("rename it to {meant}, or to something less like it if it is a tag"),
                );
            }
        }
        match (table.column(ACTIVITY), table.column(CURVE)) {
            (Some(activity), Some(curve)) => Ok((
                Self {
                    activity,
                    curve,
                    parameters,
                    fields,
                    extra,
                },
                faults,
            )),
            _ => Err(faults),
        }
    }
}

/// Faults for the columns that a table must have and has not.
pub(super) fn missing_columns(table: &Table, needed: &[&str]) -> Diagnostics {
    let mut faults = Diagnostics::default();
    for name in needed {
        if table.column(name).is_none() {
            let near = nearest(name, table.header.iter().map(String::as_str));
            let mend = match near {
                Some(near) => format!("rename the column \"{near}\" to {name}"),
                None => format!("the first row names the columns; one of them must be {name}"),
            };
            faults.add(
                "a missing column",
                || table.header_row_place(),
                format!("{} has no column named {name}", table.file),
                mend,
            );
        }
    }
    faults
}

/// Slips up to which a word may be a known one misspelt. In a word of three letters a letter
/// changed makes another word: a map is no cap.
fn slips_in(word: &str, known: &str) -> usize {
    let letters = |word: &str| {
        let mut letters: Vec<char> = word.chars().collect();
        letters.sort_unstable();
        letters
    };
    match known.len() {
        0..=3 if word.len() == known.len() && letters(word) != letters(known) => 0,
        0..=5 => 1,
        _ => 2,
    }
}

/// The known word that a misspelt one is nearest to, if it is near at all: one slip of the
/// fingers, or two in a long word.
pub(super) fn nearest<'k>(word: &str, known: impl Iterator<Item = &'k str>) -> Option<&'k str> {
    let word = word.to_lowercase();
    known
        .map(|known| {
            (
                strsim::damerau_levenshtein(&word, &known.to_lowercase()),
                known,
            )
        })
        .filter(|(slips, known)| *slips <= slips_in(&word, known))
        .min_by_key(|(slips, _)| *slips)
        .map(|(_, known)| known)
}
