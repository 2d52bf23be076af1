//! Why a problem has no best plan.

/// Why there is no plan.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum SolveError {
    /// Floors and caps leave no plan that meets the limit.
    #[error("no plan meets the limit")]
    Infeasible {
        /// Index of the constraint.
        constraint: usize,
        /// Its limit.
        limit: f64,
        /// Least use that the floors allow, in units of the limit.
        least_use: f64,
        /// Greatest use that the caps allow; +∞ for no end.
        greatest_use: f64,
    },
    /// The total improves without end as this activity's spend grows.
    #[error("the total improves without end")]
    Unbounded {
        /// Index of the activity.
        activity: usize,
    },
    /// The only spend that the limits leave for this activity has no finite return.
    #[error("the limits leave an activity at a spend without a finite return")]
    NoFiniteTotal {
        /// Index of the activity.
        activity: usize,
    },
    /// The plan has not exactly one constraint.
    #[error("a plan needs exactly one constraint, found {found}")]
    NotOneConstraint {
        /// How many there are.
        found: usize,
    },
    /// A unit of spend on this activity uses nothing, or less than nothing, of what is limited.
    #[error("every unit of spend must use some of what is limited")]
    UseNotPositive {
        /// Index of the activity.
        activity: usize,
    },
}
