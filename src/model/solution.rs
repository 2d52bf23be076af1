//! The answer to a problem, as plain data.

/// Spends and shadow prices. The solver makes one; nothing in it is proven until the certificate
/// has looked at it.
#[derive(Debug, Clone, PartialEq)]
pub struct Solution {
    /// x_i, units of spend, in the order of the activities.
    pub spends: Vec<f64>,
    /// λ_k, the derivative of the best total by the limit of constraint k, units of the total per
    /// unit of the limit. Whatever the aim and the sense; +∞ where the first unit above a least
    /// limit is worth without bound.
    pub shadow_prices: Vec<f64>,
}
