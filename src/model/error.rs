//! What can be wrong with a plan that was read without fault.

use std::fmt;

use super::{Activity, Aim};
use crate::curves::{Curve, Family, ReturnCurve, Shape};
use crate::numeric::figures;

/// A number of an activity, named as its column.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Field {
    /// Return at zero spend.
    Base,
    /// Least spend.
    Floor,
    /// Greatest spend.
    Cap,
    /// Value of one unit of return.
    Weight,
    /// Today's spend.
    Current,
    /// Least spend that was observed.
    ObservedFrom,
    /// Greatest spend that was observed.
    ObservedTo,
}

impl Field {
    /// The name of its column.
    pub fn name(self) -> &'static str {
        match self {
            Field::Base => "base",
            Field::Floor => "floor",
            Field::Cap => "cap",
            Field::Weight => "weight",
            Field::Current => "current",
            Field::ObservedFrom => "observed_from",
            Field::ObservedTo => "observed_to",
        }
    }

    /// What the number must be, in words.
    fn rule(self) -> &'static str {
        match self {
            Field::Base => "a finite number",
            Field::Cap => "at least 0",
            Field::ObservedTo => "at least observed_from",
            Field::Floor | Field::Weight | Field::Current | Field::ObservedFrom => {
                "at least 0 and finite"
            }
        }
    }
}

impl fmt::Display for Field {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

/// Why a problem could not be built. Activities and constraints are named by their index, from
/// 0, so that `input` can add file, line and column.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum ModelError {
    /// There is nothing to spend on.
    #[error("the plan has no activities")]
    NoActivities,
    /// A number lies outside its domain.
    #[error("{field} must be {}, not {found}", field.rule())]
    Number {
        /// Index of the activity.
        activity: usize,
        /// The number at fault.
        field: Field,
        /// What stands there.
        found: f64,
    },
    /// The bounds are crossed.
    #[error("the floor of {floor} is above the cap of {cap}")]
    FloorAboveCap {
        /// Index of the activity.
        activity: usize,
        /// Least spend.
        floor: f64,
        /// Greatest spend.
        cap: f64,
    },
    /// The bounds reach beyond the knots of a tabulated curve.
    #[error(
        "the bounds {floor} to {cap} reach beyond the table, which runs from {first} to {last}"
    )]
    OutsideTable {
        /// Index of the activity.
        activity: usize,
        /// Least spend.
        floor: f64,
        /// Greatest spend.
        cap: f64,
        /// Spend of the first knot.
        first: f64,
        /// Spend of the last knot.
        last: f64,
    },
    /// The curve bends the wrong way for the aim.
    #[error(transparent)]
    Shape(Misshapen),
    /// A limit that is not a finite number.
    #[error("the limit must be a finite number, not {found}")]
    Limit {
        /// Index of the constraint.
        constraint: usize,
        /// What stands there.
        found: f64,
    },
    /// A constraint has not one use per activity.
    #[error("the constraint has {found} uses for {needed} activities")]
    UseCount {
        /// Index of the constraint.
        constraint: usize,
        /// How many uses there are.
        found: usize,
        /// How many activities there are.
        needed: usize,
    },
    /// A use per unit of spend that is not a finite number.
    #[error("the use per unit of spend must be a finite number, not {found}")]
    Use {
        /// Index of the constraint.
        constraint: usize,
        /// Index of the activity.
        activity: usize,
        /// What stands there.
        found: f64,
    },
}

/// A curve that bends the wrong way for the aim between the activity's bounds, so that "the last
/// unit earns the same everywhere" would not be the best plan.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[error("{}; {}", self.reason(), self.mend())]
pub struct Misshapen {
    /// Index of the activity.
    pub activity: usize,
    /// The aim that the curve does not fit.
    pub aim: Aim,
    /// Its family.
    pub family: Family,
    /// How it bends between floor and cap.
    pub shape: Shape,
    /// Spend of the knot at which a tabulated curve first bends the wrong way.
    pub knot: Option<f64>,
    /// Spend from which on an S-shape bends the right way, where the cap leaves room above it.
    turning_floor: Option<f64>,
}

