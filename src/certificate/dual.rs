//! Residuals of the optimality conditions and the gap to the dual value, in one pass.
//!
//! With p_i = Σ_k λ_k a_ki the price of a unit of activity i, the dual value is
//!
//! ```text
//! g(λ) = Σ_i max_x [f_i(x) − p_i x] + Σ_k λ_k b_k,   f_i the activity's worth
//! ```
//!
//! and g(λ) ≥ Σ f_i(x_i) for any plan x that meets the constraints (weak duality: S. Boyd and
//! L. Vandenberghe, *Convex Optimization*, 2004, sec. 5.1.3). Its distance from the total is
//! summed term by term as what each activity could still gain at these prices, so that no large
//! numbers cancel.

use rayon::prelude::*;

use super::room::Room;
use crate::curves::ReturnCurve;
use crate::model::{Activity, Constraint, Problem, Sense, Solution, UsePerUnit};
use crate::numeric::{BLOCK, CompensatedSum, block_sums};

/// Units in the last place to which a spend is taken when its marginal return is compared with
/// the price. Where a curve is steep, one of them changes the marginal return by more than
/// any tolerance.
const SPEND_ROUNDING: f64 = 4.0 * f64::EPSILON;

/// Share of what the limits are worth at the claimed prices that counts as the plan's size. With
/// a tolerance of 1e-9 it lets pass a rounding of 1e-14 of a limit, whatever its price, and no
/// more: a price of 1e300 would make anything small.
const LIMITS_SHARE: f64 = 1e-5;

/// What a plan misses, in units of worth where not said otherwise.
#[derive(Debug, Clone, Copy)]
pub(super) struct Residuals {
    /// g(λ) − Σ f_i(x_i), ≥ 0; +∞ where the prices prove nothing.
    pub gap: f64,
    /// Relative violation of bounds and limits.
    pub primal: f64,
    /// Relative miss of marginal return and price.
    pub stationarity: f64,
    /// Greatest |λ_k·slack_k|.
    pub complementarity: f64,
    /// The greater of Σ|f_i(x_i)| and [`LIMITS_SHARE`] of Σ|λ_k b_k|, what gap and complementarity
    /// are compared with.
    pub scale: f64,
}

/// The share of one activity, or of a block of them.
#[derive(Clone, Copy, Default)]
struct Share {
    gap: CompensatedSum,
    scale: CompensatedSum,
    primal: f64,
    stationarity: f64,
}

impl Residuals {
    /// Residuals and gap of a plan at the reported prices.
    pub(super) fn of(problem: &Problem, solution: &Solution) -> Self {
        let sign = problem.aim().sign();
        // Prices in units of worth: more is better, whatever the aim.
        let prices: Vec<f64> = solution
            .shadow_prices
            .iter()
            .map(|price| sign * price)
            .collect();
        let count = problem.activities().len();
        if solution.spends.len() != count || prices.len() != problem.constraints().len() {
            return Self::nothing_proven();
        }
        let rooms = Room::of(problem);
        let blocks: Vec<Share> = (0..count.div_ceil(BLOCK))
            .into_par_iter()
            .map(|block| {
                let mut share = Share::default();
                for i in block * BLOCK..count.min((block + 1) * BLOCK) {
                    share.add_activity(problem, &prices, &rooms, i, solution.spends[i]);
                }
                share
            })
            .collect();
        let mut whole = Share::default();
        for share in blocks {
            whole.join(share);
        }
        let mut complementarity: f64 = 0.0;
        for (k, (constraint, &price)) in problem.constraints().iter().zip(&prices).enumerate() {
            let used = problem.used(k, &solution.spends);
            let size = size_of_use(constraint, used, &solution.spends);
            whole.primal = worst(whole.primal, violation(constraint, used, size));
            // Where only floors that fill the limit leave nothing, a price may be infinite.
            let price_of_slack = if constraint.is_filled_by(used) {
                0.0
            } else {
                price * constraint.slack(used)
            };
            complementarity = worst(complementarity, price_of_slack.abs());
            whole.gap.add(if has_right_sign(constraint.sense, price) {
                price_of_slack
            } else {
                f64::INFINITY
            });
        }
        let gap = whole.gap.total();
        // The dual value is also made of what the limits are worth, and keeps their rounding. A
        // claimed price can make that as large as it likes, so little of it counts.
        let limits_worth: f64 = problem
            .constraints()
            .iter()
            .zip(&prices)
            .map(|(constraint, price)| (price * constraint.limit).abs())
            .filter(|worth| worth.is_finite())
            .sum();
        Self {
            // Rounding can leave a gap of −1e-17; a NaN proves nothing.
            gap: if gap.is_nan() {
                f64::INFINITY
            } else {
                gap.max(0.0)
            },
            primal: whole.primal,
            stationarity: whole.stationarity,
            complementarity,
            scale: whole.scale.total().max(LIMITS_SHARE * limits_worth),
        }
    }

    /// `amount` as a share of the scale.
    pub(super) fn relative(&self, amount: f64) -> f64 {
        if amount == 0.0 {
            0.0
        } else {
            amount / self.scale
        }
    }

    fn nothing_proven() -> Self {
        Self {
            gap: f64::INFINITY,
            primal: f64::INFINITY,
            stationarity: f64::INFINITY,
            complementarity: f64::INFINITY,
            scale: 0.0,
        }
    }
}

