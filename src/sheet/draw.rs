//! From bare mm to shapes. Inside this room lengths are plain mm; what leaves it carries its unit.

use super::layout::{Area, Line};
use super::{Anchor, ComposeError, Element, Ink, Pen, Point, Rect, Role, Shape, Text};
use crate::lettering::{self, Face};
use crate::units::Millimetres;

/// A length; what is not finite, which no finite input gives, becomes 0.
pub(super) fn mm(length: f64) -> Millimetres {
    Millimetres::new(length).unwrap_or(Millimetres::ZERO)
}

pub(super) fn point(x: f64, y: f64) -> Point {
    Point { x: mm(x), y: mm(y) }
}

pub(super) fn rect(area: Area) -> Rect {
    Rect { x: mm(area.left), y: mm(area.top), width: mm(area.width), height: mm(area.height) }
}

pub(super) fn pen(line: Line) -> Pen {
    Pen { width: mm(line.width), ink: line.ink, dash: None }
}

/// A pen that draws dashes and gaps of these lengths.
pub(super) fn dashed(line: Line, dash: f64, gap: f64) -> Pen {
    Pen { dash: Some((mm(dash), mm(gap))), ..pen(line) }
}

/// Straight lines through points.
pub(super) fn polyline(points: &[(f64, f64)], pen: Pen) -> Shape {
    Shape::Polyline { points: points.iter().map(|&(x, y)| point(x, y)).collect(), pen }
}

pub(super) fn frame(area: Area, pen: Pen) -> Shape {
    Shape::Rect { rect: rect(area), fill: None, pen: Some(pen) }
}

/// An element that means nothing by itself.
pub(super) fn artifact(shapes: Vec<Shape>) -> Element {
    Element { role: Role::Artifact, shapes }
}

pub(super) fn paragraph(shapes: Vec<Shape>) -> Element {
    Element { role: Role::Paragraph, shapes }
}

/// The text with a visible sign for what the faces can't draw.
fn drawable(text: &str) -> String {
    lettering::printable(text).0
}

/// How a text looks.
#[derive(Clone, Copy, Debug)]
pub(super) struct Style {
    pub size: f64,
    pub face: Face,
    pub ink: Ink,
}

impl Style {
    pub fn new(size: f64, ink: Ink) -> Self {
        Self { size, face: Face::Regular, ink }
    }

    pub fn bold(self) -> Self {
        Self { face: Face::Bold, ..self }
    }

    pub fn inked(self, ink: Ink) -> Self {
        Self { ink, ..self }
    }

    /// Height of a capital.
    pub fn cap(&self) -> f64 {
        self.face.cap_height(mm(self.size)).get()
    }

    /// A line at `x` on the baseline `y`. Characters without a glyph become a visible sign.
    pub fn at(&self, x: f64, y: f64, anchor: Anchor, text: &str) -> Shape {
        Shape::Text(Text {
            at: point(x, y),
            anchor,
            vertical: false,
            size: mm(self.size),
            face: self.face,
            ink: self.ink,
            text: drawable(text),
        })
    }

    pub fn left(&self, x: f64, y: f64, text: &str) -> Shape {
        self.at(x, y, Anchor::Left, text)
    }

    pub fn right(&self, x: f64, y: f64, text: &str) -> Shape {
        self.at(x, y, Anchor::Right, text)
    }

    pub fn middle(&self, x: f64, y: f64, text: &str) -> Shape {
        self.at(x, y, Anchor::Middle, text)
    }

    pub fn width(&self, text: &str) -> Result<f64, ComposeError> {
        Ok(lettering::width(self.face, mm(self.size), &drawable(text))?.get())
    }

    /// The same, made smaller until the text fits, down to `smallest`.
    pub fn shrunk(&self, text: &str, room: f64, smallest: f64) -> Result<Self, ComposeError> {
        let width = self.width(text)?;
        let size = if width > room { (self.size * room / width).max(smallest) } else { self.size };
        Ok(Self { size, ..*self })
    }

    /// As much of the text as fits, with an ellipsis where it was cut.
    pub fn fit(&self, text: &str, room: f64) -> Result<String, ComposeError> {
        Ok(lettering::fit(self.face, mm(self.size), &drawable(text), mm(room))?)
    }

    /// The text in lines no wider than `room`.
    pub fn wrap(&self, text: &str, room: f64) -> Result<Vec<String>, ComposeError> {
        Ok(lettering::wrap(self.face, mm(self.size), &drawable(text), mm(room))?)
    }
}
