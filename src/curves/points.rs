//! Tabulated return: straight lines through the rows of a table.

use std::sync::Arc;

use super::{CurveError, ReturnCurve, Shape, SpendRange};

/// One row of the table.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Knot {
    /// Spend, in units of spend; ≥ 0.
    pub spend: f64,
    /// Return at that spend, in units of return.
    pub value: f64,
}

/// Straight lines through knots, defined from the first to the last of them. A knot's marginal
/// return is an interval: the slope after it up to the slope before it.
#[derive(Debug, Clone, PartialEq)]
pub struct Points {
    /// Two or more, spends strictly rising.
    knots: Arc<[Knot]>,
    factor: f64,
}

/// One straight piece of a [`Points`] curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Piece {
    /// Spend at which the piece begins.
    pub from: f64,
    /// Spend at which it ends.
    pub to: f64,
    /// Return per unit of spend on it.
    pub slope: f64,
}

impl Points {
    /// A curve through the knots, given in any order.
    ///
    /// # Errors
    /// [`CurveError`] for fewer than two knots, a knot that is not finite or has a negative
    /// spend, and two knots at one spend.
    pub fn new(given: &[Knot]) -> Result<Self, CurveError> {
        if given.len() < 2 {
            return Err(CurveError::TooFewKnots { found: given.len() });
        }
        let usable =
            |knot: &Knot| 0.0 <= knot.spend && knot.spend.is_finite() && knot.value.is_finite();
        if let Some(row) = given.iter().position(|knot| !usable(knot)) {
            return Err(CurveError::BadKnot { row });
        }
        let mut order: Vec<usize> = (0..given.len()).collect();
        order.sort_by(|&a, &b| given[a].spend.total_cmp(&given[b].spend));
        if let Some(pair) = order
            .windows(2)
            .find(|pair| given[pair[0]].spend == given[pair[1]].spend)
        {
            return Err(CurveError::RepeatedKnot {
                row: pair[1],
                spend: given[pair[1]].spend,
            });
        }
        Ok(Self {
            knots: order.into_iter().map(|row| given[row]).collect(),
            factor: 1.0,
        })
    }

    /// The knots, spends strictly rising.
    pub fn knots(&self) -> impl ExactSizeIterator<Item = Knot> + '_ {
        self.knots.iter().map(|knot| Knot {
            spend: knot.spend,
            value: knot.value * self.factor,
        })
    }

    /// The straight pieces, in the order of spend.
    pub fn pieces(&self) -> impl ExactSizeIterator<Item = Piece> + '_ {
        (1..self.knots.len()).map(|end| self.piece(end))
    }

    /// Spend of the first knot, where the curve begins.
    pub fn first_spend(&self) -> f64 {
        self.knots[0].spend
    }

    /// Spend of the last knot, where the curve ends.
    pub fn last_spend(&self) -> f64 {
        self.knots[self.knots.len() - 1].spend
    }

    /// Spend of the first knot strictly between `floor` and `cap` at which the curve bends that
    /// way ([`Shape::Concave`] or [`Shape::Convex`]).
    pub fn bend_within(&self, floor: f64, cap: f64, shape: Shape) -> Option<f64> {
        (1..self.knots.len() - 1)
            .filter(|&knot| floor < self.knots[knot].spend && self.knots[knot].spend < cap)
            .find(|&knot| {
                shape_of_bend(self.piece(knot).slope, self.piece(knot + 1).slope) == shape
            })
            .map(|knot| self.knots[knot].spend)
    }

    pub(super) fn scaled(&self, factor: f64) -> Self {
        Self {
            knots: Arc::clone(&self.knots),
            factor: self.factor * factor,
        }
    }

    /// The piece that ends at knot `end` ≥ 1.
    fn piece(&self, end: usize) -> Piece {
        let (from, to) = (self.knots[end - 1], self.knots[end]);
        Piece {
            from: from.spend,
            to: to.spend,
            slope: (to.value - from.value) / (to.spend - from.spend) * self.factor,
        }
    }

    /// The piece that holds `spend`: at a knot the one after it, beyond the ends the outermost.
    fn piece_from(&self, spend: f64) -> Piece {
        let after = self.knots.partition_point(|knot| knot.spend <= spend);
        self.piece(after.clamp(1, self.knots.len() - 1))
    }

    /// The piece that holds `spend`: at a knot the one before it.
    fn piece_up_to(&self, spend: f64) -> Piece {
        let before = self.knots.partition_point(|knot| knot.spend < spend);
        self.piece(before.clamp(1, self.knots.len() - 1))
    }
}

impl ReturnCurve for Points {
    /// Linear interpolation; the outermost pieces continued beyond the ends.
    fn value(&self, spend: f64) -> f64 {
        let after = self.knots.partition_point(|knot| knot.spend <= spend);
        let start = self.knots[after.clamp(1, self.knots.len() - 1) - 1];
        start.value * self.factor + (spend - start.spend) * self.piece_from(spend).slope
    }

    /// Slope of the piece after `spend`.
    fn marginal(&self, spend: f64) -> f64 {
        self.piece_from(spend).slope
    }

    /// Slope of the piece before `spend`.
    fn marginal_before(&self, spend: f64) -> f64 {
        self.piece_up_to(spend).slope
    }

    /// The last slope, as if the last piece went on.
    fn marginal_at_infinity(&self) -> f64 {
        self.piece(self.knots.len() - 1).slope
    }

    /// From the end of the last steeper piece to the end of the last piece that is not less
    /// steep, within the table.
    fn inverse_marginal(&self, marginal: f64) -> SpendRange {
        let ends_where = |steeper: &dyn Fn(f64) -> bool| {
            self.pieces()
                .take_while(|piece| steeper(piece.slope))
                .last()
                .map_or(self.first_spend(), |piece| piece.to)
        };
        SpendRange {
            least: ends_where(&|slope| slope > marginal),
            greatest: ends_where(&|slope| slope >= marginal),
        }
    }

    fn curvature(&self, _spend: f64) -> f64 {
        0.0
    }

    fn shape(&self, floor: f64, cap: f64) -> Shape {
        let bends = |shape| self.bend_within(floor, cap, shape).is_some();
        match (bends(Shape::Concave), bends(Shape::Convex)) {
            (false, false) => Shape::Straight,
            (true, false) => Shape::Concave,
            (false, true) => Shape::Convex,
            (true, true) => Shape::BendsBothWays,
        }
    }
}

/// Relative difference of two neighbouring slopes below which they are the same: a table printed
/// to 12 digits of a straight line must not count as bent.
const SAME_SLOPE: f64 = 1e-11;

fn shape_of_bend(before: f64, after: f64) -> Shape {
    if (before - after).abs() <= SAME_SLOPE * before.abs().max(after.abs()) {
        Shape::Straight
    } else if after < before {
        Shape::Concave
    } else {
        Shape::Convex
    }
}
