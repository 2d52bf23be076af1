//! The plan beside other splits: today's, today's scaled to the same use, and an even one.

use crate::model::{Aim, Constraint, Problem, Sense};
use crate::numeric::block_sums;

/// Another way to split.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SplitKind {
    /// What every activity has today.
    Current,
    /// Today's spends times one factor, within floors and caps.
    Proportional,
    /// The same spend for all, within floors and caps.
    Even,
}

impl SplitKind {
    /// The name in tables.
    pub fn name(self) -> &'static str {
        match self {
            SplitKind::Current => "today's split",
            SplitKind::Proportional => "today's split, scaled",
            SplitKind::Even => "an even split",
        }
    }

    /// The name in JSON and CSV.
    pub fn key(self) -> &'static str {
        match self {
            SplitKind::Current => "current",
            SplitKind::Proportional => "proportional to current",
            SplitKind::Even => "even",
        }
    }
}

/// What another split comes to.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Split {
    /// How it splits.
    pub kind: SplitKind,
    /// What it comes to, or why it cannot be made.
    pub outcome: Result<SplitOutcome, NoSplit>,
}

/// A split that was made.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SplitOutcome {
    /// What it uses, in units of the limit.
    pub used: f64,
    /// Its total, in the common unit.
    pub total: f64,
    /// By how much the plan is better: more under maximise, less under minimise.
    pub gain: f64,
    /// That gain as a share of the split's own total; `None` where that is zero.
    pub gain_share: Option<f64>,
    /// Whether it uses as much as the plan, to a relative 1e-9.
    pub same_use: bool,
    /// Activities that it leaves outside their floor or cap.
    pub outside_bounds: usize,
}

/// Why a split cannot be made.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum NoSplit {
    /// Nothing is known of today.
    CurrentUnknown,
    /// Today's spend is not known for some.
    CurrentIncomplete {
        /// How many.
        missing: usize,
    },
    /// Today's spend is zero everywhere.
    CurrentZero,
    /// No factor meets the limit within floors and caps.
    OutOfReach,
    /// Some activity would stand at a spend without a finite return.
    NoFiniteTotal,
}

impl NoSplit {
    /// The fault in JSON and CSV.
    pub fn name(self) -> &'static str {
        match self {
            NoSplit::CurrentUnknown => "current spend unknown",
            NoSplit::CurrentIncomplete { .. } => "current spend incomplete",
            NoSplit::CurrentZero => "current spend zero",
            NoSplit::OutOfReach => "limit out of reach",
            NoSplit::NoFiniteTotal => "no finite total",
        }
    }
}

/// Relative difference up to which two uses are called the same: far above the rounding of a
/// sum, far below what anyone would see in a budget.
const SAME_USE: f64 = 1e-9;

/// Relative difference up to which two totals are the same: what two orders of summing leave.
const SAME_TOTAL: f64 = 1e-13;

/// What the other splits stand beside.
#[derive(Debug, Clone, Copy)]
pub(super) struct Planned {
    /// Total of the plan, in the common unit.
    pub total: f64,
    /// What the plan uses of constraint 0.
    pub used: f64,
}

/// Today's split, beside the plan.
pub(super) fn compare_with_current(problem: &Problem, plan: Planned) -> Split {
    let missing = currents_missing(problem);
    let outcome = if missing == problem.activities().len() {
        Err(NoSplit::CurrentUnknown)
    } else if missing > 0 {
        Err(NoSplit::CurrentIncomplete { missing })
    } else {
        value_split(problem, plan, |i| current_of(problem, i))
    };
    Split {
        kind: SplitKind::Current,
        outcome,
    }
}

/// All the other splits, in the order of the table.
pub(super) fn compare_splits(problem: &Problem, plan: Planned) -> Vec<Split> {
    let current = compare_with_current(problem, plan);
    let proportional = match current.outcome {
        Err(unknown @ (NoSplit::CurrentUnknown | NoSplit::CurrentIncomplete { .. })) => {
            Err(unknown)
        }
        _ if problem
            .activities()
            .iter()
            .all(|activity| activity.current == Some(0.0)) =>
        {
            Err(NoSplit::CurrentZero)
        }
        _ => scale_split(problem, plan, |i| current_of(problem, i)),
    };
    vec![
        current,
        Split {
            kind: SplitKind::Proportional,
            outcome: proportional,
        },
        Split {
            kind: SplitKind::Even,
            outcome: scale_split(problem, plan, |_| 1.0),
        },
    ]
}

