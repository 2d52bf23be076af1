//! One activity: a return curve, the bounds of its spend, and what is known of today.

use compact_str::CompactString;

use crate::curves::Curve;

/// The range of spend that an activity's curve was fitted on, units of spend.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ObservedRange {
    /// Least spend seen; 0 where the file does not say.
    pub from: f64,
    /// Greatest spend seen; +∞ where the file does not say.
    pub to: f64,
}

impl ObservedRange {
    /// Whether a curve must be extrapolated to this spend.
    pub fn excludes(&self, spend: f64) -> bool {
        spend < self.from || self.to < spend
    }
}

/// One activity. A plain record: [`Problem::new`](super::Problem::new) validates it.
#[derive(Debug, Clone, PartialEq)]
pub struct Activity {
    /// Unique name.
    pub name: CompactString,
    /// Return for spend, in the activity's own unit of return, without the base.
    pub curve: Curve,
    /// Return at zero spend; moves the total, never the split.
    pub base: f64,
    /// Least spend, ≥ 0.
    pub floor: f64,
    /// Greatest spend; +∞ for none.
    pub cap: f64,
    /// Value of one unit of this return in the common unit, ≥ 0.
    pub weight: f64,
    /// Today's spend.
    pub current: Option<f64>,
    /// Range of spend that the curve was fitted on.
    pub observed: Option<ObservedRange>,
}

impl Activity {
    /// An activity without base, bounds or history, and of weight 1.
    pub fn new(name: impl Into<CompactString>, curve: Curve) -> Self {
        Self {
            name: name.into(),
            curve,
            base: 0.0,
            floor: 0.0,
            cap: f64::INFINITY,
            weight: 1.0,
            current: None,
            observed: None,
        }
    }

    /// Where a spend stands between the bounds; compares exactly.
    pub fn position(&self, spend: f64) -> Position {
        if spend == 0.0 && self.floor == 0.0 {
            Position::Unfunded
        } else if spend == self.floor {
            Position::AtFloor
        } else if spend == self.cap {
            Position::AtCap
        } else {
            Position::Between
        }
    }
}

/// Where an activity's spend stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Position {
    /// Strictly between floor and cap.
    Between,
    /// At a floor above zero.
    AtFloor,
    /// At its cap.
    AtCap,
    /// At zero spend, with no floor.
    Unfunded,
}

impl Position {
    /// The word in tables and JSON.
    pub fn name(self) -> &'static str {
        match self {
            Position::Between => "between",
            Position::AtFloor => "at floor",
            Position::AtCap => "at cap",
            Position::Unfunded => "unfunded",
        }
    }
}
