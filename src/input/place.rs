//! Where a fault stands: the second, slow look at a file.

use std::ops::Range;

/// Characters of a line that an excerpt shows on either side of its cell.
const EXCERPT_MARGIN: usize = 60;

/// Characters of a cell that an excerpt shows at the most.
const EXCERPT_CELL: usize = 80;

/// A place in a file.
#[derive(Debug, Clone, PartialEq)]
pub struct Place {
    /// The file, as it was named.
    pub file: String,
    /// Line, from 1.
    pub line: Option<usize>,
    /// Name of the column, or of the key.
    pub column: Option<String>,
    /// The line's text with the cell in it.
    pub excerpt: Option<Excerpt>,
}

/// A line of a file, cut to a readable length round the cell.
#[derive(Debug, Clone, PartialEq)]
pub struct Excerpt {
    /// The text.
    pub text: String,
    /// The cell's bytes in it.
    pub cell: Range<usize>,
}

impl Place {
    /// A whole file.
    pub fn file(file: &str) -> Self {
        Self {
            file: file.to_owned(),
            line: None,
            column: None,
            excerpt: None,
        }
    }

    /// The bytes `cell` of a file's text.
    pub fn in_text(file: &str, text: &str, cell: Range<usize>, column: Option<&str>) -> Self {
        let start = floor_boundary(text, cell.start);
        let bytes = text.as_bytes();
        let line_start = memchr::memrchr2(b'\n', b'\r', &bytes[..start]).map_or(0, |end| end + 1);
        let line_end =
            memchr::memchr2(b'\n', b'\r', &bytes[start..]).map_or(text.len(), |end| start + end);
        let end = floor_boundary(text, cell.end.min(line_end).max(start));
        let line = 1 + line_ends(&bytes[..line_start]);
        Self {
            file: file.to_owned(),
            line: Some(line),
            column: column.map(|name| name.chars().map(visible).collect()),
            excerpt: Some(Excerpt::cut(
                &text[line_start..line_end],
                start - line_start..end - line_start,
            )),
        }
    }

    /// A byte of a file that is no text: the line round it, as far as it can be read.
    pub fn in_bytes(file: &str, bytes: &[u8], at: usize) -> Self {
        let at = at.min(bytes.len());
        let from = memchr::memrchr(b'\n', &bytes[..at])
            .map_or(0, |end| end + 1)
            .max(at.saturating_sub(EXCERPT_MARGIN));
        let to = memchr::memchr(b'\n', &bytes[at..]).map_or(bytes.len(), |end| at + end);
        let before = String::from_utf8_lossy(&bytes[from..at]);
        let after = String::from_utf8_lossy(&bytes[at..to.min(at + EXCERPT_MARGIN)]);
        let width = after.chars().next().map_or(0, char::len_utf8);
        let cell = before.len()..before.len() + width;
        let line = format!("{before}{}", after.trim_end_matches('\r'));
        let cell = cell.start..cell.end.min(line.len());
        Self {
            file: file.to_owned(),
            line: Some(1 + line_ends(&bytes[..at])),
            column: None,
            excerpt: Some(Excerpt::cut(&line, cell)),
        }
    }

    /// What places are sorted by.
    pub(super) fn order(&self) -> (&str, usize, usize) {
        let within = self
            .excerpt
            .as_ref()
            .map_or(0, |excerpt| excerpt.cell.start);
        (&self.file, self.line.unwrap_or(0), within)
    }
}

impl Excerpt {
    /// The line with what is far from the cell cut away, and control characters made visible.
    fn cut(line: &str, cell: Range<usize>) -> Self {
        let before: Vec<char> = line[..cell.start]
            .chars()
            .rev()
            .take(EXCERPT_MARGIN + 1)
            .collect();
        let inside: Vec<char> = line[cell.clone()].chars().take(EXCERPT_CELL + 1).collect();
        let after: Vec<char> = line[cell.end..].chars().take(EXCERPT_MARGIN + 1).collect();
        let mut text = String::new();
        if before.len() > EXCERPT_MARGIN {
            text.push('…');
        }
        text.extend(
            before
                .iter()
                .take(EXCERPT_MARGIN)
                .rev()
                .copied()
                .map(visible),
        );
        let start = text.len();
        text.extend(inside.iter().take(EXCERPT_CELL).copied().map(visible));
        if inside.len() > EXCERPT_CELL {
            text.push('…');
        }
        let end = text.len();
        if inside.len() <= EXCERPT_CELL {
            text.extend(after.iter().take(EXCERPT_MARGIN).copied().map(visible));
            if after.len() > EXCERPT_MARGIN {
                text.push('…');
            }
        }
        // An empty cell is pointed at by the place after it.
        if start == end && end == text.len() {
            text.push(' ');
        }
        Self {
            cell: start..end.max(start + text[start..].chars().next().map_or(0, char::len_utf8)),
            text,
        }
    }
}

/// How many lines end in these bytes: with `\n`, `\r\n`, or the `\r` of old.
fn line_ends(bytes: &[u8]) -> usize {
    let newlines = memchr::memchr_iter(b'\n', bytes).count();
    let returns = memchr::memchr_iter(b'\r', bytes);
    newlines
        + returns
            .filter(|&at| bytes.get(at + 1) != Some(&b'\n'))
            .count()
}

/// A character as it can stand in an excerpt.
fn visible(character: char) -> char {
    match character {
        '\t' => ' ',
        unseen if is_unseen(unseen) => '\u{fffd}',
        other => other,
    }
}

/// A line's end or another control, an invisible space or hyphen, a mark that turns the direction
/// of writing. Joiners are left to the scripts that need them.
pub(super) fn is_unseen(character: char) -> bool {
    character.is_control()
        || matches!(
            character,
            '\u{ad}'
                | '\u{200b}'
                | '\u{2028}'..='\u{202e}'
                | '\u{2060}'
                | '\u{2066}'..='\u{2069}'
                | '\u{feff}'
        )
}

fn floor_boundary(text: &str, mut at: usize) -> usize {
    at = at.min(text.len());
    while !text.is_char_boundary(at) {
        at -= 1;
    }
    at
}

/// The bytes of cell `column` of the record that begins at `record`; an empty range at the end
/// of the record where it has fewer cells. Follows the quoting of RFC 4180.
pub(super) fn cell_of(text: &str, record: usize, column: usize, separator: u8) -> Range<usize> {
    let bytes = text.as_bytes();
    let mut at = record;
    while at < bytes.len() && matches!(bytes[at], b'\n' | b'\r') {
        at += 1;
    }
    for _ in 0..column {
        at = cell_end(bytes, at, separator);
        if bytes.get(at) != Some(&separator) {
            return at..at;
        }
        at += 1;
    }
    at..cell_end(bytes, at, separator)
}

/// Where the cell that begins at `at` ends: at a separator, a line's end or the file's end.
fn cell_end(bytes: &[u8], mut at: usize, separator: u8) -> usize {
    if bytes.get(at) == Some(&b'"') {
        at += 1;
        while at < bytes.len() {
            if bytes[at] == b'"' {
                if bytes.get(at + 1) != Some(&b'"') {
                    at += 1;
                    break;
                }
                at += 1;
            }
            at += 1;
        }
    }
    while at < bytes.len() && bytes[at] != separator && !matches!(bytes[at], b'\n' | b'\r') {
        at += 1;
    }
    at
}
