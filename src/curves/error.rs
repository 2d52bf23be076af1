//! What can be wrong with a curve's parameters or table.

use super::{Family, Parameter};

/// Why a curve could not be built. The texts are those a user reads; `input` adds the place.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum CurveError {
    /// The family needs a parameter that is not given.
    #[error("the {family} curve needs a number for {parameter}")]
    Missing {
        /// The curve's family.
        family: Family,
        /// The absent parameter.
        parameter: Parameter,
    },
    /// A parameter is given that the family does not have.
    #[error("the {family} curve has no {parameter}")]
    NotUsed {
        /// The curve's family.
        family: Family,
        /// The superfluous parameter.
        parameter: Parameter,
    },
    /// A parameter lies outside its domain.
    #[error("the {parameter} of the {family} curve must be {rule}, not {found}")]
    OutOfDomain {
        /// The curve's family.
        family: Family,
        /// The parameter at fault.
        parameter: Parameter,
        /// What stands there.
        found: f64,
        /// The domain in words, such as "above 0".
        rule: &'static str,
    },
    /// A tabulated curve was asked for by parameters.
    #[error("a points curve is read from the points table")]
    NoTable,
    /// A tabulated curve has fewer than two knots.
    #[error("a points curve needs at least two rows in the points table, found {found}")]
    TooFewKnots {
        /// How many rows there are.
        found: usize,
    },
    /// A knot's spend or return is not a finite number, or its spend is negative.
    #[error("row {row} of a points curve needs a spend of at least 0 and a finite return")]
    BadKnot {
        /// The row at fault, from 0, in the order given.
        row: usize,
    },
    /// Two knots stand at the same spend.
    #[error("a points curve has two returns for a spend of {spend}")]
    RepeatedKnot {
        /// The later of the two rows, from 0, in the order given.
        row: usize,
        /// Their spend.
        spend: f64,
    },
}

impl CurveError {
    /// The parameter at fault, where the fault lies in one.
    pub fn parameter(&self) -> Option<Parameter> {
        match self {
            Self::Missing { parameter, .. }
            | Self::NotUsed { parameter, .. }
            | Self::OutOfDomain { parameter, .. } => Some(*parameter),
            _ => None,
        }
    }
}

/// Size beyond which a parameter is a slip, and products of two of them would leave the range of
/// numbers.
const LARGEST: f64 = 1e100;

/// `value` if it is a number of a sensible size, or the error that says so.
pub(super) fn finite(family: Family, parameter: Parameter, value: f64) -> Result<f64, CurveError> {
    if value.abs() <= LARGEST {
        return Ok(value);
    }
    Err(CurveError::OutOfDomain {
        family,
        parameter,
        found: value,
        rule: "a number between −1e100 and 1e100",
    })
}

/// `value` if it is above zero and of a sensible size, or the error that says so.
pub(super) fn positive(
    family: Family,
    parameter: Parameter,
    value: f64,
) -> Result<f64, CurveError> {
    if (1.0 / LARGEST..=LARGEST).contains(&value) {
        return Ok(value);
    }
    Err(CurveError::OutOfDomain {
        family,
        parameter,
        found: value,
        rule: "above 0 (from 1e-100 to 1e100)",
    })
}