impl Misshapen {
    pub(super) fn of(aim: Aim, i: usize, activity: &Activity, shape: Shape) -> Self {
        let wrong = match aim {
            Aim::Maximise => Shape::Convex,
            Aim::Minimise => Shape::Concave,
        };
        let knot = match &activity.curve {
            Curve::Points(points) => points.bend_within(activity.floor, activity.cap, wrong),
            _ => None,
        };
        let turning_floor = match shape {
            Shape::TurnsAt(turning) if turning < activity.cap => {
                Some(turning).filter(|&floor| activity.curve.shape(floor, activity.cap) != wrong)
            }
            _ => None,
        };
        Self {
            activity: i,
            aim,
            family: activity.curve.family(),
            shape,
            knot,
            turning_floor,
        }
    }

    /// What is wrong, in words.
    pub fn reason(&self) -> String {
        let (needed, further) = match self.aim {
            Aim::Maximise => ("concave", "more"),
            Aim::Minimise => ("convex", "less"),
        };
        match (self.shape, self.knot) {
            (_, Some(knot)) => format!(
                "this points curve is not {needed}: at a spend of {knot} the next unit begins to \
                 give {further} than the last"
            ),
            (Shape::TurnsAt(turning), _) => format!(
                "this {} curve is S-shaped: it bends one way up to a spend of {} and the other \
                 way beyond it",
                self.family,
                just_above(turning)
            ),
            _ => format!(
                "this {} curve is not {needed} between its bounds: every further unit gives \
                 {further} than the one before",
                self.family
            ),
        }
    }

    /// What would help, in words.
    pub fn mend(&self) -> String {
        if let Some(floor) = self.turning_floor {
            let fitting = match self.aim {
                Aim::Maximise => "falling marginal return",
                Aim::Minimise => "rising marginal cost",
            };
            return format!(
                "give it a floor of at least {}, or fit a curve with {fitting}",
                just_above(floor)
            );
        }
        match (self.aim, self.family) {
            (Aim::Maximise, Family::Power) => {
                "a return needs an exponent between 0 and 1 with a positive gain, or below 0 with \
                 a negative gain"
                    .to_owned()
            }
            (Aim::Minimise, Family::Power) => {
                "a cost needs an exponent above 1 or below 0 with a positive gain".to_owned()
            }
            (Aim::Maximise, Family::Quadratic) => {
                "a return needs a curvature of at most 0".to_owned()
            }
            (Aim::Minimise, Family::Quadratic) => {
                "a cost needs a curvature of at least 0".to_owned()
            }
            (Aim::Maximise, Family::Points) => {
                "smooth the table so that every further unit gives no more than the one before, \
                 or cap the activity below that spend"
                    .to_owned()
            }
            (Aim::Minimise, Family::Points) => {
                "smooth the table so that every further unit costs no less than the one before, \
                 or cap the activity below that spend"
                    .to_owned()
            }
            (Aim::Maximise, _) => {
                "check the sign of its parameters, or set aim = \"minimise\" if it is a cost"
                    .to_owned()
            }
            (Aim::Minimise, _) => {
                "check the sign of its parameters, or set aim = \"maximise\" if it is a return"
                    .to_owned()
            }
        }
    }
}

/// A spend to six digits, rounded up so that it is a floor that works.
fn just_above(spend: f64) -> String {
    let decimals = figures::decimals_for(spend, 6);
    let nearest = format!("{spend:.decimals$}");
    let rounded = match nearest.parse::<f64>() {
        Ok(below) if below < spend => {
            let step = 10_f64.powi(-i32::try_from(decimals).unwrap_or(i32::MAX));
            format!("{:.decimals$}", below + step)
        }
        _ => nearest,
    };
    if rounded.contains('.') {
        rounded
            .trim_end_matches('0')
            .trim_end_matches('.')
            .to_owned()
    } else {
        rounded
    }
}
