//! Lines and columns of a terminal: display width, wrapping, aligned tables.

use unicode_width::UnicodeWidthStr;

/// Least width of a table's first column before the table becomes wider than asked.
const LEAST_NAME_WIDTH: usize = 10;

/// Space between two columns.
const GAP: usize = 2;

/// `text` in lines of at most `width` columns, the first after `first` columns that are taken,
/// the others after `indent` spaces. A word longer than a line stands whole.
pub fn wrapped(text: &str, width: usize, first: usize, indent: usize) -> String {
    let mut out = String::with_capacity(text.len() + 16);
    let mut column = first;
    let mut at_start = true;
    for word in text.split(' ').filter(|word| !word.is_empty()) {
        let wide = word.width();
        if !at_start && column + 1 + wide > width {
            out.push('\n');
            out.push_str(&" ".repeat(indent));
            column = indent;
        } else if !at_start {
            out.push(' ');
            column += 1;
        }
        out.push_str(word);
        column += wide;
        at_start = false;
    }
    out
}

/// On which side of its column a cell stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Side {
    Left,
    Right,
}

/// A table whose first column holds names and gives way where room is short.
#[derive(Debug)]
pub(super) struct Table {
    columns: Vec<(String, Side)>,
    lines: Vec<Line>,
}

/// One line of a table's body.
#[derive(Debug)]
enum Line {
    Cells(Vec<String>),
    /// Words that run across the columns.
    Across(String),
    Rule,
}

impl Table {
    pub(super) fn new(columns: &[(&str, Side)]) -> Self {
        Self {
            columns: columns
                .iter()
                .map(|(name, side)| ((*name).to_owned(), *side))
                .collect(),
            lines: vec![Line::Rule],
        }
    }

    pub(super) fn row(&mut self, cells: Vec<String>) {
        self.lines.push(Line::Cells(cells));
    }

    /// A rule before the next row.
    pub(super) fn rule(&mut self) {
        self.lines.push(Line::Rule);
    }

    /// Words about the row above, across the columns.
    pub(super) fn line_below(&mut self, words: String) {
        self.lines.push(Line::Across(words));
    }

    /// The table's lines, indented by `indent`.
    pub(super) fn render(&self, width: usize, indent: usize) -> String {
        let mut widths: Vec<usize> = self.columns.iter().map(|(name, _)| name.width()).collect();
        for line in &self.lines {
            let Line::Cells(cells) = line else { continue };
            for (widest, cell) in widths.iter_mut().zip(cells) {
                *widest = (*widest).max(cell.width());
            }
        }
        let others: usize = widths.iter().skip(1).map(|width| width + GAP).sum();
        if let Some(names) = widths.first_mut() {
            let room = width.saturating_sub(others + indent);
            *names = (*names).min(room.max(LEAST_NAME_WIDTH));
        }
        let whole = widths.iter().sum::<usize>() + GAP * widths.len().saturating_sub(1);
        let mut out = String::new();
        let header: Vec<String> = self.columns.iter().map(|(name, _)| name.clone()).collect();
        self.push_row(&mut out, &header, &widths, indent);
        let margin = " ".repeat(indent);
        for line in &self.lines {
            match line {
                Line::Cells(cells) => self.push_row(&mut out, cells, &widths, indent),
                Line::Rule => out.push_str(&format!("{margin}{}\n", "─".repeat(whole))),
                Line::Across(words) => {
                    let start = indent + GAP;
                    let words = wrapped(words, width, start, start);
                    out.push_str(&format!("{}{words}\n", " ".repeat(start)));
                }
            }
        }
        out
    }

    fn push_row(&self, out: &mut String, cells: &[String], widths: &[usize], indent: usize) {
        let names = cells.first().map(String::as_str).unwrap_or_default();
        let name_width = widths.first().copied().unwrap_or_default();
        let pieces = pieces(names, name_width);
        let (last, before) = match pieces.split_last() {
            Some((last, before)) => (last.as_str(), before),
            None => ("", &[][..]),
        };
        for piece in before {
            out.push_str(&" ".repeat(indent));
            out.push_str(piece);
            out.push('\n');
        }
        let mut line = " ".repeat(indent);
        let shown = std::iter::once(last).chain(cells.iter().skip(1).map(String::as_str));
        for (column, (cell, width)) in shown.zip(widths).enumerate() {
            let gap = if column == 0 { 0 } else { GAP };
            let space = " ".repeat(width.saturating_sub(cell.width()));
            line.push_str(&" ".repeat(gap));
            match self.columns[column].1 {
                Side::Left => line.extend([cell, &space]),
                Side::Right => line.extend([&space, cell]),
            }
        }
        out.push_str(line.trim_end());
        out.push('\n');
    }
}

/// A name in pieces that fit a column, broken between words, and within a word that is itself
/// too long.
fn pieces(name: &str, width: usize) -> Vec<String> {
    const CONTINUED: &str = "  ";
    let mut pieces = Vec::new();
    for line in wrapped(name, width, 0, CONTINUED.len()).split('\n') {
        let mut piece = String::new();
        for letter in line.chars() {
            let mut encoded = [0; 4];
            let letter: &str = letter.encode_utf8(&mut encoded);
            if piece.width() + letter.width() > width {
                pieces.push(std::mem::replace(&mut piece, CONTINUED.to_owned()));
            }
            piece.push_str(letter);
        }
        pieces.push(piece);
    }
    pieces
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn wide_characters_are_counted_by_the_columns_they_take() {
        let mut table = Table::new(&[("name", Side::Left), ("n", Side::Right)]);
        table.row(vec!["堤防".to_owned(), "1".to_owned()]);
        table.row(vec!["Café".to_owned(), "12".to_owned()]);
        assert_eq!(
            table.render(80, 0),
            "name   n\n────────\n堤防   1\nCafé  12\n"
        );
    }

    #[test]
    fn long_names_give_way_to_the_numbers() {
        let mut table = Table::new(&[("name", Side::Left), ("n", Side::Right)]);
        table.row(vec![
            "Neighbourhood watch of the river".to_owned(),
            "12".to_owned(),
        ]);
        for line in table.render(18, 0).lines() {
            assert!(line.width() <= 18, "{line:?}");
        }
    }

    #[test]
    fn text_wraps_between_words_with_a_hanging_indent() {
        assert_eq!(wrapped("one two three", 8, 0, 2), "one two\n  three");
        assert_eq!(wrapped("one", 2, 0, 2), "one");
    }
}
