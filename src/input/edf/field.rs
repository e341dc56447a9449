//! The fields of a header: text of a fixed width, filled up with spaces.

use crate::input::files::text_of;
use crate::input::{At, Fault};

/// One field and where it stands in the file.
#[derive(Clone, Copy)]
pub(super) struct Field<'a> {
    bytes: &'a [u8],
    at: u64,
}

impl<'a> Field<'a> {
    /// `width` bytes of a header from `start`; what the header doesn't hold is empty.
    pub fn of(header: &'a [u8], start: usize, width: usize) -> Self {
        let bytes = header.get(start..start.saturating_add(width)).unwrap_or_default();
        Self { bytes, at: start as u64 }
    }

    /// Where it stands.
    pub fn at(self) -> At {
        At::Byte(self.at)
    }

    /// Without the spaces around it; some writers fill up with zeros.
    pub fn text(self) -> String {
        let end = self.bytes.iter().rposition(|byte| !matches!(byte, 0 | b' ')).map_or(0, |last| last + 1);
        text_of(self.bytes.get(..end).unwrap_or_default()).trim().to_owned()
    }

    /// A finite number.
    pub fn number(self, expected: &str) -> Result<f64, Fault> {
        let text = self.text();
        text.parse().ok().filter(|number: &f64| number.is_finite()).ok_or_else(|| self.wrong(expected))
    }

    /// A whole number.
    pub fn whole(self, expected: &str) -> Result<i64, Fault> {
        self.text().parse().map_err(|_| self.wrong(expected))
    }

    /// The field does not hold what it must.
    pub fn wrong(self, expected: &str) -> Fault {
        Fault::malformed(
            self.at(),
            expected,
            format!("`{}`", self.text()),
            "correct the header, as the specification of EDF describes it",
        )
    }
}
