//! Numbers as people write them.

use super::currency::without_currency;
use super::digits::{
    DECIMAL_COMMA, DecimalSign, Doubt, THOUSANDS, digits_of, is_space, looks_grouped,
};

/// How a number was written, if not plainly.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Amount {
    /// The number; finite.
    pub value: f64,
    /// How it was written, in words for a note; `None` for a plain number.
    pub written: Option<&'static str>,
    /// The currency that stands beside it: its code, or a sign that several share.
    pub currency: Option<&'static str>,
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
    /// Written as in another table.
    #[error("\"{text}\" does not fit a table whose decimal sign is the {sign}")]
    OtherSign {
        /// What stands there.
        text: String,
        /// The same with a point and nothing else.
        point: String,
        /// The table's sign in words.
        sign: &'static str,
    },
    /// A sign that stands for no number.
    #[error("\"{0}\" stands for no number")]
    Absent(String),
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
            Self::Percent(_) => {
                "write the number itself: 0.12 for a share of 12 %, or the amount".to_owned()
            }
            Self::OtherSign { point, .. } => format!("write {point}"),
            Self::Absent(_) => "write a number, or nothing where there is none".to_owned(),
            Self::NotFinite(_) => "write a finite number, or nothing".to_owned(),
        }
    }
}

/// An amount of the command line or of a plan file: digits with a point, with thousands
/// separators that leave no doubt, a currency, a sign or accounting brackets.
///
/// # Errors
/// [`AmountFault`] where the text is no number, or could be two.
pub fn parse_amount(text: &str) -> Result<Amount, AmountFault> {
    match plain(text.trim_matches(is_space)) {
        Some(value) => Ok(Amount {
            value,
            written: None,
            currency: None,
        }),
        None => parse(text, DecimalSign::Unknown),
    }
}

/// An amount in a table whose numbers have this decimal sign.
pub(super) fn parse(text: &str, decimal: DecimalSign) -> Result<Amount, AmountFault> {
    let trimmed = text.trim_matches(is_space);
    let could_be_grouped = || decimal != DecimalSign::Point && looks_grouped(trimmed, '.');
    if let Some(value) = plain(trimmed).filter(|_| !could_be_grouped()) {
        return Ok(Amount {
            value,
            written: None,
            currency: None,
        });
    }
    let fault = || AmountFault::NotANumber(trimmed.to_owned());
    if trimmed.ends_with('%') {
        return Err(AmountFault::Percent(trimmed.to_owned()));
    }
    if is_absent(trimmed) {
        return Err(AmountFault::Absent(trimmed.to_owned()));
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
    let has_currency = currency.is_some();
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
    if has_currency {
        written = Some("a currency beside the number");
    }
    let (digits, grouping) = digits_of(bare, decimal).map_err(|doubt| match doubt {
        Doubt::NoNumber => fault(),
        Doubt::Two(one, other) => AmountFault::Ambiguous {
            text: trimmed.to_owned(),
            one,
            other,
        },
        Doubt::OtherSign(point, sign) => AmountFault::OtherSign {
            text: trimmed.to_owned(),
            point,
            sign,
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
        written: match grouping {
            Some(THOUSANDS) if has_currency => Some("a currency and thousands separators"),
            Some(DECIMAL_COMMA) if has_currency => Some("a currency and a decimal comma"),
            Some(grouping) => Some(grouping),
            None => written.or(Some("a sign written apart from the number")),
        },
        currency,
    })
}

/// A number as a programme writes it.
#[inline]
pub(super) fn plain(text: &str) -> Option<f64> {
    fast_float2::parse::<f64, _>(text)
        .ok()
        .filter(|value| value.is_finite())
}

/// What people and workbooks write where they have no number.
fn is_absent(text: &str) -> bool {
    const ABSENT: [&str; 16] = [
        "-", "–", "—", "--", "?", ".", "n/a", "na", "#n/a", "#div/0!", "#value!", "#ref!", "#num!",
        "none", "null", "tbd",
    ];
    ABSENT.contains(&text.to_lowercase().as_str())
}

fn is_not_finite(text: &str) -> bool {
    let word = text
        .trim_start_matches(['-', '+', '−'])
        .to_ascii_lowercase();
    matches!(word.as_str(), "nan" | "inf" | "infinity" | "∞")
        || plain(text).is_none() && fast_float2::parse::<f64, _>(text).is_ok()
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
        for text in ["1,234", "1234,0", "1.234,5", "1 234,5"] {
            assert!(parse(text, DecimalSign::Comma).is_ok(), "{text}");
        }
        assert_eq!(
            parse("1,234", DecimalSign::Comma).map(|amount| amount.value),
            Ok(1.234)
        );
        assert_eq!(
            parse("1.234", DecimalSign::Point).map(|amount| amount.value),
            Ok(1.234)
        );
    }

    #[test]
    fn what_could_be_two_numbers_is_refused() {
        for text in ["1,234", "-12,345", "€999,999"] {
            assert!(
                matches!(parse_amount(text), Err(AmountFault::Ambiguous { .. })),
                "{text}"
            );
        }
        for decimal in [DecimalSign::Comma, DecimalSign::Unknown] {
            assert!(matches!(
                parse("1.234", decimal),
                Err(AmountFault::Ambiguous { .. })
            ));
        }
    }

    #[test]
    fn a_sign_that_contradicts_the_table_is_refused() {
        for text in ["1,5", "1.234,56", "1.234.567", "24 000,5", "0,123"] {
            assert!(
                matches!(
                    parse(text, DecimalSign::Point),
                    Err(AmountFault::OtherSign { .. })
                ),
                "{text}"
            );
        }
        for text in ["1,234,567", "1,234.5"] {
            assert!(parse(text, DecimalSign::Comma).is_err(), "{text}");
        }
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
        for text in ["-", "n/a", "#N/A"] {
            assert!(
                matches!(parse_amount(text), Err(AmountFault::Absent(_))),
                "{text}"
            );
        }
        for text in ["NaN", "inf", "-Infinity", "1e999"] {
            assert!(
                matches!(parse_amount(text), Err(AmountFault::NotFinite(_))),
                "{text}"
            );
        }
    }
}
