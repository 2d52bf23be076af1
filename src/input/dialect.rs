//! How a table is written: what separates its cells, and which sign is its decimal point.

use super::digits::{DecimalSign, decimal_sign_of};

/// What separates the cells of a table, and how its numbers are written.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Dialect {
    /// `,` `;` or tab.
    pub separator: u8,
    /// The decimal sign of its numbers. Where commas separate cells it is the point.
    pub decimal: DecimalSign,
}

impl Dialect {
    /// The dialect of a table, from its header row and, where its numbers could have decimal
    /// commas, from all of its cells.
    pub(super) fn of(text: &str, key_column: &str) -> Self {
        let header = text
            .split(['\n', '\r'])
            .find(|line| !line.trim().is_empty())
            .unwrap_or_default();
        let separator = separator_of(header, key_column);
        let decimal = if separator == b',' {
            DecimalSign::Point
        } else {
            decimal_sign(text, separator)
        };
        Self { separator, decimal }
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

/// The decimal sign that the cells agree on.
fn decimal_sign(text: &str, separator: u8) -> DecimalSign {
    let (mut points, mut commas) = (false, false);
    let cells = text.split(['\n', '\r', char::from(separator)]);
    for cell in cells {
        match decimal_sign_of(cell.trim().trim_matches('"')) {
            DecimalSign::Point => points = true,
            DecimalSign::Comma => commas = true,
            DecimalSign::Unknown => {}
        }
    }
    match (points, commas) {
        (true, false) => DecimalSign::Point,
        (false, true) => DecimalSign::Comma,
        _ => DecimalSign::Unknown,
    }
}
