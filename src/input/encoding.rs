//! From bytes to text: UTF-8, UTF-16 and Windows-1252.

use std::borrow::Cow;

use encoding_rs::{Encoding, UTF_16BE, UTF_16LE, WINDOWS_1252};

use super::faults::Diagnostics;
use super::notes::Note;
use super::place::Place;

/// Bytes at the start of a file in which the pattern of UTF-16 is looked for.
const LOOKED_AT: usize = 4096;

/// The text of a file, and what there is to say of how it was written.
///
/// # Errors
/// A fault where the bytes are no text in any of the encodings.
pub(super) fn decode<'a>(
    file: &str,
    bytes: &'a [u8],
) -> Result<(Cow<'a, str>, Option<Note>), Diagnostics> {
    if let Some((utf16, name)) = utf16_of(bytes) {
        let (text, _, broken) = utf16.decode(bytes);
        if broken {
            return Err(no_text(
                file,
                &format!("it looks like {name} and is broken"),
            ));
        }
        return Ok((text, Some(Note::reading(format!("{file}: read as {name}")))));
    }
    if memchr::memchr(0, bytes).is_some() {
        return Err(no_text(file, "it holds zero bytes"));
    }
    match std::str::from_utf8(bytes) {
        Ok(text) => Ok((
            Cow::Borrowed(text.strip_prefix('\u{feff}').unwrap_or(text)),
            None,
        )),
        Err(_) => {
            let (text, _, _) = WINDOWS_1252.decode(bytes);
            if text.contains(is_odd_control) {
                return Err(no_text(file, "it is neither UTF-8 nor Windows-1252"));
            }
            let note = Note::reading(format!("{file}: not UTF-8, read as Windows-1252"));
            Ok((text, Some(note)))
        }
    }
}

/// UTF-16 by its byte order mark, or by a zero in every other byte.
fn utf16_of(bytes: &[u8]) -> Option<(&'static Encoding, &'static str)> {
    let start = &bytes[..bytes.len().min(LOOKED_AT) & !1];
    let zeros = |first: usize| {
        start
            .iter()
            .skip(first)
            .step_by(2)
            .filter(|&&byte| byte == 0)
            .count()
    };
    let mostly = |zeros: usize| zeros * 2 * 2 > start.len();
    let little = bytes.starts_with(&[0xff, 0xfe]) || (mostly(zeros(1)) && zeros(0) == 0);
    let big = bytes.starts_with(&[0xfe, 0xff]) || (mostly(zeros(0)) && zeros(1) == 0);
    if little {
        Some((UTF_16LE, "UTF-16 (little endian)"))
    } else if big {
        Some((UTF_16BE, "UTF-16 (big endian)"))
    } else {
        None
    }
}

fn is_odd_control(character: char) -> bool {
    character.is_control() && !matches!(character, '\n' | '\r' | '\t')
}

fn no_text(file: &str, why: &str) -> Diagnostics {
    Diagnostics::of(
        "not a text file",
        Place::file(file),
        format!("this is not a text file: {why}"),
        "save the table as CSV in UTF-8",
    )
}
