//! Amounts and totals in the words of the plan.

use crate::model::{Aim, Labels, Sense};
use crate::numeric::figures;

/// Digits of a total in a sentence.
pub(super) const TOTAL_DIGITS: usize = 4;

/// Digits of a marginal return or price in a sentence.
pub(super) const PRICE_DIGITS: usize = 3;

/// The units of a plan, put behind its numbers.
#[derive(Debug, Clone, Copy)]
pub struct Units<'a> {
    money: Option<&'a str>,
    total: Option<&'a str>,
}

impl<'a> Units<'a> {
    /// The units that the labels name; a number stands alone where they name none.
    pub fn of(labels: &'a Labels) -> Self {
        let named = |unit: &'a Option<String>| unit.as_deref().filter(|unit| !unit.is_empty());
        Self {
            money: named(&labels.money),
            total: named(&labels.return_unit),
        }
    }

    /// The unit of spend.
    pub fn money_name(&self) -> Option<&'a str> {
        self.money
    }

    /// The unit of the total.
    pub fn total_name(&self) -> Option<&'a str> {
        self.total
    }

    /// `24,000,000 EUR`
    pub fn money(&self, amount: f64) -> String {
        with_unit(figures::amount(amount), self.money)
    }

    /// `1,842 homes protected`
    pub fn total(&self, total: f64, digits: usize) -> String {
        with_unit(figures::figure(total, digits), self.total)
    }
}

fn with_unit(number: String, unit: Option<&str>) -> String {
    match unit {
        Some(unit) => format!("{number} {unit}"),
        None => number,
    }
}

/// `1 activity`, `12 activities`, `1,000,000 activities`.
pub fn activities(count: usize) -> String {
    match count {
        1 => "1 activity".to_owned(),
        _ => format!("{} activities", figures::fixed(count as f64, 0)),
    }
}

/// What a change of the total does, for the aim: `adds 0.031`, `costs 9.15 more`.
pub(super) fn change_in_words(aim: Aim, change: f64, form: VerbForm) -> String {
    let size = figures::figure(change.abs(), PRICE_DIGITS);
    // A zero keeps the sign of the step that it comes from: nothing added, or nothing lost.
    let (bare, third) = match (aim, change.is_sign_positive()) {
        (Aim::Maximise, true) => ("add", "adds"),
        (Aim::Maximise, false) => ("lose", "loses"),
        (Aim::Minimise, true) => ("cost", "costs"),
        (Aim::Minimise, false) => ("save", "saves"),
    };
    let verb = form.of(bare, third);
    let size = if change == 0.0 { "nothing" } else { &size };
    match (aim, change.is_sign_positive()) {
        (Aim::Minimise, true) => format!("{verb} {size} more"),
        _ => format!("{verb} {size}"),
    }
}

/// `would add` or `adds`.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum VerbForm {
    /// After "would".
    Bare,
    /// With one subject.
    Third,
}

impl VerbForm {
    fn of<'s>(self, bare: &'s str, third: &'s str) -> &'s str {
        match self {
            VerbForm::Bare => bare,
            VerbForm::Third => third,
        }
    }
}

/// What a limit is called: the constraint's own name, and `requirement` or `budget` in a
/// sentence that compares limits.
pub(super) fn limit_noun(sense: Sense) -> &'static str {
    match sense {
        Sense::AtMost | Sense::Equal => "budget",
        Sense::AtLeast => "requirement",
    }
}

/// Up to three names, and how many more there are: `Dunes, Pumps, Tide gates and 4 more`.
pub(super) fn names(listed: &[String], count: usize) -> String {
    let more = count - listed.len();
    match (listed, more) {
        ([only], 0) => only.clone(),
        ([first @ .., last], 0) => format!("{} and {last}", first.join(", ")),
        (listed, more) => format!(
            "{} and {} more",
            listed.join(", "),
            figures::fixed(more as f64, 0)
        ),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_are_listed_as_in_a_sentence() {
        let listed: Vec<String> = ["a", "b", "c"].map(str::to_owned).to_vec();
        assert_eq!(names(&listed[..1], 1), "a");
        assert_eq!(names(&listed[..2], 2), "a and b");
        assert_eq!(names(&listed, 3), "a, b and c");
        assert_eq!(names(&listed, 1203), "a, b, c and 1,200 more");
    }

    #[test]
    fn a_change_is_worded_for_the_aim() {
        let words = |aim, change| change_in_words(aim, change, VerbForm::Bare);
        assert_eq!(words(Aim::Maximise, 0.0311), "add 0.0311");
        assert_eq!(words(Aim::Maximise, -2.0), "lose 2");
        assert_eq!(words(Aim::Minimise, 9.148), "cost 9.15 more");
        assert_eq!(words(Aim::Minimise, -9.148), "save 9.15");
        assert_eq!(words(Aim::Maximise, 0.0), "add nothing");
        assert_eq!(words(Aim::Minimise, -0.0), "save nothing");
    }
}
