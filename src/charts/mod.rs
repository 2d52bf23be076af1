//! The pictures of a plan, one a file, each drawn once and rendered as PNG and as SVG.
//!
//! A picture is drawn in its own units of a pixel on a `canvas::Canvas`; the renderings differ in how
//! fine that pixel is. Colour never carries a meaning alone: marks differ in shape, lines in
//! their dashes, and everything is labelled where it stands.

mod amounts;
mod axis;
mod canvas;
mod error;
mod heights;
mod marginal_curves;
mod palette;
mod panel;
mod rendering;
mod spend;
mod wording;

pub use error::ChartError;
pub use marginal_curves::draw_marginal_curves;
pub use spend::draw_spend;

use crate::model::{Labels, Problem, Solution};

/// What a picture is drawn from.
#[derive(Debug, Clone, Copy)]
pub struct PlanView<'a> {
    /// The words and units.
    pub labels: &'a Labels,
    /// The plan.
    pub problem: &'a Problem,
    /// Its spends and prices.
    pub solution: &'a Solution,
}

/// A picture in both renderings.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Drawing {
    /// Name of its files, without the ending.
    pub stem: &'static str,
    /// What it shows, as a heading.
    pub title: String,
    /// What it shows, in sentences for those who cannot see it.
    pub alt: String,
    /// The PNG file.
    pub png: Vec<u8>,
    /// The SVG file.
    pub svg: String,
}
