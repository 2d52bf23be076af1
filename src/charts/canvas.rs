//! A sheet in pixels, several times as fine underneath: lines, marks and letters.

use plotters::backend::DrawingBackend;
use plotters::coord::Shift;
use plotters::drawing::DrawingArea;
use plotters::element::{Circle, PathElement, Polygon, Rectangle, Text};
use plotters::style::text_anchor::{HPos, Pos, VPos};
use plotters::style::{Color, FontStyle, IntoFont, RGBColor, ShapeStyle, TextStyle, WHITE};

use super::ChartError;

/// The name under which the embedded font is registered. A viewer of the SVG takes its own font
/// of that kind; the embedded one is among the widest, so that no text outgrows its place.
pub(super) const FONT: &str = "sans-serif";

/// Pixels by which a curve may be straightened. The drawing library rounds every point; with few
/// points a curve does not show it.
const STRAIGHTENED: f64 = 0.12;

/// Where a text stands against its point.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Align {
    Left,
    Centre,
    Right,
}

/// How a text is written.
#[derive(Debug, Clone, Copy)]
pub(super) struct Type {
    /// Height in pixels.
    pub size: f64,
    pub bold: bool,
    pub colour: RGBColor,
}

/// A mark at a point.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Mark {
    /// Filled: what is planned.
    Disc,
    /// Hollow, with room for a disc inside: today.
    Diamond,
}

/// A picture that can be drawn on any canvas.
pub(super) trait Picture {
    /// Width and height in pixels.
    fn size(&self) -> (u32, u32);
    /// Draws everything.
    fn draw<DB: DrawingBackend>(&self, canvas: &Canvas<DB>) -> Result<(), ChartError>;
}

/// A sheet in pixels; y grows downward. Points that are not finite are drawn nowhere.
pub(super) struct Canvas<DB: DrawingBackend> {
    area: DrawingArea<DB, Shift>,
    fineness: i32,
}

impl<DB: DrawingBackend> Canvas<DB> {
    /// A canvas on an area that is `fineness` times as wide and high as the picture.
    pub(super) fn new(area: DrawingArea<DB, Shift>, fineness: i32) -> Self {
        Self { area, fineness }
    }

    /// Writes what is drawn to where it goes.
    pub(super) fn finish(&self) -> Result<(), ChartError> {
        self.area.present().map_err(ChartError::of)
    }

    fn point(&self, (x, y): (f64, f64)) -> (i32, i32) {
        let fine = |at: f64| (at * f64::from(self.fineness)).round() as i32;
        (fine(x), fine(y))
    }

    fn stroke(&self, colour: RGBColor, width: f64) -> ShapeStyle {
        let width = (width * f64::from(self.fineness)).round().max(1.0) as u32;
        ShapeStyle::from(&colour).stroke_width(width)
    }

    /// A line through points.
    pub(super) fn line(
        &self,
        points: &[(f64, f64)],
        colour: RGBColor,
        width: f64,
    ) -> Result<(), ChartError> {
        let points: Vec<(i32, i32)> = points
            .iter()
            .filter(|(x, y)| x.is_finite() && y.is_finite())
            .map(|&point| self.point(point))
            .collect();
        if points.len() < 2 {
            return Ok(());
        }
        let path = PathElement::new(points, self.stroke(colour, width));
        self.area.draw(&path).map_err(ChartError::of)
    }

    /// A dashed line through points: `on` pixels drawn, `off` left out, in turn.
    pub(super) fn dashes(
        &self,
        points: &[(f64, f64)],
        colour: RGBColor,
        width: f64,
        (on, off): (f64, f64),
    ) -> Result<(), ChartError> {
        let mut left = on;
        let mut drawing = true;
        let mut dash: Vec<(f64, f64)> = points.first().copied().into_iter().collect();
        for ends in points.windows(2) {
            let (mut from, to) = (ends[0], ends[1]);
            let mut length = (to.0 - from.0).hypot(to.1 - from.1);
            if !length.is_finite() {
                continue;
            }
            while length > left {
                let share = left / length;
                let at = (
                    from.0 + share * (to.0 - from.0),
                    from.1 + share * (to.1 - from.1),
                );
                if drawing {
                    dash.push(at);
                    self.line(&dash, colour, width)?;
                }
                dash = vec![at];
                drawing = !drawing;
                (from, length, left) = (at, length - left, if drawing { on } else { off });
            }
            left -= length;
            dash.push(to);
        }
        if drawing {
            self.line(&dash, colour, width)
        } else {
            Ok(())
        }
    }

    /// A filled rectangle between two corners.
    pub(super) fn band(
        &self,
        corner: (f64, f64),
        opposite: (f64, f64),
        colour: RGBColor,
    ) -> Result<(), ChartError> {
        let corners = [self.point(corner), self.point(opposite)];
        self.area
            .draw(&Rectangle::new(corners, colour.filled()))
            .map_err(ChartError::of)
    }

