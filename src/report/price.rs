//! What the limit is worth, in sentences, and the constraints as a table.

use super::headline::step_of;
use super::wording::{PRICE_DIGITS, Units, VerbForm, change_in_words, limit_noun};
use crate::model::{Aim, Constraint, Problem};
use crate::numeric::figures;
use crate::sensitivity::ConstraintPrice;

/// One fact: what it is about, and what is the case.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Fact {
    /// What it is about, a few words.
    pub about: String,
    /// What is the case.
    pub says: String,
}

impl Fact {
    pub(super) fn new(about: impl Into<String>, says: impl Into<String>) -> Self {
        Self {
            about: about.into(),
            says: says.into(),
        }
    }
}

/// What constraint `k` is worth: one more and one less, how far that holds, and what the next
/// unit of return costs. Rates are per round step of the limit, so that they can be read.
pub(super) fn price_facts(
    problem: &Problem,
    k: usize,
    price: &ConstraintPrice,
    units: Units,
) -> Vec<Fact> {
    let constraint = &problem.constraints()[k];
    let aim = problem.aim();
    let noun = limit_noun(constraint.sense);
    let step = step_of(constraint.limit);
    let amount = units.money(step);
    let mut facts = Vec::new();

    let rate = |change: f64| {
        let words = change_in_words(aim, change, VerbForm::Third);
        match units.total_name() {
            Some(unit) if change != 0.0 => with_unit_after_number(&words, unit),
            _ => words,
        }
    };
    let more = match price.one_more {
        Some(worth) if worth.is_finite() => rate(worth * step),
        Some(_) => "is worth more than any number: the first unit earns without bound".to_owned(),
        None => format!("cannot be used: no plan meets a greater {noun}"),
    };
    facts.push(Fact::new(format!("{amount} more"), more));
    let less = match price.one_less {
        Some(worth) if worth.is_finite() => rate(-worth * step),
        Some(_) => "costs more than any number".to_owned(),
        None => format!("is not possible: no plan meets a smaller {noun}"),
    };
    facts.push(Fact::new(format!("{amount} less"), less));
    facts.push(Fact::new(
        "Same bounds",
        range_in_words(constraint, price, units),
    ));
    if let Some(cost) = marginal_cost(aim, price, units) {
        facts.push(cost);
    }
    facts
}

/// `adds 0.0311 homes protected`, `costs 9.15 EUR/h more`.
fn with_unit_after_number(words: &str, unit: &str) -> String {
    match words.strip_suffix(" more") {
        Some(start) => format!("{start} {unit} more"),
        None => format!("{words} {unit}"),
    }
}

fn range_in_words(constraint: &Constraint, price: &ConstraintPrice, units: Units) -> String {
    let noun = limit_noun(constraint.sense);
    let plural = format!("{noun}s");
    let bound = |limit: f64| figures::figure(limit, 6);
    let range = match (price.holds_from, price.holds_to) {
        (Some(from), Some(to)) if from == to => format!("at this {noun} alone"),
        (Some(from), Some(to)) => {
            format!(
                "for {plural} from {} to {}",
                bound(from),
                units_after(bound(to), units)
            )
        }
        (Some(from), None) => format!("for any {noun} from {} up", units_after(bound(from), units)),
        (None, Some(to)) => format!("for any {noun} up to {}", units_after(bound(to), units)),
        (None, None) => format!("for any {noun}"),
    };
    if !price.binding {
        return format!("{range}: the limit is not what holds the plan");
    }
    if price.holds_from.is_some() && price.holds_from == price.holds_to {
        return format!("{range}: any other moves an activity onto a bound or off one");
    }
    format!("{range}: no activity meets a bound or leaves one")
}

fn units_after(number: String, units: Units) -> String {
    match units.money_name() {
        Some(unit) => format!("{number} {unit}"),
        None => number,
    }
}

fn marginal_cost(aim: Aim, price: &ConstraintPrice, units: Units) -> Option<Fact> {
    let worth = price
        .one_more
        .filter(|worth| *worth > 0.0 && worth.is_finite())?;
    let cost = figures::figure(1.0 / worth, PRICE_DIGITS);
    let cost = units_after(cost, units);
    match aim {
        Aim::Maximise => {
            let unit = match units.total_name() {
                Some(unit) => format!("one unit more ({unit})"),
                None => "one unit more of return".to_owned(),
            };
            Some(Fact::new("At the margin", format!("{unit} costs {cost}")))
        }
        Aim::Minimise => None,
    }
}

/// One row of the table of constraints.
#[derive(Debug, Clone, Copy)]
pub struct ConstraintRow<'a> {
    /// The constraint as it was read.
    pub constraint: &'a Constraint,
    /// What is used and what the limit is worth.
    pub price: &'a ConstraintPrice,
}
