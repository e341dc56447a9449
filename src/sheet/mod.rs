//! A finished page in millimetres, composed from a case by a layout.
//!
//! The page is complete before any writer sees it: every item is placed, every text measured.
//! One scale per strip feeds grid, trace, calibration pulse and legend.

mod page;

pub use page::{Anchor, Element, Grid, Ink, Page, Paper, Pen, Point, Rect, Role, Shape, Text};
