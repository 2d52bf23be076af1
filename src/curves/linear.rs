//! Constant returns: every unit of spend earns the same.

use super::error::finite;
use super::{CurveError, Family, Parameter, ParameterSet, ReturnCurve, Shape, SpendRange};

/// The parameters of a [`Linear`] curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LinearParams {
    /// Return per unit of spend; any finite number.
    pub slope: f64,
}

/// r(x) = slope·x.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Linear(LinearParams);

impl Linear {
    /// # Errors
    /// [`CurveError::OutOfDomain`] unless the slope is finite.
    pub fn new(given: LinearParams) -> Result<Self, CurveError> {
        finite(Family::Linear, Parameter::Slope, given.slope)?;
        Ok(Self(given))
    }

    /// Return per unit of spend.
    pub fn slope(&self) -> f64 {
        self.0.slope
    }

    pub(super) fn scaled(&self, factor: f64) -> Self {
        Self(LinearParams {
            slope: self.0.slope * factor,
        })
    }

    pub(super) fn parameters(&self) -> ParameterSet {
        ParameterSet::default().with(Parameter::Slope, self.0.slope)
    }
}

impl ReturnCurve for Linear {
    /// slope·x
    fn value(&self, spend: f64) -> f64 {
        self.0.slope * spend
    }

    /// slope, everywhere
    fn marginal(&self, _spend: f64) -> f64 {
        self.0.slope
    }

    fn marginal_at_infinity(&self) -> f64 {
        self.0.slope
    }

    /// All spends at marginal = slope, else 0 or +∞.
    fn inverse_marginal(&self, marginal: f64) -> SpendRange {
        straight_inverse(self.0.slope, marginal)
    }

    fn curvature(&self, _spend: f64) -> f64 {
        0.0
    }

    fn shape(&self, _floor: f64, _cap: f64) -> Shape {
        Shape::Straight
    }
}

/// The spends at which a straight line of this slope earns `marginal`.
pub(super) fn straight_inverse(slope: f64, marginal: f64) -> SpendRange {
    SpendRange {
        least: if slope > marginal { f64::INFINITY } else { 0.0 },
        greatest: if slope >= marginal {
            f64::INFINITY
        } else {
            0.0
        },
    }
}
