//! Logarithmic response: every doubling beyond the scale adds the same.

use super::error::{finite, positive};
use super::linear::straight_inverse;
use super::{
    CurveError, Family, Parameter, ParameterSet, ReturnCurve, Shape, SpendRange, shape_of_sign,
};

/// The parameters of a [`Log`] curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LogParams {
    /// Return that each further factor e adds, in units of return; finite.
    pub gain: f64,
    /// Spend at which the marginal return has halved, in units of spend; above 0.
    pub scale: f64,
}

/// r(x) = gain·ln(1 + x/scale). Equal marginal returns of such curves fill levels like water: T. M. Cover
/// and J. A. Thomas, *Elements of Information Theory*, 2nd ed. 2006, sec. 9.4.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Log(LogParams);

impl Log {
    /// # Errors
    /// [`CurveError::OutOfDomain`] unless the gain is finite and the scale above 0.
    pub fn new(given: LogParams) -> Result<Self, CurveError> {
        finite(Family::Log, Parameter::Gain, given.gain)?;
        positive(Family::Log, Parameter::Scale, given.scale)?;
        Ok(Self(given))
    }

    /// Gain and scale.
    pub fn params(&self) -> LogParams {
        self.0
    }

    pub(super) fn scaled(&self, factor: f64) -> Self {
        Self(LogParams {
            gain: self.0.gain * factor,
            scale: self.0.scale,
        })
    }

    pub(super) fn parameters(&self) -> ParameterSet {
        ParameterSet::default()
            .with(Parameter::Gain, self.0.gain)
            .with(Parameter::Scale, self.0.scale)
    }
}

impl ReturnCurve for Log {
    /// gain·ln(1 + x/scale)
    fn value(&self, spend: f64) -> f64 {
        self.0.gain * (spend / self.0.scale).ln_1p()
    }

    /// gain/(scale + x)
    fn marginal(&self, spend: f64) -> f64 {
        self.0.gain / (self.0.scale + spend)
    }

    fn marginal_at_infinity(&self) -> f64 {
        0.0
    }

    /// gain/marginal − scale
    fn inverse_marginal(&self, marginal: f64) -> SpendRange {
        if self.0.gain == 0.0 {
            return straight_inverse(0.0, marginal);
        }
        if marginal <= 0.0 {
            return SpendRange::at(f64::INFINITY);
        }
        SpendRange::at(self.0.gain / marginal - self.0.scale)
    }

    /// −gain/(scale + x)²
    fn curvature(&self, spend: f64) -> f64 {
        let shifted = self.0.scale + spend;
        -self.0.gain / shifted / shifted
    }

    fn shape(&self, _floor: f64, _cap: f64) -> Shape {
        shape_of_sign(-self.0.gain)
    }
}
