//! The rows of the table of activities, and why each spend is what it is.

use std::fmt;

use crate::curves::{Curve, ReturnCurve, Shape};
use crate::model::{Activity, Aim, Position, Problem, Solution};
use crate::numeric::figures;

/// Every row of the table, worked out when it is asked for: a plan of a million activities
/// writes its tables without holding them.
#[derive(Debug, Clone, Copy)]
pub struct ActivityRows<'a> {
    problem: &'a Problem,
    solution: &'a Solution,
    spends: &'a [f64],
}

/// One row. Money is in units of spend.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ActivityRow<'a> {
    /// The activity's name.
    pub activity: &'a str,
    /// Planned spend.
    pub spend: f64,
    /// Return at that spend, base included, in the activity's own unit of return.
    pub return_: f64,
    /// What the next unit of spend gives, in the common unit.
    pub marginal_return: f64,
    /// Where the spend stands between the bounds.
    pub position: Position,
}

impl<'a> ActivityRows<'a> {
    /// The rows of a solved plan that show these `spends`: the solution's own, or rounded ones.
    pub fn new(problem: &'a Problem, solution: &'a Solution, spends: &'a [f64]) -> Self {
        Self {
            problem,
            solution,
            spends,
        }
    }

    /// How many activities there are.
    pub fn len(&self) -> usize {
        self.spends.len()
    }

    /// Whether there are none.
    pub fn is_empty(&self) -> bool {
        self.spends.is_empty()
    }

    /// Row `i`.
    #[inline]
    pub fn row(&self, i: usize) -> ActivityRow<'a> {
        let activity = self.activity(i);
        let spend = self.spends[i];
        ActivityRow {
            activity: &activity.name,
            spend,
            return_: self.problem.return_at(i, spend),
            marginal_return: self.problem.marginal_return_at(i, spend),
            position: activity.position(spend),
        }
    }

    /// Activity `i` as it was read.
    pub fn activity(&self, i: usize) -> &'a Activity {
        &self.problem.activities()[i]
    }

    /// Planned spend less today's; `None` where today's is not known.
    pub fn change(&self, i: usize) -> Option<f64> {
        self.activity(i)
            .current
            .map(|current| self.spends[i] - current)
    }

    /// Whether the spend lies outside the range that the curve was fitted on.
    pub fn is_extrapolated(&self, i: usize) -> bool {
        self.activity(i)
            .observed
            .is_some_and(|observed| observed.excludes(self.spends[i]))
    }

    /// Why the spend of activity `i` is what it is; of the exact plan, also where rounded spends
    /// are shown.
    pub fn why(&self, i: usize) -> Why {
        let activity = self.activity(i);
        let spend = self.solution.spends[i];
        let price = self.price_of_spend(i);
        let next = self.problem.marginal_return_at(i, spend);
        let share = (price != 0.0 && price.is_finite() && next.is_finite()).then(|| next / price);
        let reason = match activity.position(spend) {
            _ if activity.floor == activity.cap => Reason::Fixed,
            Position::AtCap => Reason::AtCap(share),
            Position::AtFloor | Position::Unfunded if price.is_infinite() => Reason::NothingLeft,
            Position::AtFloor => Reason::AtFloor(share),
            Position::Unfunded => Reason::Unfunded(share),
            Position::Between if price == 0.0 => Reason::Saturated,
            Position::Between if spend != self.spends[i] => Reason::Rounded,
            Position::Between => match share {
                Some(share) if self.is_at_knot(i, spend) => Reason::AtKnot(share),
                _ if is_straight(activity) => Reason::Straight,
                _ => Reason::AtPrice,
            },
        };
        Why {
            reason,
            aim: self.problem.aim(),
        }
    }

    /// Σ λ_k a_ki: what one unit of spend on activity `i` costs at the shadow prices.
    fn price_of_spend(&self, i: usize) -> f64 {
        let prices = self.problem.constraints().iter();
        prices
            .zip(&self.solution.shadow_prices)
            .map(|(constraint, price)| constraint.use_per_unit(i) * price)
            .sum()
    }

    fn is_at_knot(&self, i: usize, spend: f64) -> bool {
        let curve = &self.activity(i).curve;
        curve.marginal(spend) != curve.marginal_before(spend)
    }
}

