//! What was read leniently, and what looks odd: said, never silent.

use std::collections::BTreeMap;

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

/// Lenient readings of one file's cells, counted by how they were written.
#[derive(Debug, Default)]
pub(super) struct Readings(BTreeMap<&'static str, (usize, String)>);

impl Readings {
    /// Counts a cell that was read as `how` says; the first is kept as the example.
    pub(super) fn count(&mut self, how: &'static str, cell: &str) {
        let entry = self.0.entry(how).or_insert_with(|| (0, cell.to_owned()));
        entry.0 += 1;
    }

    /// `activities.csv: read thousands separators in 12 cells, such as "24,000,000"`.
    pub(super) fn notes(self, file: &str) -> impl Iterator<Item = Note> {
        let file = file.to_owned();
        self.0.into_iter().map(move |(how, (count, example))| {
            let cells = if count == 1 { "cell" } else { "cells" };
            Note::reading(format!(
                "{file}: read {how} in {count} {cells}, such as \"{example}\""
            ))
        })
    }
}
