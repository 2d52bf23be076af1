//! A plan as mathematics: activities, constraints, the validated [`Problem`], its [`Solution`].
//!
//! The model knows no file. `input` reads files into a [`Problem`] and turns a [`ModelError`]
//! into a message with file, line and column.

mod activity;
mod constraint;
mod error;
mod labels;
mod problem;
mod solution;

pub use activity::{Activity, ObservedRange, Position};
pub use constraint::{Constraint, Sense, UsePerUnit};
pub use error::{Field, Misshapen, ModelError};
pub use labels::Labels;
pub use problem::{Aim, Problem};
pub use solution::Solution;
