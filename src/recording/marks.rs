//! What a reader, or a program, marked in a recording.

/// Marks that came with a recording, in the order of their file.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Marks {
    /// Ticks per second in which the marks are placed; `None` is the recording's sampling rate (of a WFDB
    /// record with several samples a frame, its frames per second).
    pub ticks: Option<f64>,
    /// What the file says that codes of its own stand for: code, symbol and meaning, as written.
    pub definitions: Vec<String>,
    /// The marks.
    pub marks: Vec<Mark>,
}

/// One mark.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Mark {
    /// Where: ticks from the first sample on. It may lie beyond the recording, and before it.
    pub tick: i64,
    /// What, in the numbering of WFDB's annot(5), 1 to 49.
    pub code: u8,
    /// A further division of the code; 0 where there is none.
    pub subtype: i8,
    /// The signal it was made in; by convention 0 stands for all of them too.
    pub channel: u8,
    /// A number whose meaning its maker chose.
    pub number: i8,
    /// A remark; empty when there is none.
    pub text: String,
}

/// Characters of the codes 1 to 41, after annot(5) (r); a blank has none.
const SYMBOLS: &[u8; 41] = b"NLRaVFJASEj/Q~ | sT*D\"=pB^t+u?![]en@xf()r";

impl Mark {
    /// The character that lists print for the code, unless [`Marks::definitions`] say otherwise; `None` for codes
    /// that have none.
    pub fn symbol(&self) -> Option<char> {
        let index = usize::from(self.code).checked_sub(1)?;
        SYMBOLS.get(index).filter(|symbol| **symbol != b' ').map(|symbol| char::from(*symbol))
    }
}
