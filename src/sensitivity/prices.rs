//! The price of a limit on both sides, and the range over which it holds.
//!
//! The best total is a concave function of the limit (convex, for a least cost). Where its slope
//! jumps, the value of one more unit and the loss from one less differ. One more unit goes to
//! the activity whose next unit earns most; one less is taken where the last unit earned least.

use rayon::prelude::*;

use crate::curves::{Curve, ReturnCurve};
use crate::model::{Problem, Sense, Solution};
use crate::numeric::BLOCK;
use crate::solver::Demand;

/// The price of one constraint, on both sides.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ConstraintPrice {
    /// What the plan uses, in units of the limit.
    pub used: f64,
    /// limit − used.
    pub slack: f64,
    /// Whether the use meets the limit.
    pub binding: bool,
    /// Derivative of the best total by the limit, units of the total per unit of the limit; where
    /// the two sides differ, the value between them that the solver found.
    pub shadow_price: f64,
    /// Right derivative: what one more unit of the limit is worth. `None` where no plan meets a
    /// greater limit.
    pub one_more: Option<f64>,
    /// Left derivative: what one less unit of the limit costs. `None` where no plan meets a
    /// smaller limit.
    pub one_less: Option<f64>,
    /// Least limit at which the same bounds and rows bind; `None` where there is no end.
    pub holds_from: Option<f64>,
    /// Greatest such limit; `None` where there is no end.
    pub holds_to: Option<f64>,
}

/// The price of every constraint of a solved plan, in the order of the constraints.
/// `demand` is the problem's own.
pub fn price_constraints(
    problem: &Problem,
    solution: &Solution,
    demand: &Demand,
) -> Vec<ConstraintPrice> {
    vec![price_limit(problem, solution, demand)]
}

fn price_limit(problem: &Problem, solution: &Solution, demand: &Demand) -> ConstraintPrice {
    let constraint = &problem.constraints()[0];
    let sign = problem.aim().sign();
    let shadow_price = solution.shadow_prices[0];
    let used = problem.used(0, &solution.spends);
    let binding = constraint.is_binding(used);
    let mut price = ConstraintPrice {
        used,
        slack: constraint.slack(used),
        binding,
        shadow_price,
        one_more: Some(0.0),
        one_less: Some(0.0),
        holds_from: None,
        holds_to: None,
    };
    if !binding {
        match constraint.sense {
            Sense::AtMost => price.holds_from = Some(used),
            _ => price.holds_to = Some(used),
        }
        return price;
    }
    let margin = Margin::of(problem, &solution.spends);
    let found = sign * shadow_price;
    let [next, last] = margin.sides(constraint.sense, found);
    price.one_more = (next > f64::NEG_INFINITY).then_some(sign * next);
    price.one_less = (last < f64::INFINITY).then_some(sign * last);
    [price.holds_from, price.holds_to] =
        margin.holds(demand, constraint.sense, constraint.limit, found);
    price
}

/// Where the activities stand at the margin, in worth per unit of what is limited.
#[derive(Debug, Clone, Copy)]
struct Margin {
    /// An activity stands on a smooth stretch between its bounds, so the price has one value.
    moves: bool,
    /// An activity stands on a straight piece, so the price stays until the piece ends.
    straight: bool,
    /// The best next unit of those at a bound or a knot, below their cap; −∞ if none.
    best_next: f64,
    /// The poorest last unit of those at a bound or a knot, above their floor; +∞ if none.
    poorest_last: f64,
    /// The greatest price below, at which an activity enters, meets its cap or leaves a knot,
    /// and whether that price is only approached as a spend grows without end.
    event_below: (f64, bool),
    /// The least price above, at which an activity meets its floor, or leaves its cap or a knot.
    event_above: f64,
}

impl Margin {
    fn of(problem: &Problem, spends: &[f64]) -> Self {
        (0..spends.len())
            .into_par_iter()
            .with_min_len(BLOCK)
            .map(|i| Self::of_activity(problem, i, spends[i]))
            .reduce(Self::nobody, Self::joined)
    }