    /// A mark of this radius; its inside is white where it is no disc.
    pub(super) fn mark(
        &self,
        mark: Mark,
        at: (f64, f64),
        radius: f64,
        colour: RGBColor,
    ) -> Result<(), ChartError> {
        let (x, y) = at;
        if !(x.is_finite() && y.is_finite()) {
            return Ok(());
        }
        let fine_radius = (radius * f64::from(self.fineness)).round() as i32;
        match mark {
            Mark::Disc => {
                let disc = Circle::new(self.point(at), fine_radius, colour.filled());
                self.area.draw(&disc).map_err(ChartError::of)
            }
            Mark::Diamond => {
                let diamond = |radius: f64| {
                    [
                        (x - radius, y),
                        (x, y - radius),
                        (x + radius, y),
                        (x, y + radius),
                    ]
                    .map(|point| self.point(point))
                    .to_vec()
                };
                let outer = Polygon::new(diamond(1.25 * radius), colour.filled());
                self.area.draw(&outer).map_err(ChartError::of)?;
                let inner = Polygon::new(diamond(1.25 * radius - 3.0), WHITE.filled());
                self.area.draw(&inner).map_err(ChartError::of)
            }
        }
    }

    /// A text whose middle line passes through `at`.
    pub(super) fn text(
        &self,
        text: &str,
        at: (f64, f64),
        align: Align,
        written: Type,
    ) -> Result<(), ChartError> {
        let anchor = match align {
            Align::Left => HPos::Left,
            Align::Centre => HPos::Center,
            Align::Right => HPos::Right,
        };
        let style = self.style(written).pos(Pos::new(anchor, VPos::Center));
        // The library centres the line with its descenders; letters look centred a little lower.
        let at = (at.0, at.1 + 0.12 * written.size);
        self.area
            .draw(&Text::new(printable(text), self.point(at), style))
            .map_err(ChartError::of)
    }

    /// A text that runs upward, centred on `at`.
    pub(super) fn upright_text(
        &self,
        text: &str,
        at: (f64, f64),
        written: Type,
    ) -> Result<(), ChartError> {
        let style = self
            .style(written)
            .transform(plotters::style::FontTransform::Rotate270)
            .pos(Pos::new(HPos::Center, VPos::Center));
        self.area
            .draw(&Text::new(printable(text), self.point(at), style))
            .map_err(ChartError::of)
    }

    fn style(&self, written: Type) -> TextStyle<'static> {
        let style = if written.bold {
            FontStyle::Bold
        } else {
            FontStyle::Normal
        };
        (FONT, written.size * f64::from(self.fineness), style)
            .into_font()
            .color(&written.colour)
    }

    /// Width of a text in pixels.
    pub(super) fn width_of(&self, text: &str, written: Type) -> f64 {
        self.area
            .estimate_text_size(&printable(text), &self.style(written))
            .map_or(0.0, |(width, _)| {
                f64::from(width) / f64::from(self.fineness)
            })
    }

    /// The text, shortened to at most this width. The ellipsis stands inside, because names that
    /// begin alike often differ at their ends.
    pub(super) fn fitted(&self, text: &str, width: f64, written: Type) -> String {
        let text = printable(text);
        if self.width_of(&text, written) <= width {
            return text;
        }
        let letters: Vec<char> = text.chars().collect();
        let shortened = |kept: usize| {
            let end = kept * 2 / 5;
            let start: String = letters[..kept - end].iter().collect();
            let end: String = letters[letters.len() - end..].iter().collect();
            format!("{}…{}", start.trim_end(), end.trim_start())
        };
        // The most letters that fit, by halving.
        let (mut fits, mut too_long) = (0, letters.len());
        while too_long - fits > 1 {
            let middle = usize::midpoint(fits, too_long);
            if self.width_of(&shortened(middle), written) <= width {
                fits = middle;
            } else {
                too_long = middle;
            }
        }
        shortened(fits)
    }
}

/// The text without control characters, what XML forbids, and marks that turn the direction of
/// writing.
pub(super) fn printable(text: &str) -> String {
    text.chars()
        .filter(|character| {
            !character.is_control()
                && !matches!(character, '\u{200b}'..='\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}' | '\u{61c}' | '\u{feff}' | '\u{fffe}' | '\u{ffff}')
        })
        .collect()
}

/// The fewest of the points that stay within [`STRAIGHTENED`] of them all: D. Douglas and
/// T. Peucker, *Cartographica* 10 (1973), from memory.
pub(super) fn straightened(points: &[(f64, f64)]) -> Vec<(f64, f64)> {
    let (Some(&first), Some(&last)) = (points.first(), points.last()) else {
        return Vec::new();
    };
    let (across, up) = (last.0 - first.0, last.1 - first.1);
    let length = across.hypot(up);
    let aside = |point: (f64, f64)| {
        let (x, y) = (point.0 - first.0, point.1 - first.1);
        if length > 0.0 {
            (across * y - up * x).abs() / length
        } else {
            x.hypot(y)
        }
    };
    let farthest = (1..points.len().saturating_sub(1))
        .map(|i| (i, aside(points[i])))
        .max_by(|a, b| a.1.total_cmp(&b.1));
    match farthest {
        Some((i, distance)) if distance > STRAIGHTENED => {
            let mut kept = straightened(&points[..=i]);
            kept.pop();
            kept.extend(straightened(&points[i..]));
            kept
        }
        _ if points.len() > 1 => vec![first, last],
        _ => vec![first],
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_straight_line_keeps_its_ends_and_a_step_its_corners() {
        let line: Vec<(f64, f64)> = (0..50)
            .map(|i| (f64::from(i), 2.0 * f64::from(i)))
            .collect();
        assert_eq!(straightened(&line), vec![(0.0, 0.0), (49.0, 98.0)]);
        let step = [(0.0, 9.0), (5.0, 9.0), (5.0, 2.0), (9.0, 2.0)];
        assert_eq!(straightened(&step), step.to_vec());
    }
}
