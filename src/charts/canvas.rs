//! A sheet that one drawing function fills twice: fine pixels scaled down for PNG, fine units
//! with a view box for SVG.
//!
//! The drawing library rounds every point to a whole pixel, in SVG too. Drawn several times as
//! large, the rounding is too small to see.

use std::sync::Once;

use plotters::backend::{BitMapBackend, DrawingBackend, SVGBackend};
use plotters::coord::Shift;
use plotters::drawing::{DrawingArea, IntoDrawingArea};
use plotters::element::{Circle, PathElement, Polygon, Text};
use plotters::style::text_anchor::{HPos, Pos, VPos};
use plotters::style::{
    Color, FontStyle, IntoFont, RGBColor, ShapeStyle, TextStyle, WHITE, register_font,
};

use super::ChartError;

/// Pixels of the drawing for one of the PNG, in each direction.
const PNG_FINENESS: i32 = 3;

/// Units of the SVG's view box for one pixel.
const SVG_FINENESS: i32 = 10;

/// The name under which the embedded font is registered. A viewer of the SVG takes its own font
/// of that kind; the embedded one is among the widest, so that no text outgrows its place.
const FONT: &str = "sans-serif";

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
    pub colour: RGBColor,
}

/// A mark at a point.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Mark {
    Disc,
    Ring,
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
    fn new(area: DrawingArea<DB, Shift>, fineness: i32) -> Self {
        Self { area, fineness }
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

    /// A mark of this radius; its inside is white where it is no disc.
    pub(super) fn mark(
        &self,
        mark: Mark,
        at: (f64, f64),
        radius: f64,
        colour: RGBColor,
    ) -> Result<(), ChartError> {
        let (x, y) = at;
        let fine_radius = (radius * f64::from(self.fineness)).round() as i32;
        let circle = |radius: i32, style: ShapeStyle| {
            self.area
                .draw(&Circle::new(self.point(at), radius, style))
                .map_err(ChartError::of)
        };
        match mark {
            Mark::Disc => circle(fine_radius, colour.filled()),
            Mark::Ring => {
                circle(fine_radius, colour.filled())?;
                circle(fine_radius * 3 / 5, WHITE.filled())
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
                let inner = Polygon::new(diamond(0.65 * radius), WHITE.filled());
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
        (FONT, written.size * f64::from(self.fineness))
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

    /// The text, shortened with an ellipsis to at most this width.
    pub(super) fn fitted(&self, text: &str, width: f64, written: Type) -> String {
        let text = printable(text);
        if self.width_of(&text, written) <= width {
            return text;
        }
        let letters: Vec<char> = text.chars().collect();
        let shortened = |kept: usize| {
            let start: String = letters[..kept].iter().collect();
            format!("{}…", start.trim_end())
        };
        // The longest start that fits, by halving.
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

/// The text without control characters and marks that turn the direction of writing.
fn printable(text: &str) -> String {
    text.chars()
        .filter(|character| {
            !character.is_control()
                && !matches!(character, '\u{200b}'..='\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}' | '\u{feff}')
        })
        .collect()
}

/// Draws a picture on both canvases.
pub(super) fn render(picture: &impl Picture) -> Result<(Vec<u8>, String), ChartError> {
    register_fonts()?;
    Ok((render_png(picture)?, render_svg(picture)?))
}

fn register_fonts() -> Result<(), ChartError> {
    static REGISTERED: Once = Once::new();
    let mut outcome = Ok(());
    REGISTERED.call_once(|| {
        outcome = register_font(FONT, FontStyle::Normal, dejavu::sans::regular())
            .map_err(|_| ChartError("the embedded font cannot be read".to_owned()));
    });
    outcome
}

fn render_svg(picture: &impl Picture) -> Result<String, ChartError> {
    let (width, height) = picture.size();
    let fine = SVG_FINENESS.unsigned_abs();
    let mut svg = String::new();
    {
        let area =
            SVGBackend::with_string(&mut svg, (fine * width, fine * height)).into_drawing_area();
        area.fill(&WHITE).map_err(ChartError::of)?;
        let canvas = Canvas::new(area, SVG_FINENESS);
        picture.draw(&canvas)?;
        canvas.area.present().map_err(ChartError::of)?;
    }
    // The view box stays fine; the page shows it at its size in pixels.
    let drawn = format!("width=\"{}\" height=\"{}\"", fine * width, fine * height);
    let shown = format!("width=\"{width}\" height=\"{height}\" role=\"img\"");
    Ok(svg.replacen(&drawn, &shown, 1))
}

fn render_png(picture: &impl Picture) -> Result<Vec<u8>, ChartError> {
    let (width, height) = picture.size();
    let fine = PNG_FINENESS.unsigned_abs();
    let mut pixels = vec![255; (3 * fine * width * fine * height) as usize];
    {
        let area = BitMapBackend::with_buffer(&mut pixels, (fine * width, fine * height))
            .into_drawing_area();
        let canvas = Canvas::new(area, PNG_FINENESS);
        picture.draw(&canvas)?;
        canvas.area.present().map_err(ChartError::of)?;
    }
    let scaled = scaled_down(&pixels, width as usize, height as usize, fine as usize);
    let mut file = Vec::new();
    let mut encoder = png::Encoder::new(&mut file, width, height);
    encoder.set_color(png::ColorType::Rgb);
    encoder.set_depth(png::BitDepth::Eight);
    let mut writer = encoder.write_header().map_err(ChartError::of)?;
    writer.write_image_data(&scaled).map_err(ChartError::of)?;
    writer.finish().map_err(ChartError::of)?;
    Ok(file)
}

/// The mean of every `fine` × `fine` block of RGB pixels.
fn scaled_down(pixels: &[u8], width: usize, height: usize, fine: usize) -> Vec<u8> {
    let share = (fine * fine) as u32;
    let mut scaled = Vec::with_capacity(3 * width * height);
    let mut sums = vec![0_u32; 3 * width];
    for rows in pixels.chunks_exact(3 * fine * width * fine) {
        sums.fill(0);
        for row in rows.chunks_exact(3 * fine * width) {
            for (sums, block) in sums.chunks_exact_mut(3).zip(row.chunks_exact(3 * fine)) {
                for pixel in block.chunks_exact(3) {
                    for (sum, &value) in sums.iter_mut().zip(pixel) {
                        *sum += u32::from(value);
                    }
                }
            }
        }
        scaled.extend(sums.iter().map(|sum| ((sum + share / 2) / share) as u8));
    }
    scaled
}
