//! Numbers as people write them.

/// How a number was written, if not plainly.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Amount {
    /// The number; finite.
    pub value: f64,
    /// How it was written, in words for a note; `None` for a plain number.
    pub written: Option<&'static str>,
}

/// Why a text is not a number without doubt.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum AmountFault {
    /// No number at all.
    #[error("\"{0}\" is not a number")]
    NotANumber(String),
    /// It could mean two numbers.
    #[error("\"{text}\" could mean {one} or {other}")]
    Ambiguous {
        /// What stands there.
        text: String,
        /// With the sign as a thousands separator.
        one: String,
        /// With the sign as a decimal point.
        other: String,
    },
    /// A share, where an amount belongs.
    #[error("\"{0}\" is a percentage, and an amount is needed")]
    Percent(String),
    /// NaN, an infinity, or beyond the range of numbers.
    #[error("\"{0}\" is not a finite number")]
    NotFinite(String),
}

impl AmountFault {
    /// What would mend it, in words.
    pub fn mend(&self) -> String {
        match self {
            Self::NotANumber(_) => "write plain digits, such as 24000000 or 0.75".to_owned(),
            Self::Ambiguous { one, other, .. } => format!("write {one} or {other}"),
            Self::Percent(_) => "write the amount itself, in the unit of the column".to_owned(),
            Self::NotFinite(_) => "write a finite number, or leave the cell blank".to_owned(),
        }
    }
}

/// An amount of the command line or of a plan file: digits with a point, with thousands
/// separators that leave no doubt, a currency, a sign or accounting brackets.
///
/// # Errors
/// [`AmountFault`] where the text is no number, or could be two.
pub fn parse_amount(text: &str) -> Result<Amount, AmountFault> {
    parse(text, false)
}

/// Currency signs, and the codes of ISO 4217 that are read beside a number.
const SIGNS: [char; 9] = ['€', '$', '£', '¥', '₹', '₩', '₺', '₽', '¢'];
const CODES: [&str; 24] = [
    "EUR", "USD", "GBP", "CHF", "JPY", "CNY", "INR", "AUD", "CAD", "NZD", "SEK", "NOK", "DKK",
    "PLN", "CZK", "HUF", "RON", "TRY", "ZAR", "BRL", "MXN", "KRW", "SGD", "HKD",
];

/// An amount in a table whose single commas are decimal points if `decimal_comma` says so.
pub(super) fn parse(text: &str, decimal_comma: bool) -> Result<Amount, AmountFault> {
    let trimmed = text.trim_matches(is_space);
    if let Some(value) = plain(trimmed).filter(|_| !(decimal_comma && looks_grouped(trimmed, '.')))
    {
        return Ok(Amount {
            value,
            written: None,
        });
    }
    let fault = || AmountFault::NotANumber(trimmed.to_owned());
    if trimmed.ends_with('%') {
        return Err(AmountFault::Percent(trimmed.to_owned()));
    }
    if is_not_finite(trimmed) {
        return Err(AmountFault::NotFinite(trimmed.to_owned()));
    }
    let mut written = None;
    let mut rest = trimmed;
    let mut negative = false;
    if let Some(inside) = rest
        .strip_prefix('(')
        .and_then(|rest| rest.strip_suffix(')'))
    {
        (rest, negative, written) = (
            inside.trim_matches(is_space),
            true,
            Some("accounting brackets"),
        );
    }
    let (unsigned, first_sign) = without_sign(rest);
    let (bare, currency) = without_currency(unsigned);
    let (bare, second_sign) = without_sign(bare);
    if [negative, first_sign.is_some(), second_sign.is_some()]
        .iter()
        .filter(|&&sign| sign)
        .count()
        > 1
    {
        return Err(fault());
    }
    negative |= first_sign == Some(true) || second_sign == Some(true);
    if currency {
        written = Some("a currency beside the number");
    }
    let (digits, grouping) = digits_of(bare, decimal_comma).map_err(|sides| match sides {
        None => fault(),
        Some([one, other]) => AmountFault::Ambiguous {
            text: trimmed.to_owned(),
            one,
            other,
        },
    })?;
    let value = plain(&digits).ok_or_else(|| {
        if digits.parse::<f64>().is_ok() {
            AmountFault::NotFinite(trimmed.to_owned())
        } else {
            fault()
        }
    })?;
    Ok(Amount {
        value: if negative { -value } else { value },
        written: grouping
            .or(written)
            .or(Some("a sign written apart from the number")),
    })
}

