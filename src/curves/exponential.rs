//! Saturating exponential: every unit takes the same share of what is still to be had.

use super::error::{finite, positive};
use super::linear::straight_inverse;
use super::{
    CurveError, Family, Parameter, ParameterSet, ReturnCurve, Shape, SpendRange, shape_of_sign,
};

/// The parameters of an [`Exponential`] curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ExponentialParams {
    /// Return that is approached and never reached, in units of return; finite.
    pub ceiling: f64,
    /// Spend that takes 63 % (1 − 1/e) of what is left, in units of spend; above 0.
    pub scale: f64,
}

/// r(x) = ceiling·(1 − e^(−x/scale)).
///
/// In agronomy E. A. Mitscherlich's law of diminishing yield (1909); in search theory the
/// detection function of B. O. Koopman, *The theory of search III*, Operations Research 5 (1957),
/// 613–626.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Exponential(ExponentialParams);

impl Exponential {
    /// # Errors
    /// [`CurveError::OutOfDomain`] unless the ceiling is finite and the scale above 0.
    pub fn new(given: ExponentialParams) -> Result<Self, CurveError> {
        finite(Family::Exponential, Parameter::Ceiling, given.ceiling)?;
        positive(Family::Exponential, Parameter::Scale, given.scale)?;
        Ok(Self(given))
    }

    /// Ceiling and scale.
    pub fn params(&self) -> ExponentialParams {
        self.0
    }

    pub(super) fn scaled(&self, factor: f64) -> Self {
        Self(ExponentialParams {
            ceiling: self.0.ceiling * factor,
            scale: self.0.scale,
        })
    }

    pub(super) fn parameters(&self) -> ParameterSet {
        ParameterSet::default()
            .with(Parameter::Ceiling, self.0.ceiling)
            .with(Parameter::Scale, self.0.scale)
    }
}

impl ReturnCurve for Exponential {
    /// ceiling·(1 − e^(−x/scale))
    fn value(&self, spend: f64) -> f64 {
        -self.0.ceiling * (-spend / self.0.scale).exp_m1()
    }

    /// ceiling/scale·e^(−x/scale)
    fn marginal(&self, spend: f64) -> f64 {
        self.0.ceiling / self.0.scale * (-spend / self.0.scale).exp()
    }

    fn marginal_at_infinity(&self) -> f64 {
        0.0
    }

    /// scale·ln(ceiling/(scale·marginal)). At marginal 0 the spend beyond which the marginal
    /// return is below the smallest number that can be told from zero.
    fn inverse_marginal(&self, marginal: f64) -> SpendRange {
        let first = self.0.ceiling / self.0.scale;
        if first == 0.0 {
            return straight_inverse(0.0, marginal);
        }
        if marginal < 0.0 {
            return SpendRange::at(f64::INFINITY);
        }
        let least = self.0.scale * (first.ln() - marginal.max(super::SMALLEST_MARGINAL).ln());
        let greatest = if marginal == 0.0 {
            f64::INFINITY
        } else {
            least
        };
        SpendRange {
            least: least.max(0.0),
            greatest: greatest.max(0.0),
        }
    }

    /// −ceiling/scale²·e^(−x/scale)
    fn curvature(&self, spend: f64) -> f64 {
        -self.marginal(spend) / self.0.scale
    }

    fn shape(&self, _floor: f64, _cap: f64) -> Shape {
        shape_of_sign(-self.0.ceiling)
    }
}
