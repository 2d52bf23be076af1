//! Currencies beside numbers: read, said, and never mixed in silence.

use std::collections::BTreeSet;

use super::digits::is_space;
use super::notes::Note;

/// Signs of currencies and what they stand for; a sign that several share stands for itself. No
/// sign of a hundredth part is among them: 50 of those are not 50.
const SIGNS: [(&str, &str); 8] = [
    ("€", "EUR"),
    ("£", "GBP"),
    ("₹", "INR"),
    ("₩", "KRW"),
    ("₺", "TRY"),
    ("₽", "RUB"),
    ("$", "$"),
    ("¥", "¥"),
];

/// Codes of ISO 4217 that are read beside a number, each with the shared sign that may also
/// stand for it.
const CODES: [(&str, &str); 25] = [
    ("EUR", ""),
    ("USD", "$"),
    ("GBP", ""),
    ("CHF", ""),
    ("JPY", "¥"),
    ("CNY", "¥"),
    ("INR", ""),
    ("AUD", "$"),
    ("CAD", "$"),
    ("NZD", "$"),
    ("SEK", ""),
    ("NOK", ""),
    ("DKK", ""),
    ("PLN", ""),
    ("CZK", ""),
    ("HUF", ""),
    ("RON", ""),
    ("TRY", ""),
    ("ZAR", ""),
    ("BRL", ""),
    ("MXN", "$"),
    ("KRW", ""),
    ("SGD", "$"),
    ("HKD", "$"),
    ("RUB", ""),
];

/// The text without a currency before or after it, and the code or shared sign of that currency.
pub(super) fn without_currency(text: &str) -> (&str, Option<&'static str>) {
    let codes = CODES.iter().map(|(code, _)| (*code, *code));
    for (written, currency) in codes.chain(SIGNS) {
        let rest = text
            .strip_prefix(written)
            .or_else(|| text.strip_suffix(written));
        if let Some(rest) = rest {
            return (rest.trim_matches(is_space), Some(currency));
        }
    }
    (text, None)
}

/// The currencies that stand beside the numbers of a plan.
#[derive(Debug, Clone, Default)]
pub(super) struct Currencies(BTreeSet<&'static str>);

impl Currencies {
    pub(super) fn add(&mut self, currency: Option<&'static str>) {
        self.0.extend(currency);
    }

    pub(super) fn append(&mut self, others: &Self) {
        self.0.extend(&others.0);
    }

    /// The currency that the plan's unit of money names, if it names one.
    pub(super) fn add_unit(&mut self, money: &str) {
        let known = CODES.iter().map(|(code, _)| (*code, *code)).chain(SIGNS);
        let named = known.filter(|(written, _)| *written == money);
        self.0.extend(named.map(|(_, currency)| currency));
    }

    /// A warning where there are several.
    pub(super) fn warning(&self) -> Option<Note> {
        let is_shared_sign_of_another = |sign: &str| {
            CODES
                .iter()
                .any(|(code, shared)| *shared == sign && self.0.contains(code))
        };
        let different: Vec<&str> = self
            .0
            .iter()
            .copied()
            .filter(|currency| !is_shared_sign_of_another(currency))
            .collect();
        (different.len() > 1).then(|| {
            Note::warning(format!(
                "amounts are written in {}: nothing is converted",
                different.join(" and ")
            ))
        })
    }
}
