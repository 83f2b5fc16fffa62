//! Turns a [`Drawing`] into SVG or PNG with plotters.
//!
//! plotters rounds all coordinates to whole pixels and knows no font of its own: everything is drawn at four
//! times the size, and a font subset is built in.

use super::{Anchor, Drawing, Shape};
use crate::report::ReportError;
use plotters::backend::{BitMapBackend, DrawingBackend, SVGBackend};
use plotters::coord::Shift;
use plotters::drawing::{DrawingArea, IntoDrawingArea};
use plotters::element::{PathElement, Polygon, Text};
use plotters::style::text_anchor::{HPos, Pos, VPos};
use plotters::style::{Color, FontStyle, IntoFont, RGBColor, ShapeStyle, TextStyle, WHITE, register_font};
use std::sync::LazyLock;

const SCALE: u32 = 4;
/// The PNG has this many pixels for each logical one; the rest of [`SCALE`] smooths edges.
const PNG_SCALE: u32 = 2;
const FONT: &[u8] = include_bytes!("../font/DejaVuSans-subset.ttf");
const FAMILY: &str = "sans-serif";

static FONT_READY: LazyLock<bool> = LazyLock::new(|| register_font(FAMILY, FontStyle::Normal, FONT).is_ok());

/// Width of a text in logical pixels.
pub(super) fn text_width(text: &str, size: f64) -> f64 {
    if !*FONT_READY {
        return 0.6 * size * text.chars().count() as f64;
    }
    let large = size * f64::from(SCALE);
    (FAMILY, large).into_font().box_size(text).map_or(0.0, |(w, _)| f64::from(w) / f64::from(SCALE))
}

fn picture_error(e: impl std::fmt::Display) -> ReportError {
    ReportError::Picture(e.to_string())
}

impl Drawing {
    /// The picture as SVG.
    ///
    /// # Errors
    /// When the drawing library fails.
    pub fn to_svg(&self) -> Result<Vec<u8>, ReportError> {
        let (large_width, large_height) = (self.width * SCALE, self.height * SCALE);
        let mut svg = String::new();
        {
            let area = SVGBackend::with_string(&mut svg, (large_width, large_height)).into_drawing_area();
            self.paint(&area)?;
        }
        let large = format!("width=\"{large_width}\" height=\"{large_height}\"");
        let small = format!("width=\"{}\" height=\"{}\"", self.width, self.height);
        Ok(svg.replacen(&large, &small, 1).into_bytes())
    }

    /// The picture as PNG, two pixels for each logical one.
    ///
    /// # Errors
    /// When the drawing library or the encoder fails.
    pub fn to_png(&self) -> Result<Vec<u8>, ReportError> {
        let (large_width, large_height) = (self.width * SCALE, self.height * SCALE);
        let mut pixels = vec![255_u8; large_width as usize * large_height as usize * 3];
        {
            let area = BitMapBackend::with_buffer(&mut pixels, (large_width, large_height)).into_drawing_area();
            self.paint(&area)?;
        }
        let small = shrink(&pixels, large_width as usize);
        let mut bytes = Vec::new();
        let mut encoder = png::Encoder::new(&mut bytes, self.width * PNG_SCALE, self.height * PNG_SCALE);
        encoder.set_color(png::ColorType::Rgb);
        encoder.set_depth(png::BitDepth::Eight);
        // Lines repeat from row to row: unfiltered they pack best.
        encoder.set_filter(png::FilterType::NoFilter);
        encoder.set_compression(png::Compression::Default);
        let mut writer = encoder.write_header().map_err(picture_error)?;
        writer.write_image_data(&small).map_err(picture_error)?;
        writer.finish().map_err(picture_error)?;
        Ok(bytes)
    }

    fn paint<B: DrawingBackend>(&self, area: &DrawingArea<B, Shift>) -> Result<(), ReportError> {
        if !*FONT_READY {
            return Err(ReportError::Picture("the built-in font is unusable".to_owned()));
        }
        let scale = f64::from(SCALE);
        let pixel = |p: &(f64, f64)| ((p.0 * scale).round() as i32, (p.1 * scale).round() as i32);
        area.fill(&WHITE).map_err(picture_error)?;
        for shape in &self.shapes {
            let drawn = match shape {
                Shape::Line { points, width, colour: [r, g, b] } => {
                    let stroke = (width * scale).round().max(1.0) as u32;
                    let style =
                        ShapeStyle { color: RGBColor(*r, *g, *b).to_rgba(), filled: false, stroke_width: stroke };
                    area.draw(&PathElement::new(points.iter().map(pixel).collect::<Vec<_>>(), style))
                }
                Shape::Area { points, colour: [r, g, b] } => area
                    .draw(&Polygon::new(points.iter().map(pixel).collect::<Vec<_>>(), RGBColor(*r, *g, *b).filled())),
                Shape::Text { at, size, anchor, colour: [r, g, b], text } => {
                    let side = match anchor {
                        Anchor::Left => HPos::Left,
                        Anchor::Middle => HPos::Center,
                        Anchor::Right => HPos::Right,
                    };
                    let ink = RGBColor(*r, *g, *b);
                    let style = TextStyle::from((FAMILY, size * scale).into_font())
                        .color(&ink)
                        .pos(Pos::new(side, VPos::Center));
                    // The box that is centred reaches from the ascent to the descent, so that figures sit too high in it.
                    area.draw(&Text::new(text.as_str(), pixel(&(at.0, at.1 + 0.09 * size)), style))
                }
            };
            drawn.map_err(picture_error)?;
        }
        area.present().map_err(picture_error)
    }
}

/// Averages squares of pixels: [`SCALE`] down to [`PNG_SCALE`].
fn shrink(pixels: &[u8], width: usize) -> Vec<u8> {
    const STEP: usize = (SCALE / PNG_SCALE) as usize;
    const SQUARE: u16 = (STEP * STEP) as u16;
    let row = width * 3;
    let mut out = Vec::with_capacity(pixels.len() / (STEP * STEP));
    let mut sums = vec![0_u16; row];
    for rows in pixels.chunks_exact(row * STEP) {
        sums.fill(0);
        for line in rows.chunks_exact(row) {
            for (sum, pixel) in sums.iter_mut().zip(line) {
                *sum += u16::from(*pixel);
            }
        }
        for square in sums.chunks_exact(STEP * 3) {
            for channel in 0..3 {
                let sum: u16 = square.iter().skip(channel).step_by(3).sum();
                out.push(((sum + SQUARE / 2) / SQUARE) as u8);
            }
        }
    }
    out
}
