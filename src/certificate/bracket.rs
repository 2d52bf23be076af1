//! The cross-check: two linear programmes that enclose the best total.
//!
//! Chords of the curves give a plan that can be carried out, so the best total is at least
//! theirs; tangents give a relaxation, so it is at most theirs. The breakpoints begin around the
//! given spends and move to what the programmes themselves prefer, until both ends meet or leave
//! the claimed total outside.

use rayon::prelude::*;

use super::CrossCheck;
use super::polyline::{Breakpoints, Polyline};
use super::programme::Programme;
use crate::curves::Curve;
use crate::model::{Aim, Problem, Sense, Solution};

/// Activities and pieces of tabulated curves, together, up to which the cross-check runs unless
/// it is asked for: about a second on one core.
pub const CROSS_CHECKED_UP_TO: usize = 2_000;

/// Relative width at which the bracket counts as closed.
pub const BRACKET_WIDTH: f64 = 1e-6;

/// By how much the total may lie outside the bracket, relative to its size: what the LP solver's
/// own tolerance leaves.
pub const BRACKET_TOLERANCE: f64 = 1e-7;

/// Refinements after which the bracket is reported as it is.
const MOST_ROUNDS: usize = 40;

/// What the cross-check by linear programming found.
#[derive(Debug, Clone, PartialEq)]
pub enum LpCheck {
    /// Two linear programmes were solved.
    Bracketed(LpBracket),
    /// Left out because of the size of the plan.
    LeftOut {
        /// Activities and pieces of tabulated curves of this plan.
        activities: usize,
        /// How many it runs for by default.
        limit: usize,
    },
    /// The programmes could not be solved; the plan is then not proven.
    Failed {
        /// What the LP solver said, in words.
        reason: String,
    },
}

/// Lower and upper bound on the best total by linear programming.
#[derive(Debug, Clone, PartialEq)]
pub struct LpBracket {
    /// The best total is at least this; units of the total. `lower` ≤ `upper` whatever the aim.
    pub lower: f64,
    /// The best total is at most this.
    pub upper: f64,
    /// Shadow price of every constraint by the explicit dual programme, sign as in the report.
    pub prices: Vec<f64>,
    /// How often the breakpoints were refined.
    pub rounds: usize,
    /// Whether the plan's total lies within, to [`BRACKET_TOLERANCE`].
    pub encloses: bool,
}

/// Runs the cross-check, unless the plan is too large for one that was not asked for.
pub(super) fn cross_check(problem: &Problem, solution: &Solution, when: CrossCheck) -> LpCheck {
    let size: usize = problem
        .activities()
        .iter()
        .map(|activity| match &activity.curve {
            Curve::Points(points) => points.pieces().len(),
            _ => 1,
        })
        .sum();
    if when == CrossCheck::WhenQuick && size > CROSS_CHECKED_UP_TO {
        return LpCheck::LeftOut {
            activities: size,
            limit: CROSS_CHECKED_UP_TO,
        };
    }
    match enclose(problem, solution) {
        Ok(bracket) => LpCheck::Bracketed(bracket),
        Err(reason) => LpCheck::Failed { reason },
    }
}

fn enclose(problem: &Problem, solution: &Solution) -> Result<LpBracket, String> {
    let count = problem.activities().len();
    // Where no use is negative, one activity alone can use at most the limit.
    let caps_all: Vec<bool> = problem
        .constraints()
        .iter()
        .map(|constraint| {
            constraint.sense != Sense::AtLeast
                && (0..count).all(|i| constraint.use_per_unit(i) >= 0.0)
        })
        .collect();
    let mut breakpoints: Vec<Breakpoints> = (0..count)
        .map(|i| {
            let activity = &problem.activities()[i];
            let trial = solution.spends.get(i).copied().unwrap_or(f64::NAN);
            let room = cap_within(problem, &caps_all, i);
            // A cap that only repeats a row would share that row's price with it.
            let cap = if room == activity.floor {
                room
            } else {
                activity.cap
            };
            let reach = if room.is_finite() {
                room
            } else {
                needed_of(problem, i, trial)
            };
            Breakpoints::around(problem.worth(i), activity.floor, cap, reach, trial)
        })
        .collect();
    let bases: f64 = problem
        .activities()
        .iter()
        .map(|activity| {
            if activity.weight == 0.0 {
                0.0
            } else {
                activity.weight * activity.base
            }
        })
        .sum();
    let sign = problem.aim().sign();
    let claimed = sign * (problem.total(&solution.spends) - bases);
    let mut rounds = 0;
    loop {
        let chords: Vec<Polyline> = breakpoints.iter().map(Breakpoints::chords).collect();
        let tangents: Vec<Polyline> = breakpoints.iter().map(Breakpoints::tangents).collect();
        let (below, above) = (
            Programme::new(problem, &chords)?,
            Programme::new(problem, &tangents)?,
        );
        let (least, most) = rayon::join(|| below.solve(), || above.solve());
        let (least, most) = (least?, most?);
        let size = least.worth.abs().max(most.worth.abs());
        let room = BRACKET_TOLERANCE * size;
        let encloses = least.worth - room <= claimed && claimed <= most.worth + room;
        let closed = most.worth - least.worth <= BRACKET_WIDTH * size;
        // A claim outside the bracket stays outside every narrower one.
        if closed || !encloses || rounds == MOST_ROUNDS {
            let ends = [sign * least.worth + bases, sign * most.worth + bases];
            let [lower, upper] = match problem.aim() {
                Aim::Maximise => ends,
                Aim::Minimise => [ends[1], ends[0]],
            };
            let prices = above
                .prices()?
                .into_iter()
                .map(|price| sign * price)
                .collect();
            return Ok(LpBracket {
                lower,
                upper,
                prices,
                rounds,
                encloses,
            });
        }
        breakpoints
            .par_iter_mut()
            .enumerate()
            .for_each(|(i, points)| {
                points.refine(&[least.spends[i], most.spends[i]]);
            });
        rounds += 1;
    }
}

/// The greatest spend of activity `i` that its cap and the limits leave, were all else at
/// nothing.
fn cap_within(problem: &Problem, caps_all: &[bool], i: usize) -> f64 {
    let activity = &problem.activities()[i];
    let mut cap = activity.cap;
    for (constraint, caps_all) in problem.constraints().iter().zip(caps_all) {
        let per_unit = constraint.use_per_unit(i);
        if per_unit > 0.0 && *caps_all {
            cap = cap.min(constraint.limit / per_unit);
        }
    }
    cap.max(activity.floor)
}

/// A finite spend with which an activity without end could meet any limit alone.
fn needed_of(problem: &Problem, i: usize, trial: f64) -> f64 {
    let mut needed = if trial.is_finite() { 2.0 * trial } else { 0.0 };
    for constraint in problem.constraints() {
        let per_unit = constraint.use_per_unit(i).abs();
        if per_unit > 0.0 {
            needed = needed.max(constraint.limit.abs() / per_unit);
        }
    }
    needed.max(problem.activities()[i].floor)
}
