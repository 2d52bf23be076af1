//! What the activities ask for together at a price.
//!
//! In units of what is limited, y = a·x, the demand of most families is a straight line in one
//! number that depends on the price alone, held between the bounds: y = clamp(p + q·t(λ), L, U).
//! So the price is turned into t once, and an activity costs two multiply-adds.

use crate::curves::{Curve, ReturnCurve, SpendRange};
use crate::numeric::{CompensatedSum, lane_sum};

/// The least and the greatest use that a price asks for; they differ where a straight piece
/// earns exactly the price.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct UseRange {
    /// With nothing taken of the pieces at the margin.
    pub least: f64,
    /// With all of them taken.
    pub greatest: f64,
}

/// The number t(λ) in which a family's demand is a straight line.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum PriceScale {
    /// λ: quadratic.
    Price,
    /// 1/λ: log.
    Reciprocal,
    /// λ^(−½): hyperbolic, and power with exponent −1.
    InverseRoot,
    /// ln λ: exponential.
    Logarithm,
}

impl PriceScale {
    pub(super) const ALL: [Self; 4] = [
        Self::Price,
        Self::Reciprocal,
        Self::InverseRoot,
        Self::Logarithm,
    ];

    /// t(λ). A price of zero or less is met by a curve that always rises with all it can take.
    pub(super) fn of(self, price: f64) -> f64 {
        match self {
            Self::Price => price,
            Self::Reciprocal if price > 0.0 => price.recip(),
            Self::InverseRoot if price > 0.0 => price.sqrt().recip(),
            Self::Reciprocal | Self::InverseRoot => f64::INFINITY,
            Self::Logarithm if price < 0.0 => f64::NEG_INFINITY,
            Self::Logarithm => price.max(SMALLEST_PRICE).ln(),
        }
    }
}

/// The smallest price that can be told from zero: where exponential curves count as saturated.
const SMALLEST_PRICE: f64 = f64::MIN_POSITIVE * f64::EPSILON;

/// y = clamp(intercept + slope·t, least, greatest).
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Line {
    pub intercept: f64,
    pub slope: f64,
    pub least: f64,
    pub greatest: f64,
}

impl Line {
    #[inline]
    pub(super) fn at(&self, scaled_price: f64) -> f64 {
        (self.intercept + self.slope * scaled_price)
            .max(self.least)
            .min(self.greatest)
    }

    /// The same without the bounds.
    #[inline]
    pub(super) fn unbounded(&self, scaled_price: f64) -> f64 {
        self.intercept + self.slope * scaled_price
    }
}

/// y = clamp(e^(intercept + slope·ln|λ|), least, greatest): a power curve. A negative slope
/// answers positive prices (a return), a positive slope negative ones (a cost turned by −1).
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct PowerLine {
    pub intercept: f64,
    pub slope: f64,
    pub least: f64,
    pub greatest: f64,
}

impl PowerLine {
    #[inline]
    pub(super) fn at(&self, logs: LogPrices) -> f64 {
        let log = if self.slope < 0.0 {
            logs.of_positive
        } else {
            logs.of_negative
        };
        (self.intercept + self.slope * log)
            .exp()
            .max(self.least)
            .min(self.greatest)
    }
}

/// ln λ and ln(−λ), each −∞ where the price has the other sign.
#[derive(Debug, Clone, Copy)]
pub(super) struct LogPrices {
    of_positive: f64,
    of_negative: f64,
}

impl LogPrices {
    pub(super) fn of(price: f64) -> Self {
        let log = |price: f64| {
            if price > 0.0 {
                price.ln()
            } else {
                f64::NEG_INFINITY
            }
        };
        Self {
            of_positive: log(price),
            of_negative: log(-price),
        }
    }
}

/// A straight piece of a curve: taken whole below its price, not at all above it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct StraightPiece {
    /// Marginal worth per unit of use.
    pub price: f64,
    /// Use of the whole piece; +∞ for an uncapped line.
    pub width: f64,
}

