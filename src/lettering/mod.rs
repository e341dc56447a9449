//! Text measured in mm, in the fonts that the program carries.
//!
//! A character without a glyph is an error, never a blank.

/// The faces that the program carries.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Face {
    /// For running text.
    Regular,
    /// For headings and lead names.
    Bold,
}
