//! Lists of time-stamped annotations, which stand in signals of their own.
//!
//! One entry is `onset [0x15 duration] 0x14 text 0x14 [text 0x14 ...] 0`, all in text, times in seconds. The
//! first entry of a data record has an empty text and states the time of the record.

use crate::input::files::text_of;
use crate::recording::{Note, Occasion};

const SEPARATOR: u8 = 0x14;
const DURATION: u8 = 0x15;

/// So few and so short annotations go onto the sheet; what is more is a log, not a remark (own rule).
const MOST: usize = 8;
const LONGEST: usize = 80;

/// The annotations of a file: the first few, and how many there are.
#[derive(Default)]
pub(super) struct Annotations {
    kept: Vec<Annotation>,
    count: usize,
}

struct Annotation {
    /// Seconds from the start in the header.
    onset: f64,
    /// Seconds; `None` is not stated.
    duration: Option<f64>,
    text: String,
}

impl Annotations {
    /// Takes those of one signal in one data record, and gives the time that the first entry states.
    pub fn take(&mut self, bytes: &[u8]) -> Option<f64> {
        let mut record_onset = None;
        for (index, entry) in bytes.split(|&byte| byte == 0).enumerate() {
            let mut parts = entry.split(|&byte| byte == SEPARATOR);
            let Some((onset, duration)) = parts.next().and_then(times) else { continue };
            let mut texts = parts.peekable();
            if index == 0 && texts.peek().is_some_and(|text| text.is_empty()) {
                record_onset = Some(onset);
            }
            for text in texts.filter(|text| !text.is_empty()) {
                self.count += 1;
                if self.kept.len() < MOST {
                    let text = text_of(text).split_whitespace().collect::<Vec<_>>().join(" ");
                    self.kept.push(Annotation { onset, duration, text });
                }
            }
        }
        record_onset
    }

    /// Few and short ones are remarks, with their times from the first sample on.
    pub fn apply(self, first_onset: f64, occasion: &mut Occasion, notes: &mut Vec<Note>) {
        let short = self.kept.iter().all(|annotation| annotation.text.chars().count() <= LONGEST);
        if self.count > self.kept.len() || !short {
            notes.push(Note::information(format!("{} annotations in the file are left out", self.count)));
            return;
        }
        occasion.remarks.extend(self.kept.iter().map(|Annotation { onset, duration, text }| {
            let at = rounded(onset - first_onset);
            match duration.filter(|duration| *duration > 0.0) {
                Some(duration) => format!("At {at} s for {} s: {text}", rounded(duration)),
                None => format!("At {at} s: {text}"),
            }
        }));
    }
}

/// To the millisecond.
fn rounded(seconds: f64) -> f64 {
    (seconds * 1000.0).round() / 1000.0 + 0.0
}

/// `+1.25`, or with a duration behind it.
fn times(text: &[u8]) -> Option<(f64, Option<f64>)> {
    let mut parts = text.split(|&byte| byte == DURATION);
    let onset =
        parts.next().filter(|text| text.starts_with(b"+") || text.starts_with(b"-")).and_then(decimal)?;
    Some((onset, parts.next().and_then(decimal)))
}

fn decimal(text: &[u8]) -> Option<f64> {
    let digits = |byte: &u8| byte.is_ascii_digit() || matches!(byte, b'+' | b'-' | b'.');
    if !text.iter().all(digits) {
        return None;
    }
    std::str::from_utf8(text).ok()?.parse().ok().filter(|seconds: &f64| seconds.is_finite())
}

#[cfg(test)]
mod tests {
    use super::*;

    // Source: the examples in EDF+ 2.2.2 (r).
    #[test]
    fn the_first_entry_is_the_time_of_the_record_and_the_rest_are_annotations() {
        let mut annotations = Annotations::default();
        let onset = annotations.take(
            b"+180\x14\x14\x00+180\x14Lights off\x14Close door\x14\x00+1800.2\x1525.5\x14Apnea\x14\x00\x00",
        );
        assert_eq!(onset, Some(180.0));
        let (mut occasion, mut notes) = (Occasion::default(), Vec::new());
        annotations.apply(180.0, &mut occasion, &mut notes);
        assert_eq!(
            occasion.remarks,
            ["At 0 s: Lights off", "At 0 s: Close door", "At 1620.2 s for 25.5 s: Apnea"]
        );
        assert!(notes.is_empty());
    }

    #[test]
    fn what_is_no_entry_is_passed_over() {
        for bytes in
            [&b"180\x14\x14\x00"[..], b"+\x14\x14", b"+1e9\x14\x14", b"\x14\x14", b"", b"+5\x14late\x14\x00"]
        {
            assert_eq!(Annotations::default().take(bytes), None, "{bytes:?}");
        }
    }
}