impl Share {
    fn add_activity(
        &mut self,
        problem: &Problem,
        prices: &[f64],
        rooms: &Room,
        i: usize,
        spend: f64,
    ) {
        let activity = &problem.activities()[i];
        let worth = problem.worth(i);
        let price = price_of_unit(problem.constraints(), prices, i);
        let value = worth.value(spend);
        self.scale.add(value.abs());
        self.primal = worst(self.primal, out_of_bounds(activity, spend));

        // Nothing can be gained at a spend whose last unit earns the price, to a few roundings.
        let (floor, cap) = (activity.floor, activity.cap);
        let earning = worth.inverse_marginal(price).clipped(floor, cap);
        let earns_the_price = earning.least * (1.0 - SPEND_ROUNDING) <= spend
            && spend <= earning.greatest * (1.0 + SPEND_ROUNDING)
            && floor <= spend
            && spend <= cap;
        if earns_the_price && !price.is_nan() {
            return;
        }
        // No plan gives the activity more than the limits leave beside the floors.
        let best = earning.least.min(floor + rooms.beyond_floor(problem, i));
        // What the next unit earns beyond the price, and what the last one earned below it, at
        // spends a few roundings away.
        let mut first_order = 0.0;
        if spend < cap {
            let more = (spend * (1.0 + SPEND_ROUNDING)).max(spend + f64::MIN_POSITIVE);
            let next = worth.marginal(more.min(cap));
            self.stationarity = worst(self.stationarity, excess(next, price));
            first_order = (next - price).max(0.0) * (best - spend).max(0.0);
        }
        if floor < spend {
            let less = (spend * (1.0 - SPEND_ROUNDING)).max(floor);
            let last = worth.marginal_before(less);
            self.stationarity = worst(self.stationarity, excess(price, last));
            first_order += (price - last).max(0.0) * (spend - best).max(0.0);
        }
        // A concave worth gains no more than its slope says. Where that is less than the
        // difference of two large values can tell, it is the better bound.
        let gain = worth.value(best) - value - price * (best - spend);
        let unknown = gain.is_nan() || first_order.is_nan() || price.is_nan();
        self.gap.add(if unknown {
            f64::INFINITY
        } else {
            gain.max(0.0).min(first_order)
        });
    }

    fn join(&mut self, later: Self) {
        self.gap.join(later.gap);
        self.scale.join(later.scale);
        self.primal = worst(self.primal, later.primal);
        self.stationarity = worst(self.stationarity, later.stationarity);
    }
}

/// p_i = Σ_k λ_k a_ki, worth per unit of spend.
pub(super) fn price_of_unit(constraints: &[Constraint], prices: &[f64], i: usize) -> f64 {
    constraints
        .iter()
        .zip(prices)
        .map(|(constraint, &price)| match constraint.use_per_unit(i) {
            0.0 => 0.0,
            use_per_unit => price * use_per_unit,
        })
        .sum()
}

/// By how much `greater` exceeds `lesser`, relative to the larger of them; 0 where it does not,
/// or by less than the smallest number that keeps its digits.
fn excess(greater: f64, lesser: f64) -> f64 {
    if greater <= lesser || greater - lesser < f64::MIN_POSITIVE {
        return 0.0;
    }
    let size = greater.abs().max(lesser.abs());
    if size.is_finite() {
        (greater - lesser) / size
    } else {
        f64::INFINITY
    }
}

/// Relative distance of a spend from its bounds.
fn out_of_bounds(activity: &Activity, spend: f64) -> f64 {
    if !spend.is_finite() {
        return f64::INFINITY;
    }
    excess(activity.floor, spend).max(excess(spend, activity.cap))
}

/// Σ|a_ki x_i|, what a violation is compared with: where uses of both signs cancel, their sum keeps the
/// rounding of its terms.
fn size_of_use(constraint: &Constraint, used: f64, spends: &[f64]) -> f64 {
    match &constraint.use_per_unit {
        UsePerUnit::Spend => used.abs(),
        UsePerUnit::PerActivity(per_unit) => {
            let [size] = block_sums(spends.len(), |i| [(per_unit[i] * spends[i]).abs()]);
            size
        }
    }
}

/// Violation of a limit, relative to the greater of it and the size of what is used.
fn violation(constraint: &Constraint, used: f64, size: f64) -> f64 {
    let over = used - constraint.limit;
    let violated = match constraint.sense {
        Sense::AtMost => over.max(0.0),
        Sense::AtLeast => (-over).max(0.0),
        Sense::Equal => over.abs(),
    };
    if !used.is_finite() {
        f64::INFINITY
    } else if violated == 0.0 {
        0.0
    } else {
        violated / size.max(constraint.limit.abs())
    }
}

/// An upper limit bounds the total through a price of at least 0, a lower one through a price
/// of at most 0.
fn has_right_sign(sense: Sense, price: f64) -> bool {
    match sense {
        Sense::AtMost => price >= 0.0,
        Sense::AtLeast => price <= 0.0,
        Sense::Equal => !price.is_nan(),
    }
}

/// The greater of two residuals; a NaN is the worst of all.
fn worst(one: f64, other: f64) -> f64 {
    if one.is_nan() || other.is_nan() {
        f64::INFINITY
    } else {
        one.max(other)
    }
}