    fn nobody() -> Self {
        Self {
            moves: false,
            straight: false,
            best_next: f64::NEG_INFINITY,
            poorest_last: f64::INFINITY,
            event_below: (f64::NEG_INFINITY, false),
            event_above: f64::INFINITY,
        }
    }

    /// Greatest and least only, so that the order of joining does not matter.
    fn joined(self, other: Self) -> Self {
        let below = match self.event_below.0.total_cmp(&other.event_below.0) {
            std::cmp::Ordering::Less => other.event_below,
            std::cmp::Ordering::Greater => self.event_below,
            std::cmp::Ordering::Equal => (
                self.event_below.0,
                self.event_below.1 && other.event_below.1,
            ),
        };
        Self {
            moves: self.moves || other.moves,
            straight: self.straight || other.straight,
            best_next: self.best_next.max(other.best_next),
            poorest_last: self.poorest_last.min(other.poorest_last),
            event_below: below,
            event_above: self.event_above.min(other.event_above),
        }
    }

    fn of_activity(problem: &Problem, i: usize, spend: f64) -> Self {
        let activity = &problem.activities()[i];
        let per_unit = problem.constraints()[0].use_per_unit(i);
        let (floor, cap) = (activity.floor, activity.cap);
        let mut margin = Self::nobody();
        if floor == cap {
            return margin;
        }
        let worth = problem.worth(i);
        let between = floor < spend && spend < cap;
        let at_knot = match &worth {
            Curve::Points(curve) => curve.marginal(spend) != curve.marginal_before(spend),
            _ => false,
        };
        if between && !at_knot {
            margin.moves = true;
            margin.straight = worth.curvature(spend) == 0.0;
            margin.event_below = if cap.is_finite() {
                (worth.marginal_before(cap) / per_unit, false)
            } else {
                (worth.marginal_at_infinity() / per_unit, true)
            };
            margin.event_above = worth.marginal(floor) / per_unit;
            return margin;
        }
        if spend < cap {
            margin.best_next = worth.marginal(spend) / per_unit;
            margin.event_below = (margin.best_next, false);
        }
        if floor < spend {
            margin.poorest_last = worth.marginal_before(spend) / per_unit;
            margin.event_above = margin.poorest_last;
        }
        margin
    }

    /// The value of the next unit and of the last one. Money left over earns nothing, and under
    /// a requirement spending more than required costs what it costs: both bound the price by 0.
    fn sides(&self, sense: Sense, found: f64) -> [f64; 2] {
        if self.moves {
            return [found, found];
        }
        match sense {
            Sense::AtMost => [self.best_next.max(0.0), self.poorest_last.max(0.0)],
            Sense::AtLeast => [self.best_next.min(0.0), self.poorest_last.min(0.0)],
            Sense::Equal => [self.best_next, self.poorest_last],
        }
    }

    /// The limits between which nobody enters, leaves a bound or meets one. On straight pieces
    /// that share a price the ends are where all of them are taken, or none.
    fn holds(&self, demand: &Demand, sense: Sense, limit: f64, found: f64) -> [Option<f64>; 2] {
        let finite = |limit: f64| limit.is_finite().then_some(limit);
        if !self.moves {
            return [Some(limit), Some(limit)];
        }
        if self.straight {
            let at_price = demand.at(found);
            // A curve so flat that its bend is no number asks for one spend, not for its own.
            return [
                finite(at_price.least.min(limit)),
                finite(at_price.greatest.max(limit)),
            ];
        }
        let (mut below, mut endless) = self.event_below;
        let mut above = self.event_above;
        match sense {
            Sense::AtMost if below < 0.0 => (below, endless) = (0.0, false),
            Sense::AtLeast => above = above.min(0.0),
            _ => {}
        }
        let to = if endless {
            f64::INFINITY
        } else {
            demand.at(below.min(found)).least
        };
        let from = demand.at(above.max(found)).greatest;
        [finite(from.min(limit)), finite(to.max(limit))]
    }
}
