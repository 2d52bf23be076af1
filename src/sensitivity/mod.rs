//! What a constraint's limit is worth, and how far that holds.

use crate::model::{Problem, Solution};

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
pub fn price_constraints(_problem: &Problem, _solution: &Solution) -> Vec<ConstraintPrice> {
    unimplemented!()
}
