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

/// Straight lines through knots, defined from the first to the last of them. The marginal return
/// of a knot at which the curve bends is an interval: the slope after it up to the slope before
/// it. Knots that lie on one line, but for rounding, belong to one piece with one slope: were it
/// to rise by a rounding, a price between would take the end of the line and not its beginning.
#[derive(Debug, Clone, PartialEq)]
pub struct Points {
    /// Two or more, spends strictly rising.
    knots: Arc<[Knot]>,
    /// One or more, each beginning where the one before it ends, no two neighbours of one slope.
    pieces: Arc<[Piece]>,
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
        let knots: Arc<[Knot]> = order.into_iter().map(|row| given[row]).collect();
        Ok(Self {
            pieces: straight_pieces(&knots),
            knots,
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

    /// The straight pieces, in the order of spend; neighbours differ in slope.
    pub fn pieces(&self) -> impl ExactSizeIterator<Item = Piece> + '_ {
        (0..self.pieces.len()).map(|at| self.piece(at))
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
        (1..self.pieces.len())
            .filter(|&at| floor < self.pieces[at].from && self.pieces[at].from < cap)
            .find(|&at| shape_of_bend(self.piece(at - 1).slope, self.piece(at).slope) == shape)
            .map(|at| self.pieces[at].from)
    }

    pub(super) fn scaled(&self, factor: f64) -> Self {
        Self {
            knots: Arc::clone(&self.knots),
            pieces: Arc::clone(&self.pieces),
            factor: self.factor * factor,
        }
    }

    fn piece(&self, at: usize) -> Piece {
        let piece = self.pieces[at];
        Piece {
            slope: piece.slope * self.factor,
            ..piece
        }
    }

    /// The piece that holds `spend`: at a bend the one after it, beyond the ends the outermost.
    fn piece_from(&self, spend: f64) -> Piece {
        let after = self.pieces.partition_point(|piece| piece.to <= spend);
        self.piece(after.min(self.pieces.len() - 1))
    }

    /// The piece that holds `spend`: at a bend the one before it.
    fn piece_up_to(&self, spend: f64) -> Piece {
        let before = self.pieces.partition_point(|piece| piece.to < spend);
        self.piece(before.min(self.pieces.len() - 1))
    }
}

impl ReturnCurve for Points {
    /// Linear interpolation; the outermost pieces continued beyond the ends.
    fn value(&self, spend: f64) -> f64 {
        let after = self.knots.partition_point(|knot| knot.spend <= spend);
        let end = after.clamp(1, self.knots.len() - 1);
        let (start, end) = (self.knots[end - 1], self.knots[end]);
        (start.value + (spend - start.spend) * slope_between(start, end)) * self.factor
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
        self.piece(self.pieces.len() - 1).slope
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

fn slope_between(from: Knot, to: Knot) -> f64 {
    (to.value - from.value) / (to.spend - from.spend)
}

/// By how much a slope may be off because its knots are rounded.
fn rounding_of_slope(from: Knot, to: Knot) -> f64 {
    let width = to.spend - from.spend;
    let slope = slope_between(from, to).abs();
    let of_knots = from.value.abs() + to.value.abs() + slope * (from.spend + to.spend);
    SAME_SLOPE * slope + f64::EPSILON * of_knots / width
}

/// The longest pieces whose knots lie on one line but for rounding, each with the slope between
/// its ends.
fn straight_pieces(knots: &[Knot]) -> Arc<[Piece]> {
    let mut runs: Vec<(Knot, Knot)> = Vec::with_capacity(knots.len() - 1);
    for pair in knots.windows(2) {
        let mut run = (pair[0], pair[1]);
        while let Some(&(from, to)) = runs.last() {
            let bend = (slope_between(from, to) - slope_between(run.0, run.1)).abs();
            if bend > rounding_of_slope(from, to).max(rounding_of_slope(run.0, run.1)) {
                break;
            }
            runs.pop();
            run = (from, run.1);
        }
        runs.push(run);
    }
    runs.into_iter()
        .map(|(from, to)| Piece {
            from: from.spend,
            to: to.spend,
            slope: slope_between(from, to),
        })
        .collect()
}

fn shape_of_bend(before: f64, after: f64) -> Shape {
    if after < before {
        Shape::Concave
    } else if after > before {
        Shape::Convex
    } else {
        Shape::Straight
    }
}