/// Whether a spend between knots or bounds lies on a straight piece.
fn is_straight(activity: &Activity) -> bool {
    match activity.curve {
        Curve::Points(_) => true,
        _ => activity.curve.shape(activity.floor, activity.cap) == Shape::Straight,
    }
}

/// Why a spend is what it is. Shares are marginal return over price.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Reason {
    /// The next unit earns exactly the price.
    AtPrice,
    /// A straight piece of a curve earns the price all along and takes what is left; several
    /// such share it.
    Straight,
    /// A knot of a tabulated curve: the last unit earned more than the price, the next earns less.
    AtKnot(f64),
    /// The cap stops it.
    AtCap(Option<f64>),
    /// The floor holds it up.
    AtFloor(Option<f64>),
    /// The first unit earns too little.
    Unfunded(Option<f64>),
    /// The limit leaves nothing above the floors, at any price.
    NothingLeft,
    /// Nothing more can be earned.
    Saturated,
    /// The next unit earned the price before the spend was rounded.
    Rounded,
    /// Floor and cap are the same.
    Fixed,
}

/// A reason, worded for the aim of the plan.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Why {
    /// The reason.
    pub reason: Reason,
    aim: Aim,
}

impl Why {
    /// The aim that it is worded for.
    pub fn aim(&self) -> Aim {
        self.aim
    }

    /// The reason in at most 16 columns.
    pub fn short(&self) -> String {
        let with = |position: &str, share: Option<f64>| match share {
            Some(share) => format!("{position}, {}", figures::times(share)),
            None => position.to_owned(),
        };
        match self.reason {
            Reason::AtPrice => match self.aim {
                Aim::Maximise => "earns the price".to_owned(),
                Aim::Minimise => "costs the price".to_owned(),
            },
            Reason::Straight => "fills the rest".to_owned(),
            Reason::AtKnot(share) => with("at a knot", Some(share)),
            Reason::AtCap(share) => with("at cap", share),
            Reason::AtFloor(share) => with("at floor", share),
            Reason::Unfunded(share) => with("unfunded", share),
            Reason::NothingLeft => "nothing left".to_owned(),
            Reason::Saturated => "saturated".to_owned(),
            Reason::Rounded => "rounded".to_owned(),
            Reason::Fixed => "fixed".to_owned(),
        }
    }
}

impl fmt::Display for Why {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let (verb, earned) = match self.aim {
            Aim::Maximise => ("earn", "earned"),
            Aim::Minimise => ("cost", "cost"),
        };
        let mut with = |position: &str, unit: &str, share: Option<f64>| match share {
            Some(share) => {
                let ratio = figures::times(share);
                let ratio = ratio.trim_end_matches('×');
                write!(
                    f,
                    "{position}the {unit} unit would {verb} {ratio} times the price"
                )
            }
            None => f.write_str(position.trim_end_matches(": ")),
        };
        match self.reason {
            Reason::AtPrice => write!(f, "the next unit {verb}s the price"),
            Reason::Straight => write!(
                f,
                "every unit on this straight piece {verb}s the price: takes its part of what is left"
            ),
            Reason::AtKnot(share) => with("at a knot: ", "next", Some(share)),
            Reason::AtCap(share) => with("at its cap: ", "next", share),
            Reason::AtFloor(share) => with("at its floor: ", "next", share),
            Reason::Unfunded(share) => with("unfunded: ", "first", share),
            Reason::NothingLeft => f.write_str("the limit leaves nothing above the floors"),
            Reason::Saturated => f.write_str("saturated: more would earn nothing"),
            Reason::Rounded => write!(f, "rounded: the next unit {earned} the price before"),
            Reason::Fixed => f.write_str("floor and cap are the same"),
        }
    }
}
