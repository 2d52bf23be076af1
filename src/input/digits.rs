//! Digits between thousands separators and round a decimal sign.

/// Which sign is the decimal point of the numbers of a table.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum DecimalSign {
    /// The point, and commas separate thousands.
    Point,
    /// The comma, and points separate thousands.
    Comma,
    /// Nothing tells: a number must tell it by itself.
    Unknown,
}

impl DecimalSign {
    fn name(self) -> &'static str {
        match self {
            Self::Comma => "comma",
            Self::Point | Self::Unknown => "point",
        }
    }
}

/// Why digits with separators are not one number.
pub(super) enum Doubt {
    NoNumber,
    /// Both readings.
    Two(String, String),
    /// Another decimal sign than the table's; the number with a point, and the table's sign.
    OtherSign(String, &'static str),
}

pub(super) const THOUSANDS: &str = "thousands separators";
pub(super) const DECIMAL_COMMA: &str = "a decimal comma";

/// Digits with a point, from digits with separators, and how they were written.
pub(super) fn digits_of(
    text: &str,
    decimal: DecimalSign,
) -> Result<(String, Option<&'static str>), Doubt> {
    let (points, commas) = (text.matches('.').count(), text.matches(',').count());
    if text.contains(is_gap) {
        return spaced_digits_of(text, decimal);
    }
    let last = if text.rfind('.') > text.rfind(',') {
        '.'
    } else {
        ','
    };
    // What separates thousands: a sign that stands several times, or the first of both.
    let separator = match (points, commas) {
        (0, 0) => None,
        (1, 0) | (0, 1) if looks_grouped(text, last) => match (decimal, last) {
            (DecimalSign::Point, '.') | (DecimalSign::Comma, ',') => None,
            _ => {
                return Err(Doubt::Two(text.replace(last, ""), text.replace(last, ".")));
            }
        },
        (1, 0) | (0, 1) => None,
        (_, 0) => Some('.'),
        (0, _) => Some(','),
        _ => Some(if last == '.' { ',' } else { '.' }),
    };
    let (whole, decimals) = match separator {
        Some(separator) if separator != last => text.rsplit_once(last).unwrap_or((text, "")),
        Some(_) => (text, ""),
        None => text.split_once(last).unwrap_or((text, "")),
    };
    let whole = match separator {
        Some(separator) if !is_grouped(whole, |character| character == separator) => {
            return Err(Doubt::NoNumber);
        }
        Some(separator) => whole.replace(separator, ""),
        None => whole.to_owned(),
    };
    let has_decimals = separator != Some(last) && points + commas > 0;
    let digits = if has_decimals {
        format!("{whole}.{decimals}")
    } else {
        whole
    };
    if !all_digits(&digits) {
        return Err(Doubt::NoNumber);
    }
    let signs_are_mixed = match decimal {
        DecimalSign::Point => separator == Some('.') || has_decimals && last == ',',
        DecimalSign::Comma => {
            separator == Some(',') || has_decimals && last == '.' && separator.is_some()
        }
        DecimalSign::Unknown => false,
    };
    if signs_are_mixed {
        return Err(Doubt::OtherSign(digits, decimal.name()));
    }
    let written = match separator {
        Some(_) => Some(THOUSANDS),
        None if has_decimals && last == ',' => Some(DECIMAL_COMMA),
        None => None,
    };
    Ok((digits, written))
}

/// `24 000 000,50`, `24'000.5`: after the first group all have three digits, and the last may
/// have decimals.
fn spaced_digits_of(
    text: &str,
    decimal: DecimalSign,
) -> Result<(String, Option<&'static str>), Doubt> {
    let (whole, decimals) = text.split_once(['.', ',']).unwrap_or((text, ""));
    let digits = match decimals {
        "" => whole.replace(is_gap, ""),
        decimals => format!("{}.{decimals}", whole.replace(is_gap, "")),
    };
    if !is_grouped(whole, is_gap) || !all_digits(&digits) {
        return Err(Doubt::NoNumber);
    }
    if decimal == DecimalSign::Point && text.contains(',') {
        return Err(Doubt::OtherSign(digits, decimal.name()));
    }
    Ok((digits, Some(THOUSANDS)))
}

/// A sign between groups of digits that is neither point nor comma.
fn is_gap(character: char) -> bool {
    is_space(character) || matches!(character, '\'' | '’')
}

/// Whether these are groups of three digits behind a first of one to three.
fn is_grouped(whole: &str, separates: impl Fn(char) -> bool) -> bool {
    let mut groups = whole.split(separates);
    let first = groups.next().unwrap_or_default();
    (1..=3).contains(&first.len()) && groups.all(|group| group.len() == 3)
}

/// Digits, with at most one point between them.
fn all_digits(text: &str) -> bool {
    text.bytes().any(|byte| byte.is_ascii_digit())
        && text
            .bytes()
            .all(|byte| byte.is_ascii_digit() || byte == b'.')
        && text.matches('.').count() <= 1
}

/// Which decimal sign a cell gives away: of two signs the last, of a repeated one the other, of
/// a single one itself where it cannot separate thousands.
pub(super) fn decimal_sign_of(cell: &str) -> DecimalSign {
    let (points, commas) = (cell.matches('.').count(), cell.matches(',').count());
    let is_number = points + commas > 0
        && cell.bytes().any(|byte| byte.is_ascii_digit())
        && cell
            .trim_start_matches(['-', '+', '−'])
            .bytes()
            .all(|byte| byte.is_ascii_digit() || matches!(byte, b'.' | b','));
    if !is_number {
        return DecimalSign::Unknown;
    }
    match (points, commas) {
        (1, 0) if !looks_grouped(cell, '.') => DecimalSign::Point,
        (0, 1) if !looks_grouped(cell, ',') => DecimalSign::Comma,
        (0 | 1, 0) | (0, 1) => DecimalSign::Unknown,
        (0, _) => DecimalSign::Point,
        (_, 0) => DecimalSign::Comma,
        _ if cell.rfind('.') > cell.rfind(',') => DecimalSign::Point,
        _ => DecimalSign::Comma,
    }
}

/// `1.234`: one to three digits that do not begin with zero, the sign, three digits.
pub(super) fn looks_grouped(text: &str, sign: char) -> bool {
    let text = text.trim_start_matches(['-', '+', '−']);
    let Some((whole, group)) = text.split_once(sign) else {
        return false;
    };
    let digits = |text: &str| text.bytes().all(|byte| byte.is_ascii_digit());
    (1..=3).contains(&whole.len())
        && !whole.starts_with('0')
        && group.len() == 3
        && digits(whole)
        && digits(group)
}

pub(super) fn is_space(character: char) -> bool {
    character.is_whitespace() || matches!(character, '\u{feff}' | '\u{200b}')
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn cells_give_their_decimal_sign_away() {
        for (cell, decimal) in [
            ("1,5", DecimalSign::Comma),
            ("0,123", DecimalSign::Comma),
            ("24.000.000", DecimalSign::Comma),
            ("1.234,5", DecimalSign::Comma),
            ("1.5", DecimalSign::Point),
            ("1,234,567", DecimalSign::Point),
            ("1,234.5", DecimalSign::Point),
            ("1,234", DecimalSign::Unknown),
            ("1.234", DecimalSign::Unknown),
            ("1234", DecimalSign::Unknown),
            ("wall, 1.5", DecimalSign::Unknown),
        ] {
            assert_eq!(decimal_sign_of(cell), decimal, "{cell}");
        }
    }
}
