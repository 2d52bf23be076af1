//! From a problem to a solution, by bisection on the shadow price.
//!
//! At a price λ of what is limited, every activity asks for the spend whose last unit earns λ
//! (`demand`). What they ask for together falls as λ rises, so the price at which it meets
//! the limit can be enclosed and bisected (`price`). At a jump the activities at the margin share
//! what is left (`share`).
//!
//! Everything here maximises: costs enter with their sign turned, see
//! [`Problem::worth`](crate::model::Problem::worth).

mod compile;
mod demand;
mod error;
mod narrow;
mod price;
mod rounding;
mod share;

pub use demand::{Demand, UseRange};
pub use error::SolveError;
pub use rounding::{RoundError, Rounded, round_spends};

use crate::curves::ReturnCurve;
use crate::model::{Activity, Problem, Sense, Solution, UsePerUnit};
use price::PriceBracket;

/// The best plan: the spends at which the last unit earns the same everywhere.
///
/// # Errors
/// [`SolveError`] where no best plan exists, or where the plan has not exactly one constraint
/// with positive use.
pub fn solve(problem: &Problem) -> Result<Solution, SolveError> {
    solve_from(problem, &demand_of(problem)?)
}

/// [`solve`] from the problem's own demand, for those who go on to use it.
///
/// # Errors
/// [`SolveError`] where no best plan exists.
pub fn solve_from(problem: &Problem, demand: &Demand) -> Result<Solution, SolveError> {
    let constraint = &problem.constraints()[0];
    let sense = constraint.sense;
    let UseRange {
        least: least_use,
        greatest: greatest_use,
    } = demand.of_bounds();
    // Floors of 0.1 and 0.2 fill a budget of 0.3, although in binary numbers they exceed it.
    let limit = [least_use, greatest_use]
        .into_iter()
        .find(|&bounds| constraint.is_filled_by(bounds))
        .unwrap_or(constraint.limit);
    let too_low = limit < least_use && sense != Sense::AtLeast;
    let too_high = limit > greatest_use && sense != Sense::AtMost;
    if too_low || too_high {
        return Err(SolveError::Infeasible {
            constraint: 0,
            limit,
            least_use,
            greatest_use,
        });
    }

    // At the ends of what the bounds allow there is one plan, and the price is its bound.
    let all_at = |bound: fn(&Activity) -> f64| problem.activities().iter().map(bound).collect();
    let (price, spends) = if limit == least_use && sense != Sense::AtLeast {
        (first_unit_price(problem), all_at(|activity| activity.floor))
    } else if limit == greatest_use && sense != Sense::AtMost {
        (last_unit_price(problem), all_at(|activity| activity.cap))
    } else {
        let bracket = if price_is_zero(demand, sense, limit) {
            PriceBracket::exactly(0.0)
        } else {
            price::enclose(demand, sense, limit)
        };
        (
            bracket.price(),
            share::spends_within(problem, bracket, sense, limit)?,
        )
    };
    // Only at zero spend can a curve be without a finite return.
    let infinite = |&i: &usize| spends[i] == 0.0 && problem.worth(i).value(0.0).is_infinite();
    if let Some(activity) = (0..spends.len()).find(infinite) {
        return Err(SolveError::NoFiniteTotal { activity });
    }
    Ok(Solution {
        spends,
        shadow_prices: vec![problem.aim().sign() * price],
    })
}

/// The activities' demand for what the plan's one constraint limits.
///
/// # Errors
/// [`SolveError::NotOneConstraint`] or [`SolveError::UseNotPositive`].
pub fn demand_of(problem: &Problem) -> Result<Demand, SolveError> {
    let [constraint] = problem.constraints() else {
        return Err(SolveError::NotOneConstraint {
            found: problem.constraints().len(),
        });
    };
    if let UsePerUnit::PerActivity(uses) = &constraint.use_per_unit
        && let Some(activity) = uses.iter().position(|use_per_unit| *use_per_unit <= 0.0)
    {
        return Err(SolveError::UseNotPositive { activity });
    }
    Ok(compile::compile(problem))
}

/// Whether the limit does not bind: at price zero the activities ask for no more than an upper
/// limit, or for no less than a lower one.
fn price_is_zero(demand: &Demand, sense: Sense, limit: f64) -> bool {
    let free = demand.at(0.0);
    match sense {
        Sense::AtMost => free.least <= limit,
        Sense::AtLeast => free.greatest >= limit,
        Sense::Equal => free.least <= limit && limit <= free.greatest,
    }
}

/// The least price at which every activity stays at its floor: the best first unit's.
fn first_unit_price(problem: &Problem) -> f64 {
    let constraint = &problem.constraints()[0];
    let open = |i: &usize| problem.activities()[*i].floor < problem.activities()[*i].cap;
    (0..problem.activities().len())
        .filter(open)
        .map(|i| {
            problem.worth(i).marginal(problem.activities()[i].floor) / constraint.use_per_unit(i)
        })
        .reduce(f64::max)
        .map_or(0.0, |price| within_sense(constraint.sense, price))
}

/// The greatest price at which every activity stays at its cap: the poorest last unit's.
fn last_unit_price(problem: &Problem) -> f64 {
    let constraint = &problem.constraints()[0];
    let open = |i: &usize| problem.activities()[*i].floor < problem.activities()[*i].cap;
    (0..problem.activities().len())
        .filter(open)
        .map(|i| {
            problem
                .worth(i)
                .marginal_before(problem.activities()[i].cap)
                / constraint.use_per_unit(i)
        })
        .reduce(f64::min)
        .map_or(0.0, |price| within_sense(constraint.sense, price))
}

/// An upper limit never has a negative price, a lower one never a positive.
fn within_sense(sense: Sense, price: f64) -> f64 {
    match sense {
        Sense::AtMost => price.max(0.0),
        Sense::AtLeast => price.min(0.0),
        Sense::Equal => price,
    }
}
