//! What the limits leave to one activity while all others stay at their floors.

use crate::model::{Problem, Sense};
use crate::numeric::block_sums;

/// What the floors leave of every row under which one activity's spend bounds another's: an
/// upper limit or an equation with no negative use.
pub(super) struct Room(Vec<Option<f64>>);

impl Room {
    /// One pass over the activities for each row.
    pub(super) fn of(problem: &Problem) -> Self {
        let activities = problem.activities();
        let rows = problem.constraints().iter().map(|constraint| {
            if constraint.sense == Sense::AtLeast {
                return None;
            }
            let [used, negative] = block_sums(activities.len(), |i| {
                let use_per_unit = constraint.use_per_unit(i);
                let used = match activities[i].floor {
                    0.0 => 0.0,
                    floor => use_per_unit * floor,
                };
                [used, f64::from(u8::from(use_per_unit < 0.0))]
            });
            (negative == 0.0).then(|| (constraint.limit - used).max(0.0))
        });
        Self(rows.collect())
    }

    /// The greatest spend beyond its floor that activity `i` can have in any plan that meets the
    /// limits, units of spend; +∞ where no limit bounds it. Its own cap is not looked at.
    pub(super) fn beyond_floor(&self, problem: &Problem, i: usize) -> f64 {
        problem
            .constraints()
            .iter()
            .zip(&self.0)
            .filter_map(|(constraint, left)| Some((*left)? / constraint.use_per_unit(i)))
            .filter(|room| room.is_finite())
            .fold(f64::INFINITY, f64::min)
    }
}
