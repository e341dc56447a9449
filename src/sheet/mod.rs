//! A finished page in millimetres, composed from a case by a layout.
//!
//! The page is complete before any writer sees it: every item is placed, every text measured.
//! One scale per strip feeds grid, trace, calibration pulse and legend.

mod draw;
mod given;
mod identification;
mod layout;
mod legend;
mod occupied;
mod options;
mod page;
mod panels;
mod strips;
mod thin;
mod timing;
mod trace;

pub use layout::{DEFAULT_LAYOUT, Layout, LayoutError, LayoutInfo, Violation, layouts};
pub use options::{ComposeError, SheetOptions};
pub use page::{Anchor, Element, Grid, Ink, Page, Paper, Pen, Point, Rect, Role, Shape, Text};

use crate::case::Case;
use given::Sheet;

/// Composes the sheet of a case: one page or more, finished.
///
/// # Errors
/// When the speed or gain is none that is drawn, or more rhythm rows are asked for than fit.
pub fn compose(case: &Case, layout: &Layout, options: &SheetOptions) -> Result<Vec<Page>, ComposeError> {
    let sheet = Sheet::new(case, layout, options)?;
    let mut pages = Vec::new();
    let mut halved = Vec::new();
    for page in 0..sheet.timing.pages {
        let rows = trace::rows(&sheet, page);
        halved.extend(panels::notes::own_gains(&sheet, &rows));
        let mut elements = strips::elements(&sheet, &rows)?;
        elements.extend(legend::elements(&sheet, page)?);
        pages.push(elements);
    }
    panels::add(&sheet, &halved, &mut pages)?;
    let of = pages.len();
    let mut finished = Vec::with_capacity(of);
    for (index, elements) in pages.into_iter().enumerate() {
        let mut all = identification::elements(&sheet)?;
        all.extend(elements);
        all.extend(identification::foot(&sheet, index + 1, of)?);
        finished.push(Page { paper: options.paper, number: index + 1, of, elements: all });
    }
    Ok(finished)
}
