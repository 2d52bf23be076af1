//! The spends at the price, with what is left shared at the margin.

use rayon::prelude::*;

use super::SolveError;
use super::compile::Answer;
use super::price::PriceBracket;
use crate::curves::{Curve, ReturnCurve, SpendRange};
use crate::model::{Position, Problem, Sense};
use crate::numeric::{BLOCK, block_sums};

/// Corrections by which the spends are brought to the limit. One leaves a rounding of the
/// largest spend, the second a rounding of the sum.
const MOST_CORRECTIONS: usize = 4;

/// The spends that meet the limit. All activities whose spend depends on which end of the
/// bracket is taken (a straight piece that earns exactly the price, or a curve so flat that
/// two neighbouring prices are far apart) take the same share of their own range.
///
/// # Errors
/// [`SolveError::Unbounded`] where even at price zero an activity asks for more than any number.
pub(super) fn spends_within(
    problem: &Problem,
    bracket: PriceBracket,
    sense: Sense,
    limit: f64,
) -> Result<Vec<f64>, SolveError> {
    let constraint = &problem.constraints()[0];
    let ranges = asked_for(problem, bracket);
    if let Some(activity) = ranges.iter().position(|range| range.least.is_infinite()) {
        return Err(SolveError::Unbounded { activity });
    }
    let use_per_unit = |i: usize| constraint.use_per_unit(i);
    let [least] = block_sums(ranges.len(), |i| [used(use_per_unit(i), ranges[i].least)]);
    let slack_is_best = match sense {
        Sense::AtMost => bracket.price() == 0.0 && least <= limit,
        Sense::AtLeast => bracket.price() == 0.0 && least >= limit,
        Sense::Equal => false,
    };
    if slack_is_best {
        return Ok(ranges.into_iter().map(|range| range.least).collect());
    }
    let left = (limit - least).max(0.0);
    // An uncapped line could take all that is left, and counts as that wide.
    let width = |i: usize| {
        let width = use_per_unit(i) * (ranges[i].greatest - ranges[i].least);
        if width.is_finite() { width } else { left }
    };
    let [widths] = block_sums(ranges.len(), |i| [width(i)]);
    let share = if widths > 0.0 {
        (left / widths).min(1.0)
    } else {
        0.0
    };
    let mut spends: Vec<f64> = (0..ranges.len())
        .into_par_iter()
        .with_min_len(BLOCK)
        .map(|i| {
            let SpendRange { least, greatest } = ranges[i];
            if least == greatest || share == 0.0 {
                least
            } else if share == 1.0 && greatest.is_finite() {
                greatest
            } else {
                (least + share * width(i) / use_per_unit(i)).min(greatest)
            }
        })
        .collect();
    meet_the_limit(problem, sense, limit, &mut spends);
    Ok(spends)
}

/// For every activity the spend at the upper and at the lower end of the bracket.
fn asked_for(problem: &Problem, bracket: PriceBracket) -> Vec<SpendRange> {
    (0..problem.activities().len())
        .into_par_iter()
        .with_min_len(BLOCK)
        .map(|i| {
            let answer = Answer::of(problem, i);
            let least = answer.spends_at(problem, i, bracket.to).least;
            let greatest = answer.spends_at(problem, i, bracket.from).greatest;
            SpendRange {
                least,
                greatest: greatest.max(least),
            }
        })
        .collect()
}

/// Use of a spend; no spend uses nothing, however much a unit would use.
fn used(use_per_unit: f64, spend: f64) -> f64 {
    if spend == 0.0 {
        0.0
    } else {
        use_per_unit * spend
    }
}

/// Moves the largest spend between its bounds by the rounding that is missing, so that the limit
/// is met to the last unit and never broken.
fn meet_the_limit(problem: &Problem, sense: Sense, limit: f64, spends: &mut [f64]) {
    let constraint = &problem.constraints()[0];
    // A spend at a knot stays there: the price on both sides depends on it.
    let movable = |i: usize| {
        let activity = &problem.activities()[i];
        let at_knot = match &activity.curve {
            Curve::Points(curve) => curve.marginal(spends[i]) != curve.marginal_before(spends[i]),
            _ => false,
        };
        !at_knot && activity.position(spends[i]) == Position::Between
    };
    let used_by = |i: usize| constraint.use_per_unit(i) * spends[i];
    let larger = |&i: &usize, &j: &usize| used_by(i).total_cmp(&used_by(j)).then(j.cmp(&i));
    // The largest spend of every block is a candidate; all of them only where none of those is free.
    let mut candidates: Vec<usize> = (0..spends.len().div_ceil(BLOCK))
        .into_par_iter()
        .filter_map(|block| (block * BLOCK..spends.len().min((block + 1) * BLOCK)).max_by(larger))
        .collect();
    candidates.sort_unstable_by(|i, j| larger(j, i));
    let free = candidates
        .into_iter()
        .find(|&i| movable(i))
        .or_else(|| (0..spends.len()).filter(|&i| movable(i)).max_by(larger));
    let Some(free) = free else { return };
    let (floor, cap) = (
        problem.activities()[free].floor,
        problem.activities()[free].cap,
    );
    for _ in 0..MOST_CORRECTIONS {
        let missing = limit - problem.used(0, spends);
        let corrected = spends[free] + missing / constraint.use_per_unit(free);
        if missing == 0.0 || corrected <= floor || corrected >= cap {
            break;
        }
        spends[free] = corrected;
    }
    // What is left is a rounding: give it up on the side that keeps the limit.
    for _ in 0..MOST_CORRECTIONS {
        let missing = limit - problem.used(0, spends);
        let nudged = match sense {
            Sense::AtMost if missing < 0.0 => spends[free].next_down(),
            Sense::AtLeast if missing > 0.0 => spends[free].next_up(),
            _ => break,
        };
        if nudged <= floor || nudged >= cap {
            break;
        }
        spends[free] = nudged;
    }
}
