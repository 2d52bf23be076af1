//! What a constraint's limit is worth, and how far that holds.

mod prices;

pub use prices::{ConstraintPrice, price_constraints};
