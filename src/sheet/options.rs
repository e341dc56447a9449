//! What a user may choose of a sheet, and what can go wrong with it.

use super::Paper;
use crate::lettering::MissingGlyph;
use crate::recording::Lead;
use crate::units::{Gain, PaperSpeed};
use std::fmt;

/// What a user chooses of a sheet beside its layout.
#[derive(Clone, Debug, PartialEq)]
pub struct SheetOptions {
    /// The paper.
    pub paper: Paper,
    /// 12.5, 25 or 50 mm/s.
    pub speed: PaperSpeed,
    /// 5, 10 or 20 mm/mV; a row that would leave the field is drawn at half of it, and says so.
    pub gain: Gain,
    /// The rhythm leads, one a row; empty for those of the layout.
    pub rhythm: Vec<Lead>,
}

impl SheetOptions {
    /// Paper speeds that are drawn.
    pub const SPEEDS: [PaperSpeed; 3] =
        [PaperSpeed::literal(12.5), PaperSpeed::literal(25.0), PaperSpeed::literal(50.0)];
    /// Gains that are drawn.
    pub const GAINS: [Gain; 3] = [Gain::literal(5.0), Gain::literal(10.0), Gain::literal(20.0)];

    pub(super) fn check(&self) -> Result<(), ComposeError> {
        if !Self::SPEEDS.contains(&self.speed) {
            return Err(ComposeError::Speed(self.speed));
        }
        if !Self::GAINS.contains(&self.gain) {
            return Err(ComposeError::Gain(self.gain));
        }
        Ok(())
    }
}

impl Default for SheetOptions {
    /// A4, 25 mm/s, 10 mm/mV, the layout's rhythm leads.
    fn default() -> Self {
        Self {
            paper: Paper::A4,
            speed: PaperSpeed::literal(25.0),
            gain: Gain::literal(10.0),
            rhythm: Vec::new(),
        }
    }
}

/// Why a sheet could not be composed.
#[derive(Clone, Debug, PartialEq)]
pub enum ComposeError {
    /// Not one of [`SheetOptions::SPEEDS`].
    Speed(PaperSpeed),
    /// Not one of [`SheetOptions::GAINS`].
    Gain(Gain),
    /// More rhythm rows than the field has room for.
    TooManyRows {
        /// Rows asked for, rhythm rows included.
        asked: usize,
        /// Rows that fit.
        most: usize,
    },
    /// A text of the program itself holds a character without a glyph: a defect.
    Glyph(MissingGlyph),
}

impl fmt::Display for ComposeError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            ComposeError::Speed(found) => {
                write!(f, "a paper speed of {} mm/s is not drawn; choose 12.5, 25 or 50", found.get())
            }
            ComposeError::Gain(found) => {
                write!(f, "a gain of {} mm/mV is not drawn; choose 5, 10 or 20", found.get())
            }
            ComposeError::TooManyRows { asked, most } => {
                write!(
                    f,
                    "{asked} rows don't fit the layout, which has room for {most}; choose fewer rhythm leads"
                )
            }
            ComposeError::Glyph(missing) => write!(f, "{missing}"),
        }
    }
}

impl std::error::Error for ComposeError {}

impl From<MissingGlyph> for ComposeError {
    fn from(missing: MissingGlyph) -> Self {
        ComposeError::Glyph(missing)
    }
}
