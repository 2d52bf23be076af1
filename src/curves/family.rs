//! The names of the families and of their parameters, as they stand in a table.

use std::fmt;
use std::str::FromStr;

use super::CurveError;

/// A family of return curves, named as in the column `curve`.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Family {
    /// Constant returns.
    Linear,
    /// Quadratic response.
    Quadratic,
    /// Constant elasticity.
    Power,
    /// Logarithmic response.
    Log,
    /// Saturating exponential.
    Exponential,
    /// Saturating hyperbola.
    Hyperbolic,
    /// Hill curve.
    Hill,
    /// S-shaped logistic.
    Logistic,
    /// Tabulated return.
    Points,
}

impl Family {
    /// Every family, in the order of the handbook.
    pub const ALL: [Family; 9] = [
        Family::Linear,
        Family::Quadratic,
        Family::Power,
        Family::Log,
        Family::Exponential,
        Family::Hyperbolic,
        Family::Hill,
        Family::Logistic,
        Family::Points,
    ];

    /// The name in the column `curve`.
    pub fn name(self) -> &'static str {
        match self {
            Family::Linear => "linear",
            Family::Quadratic => "quadratic",
            Family::Power => "power",
            Family::Log => "log",
            Family::Exponential => "exponential",
            Family::Hyperbolic => "hyperbolic",
            Family::Hill => "hill",
            Family::Logistic => "logistic",
            Family::Points => "points",
        }
    }

    /// The parameters of the family, all of them needed.
    pub fn parameters(self) -> &'static [Parameter] {
        use Parameter::{Ceiling, Curvature, Exponent, Gain, Midpoint, Scale, Slope, Steepness};
        match self {
            Family::Linear => &[Slope],
            Family::Quadratic => &[Slope, Curvature],
            Family::Power => &[Gain, Exponent],
            Family::Log => &[Gain, Scale],
            Family::Exponential | Family::Hyperbolic => &[Ceiling, Scale],
            Family::Hill => &[Ceiling, Scale, Steepness],
            Family::Logistic => &[Ceiling, Scale, Midpoint],
            Family::Points => &[],
        }
    }
}

impl fmt::Display for Family {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

impl FromStr for Family {
    type Err = ();
    /// The family of that exact name.
    fn from_str(name: &str) -> Result<Self, ()> {
        Self::ALL
            .into_iter()
            .find(|family| family.name() == name)
            .ok_or(())
    }
}

/// A parameter of a family, named as its column.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Parameter {
    /// Return per unit of spend at zero spend.
    Slope,
    /// Second derivative of a quadratic, return per squared unit of spend.
    Curvature,
    /// Factor of a power or log curve, in units of return.
    Gain,
    /// Elasticity of a power curve, without unit.
    Exponent,
    /// Return that a saturating curve approaches, in units of return.
    Ceiling,
    /// Spend over which a curve saturates, in units of spend.
    Scale,
    /// Hill exponent, without unit.
    Steepness,
    /// Spend at which an S-shaped curve is steepest.
    Midpoint,
}

impl Parameter {
    /// Every parameter, in the order of the columns.
    pub const ALL: [Parameter; 8] = [
        Parameter::Slope,
        Parameter::Curvature,
        Parameter::Gain,
        Parameter::Exponent,
        Parameter::Ceiling,
        Parameter::Scale,
        Parameter::Steepness,
        Parameter::Midpoint,
    ];

    /// The name of its column.
    pub fn name(self) -> &'static str {
        match self {
            Parameter::Slope => "slope",
            Parameter::Curvature => "curvature",
            Parameter::Gain => "gain",
            Parameter::Exponent => "exponent",
            Parameter::Ceiling => "ceiling",
            Parameter::Scale => "scale",
            Parameter::Steepness => "steepness",
            Parameter::Midpoint => "midpoint",
        }
    }
}

impl fmt::Display for Parameter {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

/// Parameters by name; each may be absent.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct ParameterSet([Option<f64>; Parameter::ALL.len()]);

impl ParameterSet {
    /// The same set with `parameter` at `value`.
    pub fn with(mut self, parameter: Parameter, value: f64) -> Self {
        self.0[parameter as usize] = Some(value);
        self
    }

    /// The value of `parameter`, if it is given.
    pub fn get(&self, parameter: Parameter) -> Option<f64> {
        self.0[parameter as usize]
    }

    /// Those that are given, in the order of the columns.
    pub fn iter(&self) -> impl Iterator<Item = (Parameter, f64)> + '_ {
        Parameter::ALL
            .into_iter()
            .filter_map(|parameter| Some((parameter, self.get(parameter)?)))
    }

    pub(super) fn required(&self, family: Family, parameter: Parameter) -> Result<f64, CurveError> {
        self.get(parameter)
            .ok_or(CurveError::Missing { family, parameter })
    }

    /// Fails on the first parameter that `family` does not have.
    pub(super) fn only_those_of(&self, family: Family) -> Result<(), CurveError> {
        match self
            .iter()
            .find(|(parameter, _)| !family.parameters().contains(parameter))
        {
            Some((parameter, _)) => Err(CurveError::NotUsed { family, parameter }),
            None => Ok(()),
        }
    }
}