/// A curve whose inverse marginal return has no closed form.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct NumericDemand {
    pub worth: Curve,
    pub use_per_unit: f64,
    pub floor: f64,
    pub cap: f64,
}

impl NumericDemand {
    pub(super) fn spends_at(&self, price: f64) -> SpendRange {
        self.worth
            .inverse_marginal(price * self.use_per_unit)
            .clipped(self.floor, self.cap)
    }

    pub(super) fn at(&self, price: f64) -> UseRange {
        let spends = self.spends_at(price);
        UseRange {
            least: self.use_per_unit * spends.least,
            greatest: self.use_per_unit * spends.greatest,
        }
    }
}

/// The demand of all activities, grouped by the form of their answer to a price.
#[derive(Debug, Clone, Default)]
pub struct Demand {
    /// Use of all floors, and of all caps.
    pub(super) floors: CompensatedSum,
    pub(super) caps: CompensatedSum,
    /// Use that does not depend on the price.
    pub(super) fixed: CompensatedSum,
    /// One group for each of [`PriceScale::ALL`].
    pub(super) lines: [Vec<Line>; 4],
    pub(super) powers: Vec<PowerLine>,
    pub(super) pieces: Vec<StraightPiece>,
    pub(super) numeric: Vec<NumericDemand>,
}

impl Demand {
    /// What is asked for at `price`, units of the limit. One pass over the activities.
    pub fn at(&self, price: f64) -> UseRange {
        let mut smooth = self.fixed;
        for (scale, lines) in PriceScale::ALL.into_iter().zip(&self.lines) {
            let scaled_price = scale.of(price);
            smooth.join(lane_sum(lines, |line| line.at(scaled_price)));
        }
        let logs = LogPrices::of(price);
        smooth.join(lane_sum(&self.powers, |power| power.at(logs)));

        let mut least = smooth;
        let mut greatest = smooth;
        let taken = |piece: &StraightPiece| {
            if piece.price > price {
                piece.width
            } else {
                0.0
            }
        };
        least.join(lane_sum(&self.pieces, taken));
        let taken = |piece: &StraightPiece| {
            if piece.price >= price {
                piece.width
            } else {
                0.0
            }
        };
        greatest.join(lane_sum(&self.pieces, taken));
        least.join(lane_sum(&self.numeric, |numeric| numeric.at(price).least));
        greatest.join(lane_sum(&self.numeric, |numeric| {
            numeric.at(price).greatest
        }));
        UseRange {
            least: least.total(),
            greatest: greatest.total(),
        }
    }

    /// What all floors, and what all caps, use; units of the limit.
    pub fn of_bounds(&self) -> UseRange {
        UseRange {
            least: self.floors.total(),
            greatest: self.caps.total(),
        }
    }

    /// How many terms one evaluation sums.
    pub(super) fn terms(&self) -> usize {
        self.lines.iter().map(Vec::len).sum::<usize>()
            + self.powers.len()
            + self.pieces.len()
            + self.numeric.len()
    }

    /// Every `stride`-th activity of each group: a sample for a first guess of the price.
    pub(super) fn sample(&self, stride: usize) -> Self {
        fn every<T: Clone>(items: &[T], stride: usize) -> Vec<T> {
            items
                .iter()
                .skip(stride / 2)
                .step_by(stride)
                .cloned()
                .collect()
        }
        let mut fixed = CompensatedSum::default();
        fixed.add(self.fixed.total() / stride as f64);
        Self {
            fixed,
            floors: CompensatedSum::default(),
            caps: CompensatedSum::default(),
            lines: [0, 1, 2, 3].map(|group| every(&self.lines[group], stride)),
            powers: every(&self.powers, stride),
            pieces: every(&self.pieces, stride),
            numeric: every(&self.numeric, stride),
        }
    }
}
