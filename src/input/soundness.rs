//! Faults of a text as a whole, found before any cell of it: a line without end, and quotes that
//! leave in doubt where a cell ends.

use super::faults::Diagnostics;
use super::place::Place;

/// Bytes of a line beyond which this is no file of a person's making.
const LONGEST_LINE: usize = 1 << 20;

/// Refuses a line that goes on and on, before anything of it is kept; `kind` is what the file
/// should be.
pub(super) fn check_lines(
    file: &str,
    text: &str,
    kind: &str,
    mend: &str,
) -> Result<(), Diagnostics> {
    let bytes = text.as_bytes();
    let mut line = 0;
    while bytes.len() - line > LONGEST_LINE {
        match memchr::memrchr2(b'\n', b'\r', &bytes[line..line + LONGEST_LINE]) {
            Some(end) => line += end + 1,
            None => {
                let megabytes = LONGEST_LINE >> 20;
                return Err(Diagnostics::of(
                    "a line without end",
                    Place::in_text(file, text, line..line + 1, None),
                    format!("this line is longer than {megabytes} MB, so this is no {kind}"),
                    mend,
                ));
            }
        }
    }
    Ok(())
}

/// Refuses a quote that is never closed, and text behind a closed one or a space before an open
/// one: what a cell holds would be a guess.
pub(super) fn check_quotes(file: &str, text: &str, separator: u8) -> Result<(), Diagnostics> {
    let bytes = text.as_bytes();
    let ends_cell = |byte: u8| byte == separator || matches!(byte, b'\n' | b'\r');
    let mut at = 0;
    while let Some(found) = memchr::memchr(b'"', &bytes[at..]) {
        let open = at + found;
        let cell = bytes[..open]
            .iter()
            .rposition(|&byte| byte != b' ')
            .map_or(0, |before| before + 1);
        if cell > 0 && !ends_cell(bytes[cell - 1]) {
            at = open + 1;
            continue;
        }
        if cell < open {
            return Err(Diagnostics::of(
                "a space before a quote",
                Place::in_text(file, text, cell..open + 1, None),
                "there is a space before the opening quote of this cell",
                "delete the space, or double the quotes and put the whole cell in quotes",
            ));
        }
        let mut close = open + 1;
        loop {
            match memchr::memchr(b'"', &bytes[close..]) {
                None => {
                    return Err(Diagnostics::of(
                        "an open quote",
                        Place::in_text(file, text, open..open + 1, None),
                        "this quote is never closed",
                        "close it, or delete it",
                    ));
                }
                Some(next) if bytes.get(close + next + 1) == Some(&b'"') => close += next + 2,
                Some(next) => {
                    close += next;
                    break;
                }
            }
        }
        if bytes.get(close + 1).is_some_and(|&after| !ends_cell(after)) {
            return Err(Diagnostics::of(
                "text behind a quote",
                Place::in_text(file, text, open..close + 2, None),
                "there is text behind the closing quote of this cell",
                "put the whole cell in quotes and double the quotes inside it",
            ));
        }
        at = close + 1;
    }
    Ok(())
}
