//! Constant elasticity: one per cent more spend always changes the return by the same per cent.

use super::error::finite;
use super::linear::straight_inverse;
use super::{
    CurveError, Family, Parameter, ParameterSet, ReturnCurve, Shape, SpendRange, shape_of_sign,
};

/// The parameters of a [`Power`] curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PowerParams {
    /// Return at a spend of 1, in units of return; finite.
    pub gain: f64,
    /// Elasticity of the return; finite, not 0. Between 0 and 1 for diminishing returns. Below 0
    /// with a negative gain it is the sampling-variance curve, −∞ at zero spend.
    pub exponent: f64,
}

/// r(x) = gain·x^exponent.
///
/// With exponent −1 and gain −(N·S)² it is minus the variance of a stratum's total under
/// sampling, J. Neyman, *On the two different aspects of the representative method*, Journal of
/// the Royal Statistical Society 97 (1934), 558–625.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Power(PowerParams);

impl Power {
    /// # Errors
    /// [`CurveError::OutOfDomain`] unless both parameters are finite and the exponent is not 0.
    pub fn new(given: PowerParams) -> Result<Self, CurveError> {
        finite(Family::Power, Parameter::Gain, given.gain)?;
        finite(Family::Power, Parameter::Exponent, given.exponent)?;
        if given.exponent == 0.0 {
            return Err(CurveError::OutOfDomain {
                family: Family::Power,
                parameter: Parameter::Exponent,
                found: 0.0,
                rule: "other than 0 (a return that does not depend on spend belongs into base)",
            });
        }
        Ok(Self(given))
    }

    /// Gain and exponent.
    pub fn params(&self) -> PowerParams {
        self.0
    }

    pub(super) fn scaled(&self, factor: f64) -> Self {
        Self(PowerParams {
            gain: self.0.gain * factor,
            exponent: self.0.exponent,
        })
    }

    pub(super) fn parameters(&self) -> ParameterSet {
        ParameterSet::default()
            .with(Parameter::Gain, self.0.gain)
            .with(Parameter::Exponent, self.0.exponent)
    }

    /// gain·exponent, the marginal return at a spend of 1.
    fn steepness(&self) -> f64 {
        self.0.gain * self.0.exponent
    }
}

impl ReturnCurve for Power {
    /// gain·x^exponent; −∞·sign(−gain) at 0 where the exponent is negative.
    fn value(&self, spend: f64) -> f64 {
        if self.0.gain == 0.0 {
            return 0.0;
        }
        self.0.gain * spend.powf(self.0.exponent)
    }

    /// gain·exponent·x^(exponent − 1). Strictly falling where concave; +∞ at 0 for an exponent
    /// below 1.
    fn marginal(&self, spend: f64) -> f64 {
        if self.0.gain == 0.0 {
            return 0.0;
        }
        self.steepness() * spend.powf(self.0.exponent - 1.0)
    }

    fn marginal_at_infinity(&self) -> f64 {
        if self.0.gain == 0.0 || self.0.exponent < 1.0 {
            0.0
        } else if self.0.exponent == 1.0 {
            self.0.gain
        } else {
            self.0.gain.signum() * f64::INFINITY
        }
    }

    /// (marginal/(gain·exponent))^(1/(exponent − 1)). A convex cost turned by −1 (exponent above
    /// 1, negative gain) starts at a marginal of 0 and falls without end.
    fn inverse_marginal(&self, marginal: f64) -> SpendRange {
        let steepness = self.steepness();
        if steepness == 0.0 || self.0.exponent == 1.0 {
            return straight_inverse(steepness, marginal);
        }
        let share = marginal / steepness;
        if share > 0.0 {
            SpendRange::at(share.powf(1.0 / (self.0.exponent - 1.0)))
        } else if steepness > 0.0 {
            // Every unit earns more than a marginal of zero or less.
            SpendRange::at(f64::INFINITY)
        } else {
            SpendRange::at(0.0)
        }
    }

    /// gain·exponent·(exponent − 1)·x^(exponent − 2)
    fn curvature(&self, spend: f64) -> f64 {
        let factor = self.steepness() * (self.0.exponent - 1.0);
        if factor == 0.0 {
            return 0.0;
        }
        factor * spend.powf(self.0.exponent - 2.0)
    }

    fn shape(&self, _floor: f64, _cap: f64) -> Shape {
        shape_of_sign(self.steepness() * (self.0.exponent - 1.0))
    }
}
