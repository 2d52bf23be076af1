//! The colours: M. Okabe and K. Ito, *Color Universal Design*, 2008, told apart by everyone, and
//! greys for what carries no meaning.

use plotters::style::RGBColor;

/// Curves, and what is planned.
pub(super) const BLUE: RGBColor = RGBColor(0, 114, 178);
/// Today.
pub(super) const VERMILLION: RGBColor = RGBColor(213, 94, 0);
/// The shadow price.
pub(super) const GREEN: RGBColor = RGBColor(0, 158, 115);
/// Text.
pub(super) const INK: RGBColor = RGBColor(33, 33, 33);
/// Text of the second rank; 4.5 to 1 on white.
pub(super) const GREY_INK: RGBColor = RGBColor(100, 100, 100);
/// Axes and bounds.
pub(super) const GREY: RGBColor = RGBColor(150, 150, 150);
/// What the bounds shut out.
pub(super) const SHADE: RGBColor = RGBColor(244, 244, 244);
/// Grid lines.
pub(super) const PALE: RGBColor = RGBColor(232, 232, 232);
