//! Saturating hyperbola: half of the ceiling at the scale, and a long way to the rest.

use super::error::{finite, positive};
use super::linear::straight_inverse;
use super::{
    CurveError, Family, Parameter, ParameterSet, ReturnCurve, Shape, SpendRange, shape_of_sign,
};

/// The parameters of a [`Hyperbolic`] curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HyperbolicParams {
    /// Return that is approached and never reached, in units of return; finite.
    pub ceiling: f64,
    /// Spend that gives half of the ceiling, in units of spend; above 0.
    pub scale: f64,
}

/// r(x) = ceiling·x/(scale + x).
///
/// The rate law of L. Michaelis and M. L. Menten, *Die Kinetik der Invertinwirkung*, Biochemische
/// Zeitschrift 49 (1913), 333–369; the scale is its half-saturation constant.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Hyperbolic(HyperbolicParams);

impl Hyperbolic {
    /// # Errors
    /// [`CurveError::OutOfDomain`] unless the ceiling is finite and the scale above 0.
    pub fn new(given: HyperbolicParams) -> Result<Self, CurveError> {
        finite(Family::Hyperbolic, Parameter::Ceiling, given.ceiling)?;
        positive(Family::Hyperbolic, Parameter::Scale, given.scale)?;
        Ok(Self(given))
    }

    /// Ceiling and scale.
    pub fn params(&self) -> HyperbolicParams {
        self.0
    }

    pub(super) fn scaled(&self, factor: f64) -> Self {
        Self(HyperbolicParams {
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

impl ReturnCurve for Hyperbolic {
    /// ceiling·x/(scale + x)
    fn value(&self, spend: f64) -> f64 {
        self.0.ceiling * (spend / (self.0.scale + spend))
    }

    /// ceiling·scale/(scale + x)²
    fn marginal(&self, spend: f64) -> f64 {
        let shifted = self.0.scale + spend;
        self.0.ceiling / shifted * (self.0.scale / shifted)
    }

    fn marginal_at_infinity(&self) -> f64 {
        0.0
    }

    /// √(ceiling·scale/marginal) − scale
    fn inverse_marginal(&self, marginal: f64) -> SpendRange {
        if self.0.ceiling == 0.0 {
            return straight_inverse(0.0, marginal);
        }
        if marginal <= 0.0 {
            return SpendRange::at(f64::INFINITY);
        }
        SpendRange::at((self.0.ceiling * self.0.scale / marginal).sqrt() - self.0.scale)
    }

    /// −2·ceiling·scale/(scale + x)³
    fn curvature(&self, spend: f64) -> f64 {
        -2.0 * self.marginal(spend) / (self.0.scale + spend)
    }

    fn shape(&self, _floor: f64, _cap: f64) -> Shape {
        shape_of_sign(-self.0.ceiling)
    }
}
