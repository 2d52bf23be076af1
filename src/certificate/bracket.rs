//! The cross-check: two linear programmes that enclose the best total.
//!
//! Chords of the curves give a plan that can be carried out, so the best total is at least
//! theirs; tangents give a relaxation, so it is at most theirs. The breakpoints begin around the
//! given spends and move to what the programmes themselves prefer, until both ends meet or leave
//! the claimed total outside.

use rayon::prelude::*;

use super::CrossCheck;
use super::dual::price_of_unit;
use super::polyline::{Breakpoints, Polyline, SpendBounds};
use super::programme::{Programme, Side};
use super::room::Room;
use crate::curves::{Curve, ReturnCurve};
use crate::model::{Activity, Constraint, Problem, Sense, Solution};
use crate::numeric::CompensatedSum;

/// Activities and pieces of tabulated curves, together, up to which the cross-check runs unless
/// it is asked for: 0.6 s on two cores, growing with the square.
pub const CROSS_CHECKED_UP_TO: usize = 2_000;

/// Relative width at which the bracket counts as closed.
pub const BRACKET_WIDTH: f64 = 1e-6;

/// By how much the total may lie outside the bracket, relative to its size: what the LP solver's
/// own tolerance leaves.
pub const BRACKET_TOLERANCE: f64 = 1e-7;

/// Relative rounding of a limit and of what is used of it.
const LIMIT_ROUNDING: f64 = 4.0 * f64::EPSILON;

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
    /// The LP solver gave up, as it does where the numbers of a plan lie many powers of ten apart.
    /// It then says nothing for the plan and nothing against it.
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
pub(super) fn cross_check(
    problem: &Problem,
    solution: &Solution,
    feasible: bool,
    when: CrossCheck,
) -> LpCheck {
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
    match enclose(problem, solution, feasible) {
        Ok(bracket) => LpCheck::Bracketed(bracket),
        Err(reason) => LpCheck::Failed { reason },
    }
}

fn enclose(problem: &Problem, solution: &Solution, feasible: bool) -> Result<LpBracket, String> {
    let mut breakpoints = first_breakpoints(problem, solution);
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
    let claimed: f64 = solution
        .spends
        .iter()
        .enumerate()
        .map(|(i, &spend)| problem.worth(i).value(spend))
        .collect::<CompensatedSum>()
        .total();
    // The limits are met to their last place, which is worth this much.
    let last_place: f64 = problem
        .constraints()
        .iter()
        .zip(&solution.shadow_prices)
        .map(|(constraint, price)| (price * constraint.limit).abs() * LIMIT_ROUNDING)
        .filter(|worth| worth.is_finite())
        .sum();
    let mut rounds = 0;
    let mut widened = false;
    loop {
        let chords: Vec<Polyline> = breakpoints.iter().map(Breakpoints::chords).collect();
        let tangents: Vec<Polyline> = breakpoints.iter().map(Breakpoints::tangents).collect();
        let below = Programme::new(problem, &chords, Side::Below);
        let above = Programme::new(problem, &tangents, Side::Above)?;
        let (least, most) = rayon::join(|| below?.solve(), || above.solve());
        if least.is_err() && !widened {
            breakpoints.iter_mut().for_each(Breakpoints::widen);
            widened = true;
            continue;
        }
        let (least, most) = (least?, most?);
        let size = least.scale.max(most.scale);
        let room = BRACKET_TOLERANCE * size + last_place;
        if least.worth > most.worth + room {
            return Err("the two programmes contradict each other".to_owned());
        }
        let encloses = least.worth - room <= claimed && claimed <= most.worth + room;
        // The simplex solver errs too, on numbers many powers of ten apart. Its word against a plan
        // counts where it shows a better one.
        if feasible && claimed > most.worth + room {
            return Err("it puts the best below a plan that can be carried out".to_owned());
        }
        if claimed < least.worth - room && !is_better(problem, &least.spends, claimed) {
            return Err("the better plan that it claims cannot be carried out".to_owned());
        }
        let closed = most.worth - least.worth <= BRACKET_WIDTH * size;
        // A claim outside the bracket stays outside every narrower one.
        if closed || !encloses || rounds == MOST_ROUNDS {
            let ends = [least.worth, most.worth].map(|worth| sign * worth + bases);
            let prices = above.prices()?;
            return Ok(LpBracket {
                lower: ends[0].min(ends[1]),
                upper: ends[0].max(ends[1]),
                prices: prices.into_iter().map(|price| sign * price).collect(),
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

/// Whether these spends, brought within their bounds, meet the limits as far as a simplex solver
/// meets its rows, and are worth more than `claimed`.
fn is_better(problem: &Problem, spends: &[f64], claimed: f64) -> bool {
    let within: Vec<f64> = spends
        .iter()
        .zip(problem.activities())
        .map(|(spend, activity)| spend.max(activity.floor).min(activity.cap))
        .collect();
    let worth: CompensatedSum = within
        .iter()
        .enumerate()
        .map(|(i, &spend)| problem.worth(i).value(spend))
        .collect();
    let meets = |(k, constraint): (usize, &Constraint)| {
        let used = problem.used(k, &within);
        let room = BRACKET_TOLERANCE * constraint.limit.abs().max(used.abs());
        let (over, under) = (
            used > constraint.limit + room,
            used < constraint.limit - room,
        );
        match constraint.sense {
            Sense::AtMost => !over,
            Sense::AtLeast => !under,
            Sense::Equal => !over && !under,
        }
    };
    worth.total() > claimed && problem.constraints().iter().enumerate().all(meets)
}

/// Breakpoints round the claimed spends and prices. The bounds hold whatever was claimed.
fn first_breakpoints(problem: &Problem, solution: &Solution) -> Vec<Breakpoints> {
    let activities = problem.activities();
    let rooms = Room::of(problem);
    let prices: Vec<f64> = solution
        .shadow_prices
        .iter()
        .map(|price| problem.aim().sign() * price)
        .collect();
    activities
        .iter()
        .enumerate()
        .map(|(i, &Activity { floor, cap, .. })| {
            let trial = solution.spends.get(i).copied().unwrap_or(f64::NAN);
            let room = rooms.beyond_floor(problem, i);
            let reach = if room.is_finite() || cap.is_finite() {
                cap.min(floor + room)
            } else {
                needed_of(problem, i, trial)
            };
            // A cap that only repeats a row would share that row's price with it.
            let cap = cap.min(floor + 2.0 * room);
            let price = price_of_unit(problem.constraints(), &prices, i);
            Breakpoints::around(
                problem.worth(i),
                SpendBounds { floor, cap, reach },
                trial,
                price,
            )
        })
        .collect()
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
