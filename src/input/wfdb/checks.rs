//! Stated against found: checksums and first samples.

use super::signal_line::SignalLine;
use crate::recording::Note;

/// Collects what does not match, and says it once for all signals.
#[derive(Default)]
pub(super) struct Checks {
    /// Whether any line states something other than 0.
    stated: bool,
    checksums: Vec<String>,
    initials: Vec<String>,
}

impl Checks {
    /// Compares a line with its samples as stored. The checksum is the sum of all samples, 16 bits of it;
    /// writers differ in whether it is printed with a sign.
    pub fn compare(&mut self, line: &SignalLine, counts: &[i32]) {
        let Some(initial) = line.initial else { return };
        let name = if line.description.is_empty() { line.at.to_string() } else { line.description.clone() };
        self.stated |= initial != 0 || line.checksum.is_some_and(|sum| sum != 0);
        let sum = counts.iter().fold(0u16, |sum, &count| sum.wrapping_add(count as u16));
        if line.checksum.is_some_and(|stated| stated as u16 != sum) {
            self.checksums.push(name.clone());
        }
        if counts.first().is_some_and(|&first| i64::from(first) != initial) {
            self.initials.push(name);
        }
    }

    /// A header of zeros all over is one whose writer did not compute them.
    pub fn report(self, notes: &mut Vec<Note>) {
        if !self.stated {
            return;
        }
        if !self.checksums.is_empty() {
            notes.push(Note::caution(format!(
                "the header's checksum does not match the samples of {}: the data may be damaged or another's",
                self.checksums.join(", ")
            )));
        }
        if !self.initials.is_empty() {
            notes.push(Note::information(format!(
                "the first sample stated in the header is not that of the data in {}",
                self.initials.join(", ")
            )));
        }
    }
}
