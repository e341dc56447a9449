//! Boxes of what a page shows, in mm, for asking what lies on what.

use leadsheet::lettering;
use leadsheet::sheet::{Anchor, Page, Point, Shape, Text};

/// An upright box.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Box {
    pub left: f64,
    pub top: f64,
    pub right: f64,
    pub bottom: f64,
}

impl Box {
    pub fn overlaps(&self, other: &Box) -> bool {
        self.left < other.right
            && other.left < self.right
            && self.top < other.bottom
            && other.top < self.bottom
    }

    /// Whether a straight line passes through (Liang and Barsky's clipping, 1984).
    pub fn is_crossed(&self, from: Point, to: Point) -> bool {
        let (mut enter, mut leave) = (0.0f64, 1.0f64);
        let (x, y) = (from.x.get(), from.y.get());
        let (dx, dy) = (to.x.get() - x, to.y.get() - y);
        for (slope, room) in
            [(-dx, x - self.left), (dx, self.right - x), (-dy, y - self.top), (dy, self.bottom - y)]
        {
            if slope == 0.0 {
                if room < 0.0 {
                    return false;
                }
            } else if slope < 0.0 {
                enter = enter.max(room / slope);
            } else {
                leave = leave.min(room / slope);
            }
        }
        enter < leave
    }
}

/// From capital height to a fifth of the em below the baseline.
pub fn text_box(text: &Text) -> Box {
    assert!(!text.vertical, "no text of a sheet stands upright");
    let width =
        lettering::width(text.face, text.size, &text.text).expect("every character has a glyph").get();
    let (x, y) = (text.at.x.get(), text.at.y.get());
    let left = match text.anchor {
        Anchor::Left => x,
        Anchor::Middle => x - width / 2.0,
        Anchor::Right => x - width,
    };
    Box {
        left,
        top: y - text.face.cap_height(text.size).get(),
        right: left + width,
        bottom: y + text.size.get() * 0.2,
    }
}

/// Every shape of a page.
pub fn shapes(page: &Page) -> impl Iterator<Item = &Shape> {
    page.elements.iter().flat_map(|element| &element.shapes)
}

/// Every text of a page.
pub fn texts(page: &Page) -> Vec<&Text> {
    shapes(page)
        .filter_map(|shape| match shape {
            Shape::Text(text) => Some(text),
            _ => None,
        })
        .collect()
}

/// The grid field.
pub fn field(page: &Page) -> Option<Box> {
    shapes(page).find_map(|shape| match shape {
        Shape::Grid(grid) => Some(Box {
            left: grid.field.x.get(),
            top: grid.field.y.get(),
            right: (grid.field.x + grid.field.width).get(),
            bottom: (grid.field.y + grid.field.height).get(),
        }),
        _ => None,
    })
}
