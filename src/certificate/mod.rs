//! The proof of a plan, recomputed from the problem, the spends and the prices alone.
//!
//! Nothing here looks at how the solver came to its answer, and nothing here imports it. Three
//! things are proven: that the plan can be carried out (primal residual), that no unit of spend would earn
//! more elsewhere (stationarity, complementarity), and that nothing better exists at all: the
//! dual value at the reported prices bounds the total of *any* plan ([`Certificate::gap`]). Two
//! linear programmes then enclose the best total a second time, by other code ([`LpCheck`]).

mod bracket;
mod dual;
mod polyline;
mod programme;
mod room;

pub use bracket::{BRACKET_TOLERANCE, BRACKET_WIDTH, CROSS_CHECKED_UP_TO, LpBracket, LpCheck};

use crate::model::{Aim, Problem, Solution};
use dual::Residuals;

/// Largest relative violation of a bound or a limit. Sums of a million spends are right to
/// 1e-15; a spend that is over by a thousandth of a cent in a billion is not.
pub const PRIMAL_TOLERANCE: f64 = 1e-12;

/// Largest relative miss of "marginal return = price". The solver leaves 1e-15 to 1e-11 (the
/// last on a million activities, where one spend takes up the rounding of the whole sum); moving a
/// hundred-thousandth of a spend elsewhere leaves about 1e-5.
pub const STATIONARITY_TOLERANCE: f64 = 1e-9;

/// Largest gap, and largest price × slack, relative to the size of the returns. A gap is of
/// second order in an error of the spends, so it is far below this wherever the others hold.
pub const GAP_TOLERANCE: f64 = 1e-9;

/// Whether the plan is proven best.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Verdict {
    /// Every residual and the gap are within their tolerances, and the linear programmes, where
    /// they were run, enclose the total.
    Proven,
    /// At least one of them is not.
    NotProven,
}

/// When the cross-check by linear programming runs.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum CrossCheck {
    /// Up to [`CROSS_CHECKED_UP_TO`] activities and straight pieces.
    WhenQuick,
    /// At any size.
    Always,
}

/// The certificate. Residuals and gap are relative; each says to what.
#[derive(Debug, Clone, PartialEq)]
pub struct Certificate {
    /// The verdict over all of it.
    pub verdict: Verdict,
    /// Total of the plan, Σ w_i r_i(x_i) with bases, units of the total.
    pub total: f64,
    /// Least value that the best total can have, units of the total; −∞ where nothing is known.
    pub lower_bound: f64,
    /// Greatest value that the best total can have; +∞ where nothing is known.
    pub upper_bound: f64,
    /// (dual value − total)/scale, ≥ 0. The scale is the greater of Σ|w_i r_i|, the returns without their
    /// bases, and 1e-5 of Σ|λ_k b_k|, what the limits are worth.
    pub gap: f64,
    /// Greatest violation of a bound or a limit, relative to the greater of it and the size of what stands
    /// against it, Σ|a_ki x_i| for a limit.
    pub primal_residual: f64,
    /// Greatest miss of "marginal return = price of what the unit uses" over the activities,
    /// relative to the greater of the two. A spend is taken to a few units in its last place.
    pub stationarity_residual: f64,
    /// Greatest |price × slack| over the constraints, relative to the scale of the gap.
    pub complementarity_residual: f64,
    /// The cross-check by linear programming.
    pub lp: LpCheck,
}

/// Proves the plan, or says what is missing.
pub fn certify(problem: &Problem, solution: &Solution, cross_check: CrossCheck) -> Certificate {
    let residuals = Residuals::of(problem, solution);
    let total = problem.total(&solution.spends);
    let feasible = residuals.primal <= PRIMAL_TOLERANCE;
    // A plan that breaks a limit says nothing about what can be reached.
    let reached = if feasible {
        total
    } else {
        -problem.aim().sign() * f64::INFINITY
    };
    let bound = total + problem.aim().sign() * residuals.gap;
    let lp = bracket::cross_check(problem, solution, feasible, cross_check);
    let within_bracket = match &lp {
        LpCheck::Bracketed(bracket) => bracket.encloses,
        // Without a bracket the proof is the gap alone, and the report says so.
        LpCheck::LeftOut { .. } | LpCheck::Failed { .. } => true,
    };
    let gap = residuals.relative(residuals.gap);
    let complementarity = residuals.relative(residuals.complementarity);
    let holds = feasible
        && residuals.stationarity <= STATIONARITY_TOLERANCE
        && complementarity <= GAP_TOLERANCE
        && gap <= GAP_TOLERANCE
        && total.is_finite()
        && within_bracket;
    let (lower_bound, upper_bound) = match problem.aim() {
        Aim::Maximise => (reached, bound),
        Aim::Minimise => (bound, reached),
    };
    Certificate {
        verdict: if holds {
            Verdict::Proven
        } else {
            Verdict::NotProven
        },
        total,
        lower_bound,
        upper_bound,
        gap,
        primal_residual: residuals.primal,
        stationarity_residual: residuals.stationarity,
        complementarity_residual: complementarity,
        lp,
    }
}
