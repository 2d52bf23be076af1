//! What is said where no plan can meet the limit.

use std::io::{self, Write};

use serde::Serialize;

use super::json::SCHEMA;
use super::wording::{Units, activities, limit_noun};
use crate::model::{Labels, Problem, Sense};

/// A limit that no plan can meet: what is wrong, what is short, and the limit that would work.
#[derive(Debug, Clone, PartialEq)]
pub struct NoPlan {
    /// What is wrong, in a sentence.
    pub headline: String,
    /// What would mend it, in a sentence.
    pub mend: String,
    /// Name of the constraint.
    pub constraint: String,
    /// Its limit.
    pub limit: f64,
    /// By how much the limit is missed, > 0.
    pub shortfall: f64,
    /// The nearest limit that a plan can meet.
    pub nearest_limit: f64,
}

impl NoPlan {
    /// Words for a constraint whose use can only lie between `least_use` and `greatest_use`.
    pub fn new(
        labels: &Labels,
        problem: &Problem,
        constraint: usize,
        least_use: f64,
        greatest_use: f64,
    ) -> Self {
        let constraint = &problem.constraints()[constraint];
        let units = Units::of(labels);
        let limit = constraint.limit;
        let noun = limit_noun(constraint.sense);
        let who = activities(problem.activities().len());
        let too_small = limit < least_use && constraint.sense != Sense::AtLeast;
        let nearest_limit = if too_small { least_use } else { greatest_use };
        let shortfall = (nearest_limit - limit).abs();
        let (nearest, short) = (units.money(nearest_limit), units.money(shortfall));
        let limit_words = units.money(limit);
        let (headline, mend) = if too_small {
            (
                format!(
                    "No plan: the floors of {who} need {nearest}, {short} more than the {noun} of \
                     {limit_words}."
                ),
                format!(
                    "The least {noun} that works is {nearest}; or lower the floors by {short} in \
                     all."
                ),
            )
        } else {
            (
                format!(
                    "No plan: the caps of {who} allow {nearest} at most, {short} less than the \
                     {noun} of {limit_words}."
                ),
                format!(
                    "The greatest {noun} that works is {nearest}; or raise the caps by {short} in \
                     all."
                ),
            )
        };
        Self {
            headline,
            mend,
            constraint: constraint.name.clone(),
            limit,
            shortfall,
            nearest_limit,
        }
    }
}

#[derive(Serialize)]
struct Document<'a> {
    schema: u32,
    version: &'a str,
    status: &'static str,
    aim: &'static str,
    headline: &'a str,
    mend: &'a str,
    constraint: &'a str,
    limit: f64,
    shortfall: f64,
    nearest_limit: f64,
}

/// Writes the document of a plan that cannot be met, status `infeasible`.
///
/// # Errors
/// What the writer says.
pub fn render_no_plan_json(
    no_plan: &NoPlan,
    problem: &Problem,
    version: &str,
    out: &mut impl Write,
) -> io::Result<()> {
    let document = Document {
        schema: SCHEMA,
        version,
        status: "infeasible",
        aim: problem.aim().name(),
        headline: &no_plan.headline,
        mend: &no_plan.mend,
        constraint: &no_plan.constraint,
        limit: no_plan.limit,
        shortfall: no_plan.shortfall,
        nearest_limit: no_plan.nearest_limit,
    };
    serde_json::to_writer_pretty(&mut *out, &document)?;
    out.write_all(b"\n")
}
