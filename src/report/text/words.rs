//! The sentences round the tables.

use super::tables::return_name;
use crate::model::Aim;
use crate::report::build::Report;
use crate::report::comparison::{NoSplit, Split, SplitKind};
use crate::report::wording::activities;

/// Units of the table of activities, and how to read it.
pub(super) fn caption(report: &Report) -> String {
    let verb = match report.aim {
        Aim::Maximise => "adds",
        Aim::Minimise => "costs",
    };
    let mut said = Vec::new();
    if let Some(money) = report.units.money_name() {
        said.push(format!("Spend in {money}."));
    }
    let named = sentence_case(return_name(report.aim));
    match report.units.total_name() {
        _ if !report.one_unit => {
            said.push(format!(
                "{named}s are each in their own unit; the total weighs them."
            ));
        }
        Some(total) => said.push(format!("{named} in {total}.")),
        None => {}
    }
    said.push(format!(
        "Margin: what the next {} {verb}.",
        report.units.money(report.step)
    ));
    let shares = report
        .shown
        .iter()
        .any(|&i| report.rows.why(i).short().ends_with('×'));
    if shares {
        said.push(format!(
            "0.80×: the next unit {} 0.80 times the price.",
            match report.aim {
                Aim::Maximise => "would earn",
                Aim::Minimise => "would cost",
            }
        ));
    }
    said.join(" ")
}

/// What a reader must know of a split, or why it could not be made.
pub(super) fn remark(report: &Report, split: &Split) -> Option<String> {
    let name = split.kind.name();
    let said = match split.outcome {
        Ok(outcome) if outcome.outside_bounds > 0 => {
            let count = activities(outcome.outside_bounds);
            format!("{name} leaves {count} outside the bounds of this plan")
        }
        Ok(outcome) if !outcome.same_use => {
            let used = report.constraints.first()?.price.used;
            let than = if outcome.used < used { "less" } else { "more" };
            format!("{name} uses {than} than the plan")
        }
        Ok(_) => return None,
        Err(NoSplit::CurrentUnknown) if split.kind == SplitKind::Proportional => {
            return None;
        }
        Err(NoSplit::CurrentUnknown) => "today's spends are not known".to_owned(),
        Err(NoSplit::CurrentIncomplete { missing }) => format!(
            "{name} cannot be valued: today's spend is not known for {}",
            activities(missing)
        ),
        Err(NoSplit::CurrentZero) => format!("{name} cannot be made: nothing is spent today"),
        Err(NoSplit::OutOfReach) => {
            format!("{name} cannot use as much as the plan within floors and caps")
        }
        Err(NoSplit::NoFiniteTotal) => {
            format!("{name} has no finite {}", return_name(report.aim))
        }
    };
    Some(format!("{}.", sentence_case(&said)))
}

/// The same words with a capital at the start.
fn sentence_case(words: &str) -> String {
    let mut letters = words.chars();
    match letters.next() {
        Some(first) => first.to_uppercase().chain(letters).collect(),
        None => String::new(),
    }
}