fn currents_missing(problem: &Problem) -> usize {
    let activities = problem.activities();
    let [missing] = block_sums(activities.len(), |i| {
        [f64::from(u8::from(activities[i].current.is_none()))]
    });
    missing as usize
}

fn current_of(problem: &Problem, i: usize) -> f64 {
    problem.activities()[i].current.unwrap_or(0.0)
}

/// Finds the factor s with Σ a_i·clamp(s·part_i, floor_i, cap_i) = what the plan uses, and values the split.
fn scale_split(
    problem: &Problem,
    plan: Planned,
    part: impl Fn(usize) -> f64 + Sync,
) -> Result<SplitOutcome, NoSplit> {
    let Some(constraint) = problem.constraints().first() else {
        return Err(NoSplit::OutOfReach);
    };
    let spend = |scale: f64, i: usize| {
        let activity = &problem.activities()[i];
        let wanted = match part(i) {
            0.0 => 0.0,
            part => scale * part,
        };
        wanted.max(activity.floor).min(activity.cap)
    };
    let used = |scale: f64| used_by(problem, constraint, |i| spend(scale, i));
    let reach = used(f64::INFINITY);
    let scale = if reach <= plan.used {
        let meets = constraint.sense == Sense::AtMost || is_same_use(reach, plan.used);
        meets.then_some(f64::INFINITY)
    } else {
        factor_that_meets(plan.used, used)
    };
    let scale = scale.ok_or(NoSplit::OutOfReach)?;
    value_split(problem, plan, |i| spend(scale, i))
}

fn is_same_use(used: f64, other: f64) -> bool {
    (used - other).abs() <= SAME_USE * other.abs()
}

/// The factor s ≥ 0 at which the rising `used(s)` meets `target`, by bisection to the last bit;
/// `None` where already `used(0)` is above. `used` must pass `target` somewhere.
fn factor_that_meets(target: f64, used: impl Fn(f64) -> f64) -> Option<f64> {
    let (mut below, mut above) = (0.0, 1.0);
    while used(above) < target {
        (below, above) = (above, above * 2.0);
    }
    loop {
        let middle = below + (above - below) / 2.0;
        if middle <= below || above <= middle {
            return [below, above]
                .into_iter()
                .find(|&scale| is_same_use(used(scale), target));
        }
        if used(middle) < target {
            below = middle;
        } else {
            above = middle;
        }
    }
}

fn used_by(problem: &Problem, constraint: &Constraint, spend: impl Fn(usize) -> f64 + Sync) -> f64 {
    let [used] = block_sums(problem.activities().len(), |i| {
        [use_of(constraint, i, spend(i))]
    });
    used
}

/// Use of a spend; no spend uses nothing.
fn use_of(constraint: &Constraint, i: usize, spend: f64) -> f64 {
    match spend {
        0.0 => 0.0,
        spend => constraint.use_per_unit(i) * spend,
    }
}

