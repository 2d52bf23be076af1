//! Spends in whole steps of money that still add up to the limit.
//!
//! Steps go one at a time to the activity whose next step earns most: for concave curves the
//! best plan in whole steps (B. Fox, *Discrete optimization via marginal analysis*, Management
//! Science 13 (1966), 210–216). The search starts from the exact plan rounded down, so that few
//! steps are left to move.

use std::cmp::Ordering;
use std::collections::BinaryHeap;

use crate::curves::ReturnCurve;
use crate::model::{Problem, UsePerUnit};

/// Relative distance from a whole number of steps up to which a limit counts as whole: what a
/// decimal step such as 0.1 leaves by its own rounding.
const WHOLE: f64 = 1e-9;

/// Steps that can be counted without rounding: 2^53.
const MOST_STEPS: f64 = 9_007_199_254_740_992.0;

/// Spends in whole steps.
#[derive(Debug, Clone, PartialEq)]
pub struct Rounded {
    /// x_i, units of spend, in the order of the activities.
    pub spends: Vec<f64>,
    /// The total that they give, units of the total.
    pub total: f64,
    /// The activity that takes the rest of a limit that is no whole number of steps.
    pub odd: Option<usize>,
    /// Activities that keep their exact spend, since no whole number of steps lies between their
    /// floor and their cap.
    pub kept: Vec<usize>,
}

/// Why spends could not be rounded.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum RoundError {
    /// The step is not a positive number.
    #[error("the step must be above 0 and finite, not {step}")]
    Step {
        /// What was given.
        step: f64,
    },
    /// So many steps make up the spend that they cannot be counted exactly.
    #[error("a step of {step} is too fine for a spend of {target}")]
    TooFine {
        /// The step.
        step: f64,
        /// What the steps should add up to.
        target: f64,
    },
    /// The limit is not on the sum of the spends.
    #[error("only a limit on the sum of all spends can be met in whole steps of money")]
    NotOnSpend,
    /// Whole steps between the floors and the caps do not add up to the plan's spend.
    #[error("no whole steps of {step} between the floors and the caps add up to {target}")]
    NoRoom {
        /// The step.
        step: f64,
        /// What they should add up to.
        target: f64,
    },
}

/// A step that could be added or taken, ordered by what it is worth.
struct Move {
    worth: f64,
    activity: usize,
    /// Steps that the activity had when this was computed; another count makes it void.
    steps: u64,
}

impl Ord for Move {
    fn cmp(&self, other: &Self) -> Ordering {
        // Among equals the earlier activity of the file comes first.
        self.worth
            .total_cmp(&other.worth)
            .then(other.activity.cmp(&self.activity))
    }
}

impl PartialOrd for Move {
    fn partial_cmp(&self, other: &Self) -> Option<Ordering> {
        Some(self.cmp(other))
    }
}

impl PartialEq for Move {
    fn eq(&self, other: &Self) -> bool {
        self.cmp(other) == Ordering::Equal
    }
}

impl Eq for Move {}

/// The plan in steps while it is being improved.
struct Steps<'a> {
    problem: &'a Problem,
    step: f64,
    /// Steps of each activity, and the least and most that its bounds allow; `None` for an
    /// activity that keeps its exact spend.
    count: Vec<u64>,
    bounds: Vec<Option<(u64, u64)>>,
}

impl Steps<'_> {
    fn worth(&self, i: usize, steps: u64) -> f64 {
        self.problem.worth(i).value(steps as f64 * self.step)
    }

    /// The gain of one more step for activity `i`, if its cap allows it.
    fn gain(&self, i: usize) -> Option<Move> {
        let (steps, (_, most)) = (self.count[i], self.bounds[i]?);
        let worth = self.worth(i, steps + 1) - self.worth(i, steps);
        (steps < most).then_some(Move {
            worth,
            activity: i,
            steps,
        })
    }

    /// Minus the loss of one less step for activity `i`, if its floor allows it.
    fn loss(&self, i: usize) -> Option<Move> {
        let (steps, (fewest, _)) = (self.count[i], self.bounds[i]?);
        if steps <= fewest {
            return None;
        }
        let worth = self.worth(i, steps - 1) - self.worth(i, steps);
        Some(Move {
            worth,
            activity: i,
            steps,
        })
    }

    /// Adds (or takes, where negative) so many steps, best first, then exchanges single steps as
    /// long as that improves the total. False where the bounds leave no room.
    fn settle(&mut self, mut missing: i64) -> bool {
        let everyone = 0..self.count.len();
        let mut gains: BinaryHeap<Move> = everyone.clone().filter_map(|i| self.gain(i)).collect();
        let mut losses: BinaryHeap<Move> = everyone.filter_map(|i| self.loss(i)).collect();
        loop {
            let gain = self.top(&mut gains);
            let loss = self.top(&mut losses);
            let add = match missing.cmp(&0) {
                Ordering::Greater => true,
                Ordering::Less => false,
                Ordering::Equal => match (gain, loss) {
                    (Some((to, gain)), Some((from, loss))) if to != from && gain + loss > 0.0 => {
                        true
                    }
                    _ => return true,
                },
            };
            let Some((changed, _)) = (if add { gain } else { loss }) else {
                return false;
            };
            if add {
                self.count[changed] += 1;
                missing -= 1;
            } else {
                self.count[changed] -= 1;
                missing += 1;
            }
            gains.extend(self.gain(changed));
            losses.extend(self.loss(changed));
        }
    }

    /// The best move that still holds, left on the heap; void ones are dropped.
    fn top(&self, moves: &mut BinaryHeap<Move>) -> Option<(usize, f64)> {
        while let Some(best) = moves.peek() {
            if self.count[best.activity] == best.steps {
                return Some((best.activity, best.worth));
            }
            moves.pop();
        }
        None
    }
}

