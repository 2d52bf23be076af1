//! The problem: the only validated form of a plan.

use rayon::prelude::*;

use super::error::{Field, Misshapen, ModelError};
use super::{Activity, Constraint, UsePerUnit};
use crate::curves::{Curve, ReturnCurve, Shape};
use crate::numeric::block_sums;

/// What is done with the total.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Aim {
    /// The curves are concave returns; the best total is the greatest.
    Maximise,
    /// The curves are convex costs; the best total is the least.
    Minimise,
}

impl Aim {
    /// The word in files and JSON.
    pub fn name(self) -> &'static str {
        match self {
            Aim::Maximise => "maximise",
            Aim::Minimise => "minimise",
        }
    }

    /// +1 to maximise, −1 to minimise: the factor that turns either into "the more the better".
    pub fn sign(self) -> f64 {
        match self {
            Aim::Maximise => 1.0,
            Aim::Minimise => -1.0,
        }
    }
}

/// Activities, constraints and an aim that have been checked: bounds in order, every curve
/// bending the right way between them, every number finite where it must be.
#[derive(Debug, Clone, PartialEq)]
pub struct Problem {
    aim: Aim,
    activities: Vec<Activity>,
    constraints: Vec<Constraint>,
}

impl Problem {
    /// Checks everything and keeps it.
    ///
    /// # Errors
    /// Every fault at once, each naming the activity or constraint and the field.
    pub fn new(
        aim: Aim,
        activities: Vec<Activity>,
        constraints: Vec<Constraint>,
    ) -> Result<Self, Vec<ModelError>> {
        let mut faults = Vec::new();
        if activities.is_empty() {
            faults.push(ModelError::NoActivities);
        }
        faults.par_extend(
            activities
                .par_iter()
                .enumerate()
                .flat_map_iter(|(i, activity)| {
                    let mut faults = Vec::new();
                    check_activity(aim, i, activity, &mut faults);
                    faults
                }),
        );
        for (k, constraint) in constraints.iter().enumerate() {
            check_constraint(k, constraint, activities.len(), &mut faults);
        }
        if faults.is_empty() {
            Ok(Self {
                aim,
                activities,
                constraints,
            })
        } else {
            Err(faults)
        }
    }

    /// The same activities under another limit of constraint `k`.
    ///
    /// # Errors
    /// A limit that is not finite.
    pub fn with_limit(&self, k: usize, limit: f64) -> Result<Self, ModelError> {
        if !limit.is_finite() {
            return Err(ModelError::Limit {
                constraint: k,
                found: limit,
            });
        }
        let mut changed = self.clone();
        changed.constraints[k].limit = limit;
        Ok(changed)
    }

    /// What is done with the total.
    pub fn aim(&self) -> Aim {
        self.aim
    }

    /// The activities, in the order of the file.
    pub fn activities(&self) -> &[Activity] {
        &self.activities
    }

    /// The constraints, in the order of the file.
    pub fn constraints(&self) -> &[Constraint] {
        &self.constraints
    }

    /// Activity `i`'s worth: its weighted curve with the sign of the aim, concave between its
    /// bounds, so that more is better whatever the aim. In units of the total.
    #[inline]
    pub fn worth(&self, i: usize) -> Curve {
        let activity = &self.activities[i];
        activity.curve.scaled(self.aim.sign() * activity.weight)
    }

    /// Return of activity `i` at a spend, base included, in its own unit of return.
    pub fn return_at(&self, i: usize, spend: f64) -> f64 {
        let activity = &self.activities[i];
        activity.base + activity.curve.value(spend)
    }

    /// Marginal return of activity `i` at a spend: what the next unit gives, weighted into the
    /// common unit, units of the total per unit of spend.
    pub fn marginal_return_at(&self, i: usize, spend: f64) -> f64 {
        let activity = &self.activities[i];
        if activity.weight == 0.0 {
            return 0.0;
        }
        activity.weight * activity.curve.marginal(spend)
    }

    /// Σ w_i r_i(x_i), in the common unit; `spends` in the order of the activities.
    pub fn total(&self, spends: &[f64]) -> f64 {
        let [total] = block_sums(spends.len(), |i| {
            let weight = self.activities[i].weight;
            [if weight == 0.0 {
                0.0
            } else {
                weight * self.return_at(i, spends[i])
            }]
        });
        total
    }

    /// Σ a_ki x_i of constraint `k`, in units of its limit.
    pub fn used(&self, k: usize, spends: &[f64]) -> f64 {
        let constraint = &self.constraints[k];
        let [used] = block_sums(spends.len(), |i| {
            [if spends[i] == 0.0 {
                0.0
            } else {
                constraint.use_per_unit(i) * spends[i]
            }]
        });
        used
    }
}

fn check_activity(aim: Aim, i: usize, activity: &Activity, faults: &mut Vec<ModelError>) {
    let before = faults.len();
    let mut require = |holds: bool, field: Field, found: f64| {
        if !holds {
            faults.push(ModelError::Number {
                activity: i,
                field,
                found,
            });
        }
    };
    let Activity {
        base,
        floor,
        cap,
        weight,
        current,
        observed,
        ..
    } = *activity;
    require(base.is_finite(), Field::Base, base);
    require(0.0 <= floor && floor.is_finite(), Field::Floor, floor);
    require(0.0 <= cap, Field::Cap, cap);
    require(0.0 <= weight && weight.is_finite(), Field::Weight, weight);
    if let Some(current) = current {
        require(
            0.0 <= current && current.is_finite(),
            Field::Current,
            current,
        );
    }
    if let Some(observed) = observed {
        require(
            0.0 <= observed.from && observed.from.is_finite(),
            Field::ObservedFrom,
            observed.from,
        );
        require(observed.from <= observed.to, Field::ObservedTo, observed.to);
    }
    if faults.len() > before {
        return;
    }
    if floor > cap {
        faults.push(ModelError::FloorAboveCap {
            activity: i,
            floor,
            cap,
        });
        return;
    }
    if let Curve::Points(points) = &activity.curve {
        let (first, last) = (points.first_spend(), points.last_spend());
        if floor < first || last < cap {
            faults.push(ModelError::OutsideTable {
                activity: i,
                floor,
                cap,
                first,
                last,
            });
            return;
        }
    }
    let shape = activity.curve.shape(floor, cap);
    let fits = floor == cap
        || weight == 0.0
        || match aim {
            Aim::Maximise => matches!(shape, Shape::Straight | Shape::Concave),
            Aim::Minimise => matches!(shape, Shape::Straight | Shape::Convex),
        };
    if !fits {
        faults.push(ModelError::Shape(Misshapen::of(aim, i, activity, shape)));
    }
}

fn check_constraint(
    k: usize,
    constraint: &Constraint,
    activities: usize,
    faults: &mut Vec<ModelError>,
) {
    if !constraint.limit.is_finite() {
        faults.push(ModelError::Limit {
            constraint: k,
            found: constraint.limit,
        });
    }
    if let UsePerUnit::PerActivity(per_unit) = &constraint.use_per_unit {
        if per_unit.len() != activities {
            faults.push(ModelError::UseCount {
                constraint: k,
                found: per_unit.len(),
                needed: activities,
            });
        }
        if let Some(i) = per_unit
            .iter()
            .position(|use_per_unit| !use_per_unit.is_finite())
        {
            faults.push(ModelError::Use {
                constraint: k,
                activity: i,
                found: per_unit[i],
            });
        }
    }
}
