//! Sums with a known rounding error, and numbers written for people.

pub mod figures;
mod summation;

pub use summation::{BLOCK, CompensatedSum, block_sums, lane_sum};
