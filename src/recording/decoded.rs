//! A file as decoded, before any lead is made of it.

use super::{Note, Occasion, Samples, Subject};

/// Everything a reader found in one recording.
#[derive(Clone, Debug, PartialEq)]
pub struct Decoded {
    /// The file it came from.
    pub source: Source,
    /// Every signal, in the order of the file.
    pub signals: Vec<Signal>,
    /// Who was recorded.
    pub subject: Subject,
    /// When, where and how.
    pub occasion: Occasion,
    /// What the reader of the file has to say.
    pub notes: Vec<Note>,
}

/// The file that a recording came from.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Source {
    /// File name without folder.
    pub file: String,
    /// Name of the format, as in `leadsheet formats`.
    pub format: &'static str,
    /// SHA-256 over the bytes of all files of the recording, header first, in lower-case hex.
    pub sha256: String,
}

/// One signal as decoded.
#[derive(Clone, Debug, PartialEq)]
pub struct Signal {
    /// As the source names it; empty when it has no name.
    pub name: String,
    /// What was measured, and so the unit of the samples.
    pub quantity: Quantity,
    /// The smallest step of the source, in the unit of the samples; `None` when it has none (decimal text).
    pub resolution: Option<f64>,
    /// The samples.
    pub samples: Samples,
}

/// What a signal measures.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Quantity {
    /// A potential; the samples are in mV.
    Voltage,
    /// A potential whose scale the source does not state; the samples are in mV by the format's default.
    UncalibratedVoltage,
    /// Anything else; the samples are in this unit, as written, or in [`Quantity::NO_UNIT`].
    Other(String),
}

impl Quantity {
    /// The unit of a signal whose source states none: WFDB's word for "no units".
    pub const NO_UNIT: &'static str = "NU";
}
