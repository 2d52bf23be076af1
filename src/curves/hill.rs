//! Hill curve: a saturating hyperbola whose approach is drawn out (steepness below 1) or
//! sudden (above 1, then S-shaped).

use super::error::{finite, positive};
use super::linear::straight_inverse;
use super::{
    CurveError, Family, Parameter, ParameterSet, ReturnCurve, Shape, SpendRange, shape_of_sign,
};

/// Newton steps within which the inverse must have converged; it takes fewer than ten from any
/// start, since the function solved is concave and almost two straight lines.
const MOST_NEWTON_STEPS: usize = 60;

/// The parameters of a [`Hill`] curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HillParams {
    /// Return that is approached and never reached, in units of return; finite.
    pub ceiling: f64,
    /// Spend that gives half of the ceiling, in units of spend; above 0.
    pub scale: f64,
    /// Exponent k, without unit; above 0. Concave from zero spend on where it is ≤ 1.
    pub steepness: f64,
}

/// r(x) = ceiling·x^k/(scale^k + x^k), k = steepness.
///
/// A. V. Hill, *The possible effects of the aggregation of the molecules of haemoglobin on its
/// dissociation curves*, Journal of Physiology 40 (1910), iv–vii.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Hill(HillParams);

impl Hill {
    /// # Errors
    /// [`CurveError::OutOfDomain`] unless the ceiling is finite and scale and steepness are
    /// above 0.
    pub fn new(given: HillParams) -> Result<Self, CurveError> {
        finite(Family::Hill, Parameter::Ceiling, given.ceiling)?;
        positive(Family::Hill, Parameter::Scale, given.scale)?;
        positive(Family::Hill, Parameter::Steepness, given.steepness)?;
        Ok(Self(given))
    }

    pub(super) fn scaled(&self, factor: f64) -> Self {
        Self(HillParams {
            ceiling: self.0.ceiling * factor,
            ..self.0
        })
    }

    pub(super) fn parameters(&self) -> ParameterSet {
        ParameterSet::default()
            .with(Parameter::Ceiling, self.0.ceiling)
            .with(Parameter::Scale, self.0.scale)
            .with(Parameter::Steepness, self.0.steepness)
    }

    /// v = ln((x/scale)^k), in which r = ceiling·σ(v).
    fn level(&self, spend: f64) -> f64 {
        self.0.steepness * (spend / self.0.scale).ln()
    }

    /// The spend from which on the curve is concave: scale·((k − 1)/(k + 1))^(1/k), or 0.
    fn turning_spend(&self) -> f64 {
        let k = self.0.steepness;
        if k <= 1.0 {
            return 0.0;
        }
        self.0.scale * ((k - 1.0) / (k + 1.0)).powf(1.0 / k)
    }
}

impl ReturnCurve for Hill {
    /// ceiling·σ(v)
    fn value(&self, spend: f64) -> f64 {
        self.0.ceiling / (1.0 + (-self.level(spend)).exp())
    }

    /// ceiling·k/x·σ(v)·σ(−v). At zero spend +∞ for k < 1, ceiling/scale for k = 1, 0 for k > 1.
    fn marginal(&self, spend: f64) -> f64 {
        let HillParams {
            ceiling,
            scale,
            steepness: k,
        } = self.0;
        if spend == 0.0 {
            return match k.total_cmp(&1.0) {
                _ if ceiling == 0.0 => 0.0,
                std::cmp::Ordering::Less => ceiling.signum() * f64::INFINITY,
                std::cmp::Ordering::Equal => ceiling / scale,
                std::cmp::Ordering::Greater => 0.0,
            };
        }
        let level = self.level(spend);
        ceiling * (k / spend) / (1.0 + (-level).exp()) / (1.0 + level.exp())
    }

    fn marginal_at_infinity(&self) -> f64 {
        0.0
    }

    /// The root of ln(marginal·scale/(ceiling·k)) = (1 − 1/k)·v − 2·ln(1 + e^v) on the concave
    /// branch, by Newton's method: the right side is concave and falling there, so that from the
    /// far side the steps approach the root from one direction.
    fn inverse_marginal(&self, marginal: f64) -> SpendRange {
        let HillParams {
            ceiling,
            scale,
            steepness: k,
        } = self.0;
        if ceiling == 0.0 {
            return straight_inverse(0.0, marginal);
        }
        if marginal <= 0.0 {
            return SpendRange::at(f64::INFINITY);
        }
        if marginal == f64::INFINITY || (k == 1.0 && marginal >= ceiling / scale) {
            return SpendRange::at(self.turning_spend());
        }
        let turning = self.turning_spend();
        if k > 1.0 && marginal >= self.marginal(turning) {
            return SpendRange::at(turning);
        }
        // In logarithms, since the smallest prices divided by a steep curve would be zero.
        let wanted = marginal.ln() - (ceiling * k / scale).ln();
        let bend = 1.0 - 1.0 / k;
        // For large v the right side is −(1 + 1/k)·v from above: a start on the far side.
        let mut level = if k > 1.0 {
            (-wanted / (1.0 + 1.0 / k)).max(self.level(turning) + 1.0)
        } else {
            -wanted / (1.0 + 1.0 / k)
        };
        for _ in 0..MOST_NEWTON_STEPS {
            let softplus = level.max(0.0) + (-level.abs()).exp().ln_1p();
            let miss = bend * level - 2.0 * softplus - wanted;
            let slope = bend - 2.0 / (1.0 + (-level).exp());
            let step = miss / slope;
            level -= step;
            if step.abs() <= f64::EPSILON * level.abs().max(1.0) {
                break;
            }
        }
        SpendRange::at((scale * (level / k).exp()).max(turning))
    }

    /// marginal/x·(k·(1 − 2σ(v)) − 1)
    fn curvature(&self, spend: f64) -> f64 {
        let share = 1.0 / (1.0 + (-self.level(spend)).exp());
        self.marginal(spend) / spend * (self.0.steepness * (1.0 - 2.0 * share) - 1.0)
    }

    fn shape(&self, floor: f64, _cap: f64) -> Shape {
        let turning = self.turning_spend();
        if self.0.ceiling != 0.0 && floor < turning {
            return Shape::TurnsAt(turning);
        }
        shape_of_sign(-self.0.ceiling)
    }
}
