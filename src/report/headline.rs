//! The finding in one sentence.

use super::comparison::{Planned, SplitOutcome, compare_with_current};
use super::wording::{TOTAL_DIGITS, Units, VerbForm, activities, change_in_words, limit_noun};
use crate::certificate::Verdict;
use crate::model::{Aim, Problem, Sense};
use crate::numeric::figures;
use crate::sensitivity::ConstraintPrice;
use crate::solver;

/// Activities up to which a plan is solved again to say what the next step of the limit gives.
/// Above it the step is small against every spend, and the price alone says it to the digits
/// shown.
const SOLVED_AGAIN_UP_TO: usize = 10_000;

/// Share of the limit that the "next" amount is near.
const STEP_SHARE: f64 = 1.0 / 20_000.0;

/// The same below [`WHOLE_STEPS_FROM`], where the unit itself is large, such as a million.
const SMALL_LIMIT_STEP_SHARE: f64 = 1.0 / 1000.0;

/// From this limit on, a step is at least one unit: a committee thinks in whole ones.
const WHOLE_STEPS_FROM: f64 = 100.0;

/// The round amount by which the limit is thought to grow, a power of ten: 1,000 for 24,000,000,
/// 1 for 850, 0.01 for 24.
pub fn step_of(limit: f64) -> f64 {
    let size = limit.abs();
    if !(size > 0.0 && size.is_finite()) {
        return 1.0;
    }
    let nearest = |target: f64| 10f64.powi(target.log10().round() as i32);
    if size >= WHOLE_STEPS_FROM {
        nearest(size * STEP_SHARE).max(1.0)
    } else {
        nearest(size * SMALL_LIMIT_STEP_SHARE)
    }
}

/// What the headline is made from.
#[derive(Debug, Clone, Copy)]
pub(super) struct HeadlineFacts<'a> {
    pub units: Units<'a>,
    pub problem: &'a Problem,
    /// Total of the spends that are shown.
    pub total: f64,
    /// Total of the exact plan, which the next step starts from.
    pub exact_total: f64,
    pub price: &'a ConstraintPrice,
    pub verdict: Verdict,
}

/// `12 activities, 24,000,000 EUR: 1,842 homes protected, 214 more than today's split; the next
/// 1,000 EUR would add 0.031.`
pub(super) fn headline(facts: &HeadlineFacts) -> String {
    let Some(constraint) = facts.problem.constraints().first() else {
        return format!("{}.", activities(facts.problem.activities().len()));
    };
    let count = facts.problem.activities().len();
    let who = activities(count);
    let limit = facts.units.money(constraint.limit);
    let proven = facts.verdict == Verdict::Proven;
    let aim = facts.problem.aim();
    let total = total_in_words(facts.units, facts.total);
    let unspent = constraint.sense == Sense::AtMost && !facts.price.binding;

    let mut said = match (aim, constraint.sense, proven) {
        (Aim::Minimise, Sense::AtLeast, true) => {
            let least = facts.units.total(facts.total, TOTAL_DIGITS);
            let meet = if count == 1 { "meets" } else { "meet" };
            format!("{who} {meet} {limit} at the least cost of {least}")
        }
        (Aim::Minimise, _, true) => {
            let least = facts.units.total(facts.total, TOTAL_DIGITS);
            format!("{who}, {limit}: the least total is {least}")
        }
        _ if unspent => {
            let used = figures::figure(facts.price.used, 6);
            format!("{who}, {used} of {limit}: {total}")
        }
        (_, Sense::AtLeast, _) => format!("{who}, at least {limit}: {total}"),
        _ => format!("{who}, {limit}: {total}"),
    };
    if !proven {
        return format!(
            "Not proven. {said}, but the certificate does not hold: a better plan may exist."
        );
    }
    let planned = Planned {
        total: facts.total,
        used: facts.price.used,
    };
    if let Ok(current) = compare_with_current(facts.problem, planned).outcome {
        said.push_str(&against_today(facts, &current));
    }
    if unspent && facts.price.shadow_price == 0.0 {
        let left = facts.units.money(figures_kept(facts.price.slack));
        said.push_str(&format!(
            "; the other {left} would {}",
            match aim {
                Aim::Maximise => "add nothing",
                Aim::Minimise => "save nothing",
            }
        ));
    } else if let Some(next) = next_in_words(facts) {
        said.push_str(&next);
    }
    said.push('.');
    said
}

/// An amount left over, without the digits that only come from a subtraction.
fn figures_kept(amount: f64) -> f64 {
    const DIGITS: i32 = 6;
    let scale = 10f64.powi(DIGITS - 1 - amount.abs().log10().floor() as i32);
    let kept = (amount * scale).round() / scale;
    if kept.is_finite() { kept } else { amount }
}

fn total_in_words(units: Units, total: f64) -> String {
    let number = units.total(total, TOTAL_DIGITS);
    match units.total_name() {
        Some(_) => number,
        None => format!("a total of {number}"),
    }
}

fn against_today(facts: &HeadlineFacts, current: &SplitOutcome) -> String {
    let today = if current.same_use {
        "today's split".to_owned()
    } else {
        format!("today's {}", facts.units.money(current.used))
    };
    if current.gain == 0.0 {
        return format!(", the same as {today}");
    }
    let size = figures::difference(current.gain.abs(), facts.total, TOTAL_DIGITS);
    let direction = if facts.total > current.total {
        "more"
    } else {
        "less"
    };
    format!(", {size} {direction} than {today}")
}

fn next_in_words(facts: &HeadlineFacts) -> Option<String> {
    let constraint = facts.problem.constraints().first()?;
    let step = step_of(constraint.limit);
    let amount = facts.units.money(step);
    let aim = facts.problem.aim();
    let Some(one_more) = facts.price.one_more else {
        let noun = limit_noun(constraint.sense);
        return Some(format!("; no plan can meet a greater {noun}"));
    };
    if facts.problem.activities().len() > SOLVED_AGAIN_UP_TO {
        let rate = change_in_words(aim, one_more * step, VerbForm::Third);
        let said = format!("; at the margin {amount} more {rate}");
        return one_more.is_finite().then_some(said);
    }
    let problem = facts.problem.with_limit(0, constraint.limit + step).ok()?;
    let next = solver::solve(&problem).ok()?;
    let change = problem.total(&next.spends) - facts.exact_total;
    let change = change_in_words(aim, change, VerbForm::Bare);
    Some(format!("; the next {amount} would {change}"))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_step_is_a_round_amount_near_a_twenty_thousandth_of_the_limit() {
        assert_eq!(step_of(24e6), 1000.0);
        assert_eq!(step_of(240e9), 1e7);
        assert_eq!(step_of(850.0), 1.0);
        assert_eq!(step_of(24.0), 0.01);
        assert_eq!(step_of(0.0), 1.0);
    }
}