/// The plan in whole multiples of `step` (units of spend) that add up to what the exact `spends`
/// add up to, and lose least by it.
///
/// # Errors
/// [`RoundError`].
pub fn round_spends(problem: &Problem, spends: &[f64], step: f64) -> Result<Rounded, RoundError> {
    if !(0.0 < step && step.is_finite()) {
        return Err(RoundError::Step { step });
    }
    let on_spend =
        |constraint: &crate::model::Constraint| constraint.use_per_unit == UsePerUnit::Spend;
    let [constraint] = problem.constraints() else {
        return Err(RoundError::NotOnSpend);
    };
    if !on_spend(constraint) {
        return Err(RoundError::NotOnSpend);
    }
    let used = problem.used(0, spends);
    let target = if constraint.is_binding(used) {
        constraint.limit
    } else {
        used
    };

    if target / step > MOST_STEPS {
        return Err(RoundError::TooFine { step, target });
    }
    let mut rounded: Vec<f64> = vec![0.0; spends.len()];
    let mut plan = Steps {
        problem,
        step,
        count: vec![0; spends.len()],
        bounds: Vec::new(),
    };
    let mut kept = Vec::new();
    for (i, activity) in problem.activities().iter().enumerate() {
        let fewest = whole_up(activity.floor / step);
        let most = whole_down(activity.cap / step);
        let bounds = (activity.floor < activity.cap && fewest <= most).then_some((fewest, most));
        match bounds {
            Some((fewest, most)) => {
                plan.count[i] = whole_down(spends[i] / step).clamp(fewest, most);
            }
            None => {
                rounded[i] = spends[i];
                kept.push(i);
            }
        }
        plan.bounds.push(bounds);
    }
    let kept_spend: f64 = kept.iter().map(|&i| spends[i]).sum();
    let whole_steps = whole_down((target - kept_spend) / step);
    let placed: u64 = plan.count.iter().sum();
    if !plan.settle(whole_steps as i64 - placed as i64) {
        return Err(RoundError::NoRoom { step, target });
    }
    for (i, bounds) in plan.bounds.iter().enumerate() {
        if bounds.is_some() {
            rounded[i] = plan.count[i] as f64 * step;
        }
    }
    let rest = target - problem.used(0, &rounded);
    let odd = (rest.abs() > WHOLE * step)
        .then(|| best_home_for(problem, &rounded, rest))
        .map(|home| home.ok_or(RoundError::NoRoom { step, target }))
        .transpose()?;
    if let Some(home) = odd {
        rounded[home] += rest;
    }
    let total = problem.total(&rounded);
    Ok(Rounded {
        spends: rounded,
        total,
        odd,
        kept,
    })
}

/// The activity to which the rest of less than a step is worth most and which has room for it.
fn best_home_for(problem: &Problem, spends: &[f64], rest: f64) -> Option<usize> {
    let gain = |i: usize| {
        let worth = problem.worth(i);
        worth.value(spends[i] + rest) - worth.value(spends[i])
    };
    (0..spends.len())
        .filter(|&i| spends[i] + rest <= problem.activities()[i].cap)
        .max_by(|&i, &j| gain(i).total_cmp(&gain(j)).then(j.cmp(&i)))
}

/// The greatest whole number up to `steps`, or the nearest where that is a rounding away.
fn whole_down(steps: f64) -> u64 {
    let nearest = steps.round();
    if (steps - nearest).abs() <= WHOLE * nearest.abs() {
        nearest as u64
    } else {
        steps.floor() as u64
    }
}

/// The least whole number from `steps` on, or the nearest where that is a rounding away.
fn whole_up(steps: f64) -> u64 {
    let nearest = steps.round();
    if (steps - nearest).abs() <= WHOLE * nearest.abs() {
        nearest as u64
    } else {
        steps.ceil() as u64
    }
}
