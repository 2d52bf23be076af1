//! The proof of a plan, recomputed from the problem, the spends and the prices alone.
//!
//! Nothing here looks at how the solver came to its answer, and nothing here imports it.

use crate::model::{Problem, Solution};

/// Whether the plan is proven best.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Verdict {
    /// Every residual and the gap are within their tolerances, and the linear programmes, where
    /// they were run, enclose the total.
    Proven,
    /// At least one of them is not.
    NotProven,
}

/// What the cross-check by linear programming found.
#[derive(Debug, Clone, PartialEq)]
pub enum LpCheck {
    /// Two linear programmes were solved.
    Bracketed(LpBracket),
    /// Left out because of the size of the plan.
    LeftOut {
        /// Activities of this plan.
        activities: usize,
        /// Activities up to which it runs by default.
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
    /// Nothing better than `lower` … `upper` exists; units of the total. `lower` ≤ `upper`
    /// whatever the aim.
    pub lower: f64,
    /// The other end.
    pub upper: f64,
    /// Shadow price of every constraint by the explicit dual programme, sign as in the report.
    pub prices: Vec<f64>,
    /// How often the breakpoints were refined.
    pub rounds: usize,
}

/// When the cross-check by linear programming runs.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum CrossCheck {
    /// Up to a size that takes about a second.
    WhenQuick,
    /// At any size.
    Always,
}

/// The certificate. Residuals and gap are relative; each says to what.
#[derive(Debug, Clone, PartialEq)]
pub struct Certificate {
    /// The verdict over all of it.
    pub verdict: Verdict,
    /// Least value that the best total can have, units of the total.
    pub lower_bound: f64,
    /// Greatest value that the best total can have.
    pub upper_bound: f64,
    /// (dual value − total)/scale of the total, ≥ 0.
    pub gap: f64,
    /// Greatest violation of a bound or a limit, relative to that bound or limit.
    pub primal_residual: f64,
    /// Greatest miss of "marginal return = price of what the unit uses" over the activities,
    /// relative to that price.
    pub stationarity_residual: f64,
    /// Greatest |price × slack| over the constraints, relative to the scale of the total.
    pub complementarity_residual: f64,
    /// The cross-check by linear programming.
    pub lp: LpCheck,
}

/// Proves the plan, or says what is missing.
pub fn certify(_problem: &Problem, _solution: &Solution, _cross_check: CrossCheck) -> Certificate {
    unimplemented!()
}
