//! One constraint: what the activities may, must or shall use together.

/// How what is used stands to the limit.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Sense {
    /// use ≤ limit
    AtMost,
    /// use = limit
    Equal,
    /// use ≥ limit
    AtLeast,
}

impl Sense {
    /// The sign in tables and JSON.
    pub fn sign(self) -> &'static str {
        match self {
            Sense::AtMost => "<=",
            Sense::Equal => "=",
            Sense::AtLeast => ">=",
        }
    }
}

/// What one unit of spend uses, a_ki, for every activity.
#[derive(Debug, Clone, PartialEq)]
pub enum UsePerUnit {
    /// Every unit of every activity's spend uses 1: the constraint is on the spend itself.
    Spend,
    /// One number per activity, in the order of the activities.
    PerActivity(Vec<f64>),
}

/// Σ a_ki x_i ≤ = ≥ limit.
#[derive(Debug, Clone, PartialEq)]
pub struct Constraint {
    /// Unique name.
    pub name: String,
    /// How the use stands to the limit.
    pub sense: Sense,
    /// b_k, in units of what is used.
    pub limit: f64,
    /// a_ki, units of what is used per unit of spend.
    pub use_per_unit: UsePerUnit,
}

impl Constraint {
    /// The constraint named `budget`: all spend together at most `limit`.
    pub fn budget(limit: f64) -> Self {
        Self {
            name: "budget".to_owned(),
            sense: Sense::AtMost,
            limit,
            use_per_unit: UsePerUnit::Spend,
        }
    }

    /// The constraint named `requirement`: all spend together at least `limit`.
    pub fn requirement(limit: f64) -> Self {
        Self {
            name: "requirement".to_owned(),
            sense: Sense::AtLeast,
            limit,
            use_per_unit: UsePerUnit::Spend,
        }
    }

    /// a_ki of activity `i`.
    #[inline]
    pub fn use_per_unit(&self, i: usize) -> f64 {
        match &self.use_per_unit {
            UsePerUnit::Spend => 1.0,
            UsePerUnit::PerActivity(per_unit) => per_unit[i],
        }
    }

    /// limit − used; negative where an upper limit is broken.
    pub fn slack(&self, used: f64) -> f64 {
        self.limit - used
    }

    /// Whether `used` meets the limit to the last unit.
    pub fn is_binding(&self, used: f64) -> bool {
        self.slack(used).abs() <= BINDING * self.limit.abs().max(used.abs())
    }

    /// Whether `used` is the limit but for the rounding of decimal numbers to binary ones, as the
    /// sum of floors may be that was made to fill it.
    pub fn is_filled_by(&self, used: f64) -> bool {
        self.slack(used).abs() <= SAME_USE * self.limit.abs()
    }
}

/// Relative slack up to which a constraint binds: a few roundings of a sum, far below the
/// smallest coin of any budget.
const BINDING: f64 = 1e-14;

/// Relative difference up to which a use and a limit are the same number: the roundings of the
/// spends, of what a unit uses, of their products, of the sum and of the limit.
const SAME_USE: f64 = 3.0 * f64::EPSILON;
