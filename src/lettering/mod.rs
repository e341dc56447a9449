//! Text measured in mm, in the fonts that the program carries.
//!
//! A character without a glyph is an error, never a blank. Widths are plain sums of advance widths:
//! no kerning, no ligatures, so that what is measured is what any viewer draws.

mod face;
mod line;

pub use face::{Face, MissingGlyph};
pub use line::{fit, printable, width, wrap};