fn value_split(
    problem: &Problem,
    plan: Planned,
    spend: impl Fn(usize) -> f64 + Sync,
) -> Result<SplitOutcome, NoSplit> {
    let activities = problem.activities();
    let constraint = problem.constraints().first();
    let [total, outside, used] = block_sums(activities.len(), |i| {
        let activity = &activities[i];
        let spend = spend(i);
        let worth = match activity.weight {
            0.0 => 0.0,
            weight => weight * problem.return_at(i, spend),
        };
        let outside = spend < activity.floor || activity.cap < spend;
        let used = constraint.map_or(0.0, |constraint| use_of(constraint, i, spend));
        [worth, f64::from(u8::from(outside)), used]
    });
    if !total.is_finite() {
        return Err(NoSplit::NoFiniteTotal);
    }
    let gain = match problem.aim() {
        _ if (plan.total - total).abs() <= SAME_TOTAL * plan.total.abs().max(total.abs()) => 0.0,
        Aim::Maximise => plan.total - total,
        Aim::Minimise => total - plan.total,
    };
    Ok(SplitOutcome {
        used,
        total,
        gain,
        gain_share: (total != 0.0).then(|| gain / total.abs()),
        same_use: is_same_use(used, plan.used),
        outside_bounds: outside as usize,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::curves::{Curve, Linear, LinearParams};
    use crate::model::Activity;

    /// Activities that return what they spend, so that the total is the use: floor, cap, current.
    fn plan(bounds: &[(f64, f64, Option<f64>)], constraint: Constraint) -> Problem {
        let activities = bounds
            .iter()
            .map(|&(floor, cap, current)| {
                let curve = Curve::Linear(Linear::new(LinearParams { slope: 1.0 }).unwrap());
                let mut activity = Activity::new("a", curve);
                (activity.floor, activity.cap, activity.current) = (floor, cap, current);
                activity
            })
            .collect();
        Problem::new(Aim::Maximise, activities, vec![constraint]).unwrap()
    }

    const BESIDE: Planned = Planned {
        total: 10.0,
        used: 10.0,
    };

    fn used(splits: &[Split], kind: SplitKind) -> Result<f64, NoSplit> {
        let split = splits.iter().find(|split| split.kind == kind).unwrap();
        split.outcome.map(|outcome| outcome.used)
    }

    #[test]
    fn splits_meet_the_limit_within_floors_and_caps() {
        let bounds = [
            (0.0, 2.0, Some(1.0)),
            (5.0, f64::INFINITY, Some(1.0)),
            (0.0, f64::INFINITY, Some(4.0)),
        ];
        let splits = compare_splits(&plan(&bounds, Constraint::budget(10.0)), BESIDE);
        for kind in [SplitKind::Proportional, SplitKind::Even] {
            let used = used(&splits, kind).unwrap();
            assert!((used - 10.0).abs() < 1e-9, "{kind:?} {used}");
        }
        assert_eq!(used(&splits, SplitKind::Current), Ok(6.0));
        let current = splits[0].outcome.unwrap();
        assert_eq!((current.outside_bounds, current.same_use), (1, false));
        assert_eq!(current.gain, 4.0);
    }

    #[test]
    fn a_split_that_its_caps_stop_uses_what_it_can_of_a_budget() {
        let bounds = [(0.0, 2.0, Some(1.0)), (0.0, 9.0, Some(0.0))];
        let splits = compare_splits(&plan(&bounds, Constraint::budget(10.0)), BESIDE);
        // What has nothing today gets nothing in proportion.
        assert_eq!(used(&splits, SplitKind::Proportional), Ok(2.0));
        let splits = compare_splits(&plan(&bounds, Constraint::requirement(10.0)), BESIDE);
        assert_eq!(
            used(&splits, SplitKind::Proportional),
            Err(NoSplit::OutOfReach)
        );
    }

    #[test]
    fn what_is_not_known_of_today_is_not_taken_for_zero() {
        let some = [(0.0, 2.0, Some(1.0)), (0.0, 9.0, None)];
        let splits = compare_splits(&plan(&some, Constraint::budget(10.0)), BESIDE);
        let incomplete = NoSplit::CurrentIncomplete { missing: 1 };
        assert_eq!(used(&splits, SplitKind::Current), Err(incomplete));
        let none = [(0.0, 2.0, None), (0.0, 9.0, None)];
        let splits = compare_splits(&plan(&none, Constraint::budget(10.0)), BESIDE);
        assert_eq!(
            used(&splits, SplitKind::Proportional),
            Err(NoSplit::CurrentUnknown)
        );
        let zero = [(0.0, 2.0, Some(0.0)), (0.0, 9.0, Some(0.0))];
        let splits = compare_splits(&plan(&zero, Constraint::budget(10.0)), BESIDE);
        assert_eq!(
            used(&splits, SplitKind::Proportional),
            Err(NoSplit::CurrentZero)
        );
    }
}
