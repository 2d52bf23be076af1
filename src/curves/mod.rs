//! Return curves: what an activity gives for what is spent on it.
//!
//! Every family stands in a file of its own behind the contract [`ReturnCurve`]. A curve knows
//! no constraint, no weight and no base; the model adds those.

mod error;
mod exponential;
mod family;
mod hill;
mod hyperbolic;
mod linear;
mod log;
mod logistic;
mod points;
mod power;
mod quadratic;

pub use error::CurveError;
pub use exponential::{Exponential, ExponentialParams};
pub use family::{Family, Parameter, ParameterSet};
pub use hill::{Hill, HillParams};
pub use hyperbolic::{Hyperbolic, HyperbolicParams};
pub use linear::{Linear, LinearParams};
pub use log::{Log, LogParams};
pub use logistic::{Logistic, LogisticParams};
pub use points::{Knot, Piece, Points};
pub use power::{Power, PowerParams};
pub use quadratic::{Quadratic, QuadraticParams};

/// The spends at which a curve earns a given amount at the margin. `least == greatest` where the
/// curve bends; a straight piece earns the same over a whole interval.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SpendRange {
    /// Least such spend, ≥ 0.
    pub least: f64,
    /// Greatest such spend; +∞ where the curve never falls to that margin.
    pub greatest: f64,
}

impl SpendRange {
    /// One spend.
    pub fn at(spend: f64) -> Self {
        let spend = spend.max(0.0);
        Self {
            least: spend,
            greatest: spend,
        }
    }

    /// Both ends moved into [`floor`, `cap`].
    pub fn clipped(self, floor: f64, cap: f64) -> Self {
        Self {
            least: self.least.max(floor).min(cap),
            greatest: self.greatest.max(floor).min(cap),
        }
    }
}

/// How a curve bends over an interval of spend.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Shape {
    /// A straight line: concave and convex at once.
    Straight,
    /// Every further unit earns less.
    Concave,
    /// Every further unit earns more.
    Convex,
    /// An S: the marginal return turns at this spend, and only from there on does the curve bend
    /// one way.
    TurnsAt(f64),
    /// A tabulated curve that bends down at some knots and up at others.
    BendsBothWays,
}

/// The contract of every family. Spend is in units of money, ≥ 0; the return in its own unit.
///
/// `value` and the marginals hold for any shape. `inverse_marginal` is defined where the curve is
/// concave (an S-shape on its upper branch); a convex cost is inverted through
/// [`Curve::scaled`] by −1, which is concave.
pub trait ReturnCurve {
    /// r(x): the return at this spend, without the activity's base.
    fn value(&self, spend: f64) -> f64;

    /// r'(x⁺): what the next unit of spend earns, return per unit of spend. ±∞ where the curve
    /// starts vertically.
    fn marginal(&self, spend: f64) -> f64;

    /// r'(x⁻): what the last unit of spend earned. It differs from [`marginal`](Self::marginal) at the knots
    /// of a tabulated curve alone.
    fn marginal_before(&self, spend: f64) -> f64 {
        self.marginal(spend)
    }

    /// The limit of r'(x) as the spend grows without end.
    fn marginal_at_infinity(&self) -> f64;

    /// All x ≥ 0 whose marginal return is `marginal`: 0 where even the first unit earns less, +∞
    /// where every unit earns more. A marginal below what an `f64` can tell from zero is zero.
    fn inverse_marginal(&self, marginal: f64) -> SpendRange;

    /// r''(x), return per squared unit of spend; 0 on straight pieces.
    fn curvature(&self, spend: f64) -> f64;

    /// How the curve bends on [`floor`, `cap`]; `cap` may be +∞.
    fn shape(&self, floor: f64, cap: f64) -> Shape;
}

/// A return curve of any family.
#[derive(Debug, Clone, PartialEq)]
pub enum Curve {
    /// slope·x
    Linear(Linear),
    /// slope·x + ½·curvature·x²
    Quadratic(Quadratic),
    /// gain·x^exponent
    Power(Power),
    /// gain·ln(1 + x/scale)
    Log(Log),
    /// ceiling·(1 − e^(−x/scale))
    Exponential(Exponential),
    /// ceiling·x/(scale + x)
    Hyperbolic(Hyperbolic),
    /// ceiling·x^k/(scale^k + x^k)
    Hill(Hill),
    /// ceiling·(σ((x − midpoint)/scale) − σ(−midpoint/scale))
    Logistic(Logistic),
    /// straight lines through the rows of a table
    Points(Points),
}

/// Calls the same method on whichever family the curve is.
macro_rules! of_family {
    ($curve:expr, $inner:ident => $call:expr) => {
        match $curve {
            Curve::Linear($inner) => $call,
            Curve::Quadratic($inner) => $call,
            Curve::Power($inner) => $call,
            Curve::Log($inner) => $call,
            Curve::Exponential($inner) => $call,
            Curve::Hyperbolic($inner) => $call,
            Curve::Hill($inner) => $call,
            Curve::Logistic($inner) => $call,
            Curve::Points($inner) => $call,
        }
    };
}

