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
            let why = format!("it looks like {name} and is broken");
            return Err(no_text(Place::file(file), &why));
        }
        return Ok((text, Some(Note::reading(format!("{file}: read as {name}")))));
    }
    if let Some(zero) = memchr::memchr(0, bytes) {
        let place = Place::in_bytes(file, bytes, zero);
        return Err(no_text(place, "it holds zero bytes"));
    }
    match std::str::from_utf8(bytes) {
        Ok(text) => Ok(match text.strip_prefix('\u{feff}') {
            Some(text) => {
                let said = format!("{file}: the byte order mark before the text was passed over");
                (Cow::Borrowed(text), Some(Note::reading(said)))
            }
            None => (Cow::Borrowed(text), None),
        }),
        Err(fault) => {
            let place = || Place::in_bytes(file, bytes, fault.valid_up_to());
            if is_mostly_utf8(bytes) {
                return Err(no_text(place(), "it is UTF-8 with a broken character"));
            }
            let (text, _, _) = WINDOWS_1252.decode(bytes);
            if text.contains(is_odd_control) {
                let why = "it is neither UTF-8 nor Windows-1252";
                return Err(no_text(place(), why));
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

/// Whether a text that is not UTF-8 throughout has a mark of UTF-8 or a whole character of more
/// than one byte. In Windows-1252 such pairs are two signs that hardly ever follow each other, and
/// reading UTF-8 so would garble every name.
fn is_mostly_utf8(bytes: &[u8]) -> bool {
    bytes.starts_with(b"\xef\xbb\xbf") || bytes.utf8_chunks().any(|chunk| !chunk.valid().is_ascii())
}

fn is_odd_control(character: char) -> bool {
    character.is_control() && !matches!(character, '\n' | '\r' | '\t')
}

fn no_text(place: Place, why: &str) -> Diagnostics {
    Diagnostics::of(
        "not a text file",
        place,
        format!("this is not a text file: {why}"),
        "save it again as text in UTF-8; a table as CSV",
    )
}
