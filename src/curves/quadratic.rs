//! Quadratic response: the marginal return falls by the same amount with every unit.

use super::error::finite;
use super::linear::straight_inverse;
use super::{
    CurveError, Family, Parameter, ParameterSet, ReturnCurve, Shape, SpendRange, shape_of_sign,
};

/// The parameters of a [`Quadratic`] curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct QuadraticParams {
    /// Marginal return at zero spend, return per unit of spend; finite.
    pub slope: f64,
    /// Change of the marginal return per unit of spend; finite, ≤ 0 where the curve is concave.
    pub curvature: f64,
}

/// r(x) = slope·x + ½·curvature·x². With curvature < 0 it has its top at −slope/curvature and
/// falls beyond it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Quadratic(QuadraticParams);

impl Quadratic {
    /// # Errors
    /// [`CurveError::OutOfDomain`] unless both parameters are finite.
    pub fn new(given: QuadraticParams) -> Result<Self, CurveError> {
        finite(Family::Quadratic, Parameter::Slope, given.slope)?;
        finite(Family::Quadratic, Parameter::Curvature, given.curvature)?;
        Ok(Self(given))
    }

    /// Slope and curvature.
    pub fn params(&self) -> QuadraticParams {
        self.0
    }

    pub(super) fn scaled(&self, factor: f64) -> Self {
        Self(QuadraticParams {
            slope: self.0.slope * factor,
            curvature: self.0.curvature * factor,
        })
    }

    pub(super) fn parameters(&self) -> ParameterSet {
        ParameterSet::default()
            .with(Parameter::Slope, self.0.slope)
            .with(Parameter::Curvature, self.0.curvature)
    }
}

impl ReturnCurve for Quadratic {
    /// slope·x + ½·curvature·x²
    fn value(&self, spend: f64) -> f64 {
        spend * (self.0.slope + 0.5 * self.0.curvature * spend)
    }

    /// slope + curvature·x
    fn marginal(&self, spend: f64) -> f64 {
        self.0.slope + self.0.curvature * spend
    }

    fn marginal_at_infinity(&self) -> f64 {
        if self.0.curvature == 0.0 {
            self.0.slope
        } else {
            self.0.curvature.signum() * f64::INFINITY
        }
    }

    /// (slope − marginal)/(−curvature)
    fn inverse_marginal(&self, marginal: f64) -> SpendRange {
        if self.0.curvature == 0.0 {
            return straight_inverse(self.0.slope, marginal);
        }
        SpendRange::at((marginal - self.0.slope) / self.0.curvature)
    }

    fn curvature(&self, _spend: f64) -> f64 {
        self.0.curvature
    }

    fn shape(&self, _floor: f64, _cap: f64) -> Shape {
        shape_of_sign(self.0.curvature)
    }
}
