//! How a table is written: what separates its cells, and which sign is its decimal point.

use super::amount;

/// What separates the cells of a table, and how its numbers are written.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Dialect {
    /// `,` `;` or tab.
    pub separator: u8,
    /// Whether a single comma in a number is its decimal point.
    pub decimal_comma: bool,
}

impl Dialect {
    /// The dialect of a table, from its header row and, where its numbers could have decimal
    /// commas, from all of its cells.
    pub(super) fn of(text: &str, key_column: &str) -> Self {
        let header = text.lines().next().unwrap_or_default();
        let separator = separator_of(header, key_column);
        let decimal_comma = separator != b',' && has_decimal_commas(text, separator);
        Self {
            separator,
            decimal_comma,
        }
    }

    /// The separator in words.
    pub(super) fn separator_name(self) -> &'static str {
        match self.separator {
            b';' => "semicolons",
            b'\t' => "tabs",
            _ => "commas",
        }
    }
}

/// The first separator that makes the key column a column of its own; a comma if none does.
fn separator_of(header: &str, key_column: &str) -> u8 {
    let has_key = |separator: &u8| {
        header.split(char::from(*separator)).any(|name| {
            name.trim()
                .trim_matches('"')
                .trim()
                .eq_ignore_ascii_case(key_column)
        })
    };
    let parts = |separator: &u8| header.matches(char::from(*separator)).count();
    let mut found: Vec<u8> = b",;\t".iter().copied().filter(has_key).collect();
    // A header of one column is a table of commas.
    found.sort_by_key(|separator| std::cmp::Reverse(parts(separator)));
    found.first().copied().unwrap_or(b',')
}

/// Whether some number of the table has a comma that can only be its decimal point, and none
/// has such a point.
fn has_decimal_commas(text: &str, separator: u8) -> bool {
    let cells = || {
        text.lines()
            .skip(1)
            .flat_map(|line| line.split(char::from(separator)))
            .map(|cell| cell.trim().trim_matches('"'))
    };
    cells().any(|cell| amount::is_surely_decimal(cell, ','))
        && !cells().any(|cell| amount::is_surely_decimal(cell, '.'))
}
