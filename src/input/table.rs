//! A table whose records remember where they stand.

use std::borrow::Cow;
use std::ops::Range;

use csv::{ByteRecord, ReaderBuilder};

use super::dialect::Dialect;
use super::digits::DecimalSign;
use super::encoding::decode;
use super::faults::{Diagnostics, Spot};
use super::names::is_unprintable;
use super::notes::Note;
use super::place::{Place, cell_of};
use super::soundness::{check_lines, check_quotes};

/// Bytes of text that one part of a parallel reading holds at the least.
const PART: usize = 1 << 20;

/// The text of a table, its dialect and its header.
pub(super) struct Table<'a> {
    /// The file, as it was named.
    pub file: String,
    /// All of its text, without a byte order mark.
    pub text: Cow<'a, str>,
    /// How it is written.
    pub dialect: Dialect,
    /// The names of its columns: trimmed, in small letters, spaces as underscores.
    pub header: Vec<String>,
    /// What there is to say of how it was read.
    pub notes: Vec<Note>,
    /// Where the rows begin.
    body: usize,
    /// Where the header begins.
    head: usize,
}

impl<'a> Table<'a> {
    /// Decodes a table and reads its header; `key_column` is one that it must have.
    ///
    /// # Errors
    /// Faults of the file as a whole: no text, no rows, a line without end, an open quote, a
    /// column without a name or with another's.
    pub(super) fn open(file: &str, bytes: &'a [u8], key_column: &str) -> Result<Self, Diagnostics> {
        let (text, decoded) = decode(file, bytes)?;
        let mut notes: Vec<Note> = decoded.into_iter().collect();
        if text.trim().is_empty() {
            return Err(Diagnostics::of(
                "an empty file",
                Place::file(file),
                format!("{file} is empty"),
                format!("the first row names the columns; \"{key_column}\" is one of them"),
            ));
        }
        check_lines(
            file,
            &text,
            "table",
            "save the table as CSV, one row a line",
        )?;
        let head = after_separator_line(&text);
        if head > 0 {
            let said = format!(
                "{file}: the line \"{}\" was passed over",
                text[..head].trim()
            );
            notes.push(Note::reading(said));
        }
        let dialect = Dialect::of(&text[head..], key_column);
        check_quotes(file, &text, dialect.separator)?;
        if dialect.separator != b',' {
            let mut said = format!(
                "{file}: cells are separated by {}",
                dialect.separator_name()
            );
            if dialect.decimal == DecimalSign::Comma {
                said.push_str(", and a comma is the decimal point");
            }
            notes.push(Note::reading(said));
        }
        let mut table = Self {
            file: file.to_owned(),
            text,
            dialect,
            header: Vec::new(),
            notes,
            body: 0,
            head,
        };
        table.read_header()?;
        Ok(table)
    }

    /// Reads the first record as the names of the columns.
    fn read_header(&mut self) -> Result<(), Diagnostics> {
        let mut first = None;
        let whole = self.head..self.text.len();
        self.records(whole, |record, start, end| {
            first = Some((record.clone(), start, end));
            false
        })?;
        let Some((record, start, end)) = first else {
            return Ok(());
        };
        let mut faults = Diagnostics::default();
        let mut header: Vec<String> = Vec::with_capacity(record.len());
        let mut renamed = 0;
        for (column, cell) in record.iter().enumerate() {
            let written = String::from_utf8_lossy(cell);
            let name = written
                .split(|character: char| character.is_whitespace() || character == '\u{feff}')
                .filter(|word| !word.is_empty())
                .collect::<Vec<_>>()
                .join("_")
                .to_lowercase();
            renamed += usize::from(name != written);
            let place = || self.place(start, column, Some(&name));
            if name.is_empty() {
                faults.add(
                    "a column without a name",
                    || self.place(start, column, Some("no name")),
                    format!("column {} has no name", column + 1),
                    "name it, or delete the column",
                );
            } else if is_unprintable(&name) {
                faults.add(
                    "a column that cannot be seen whole",
                    place,
                    "the name of this column has an invisible character in it",
                    "write it anew, of characters that can be seen",
                );
            } else if let Some(earlier) = header.iter().position(|known| *known == name) {
                faults.add(
                    "a column twice",
                    place,
                    format!(
                        "the columns {} and {} are both named \"{name}\"",
                        earlier + 1,
                        column + 1
                    ),
                    "rename or delete one of them",
                );
            }
            header.push(name);
        }
        if !faults.is_empty() {
            return Err(faults);
        }
        if renamed > 0 {
            self.notes.push(Note::reading(format!(
                "{}: column names are read in small letters with underscores: {}",
                self.file,
                header.join(", ")
            )));
        }
        self.header = header;
        (self.head, self.body) = (start, end);
        Ok(())
    }

