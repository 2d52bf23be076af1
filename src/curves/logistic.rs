//! S-shaped logistic: slow, then fast, then slow. Concave from its midpoint on.

use super::error::{finite, positive};
use super::linear::straight_inverse;
use super::{
    CurveError, Family, Parameter, ParameterSet, ReturnCurve, SMALLEST_MARGINAL, Shape, SpendRange,
    shape_of_sign,
};

/// The parameters of a [`Logistic`] curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LogisticParams {
    /// Height of the whole S, in units of return; finite.
    pub ceiling: f64,
    /// Spend over which the S rises from 27 % to 50 %, in units of spend; above 0.
    pub scale: f64,
    /// Spend at which the curve is steepest, in units of spend; finite.
    pub midpoint: f64,
}

/// r(x) = ceiling·(σ((x − midpoint)/scale) − σ(−midpoint/scale)), σ(z) = 1/(1 + e^(−z)).
///
/// P.-F. Verhulst, *Notice sur la loi que la population suit dans son accroissement*,
/// Correspondance mathématique et physique 10 (1838), 113–121; shifted to start at 0.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Logistic(LogisticParams);

impl Logistic {
    /// # Errors
    /// [`CurveError::OutOfDomain`] unless ceiling and midpoint are finite and the scale is
    /// above 0.
    pub fn new(given: LogisticParams) -> Result<Self, CurveError> {
        finite(Family::Logistic, Parameter::Ceiling, given.ceiling)?;
        positive(Family::Logistic, Parameter::Scale, given.scale)?;
        finite(Family::Logistic, Parameter::Midpoint, given.midpoint)?;
        Ok(Self(given))
    }

    pub(super) fn scaled(&self, factor: f64) -> Self {
        Self(LogisticParams {
            ceiling: self.0.ceiling * factor,
            ..self.0
        })
    }

    pub(super) fn parameters(&self) -> ParameterSet {
        ParameterSet::default()
            .with(Parameter::Ceiling, self.0.ceiling)
            .with(Parameter::Scale, self.0.scale)
            .with(Parameter::Midpoint, self.0.midpoint)
    }

    /// σ((x − midpoint)/scale)
    fn share(&self, spend: f64) -> f64 {
        1.0 / (1.0 + ((self.0.midpoint - spend) / self.0.scale).exp())
    }

    /// 1 − σ((x − midpoint)/scale), without the loss near 1.
    fn rest(&self, spend: f64) -> f64 {
        1.0 / (1.0 + ((spend - self.0.midpoint) / self.0.scale).exp())
    }
}

impl ReturnCurve for Logistic {
    /// ceiling·(σ(z) − σ(z₀)) = ceiling·σ(z)·σ(−z₀)·(1 − e^(−x/scale)), free of cancellation.
    fn value(&self, spend: f64) -> f64 {
        self.0.ceiling * self.share(spend) * self.rest(0.0) * -(-spend / self.0.scale).exp_m1()
    }

    /// ceiling/scale·σ(z)·(1 − σ(z))
    fn marginal(&self, spend: f64) -> f64 {
        self.0.ceiling / self.0.scale * self.share(spend) * self.rest(spend)
    }

    fn marginal_at_infinity(&self) -> f64 {
        0.0
    }

    /// midpoint + 2·scale·arcosh(1/(2√q)), q = marginal·scale/ceiling: the upper branch, which is
    /// the concave one. At marginal 0 as in the exponential curve.
    fn inverse_marginal(&self, marginal: f64) -> SpendRange {
        let steepest = self.0.ceiling / self.0.scale;
        if steepest == 0.0 {
            return straight_inverse(0.0, marginal);
        }
        if marginal < 0.0 {
            return SpendRange::at(f64::INFINITY);
        }
        let marginal_told = marginal.max(SMALLEST_MARGINAL);
        let share = marginal_told / steepest;
        if share >= 0.25 {
            return SpendRange::at(self.0.midpoint);
        }
        let root = (1.0 - 4.0 * share).sqrt();
        // Not the logarithm of the share, which is zero where the curve is steep.
        let log_share = marginal_told.ln() - steepest.ln();
        let least = self.0.midpoint + self.0.scale * (2.0 * ((1.0 + root) / 2.0).ln() - log_share);
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

    /// marginal/scale·(1 − 2σ(z))
    fn curvature(&self, spend: f64) -> f64 {
        self.marginal(spend) / self.0.scale * (self.rest(spend) - self.share(spend))
    }

    fn shape(&self, floor: f64, _cap: f64) -> Shape {
        if self.0.ceiling != 0.0 && floor < self.0.midpoint {
            return Shape::TurnsAt(self.0.midpoint);
        }
        shape_of_sign(-self.0.ceiling)
    }
}
