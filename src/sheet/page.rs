//! The page model: what a writer (PDF, SVG, PNG) gets, and all it gets.
//!
//! Origin at the top left corner of the paper, x to the right, y down, in mm.

use crate::lettering::Face;
use crate::units::Millimetres;

/// A sheet of paper, landscape.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Paper {
    /// 297 × 210 mm.
    A4,
    /// 279.4 × 215.9 mm.
    Letter,
}

impl Paper {
    /// Width and height.
    pub const fn size(self) -> (Millimetres, Millimetres) {
        match self {
            Paper::A4 => (Millimetres::literal(297.0), Millimetres::literal(210.0)),
            Paper::Letter => (Millimetres::literal(279.4), Millimetres::literal(215.9)),
        }
    }
}

/// One finished page.
#[derive(Clone, Debug, PartialEq)]
pub struct Page {
    /// Its paper.
    pub paper: Paper,
    /// 1-based number.
    pub number: usize,
    /// How many pages the sheet has.
    pub of: usize,
    /// Bottom first.
    pub elements: Vec<Element>,
}

/// Shapes that belong together and mean one thing.
#[derive(Clone, Debug, PartialEq)]
pub struct Element {
    /// What they mean to someone who can't see them.
    pub role: Role,
    /// Bottom first.
    pub shapes: Vec<Shape>,
}

/// What an element means.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Role {
    /// Decoration: grid, rules, boxes.
    Artifact,
    /// The sheet's heading.
    Heading,
    /// Running text.
    Paragraph,
    /// One row of a table: its texts are the cells, in order.
    TableRow,
    /// A picture and what it shows, in words.
    Figure {
        /// Alternative text.
        alt: String,
    },
}

/// A point on the page.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Point {
    /// From the left edge.
    pub x: Millimetres,
    /// From the top edge.
    pub y: Millimetres,
}

/// An upright rectangle.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rect {
    /// Left edge.
    pub x: Millimetres,
    /// Top edge.
    pub y: Millimetres,
    /// Width.
    pub width: Millimetres,
    /// Height.
    pub height: Millimetres,
}

/// A colour, sRGB.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Ink {
    /// Red.
    pub r: u8,
    /// Green.
    pub g: u8,
    /// Blue.
    pub b: u8,
}

/// A line's look. Caps and joins are round: a mitre would overshoot the true voltage.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Pen {
    /// Line width.
    pub width: Millimetres,
    /// Colour.
    pub ink: Ink,
    /// Length of dash and of gap; `None` is a solid line.
    pub dash: Option<(Millimetres, Millimetres)>,
}

/// Where a text's point lies on its baseline.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs)]
pub enum Anchor {
    Left,
    Middle,
    Right,
}

/// One line of text.
#[derive(Clone, Debug, PartialEq)]
pub struct Text {
    /// On the baseline.
    pub at: Point,
    /// Which point of the line `at` is.
    pub anchor: Anchor,
    /// Whether it runs from bottom to top instead of left to right.
    pub vertical: bool,
    /// Em size.
    pub size: Millimetres,
    /// Which face.
    pub face: Face,
    /// Colour.
    pub ink: Ink,
    /// The text; every character has a glyph in the face.
    pub text: String,
}

/// A calibrated grid: rulings every 1 mm and every 5 mm, from the field's top left corner.
#[derive(Clone, Debug, PartialEq)]
pub struct Grid {
    /// The field that it covers; width and height are whole millimetres.
    pub field: Rect,
    /// The 1 mm rulings.
    pub fine: Pen,
    /// The 5 mm rulings.
    pub coarse: Pen,
}

/// Anything drawn.
#[derive(Clone, Debug, PartialEq)]
pub enum Shape {
    /// A calibrated grid.
    Grid(Grid),
    /// Straight lines through points, not closed.
    Polyline {
        /// At least two.
        points: Vec<Point>,
        /// Its look.
        pen: Pen,
    },
    /// A rectangle.
    Rect {
        /// Where.
        rect: Rect,
        /// Inside.
        fill: Option<Ink>,
        /// Outline.
        pen: Option<Pen>,
    },
    /// A line of text.
    Text(Text),
}