/// A number as a programme writes it.
#[inline]
pub(super) fn plain(text: &str) -> Option<f64> {
    fast_float2::parse::<f64, _>(text)
        .ok()
        .filter(|value| value.is_finite())
}

/// Whether this sign stands in a number where it can only be the decimal point: once, and not
/// before exactly three digits that one to three others precede.
pub(super) fn is_surely_decimal(cell: &str, sign: char) -> bool {
    let cell = cell.trim_start_matches(['-', '+', '−']);
    let Some((whole, decimals)) = cell.split_once(sign) else {
        return false;
    };
    let digits = |text: &str| !text.is_empty() && text.bytes().all(|byte| byte.is_ascii_digit());
    digits(whole) && digits(decimals) && !looks_grouped(cell, sign)
}

/// `1.234`: one to three digits that do not begin with zero, the sign, three digits.
fn looks_grouped(text: &str, sign: char) -> bool {
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

fn is_space(character: char) -> bool {
    character.is_whitespace() || matches!(character, '\u{feff}' | '\u{200b}')
}

fn is_not_finite(text: &str) -> bool {
    let word = text
        .trim_start_matches(['-', '+', '−'])
        .to_ascii_lowercase();
    matches!(
        word.as_str(),
        "nan" | "inf" | "infinity" | "∞" | "#n/a" | "n/a" | "na" | "#div/0!" | "#value!"
    ) || plain(text).is_none() && fast_float2::parse::<f64, _>(text).is_ok()
}

/// The text without its sign, and whether that was a minus.
fn without_sign(text: &str) -> (&str, Option<bool>) {
    for (sign, negative) in [("-", true), ("−", true), ("–", true), ("+", false)] {
        if let Some(rest) = text.strip_prefix(sign) {
            return (rest.trim_start_matches(is_space), Some(negative));
        }
    }
    (text, None)
}

/// The text without a currency before or after it, and whether there was one.
fn without_currency(text: &str) -> (&str, bool) {
    let known = || {
        CODES
            .iter()
            .copied()
            .map(str::to_owned)
            .chain(SIGNS.iter().map(char::to_string))
    };
    for currency in known() {
        let rest = text
            .strip_prefix(currency.as_str())
            .or_else(|| text.strip_suffix(currency.as_str()));
        if let Some(rest) = rest {
            return (rest.trim_matches(is_space), true);
        }
    }
    (text, false)
}

/// Digits with a point, from digits with separators, and how they were written.
///
/// # Errors
/// `None` where this is no number, both readings where it could be two.
fn digits_of(
    text: &str,
    decimal_comma: bool,
) -> Result<(String, Option<&'static str>), Option<[String; 2]>> {
    let spaced = text.contains(is_space) || text.contains(['\'', '’']);
    let mut groups = text.split(|character| is_space(character) || matches!(character, '\'' | '’'));
    if spaced {
        // 24 000 000,50: every group after the first has three digits, the last may go on.
        let first = groups.next().unwrap_or_default();
        let rest: Vec<&str> = groups.collect();
        let last = rest.len() - 1;
        let three =
            |group: &str| group.len() == 3 && group.bytes().all(|byte| byte.is_ascii_digit());
        let whole = |(i, group): (usize, &&str)| {
            let end = group
                .find(['.', ','])
                .filter(|_| i == last)
                .unwrap_or(group.len());
            three(&group[..end])
        };
        if !(1..=3).contains(&first.len()) || !rest.iter().enumerate().all(whole) {
            return Err(None);
        }
        let joined = format!("{first}{}", rest.concat()).replace(',', ".");
        return all_digits(&joined, 1)
            .then_some((joined, Some("thousands separators")))
            .ok_or(None);
    }
    let (points, commas) = (text.matches('.').count(), text.matches(',').count());
    let ambiguous = |sign: char| Err(Some([text.replace(sign, ""), text.replace(sign, ".")]));
    let grouped = |sign: char| {
        let mut groups = text.split(sign);
        let first = groups.next().unwrap_or_default();
        (1..=3).contains(&first.len()) && groups.all(|group| group.len() == 3)
    };
    match (points, commas) {
        (0, 0) => all_digits(text, 0)
            .then(|| (text.to_owned(), None))
            .ok_or(None),
        (1, 0) if decimal_comma && looks_grouped(text, '.') => ambiguous('.'),
        (1, 0) => all_digits(text, 1)
            .then(|| (text.to_owned(), None))
            .ok_or(None),
        (0, 1) if looks_grouped(text, ',') && !decimal_comma => ambiguous(','),
        (0, 1) => {
            let digits = text.replace(',', ".");
            all_digits(&digits, 1)
                .then_some((digits, Some("a decimal comma")))
                .ok_or(None)
        }
        (0, _) | (_, 0) => {
            let sign = if points == 0 { ',' } else { '.' };
            let digits = text.replace(sign, "");
            (grouped(sign) && all_digits(&digits, 0))
                .then_some((digits, Some("thousands separators")))
                .ok_or(None)
        }
        _ => {
            // Both signs: the one that comes last, once, is the decimal point.
            let decimal = if text.rfind('.') > text.rfind(',') {
                '.'
            } else {
                ','
            };
            let separator = if decimal == '.' { ',' } else { '.' };
            let Some((whole, decimals)) = text.rsplit_once(decimal) else {
                return Err(None);
            };
            let mut groups = whole.split(separator);
            let first = groups.next().unwrap_or_default();
            let well_formed =
                (1..=3).contains(&first.len()) && groups.all(|group| group.len() == 3);
            let digits = format!("{}.{decimals}", whole.replace(separator, ""));
            (well_formed && all_digits(&digits, 1))
                .then_some((digits, Some("thousands separators")))
                .ok_or(None)
        }
    }
}

/// Digits, with at most so many points between them.
fn all_digits(text: &str, most_points: usize) -> bool {
    text.bytes().any(|byte| byte.is_ascii_digit())
        && text
            .bytes()
            .all(|byte| byte.is_ascii_digit() || byte == b'.')
        && text.matches('.').count() <= most_points
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_leaves_no_doubt_is_read() {
        for (text, value) in [
            ("24000000", 24e6),
            ("24,000,000", 24e6),
            ("1,234.56", 1234.56),
            ("1.234,56", 1234.56),
            ("24 000 000", 24e6),
            ("24\u{a0}000,5", 24000.5),
            ("24'000", 24e3),
            ("€ 5", 5.0),
            ("5 EUR", 5.0),
            ("$1,234,567", 1_234_567.0),
            ("(1,234.50)", -1234.5),
            ("−3", -3.0),
            ("-€3.5", -3.5),
            ("1,5", 1.5),
            ("+7", 7.0),
            ("1e6", 1e6),
            (" 12 ", 12.0),
            (".5", 0.5),
            ("0,123", 0.123),
        ] {
            assert_eq!(
                parse_amount(text).map(|amount| amount.value),
                Ok(value),
                "{text}"
            );
        }
        assert_eq!(parse("1,234", true).map(|amount| amount.value), Ok(1.234));
    }

    #[test]
    fn what_could_be_two_numbers_is_refused() {
        for text in ["1,234", "-12,345", "€999,999"] {
            assert!(
                matches!(parse_amount(text), Err(AmountFault::Ambiguous { .. })),
                "{text}"
            );
        }
        assert!(matches!(
            parse("1.234", true),
            Err(AmountFault::Ambiguous { .. })
        ));
    }

    #[test]
    fn what_is_no_number_is_refused() {
        for text in [
            "", "abc", "12,34,56", "1,23.4", "1.2.3,4", "5k", "--5", "(-5)", "1 2", "12 34", "€",
            "5 XYZ",
        ] {
            assert!(
                matches!(parse_amount(text), Err(AmountFault::NotANumber(_))),
                "{text}"
            );
        }
        assert!(matches!(parse_amount("12%"), Err(AmountFault::Percent(_))));
        for text in ["NaN", "inf", "-Infinity", "1e999", "#N/A"] {
            assert!(
                matches!(parse_amount(text), Err(AmountFault::NotFinite(_))),
                "{text}"
            );
        }
    }
}