    /// The rows' text in parts that begin with a record, so that they can be read side by side.
    /// A text with quotes is one part, since a quoted cell may hold a line's end.
    pub(super) fn parts(&self) -> Vec<Range<usize>> {
        let bytes = self.text.as_bytes();
        if memchr::memchr(b'"', bytes).is_some() {
            return std::iter::once(self.body..bytes.len()).collect();
        }
        let mut parts = Vec::new();
        let mut start = self.body;
        while start < bytes.len() {
            let soonest = (start + PART).min(bytes.len());
            let end = memchr::memchr(b'\n', &bytes[soonest..])
                .map_or(bytes.len(), |newline| soonest + newline + 1);
            parts.push(start..end);
            start = end;
        }
        parts
    }

    /// Reads the records of a part in turn, each with the bytes where it begins and ends, until
    /// `each` says false. Rows with nothing in them are passed over, and their number is returned;
    /// a line without any character is no row.
    pub(super) fn records(
        &self,
        part: Range<usize>,
        mut each: impl FnMut(&ByteRecord, usize, usize) -> bool,
    ) -> Result<usize, Diagnostics> {
        let mut reader = ReaderBuilder::new()
            .has_headers(false)
            .flexible(true)
            .delimiter(self.dialect.separator)
            .from_reader(&self.text.as_bytes()[part.clone()]);
        let mut record = ByteRecord::new();
        let mut empty_rows = 0;
        loop {
            let start = part.start + reader.position().byte() as usize;
            match reader.read_byte_record(&mut record) {
                Ok(true) => {}
                Ok(false) => return Ok(empty_rows),
                Err(fault) => {
                    return Err(Diagnostics::of(
                        "an unreadable row",
                        self.place(start, 0, None),
                        fault.to_string(),
                        "save the table as CSV in UTF-8",
                    ));
                }
            }
            let end = part.start + reader.position().byte() as usize;
            let blank = record.as_slice().iter().all(u8::is_ascii_whitespace);
            if blank {
                empty_rows += 1;
            } else if !each(&record, start, end) {
                return Ok(empty_rows);
            }
        }
    }

    /// The place of a cell of the record that begins at byte `start`.
    pub(super) fn place(&self, start: usize, column: usize, name: Option<&str>) -> Place {
        let cell = cell_of(&self.text, start, column, self.dialect.separator);
        Place::in_text(&self.file, &self.text, cell, name)
    }

    /// The place of a fault that was found in a part.
    pub(super) fn place_of(&self, spot: Spot) -> Place {
        match spot.column {
            Some(column) => {
                let name = self.header.get(column).map(String::as_str);
                self.place(spot.start, column, name)
            }
            None => self.row_place(spot.start),
        }
    }

    /// The place of a whole record.
    pub(super) fn row_place(&self, start: usize) -> Place {
        let first = cell_of(&self.text, start, 0, self.dialect.separator).start;
        let line = memchr::memchr2(b'\n', b'\r', &self.text.as_bytes()[first..]);
        let end = line.map_or(self.text.len(), |length| first + length);
        Place::in_text(&self.file, &self.text, first..end, Some("this row"))
    }

    /// The place of a column's name.
    pub(super) fn header_place(&self, column: usize) -> Place {
        self.place_of(Spot {
            start: self.head,
            column: Some(column),
        })
    }

    /// The place of the whole header.
    pub(super) fn header_row_place(&self) -> Place {
        self.row_place(self.head)
    }

    /// Which column a name stands for.
    pub(super) fn column(&self, name: &str) -> Option<usize> {
        self.header.iter().position(|known| known == name)
    }
}

/// Where the table begins behind a line such as `sep=;`, which some workbooks put before it. The
/// header shows the separator by itself.
fn after_separator_line(text: &str) -> usize {
    let end = memchr::memchr2(b'\n', b'\r', text.as_bytes()).unwrap_or(text.len());
    match text[..end].trim_matches('"').strip_prefix("sep=") {
        Some(separator) if separator.chars().count() == 1 => end,
        _ => 0,
    }
}
