//! Pictures. A picture is first a list of shapes in logical pixels ([`Drawing`]); only `paint` turns it into
//! SVG or PNG, and only `paint` knows the drawing library.

mod axes;
mod calibration;
mod cases;
mod curves;
mod depth;
mod edge;
mod fluid;
mod models;
mod paint;
mod pressure;
mod rates;
mod style;
mod timeline;
mod traverse;

pub use calibration::calibration_picture;
pub use cases::compare_picture;
pub use curves::curves_picture;
pub use depth::depth_picture;
pub use edge::edge_picture;
pub use fluid::fluid_picture;
pub use models::models_picture;
pub use pressure::pressure_picture;
pub use rates::rates_picture;
pub use traverse::traverse_picture;

/// An sRGB colour.
pub(crate) type Colour = [u8; 3];

/// Where a text stands against its point.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Anchor {
    Left,
    Middle,
    Right,
}

/// One shape; lengths in logical pixels, y downwards.
#[derive(Debug, Clone, PartialEq)]
pub(crate) enum Shape {
    Line { points: Vec<(f64, f64)>, width: f64, colour: Colour },
    Area { points: Vec<(f64, f64)>, colour: Colour },
    Text { at: (f64, f64), size: f64, anchor: Anchor, colour: Colour, text: String },
}

/// A picture, ready to be turned into SVG or PNG.
#[derive(Debug, Clone, PartialEq)]
pub struct Drawing {
    width: u32,
    height: u32,
    shapes: Vec<Shape>,
}

impl Drawing {
    fn new(width: u32, height: u32) -> Self {
        Self { width, height, shapes: Vec::new() }
    }

    fn line(&mut self, points: Vec<(f64, f64)>, width: f64, colour: Colour) {
        debug_assert!(points.iter().all(|p| p.0.is_finite() && p.1.is_finite()));
        if points.len() > 1 {
            self.shapes.push(Shape::Line { points, width, colour });
        }
    }

    fn area(&mut self, points: Vec<(f64, f64)>, colour: Colour) {
        if points.len() > 2 && points.iter().all(|p| p.0.is_finite() && p.1.is_finite()) {
            self.shapes.push(Shape::Area { points, colour });
        }
    }

    fn text(&mut self, at: (f64, f64), size: f64, anchor: Anchor, colour: Colour, text: impl Into<String>) {
        if at.0.is_finite() && at.1.is_finite() {
            self.shapes.push(Shape::Text { at, size, anchor, colour, text: text.into() });
        }
    }

    /// Width and height in logical pixels.
    pub fn size(&self) -> (u32, u32) {
        (self.width, self.height)
    }

    /// Every text in the picture, in drawing order.
    pub fn texts(&self) -> impl Iterator<Item = &str> {
        self.shapes.iter().filter_map(|s| match s {
            Shape::Text { text, .. } => Some(text.as_str()),
            _ => None,
        })
    }

    /// Texts that reach over the edge of the picture.
    pub fn clipped_texts(&self) -> Vec<&str> {
        let (w, h) = (f64::from(self.width), f64::from(self.height));
        self.shapes
            .iter()
            .filter_map(|s| match s {
                Shape::Text { at, size, anchor, text, .. } => {
                    let width = paint::text_width(text, *size);
                    let left = match anchor {
                        Anchor::Left => at.0,
                        Anchor::Middle => at.0 - width / 2.0,
                        Anchor::Right => at.0 - width,
                    };
                    let inside = left >= 0.0 && left + width <= w && at.1 - size / 2.0 >= 0.0 && at.1 + size / 2.0 <= h;
                    (!inside).then_some(text.as_str())
                }
                _ => None,
            })
            .collect()
    }
}
