//! What was read leniently, and what looks odd: said, never silent.

use std::collections::BTreeMap;

use super::amount::Amount;
use super::currency::Currencies;

/// What a note is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum NoteKind {
    /// Something was written unusually, and how it was read.
    Reading,
    /// Something is allowed and looks wrong.
    Warning,
}

/// One thing to say about the files.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Note {
    /// What it is.
    pub kind: NoteKind,
    /// In words.
    pub text: String,
}

impl Note {
    pub(super) fn reading(text: impl Into<String>) -> Self {
        Self {
            kind: NoteKind::Reading,
            text: text.into(),
        }
    }

    pub(super) fn warning(text: impl Into<String>) -> Self {
        Self {
            kind: NoteKind::Warning,
            text: text.into(),
        }
    }
}

impl Note {
    /// Says that rows with nothing in them were passed over.
    pub(super) fn of_empty_rows(file: &str, rows: usize) -> Option<Self> {
        let words = match rows {
            0 => return None,
            1 => "1 row with nothing in it was".to_owned(),
            rows => format!("{rows} rows with nothing in them were"),
        };
        Some(Self::reading(format!("{file}: {words} passed over")))
    }
}

/// Lenient readings of one file's cells, counted by how they were written.
#[derive(Debug, Default)]
pub(super) struct Readings {
    counts: BTreeMap<&'static str, (usize, String)>,
    pub currencies: Currencies,
}

impl Readings {
    /// Counts a cell that was read as `how` says; the first is kept as the example.
    pub(super) fn count(&mut self, how: &'static str, cell: &str) {
        let entry = self.counts.entry(how);
        entry.or_insert_with(|| (0, cell.to_owned())).0 += 1;
    }

    /// Counts an amount that was not written plainly.
    pub(super) fn count_amount(&mut self, amount: &Amount, cell: &str) {
        if let Some(how) = amount.written {
            self.count(how, cell.trim());
        }
        self.currencies.add(amount.currency);
    }

    /// Adds the readings of a later part.
    pub(super) fn append(&mut self, later: Self) {
        for (how, (count, example)) in later.counts {
            self.counts.entry(how).or_insert((0, example)).0 += count;
        }
        self.currencies.append(&later.currencies);
    }

    /// `activities.csv: read thousands separators in 12 cells, such as "24,000,000"`.
    pub(super) fn notes(self, file: &str) -> impl Iterator<Item = Note> {
        let file = file.to_owned();
        self.counts.into_iter().map(move |(how, (count, example))| {
            let cells = if count == 1 { "cell" } else { "cells" };
            Note::reading(format!(
                "{file}: read {how} in {count} {cells}, such as \"{example}\""
            ))
        })
    }
}