impl ReturnCurve for Curve {
    #[inline]
    fn value(&self, spend: f64) -> f64 {
        of_family!(self, curve => curve.value(spend))
    }
    #[inline]
    fn marginal(&self, spend: f64) -> f64 {
        of_family!(self, curve => curve.marginal(spend))
    }
    #[inline]
    fn marginal_before(&self, spend: f64) -> f64 {
        of_family!(self, curve => curve.marginal_before(spend))
    }
    fn marginal_at_infinity(&self) -> f64 {
        of_family!(self, curve => curve.marginal_at_infinity())
    }
    #[inline]
    fn inverse_marginal(&self, marginal: f64) -> SpendRange {
        of_family!(self, curve => curve.inverse_marginal(marginal))
    }
    fn curvature(&self, spend: f64) -> f64 {
        of_family!(self, curve => curve.curvature(spend))
    }
    fn shape(&self, floor: f64, cap: f64) -> Shape {
        of_family!(self, curve => curve.shape(floor, cap))
    }
}

impl Curve {
    /// The same curve in another unit of return: every value times `factor` (finite; −1 turns a
    /// convex cost into a concave return). Every family is closed under this.
    pub fn scaled(&self, factor: f64) -> Self {
        match self {
            Curve::Linear(curve) => Curve::Linear(curve.scaled(factor)),
            Curve::Quadratic(curve) => Curve::Quadratic(curve.scaled(factor)),
            Curve::Power(curve) => Curve::Power(curve.scaled(factor)),
            Curve::Log(curve) => Curve::Log(curve.scaled(factor)),
            Curve::Exponential(curve) => Curve::Exponential(curve.scaled(factor)),
            Curve::Hyperbolic(curve) => Curve::Hyperbolic(curve.scaled(factor)),
            Curve::Hill(curve) => Curve::Hill(curve.scaled(factor)),
            Curve::Logistic(curve) => Curve::Logistic(curve.scaled(factor)),
            Curve::Points(curve) => Curve::Points(curve.scaled(factor)),
        }
    }

    /// The family that the curve belongs to.
    pub fn family(&self) -> Family {
        match self {
            Curve::Linear(_) => Family::Linear,
            Curve::Quadratic(_) => Family::Quadratic,
            Curve::Power(_) => Family::Power,
            Curve::Log(_) => Family::Log,
            Curve::Exponential(_) => Family::Exponential,
            Curve::Hyperbolic(_) => Family::Hyperbolic,
            Curve::Hill(_) => Family::Hill,
            Curve::Logistic(_) => Family::Logistic,
            Curve::Points(_) => Family::Points,
        }
    }

    /// A curve of a parametric `family` from named parameters.
    ///
    /// # Errors
    /// [`CurveError`] names the parameter that is missing, not used by the family, or outside
    /// its domain. [`Family::Points`] has no parameters and is built by [`Points::new`].
    pub fn from_parameters(family: Family, given: &ParameterSet) -> Result<Self, CurveError> {
        given.only_those_of(family)?;
        let value = |parameter| given.required(family, parameter);
        Ok(match family {
            Family::Linear => Curve::Linear(Linear::new(LinearParams {
                slope: value(Parameter::Slope)?,
            })?),
            Family::Quadratic => Curve::Quadratic(Quadratic::new(QuadraticParams {
                slope: value(Parameter::Slope)?,
                curvature: value(Parameter::Curvature)?,
            })?),
            Family::Power => Curve::Power(Power::new(PowerParams {
                gain: value(Parameter::Gain)?,
                exponent: value(Parameter::Exponent)?,
            })?),
            Family::Log => Curve::Log(Log::new(LogParams {
                gain: value(Parameter::Gain)?,
                scale: value(Parameter::Scale)?,
            })?),
            Family::Exponential => Curve::Exponential(Exponential::new(ExponentialParams {
                ceiling: value(Parameter::Ceiling)?,
                scale: value(Parameter::Scale)?,
            })?),
            Family::Hyperbolic => Curve::Hyperbolic(Hyperbolic::new(HyperbolicParams {
                ceiling: value(Parameter::Ceiling)?,
                scale: value(Parameter::Scale)?,
            })?),
            Family::Hill => Curve::Hill(Hill::new(HillParams {
                ceiling: value(Parameter::Ceiling)?,
                scale: value(Parameter::Scale)?,
                steepness: value(Parameter::Steepness)?,
            })?),
            Family::Logistic => Curve::Logistic(Logistic::new(LogisticParams {
                ceiling: value(Parameter::Ceiling)?,
                scale: value(Parameter::Scale)?,
                midpoint: value(Parameter::Midpoint)?,
            })?),
            Family::Points => return Err(CurveError::NoTable),
        })
    }

    /// The curve's parameters by name; empty for a tabulated curve.
    pub fn parameters(&self) -> ParameterSet {
        match self {
            Curve::Linear(curve) => curve.parameters(),
            Curve::Quadratic(curve) => curve.parameters(),
            Curve::Power(curve) => curve.parameters(),
            Curve::Log(curve) => curve.parameters(),
            Curve::Exponential(curve) => curve.parameters(),
            Curve::Hyperbolic(curve) => curve.parameters(),
            Curve::Hill(curve) => curve.parameters(),
            Curve::Logistic(curve) => curve.parameters(),
            Curve::Points(_) => ParameterSet::default(),
        }
    }
}

/// The shape of a smooth curve whose second derivative has one sign, that of `second`.
fn shape_of_sign(second: f64) -> Shape {
    if second < 0.0 {
        Shape::Concave
    } else if second > 0.0 {
        Shape::Convex
    } else {
        Shape::Straight
    }
}

/// The smallest marginal return that an `f64` can tell from zero. A curve that approaches its
/// ceiling exponentially earns less than this from a finite spend on.
const SMALLEST_MARGINAL: f64 = f64::MIN_POSITIVE * f64::EPSILON;
