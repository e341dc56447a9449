//! The faces and their glyphs.

use crate::units::Millimetres;
use std::fmt;
use std::sync::OnceLock;
use ttf_parser::GlyphId;

/// The faces that the program carries.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Face {
    /// For running text.
    Regular,
    /// For headings and lead names.
    Bold,
}

/// A character that a face can't draw.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct MissingGlyph {
    /// Which character.
    pub character: char,
    /// Which face.
    pub face: Face,
}

impl fmt::Display for MissingGlyph {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let (character, face) = (self.character, self.face);
        write!(f, "no glyph for {character:?} (U+{:04X}) in the {face:?} face", character as u32)
    }
}

impl std::error::Error for MissingGlyph {}

/// Numbers of a face, in font units.
struct Metrics {
    parsed: ttf_parser::Face<'static>,
    per_em: f64,
}

impl Face {
    /// Every face.
    pub const ALL: [Face; 2] = [Face::Regular, Face::Bold];

    /// The font file.
    pub const fn bytes(self) -> &'static [u8] {
        match self {
            Face::Regular => include_bytes!("../../fonts/NotoSans-Regular.ttf"),
            Face::Bold => include_bytes!("../../fonts/NotoSans-Bold.ttf"),
        }
    }

    fn metrics(self) -> &'static Metrics {
        static METRICS: [OnceLock<Metrics>; 2] = [OnceLock::new(), OnceLock::new()];
        METRICS[self as usize].get_or_init(|| {
            let parsed = ttf_parser::Face::parse(self.bytes(), 0).expect("the program carries sound fonts");
            let per_em = f64::from(parsed.units_per_em());
            Metrics { parsed, per_em }
        })
    }

    /// The glyph of a character.
    ///
    /// # Errors
    /// When the face has none.
    pub fn glyph(self, character: char) -> Result<u16, MissingGlyph> {
        match self.metrics().parsed.glyph_index(character) {
            Some(GlyphId(0)) | None => Err(MissingGlyph { character, face: self }),
            Some(GlyphId(glyph)) => Ok(glyph),
        }
    }

    /// A glyph's advance width, in thousandths of the em.
    pub fn advance(self, glyph: u16) -> f64 {
        let metrics = self.metrics();
        let advance = metrics.parsed.glyph_hor_advance(GlyphId(glyph)).unwrap_or(0);
        f64::from(advance) * 1000.0 / metrics.per_em
    }

    /// Height of a capital over the baseline, at an em of `size`.
    pub fn cap_height(self, size: Millimetres) -> Millimetres {
        self.scaled(self.metrics().parsed.capital_height(), size)
    }

    /// Height over the baseline that no letter passes, diacritics included, at an em of `size`.
    pub fn ascent(self, size: Millimetres) -> Millimetres {
        self.scaled(Some(self.metrics().parsed.ascender()), size)
    }

    /// Depth under the baseline that no letter passes, as a positive length, at an em of `size`.
    pub fn descent(self, size: Millimetres) -> Millimetres {
        -self.scaled(Some(self.metrics().parsed.descender()), size)
    }

    /// Font bounding box and vertical extents in thousandths of the em, as a PDF font descriptor
    /// wants them: left, bottom, right, top, ascent, descent, capital height.
    pub fn descriptor(self) -> [f64; 7] {
        let metrics = self.metrics();
        let scaled = |value: i16| f64::from(value) * 1000.0 / metrics.per_em;
        let bounds = metrics.parsed.global_bounding_box();
        [
            scaled(bounds.x_min),
            scaled(bounds.y_min),
            scaled(bounds.x_max),
            scaled(bounds.y_max),
            scaled(metrics.parsed.ascender()),
            scaled(metrics.parsed.descender()),
            scaled(metrics.parsed.capital_height().unwrap_or(700)),
        ]
    }

    fn scaled(self, units: Option<i16>, size: Millimetres) -> Millimetres {
        size * (f64::from(units.unwrap_or(700)) / self.metrics().per_em)
    }
}
