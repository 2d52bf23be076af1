//! The two renderings of a picture: fine pixels scaled down for PNG, fine units with a view box
//! for SVG.
//!
//! The drawing library rounds every point to a whole pixel, in SVG too. Drawn several times as
//! large, the rounding is too small to see.

use std::sync::OnceLock;

use plotters::backend::{BitMapBackend, SVGBackend};
use plotters::drawing::IntoDrawingArea;
use plotters::style::{FontStyle, WHITE, register_font};

use super::ChartError;
use super::canvas::{Canvas, FONT, Picture, printable};

/// Pixels of the drawing for one of the PNG, in each direction.
const PNG_FINENESS: i32 = 4;

/// Units of the SVG's view box for one pixel.
const SVG_FINENESS: i32 = 10;

/// Draws a picture on both canvases; the SVG carries its title and its text for those who cannot
/// see it.
pub(super) fn render(
    picture: &impl Picture,
    title: &str,
    alt: &str,
) -> Result<(Vec<u8>, String), ChartError> {
    register_fonts()?;
    Ok((render_png(picture)?, render_svg(picture, title, alt)?))
}

fn register_fonts() -> Result<(), ChartError> {
    static REGISTERED: OnceLock<bool> = OnceLock::new();
    let registered = REGISTERED.get_or_init(|| {
        let faces = [
            (FontStyle::Normal, dejavu::sans::regular()),
            (FontStyle::Bold, dejavu::sans::bold()),
        ];
        faces
            .into_iter()
            .all(|(style, face)| register_font(FONT, style, face).is_ok())
    });
    if *registered {
        Ok(())
    } else {
        Err(ChartError("the embedded font cannot be read".to_owned()))
    }
}

fn render_svg(picture: &impl Picture, title: &str, alt: &str) -> Result<String, ChartError> {
    let (width, height) = picture.size();
    let fine = SVG_FINENESS.unsigned_abs();
    let mut svg = String::new();
    {
        let area =
            SVGBackend::with_string(&mut svg, (fine * width, fine * height)).into_drawing_area();
        area.fill(&WHITE).map_err(ChartError::of)?;
        let canvas = Canvas::new(area, SVG_FINENESS);
        picture.draw(&canvas)?;
        canvas.finish()?;
    }
    // The view box stays fine; the page shows it at its size in pixels.
    let Some((head, drawn)) = svg.split_once('>') else {
        return Err(ChartError("the SVG has no beginning".to_owned()));
    };
    let fine_size = format!("width=\"{}\" height=\"{}\"", fine * width, fine * height);
    let size = format!("width=\"{width}\" height=\"{height}\" role=\"img\"");
    let head = head.replacen(&fine_size, &size, 1);
    let (title, alt) = (escaped(title), escaped(alt));
    Ok(format!(
        "{head}>\n<title>{title}</title>\n<desc>{alt}</desc>{drawn}"
    ))
}

/// Text as XML holds it.
fn escaped(text: &str) -> String {
    printable(text)
        .replace('&', "&amp;")
        .replace('<', "&lt;")
        .replace('>', "&gt;")
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
        canvas.finish()?;
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
