//! Annotation files in the MIT format, after annot(5) of the WFDB Applications Guide.

use crate::input::files::{Files, text_of};
use crate::input::{At, Error, Fault};
use crate::recording::{Mark, Marks};
use std::path::Path;

/// Codes above those of annotations, with what the low ten bits of their word mean.
mod pseudo {
    /// Nothing; an interval of 32 bit follows, high half first.
    pub const SKIP: u16 = 59;
    /// `num` of the annotation before and of all that follow.
    pub const NUMBER: u16 = 60;
    /// `subtyp` of the annotation before.
    pub const SUBTYPE: u16 = 61;
    /// `chan` of the annotation before and of all that follow.
    pub const CHANNEL: u16 = 62;
    /// Bytes of text that follow, filled up to an even count.
    pub const TEXT: u16 = 63;
}

/// The largest code of an annotation: ACMAX of the specification.
const MAX_CODE: u16 = 49;

/// The code of a note. Those at the front may speak of the file itself: in which ticks all that follows is
/// placed, and what codes of its own stand for.
const NOTE: u8 = 22;
const RESOLUTION: &str = "## time resolution:";
const DEFINITIONS: &str = "## annotation type definitions";
const END_OF_DEFINITIONS: &str = "## end of definitions";

/// Reads the marks that a reader made, from an annotation file such as `100.atr`. None is read with a
/// recording by itself.
///
/// # Errors
/// When the file can't be opened, or is no annotation file in the MIT format.
pub fn marks(path: &Path) -> Result<Marks, Error> {
    let bytes = Files::default().data(path)?;
    parse(&bytes).map_err(|fault| fault.within(path))
}

fn parse(bytes: &[u8]) -> Result<Marks, Fault> {
    let mut words = Words { bytes, position: 0 };
    let mut marks: Vec<Mark> = Vec::new();
    let (mut tick, mut channel, mut number) = (0i64, 0u8, 0i8);
    loop {
        let at = words.position;
        let word = words.next()?;
        let (code, value) = (word >> 10, word & 0x3ff);
        let low = value.to_le_bytes()[0];
        if code == pseudo::SKIP {
            let (high, low) = (words.next()?, words.next()?);
            let interval = (u32::from(high) << 16 | u32::from(low)) as i32;
            tick = tick.saturating_add(i64::from(interval));
            continue;
        }
        if (1..=MAX_CODE).contains(&code) {
            tick = tick.saturating_add(i64::from(value));
            marks.push(Mark { tick, code: code as u8, subtype: 0, channel, number, text: String::new() });
            continue;
        }
        if word == 0 {
            return Ok(without_front(marks));
        }
        // No annotation, only its interval: what follows stands that much later.
        if code == 0 {
            tick = tick.saturating_add(i64::from(value));
            continue;
        }
        let Some(mark) = marks.last_mut() else { return Err(stray(at, code)) };
        match code {
            pseudo::NUMBER => {
                number = low as i8;
                mark.number = number;
            }
            pseudo::SUBTYPE => mark.subtype = low as i8,
            pseudo::CHANNEL => {
                channel = low;
                mark.channel = low;
            }
            pseudo::TEXT => {
                let text = words.text(value.into())?;
                mark.text = text_of(text.strip_suffix(&[0]).unwrap_or(text)).into_owned();
            }
            _ => return Err(stray(at, code)),
        }
    }
}

/// Takes the notes at the front that speak of the file itself.
fn without_front(marks: Vec<Mark>) -> Marks {
    let mut found = Marks::default();
    let mut rest = marks.into_iter().peekable();
    let mut defining = false;
    while let Some(note) = rest.next_if(|mark| {
        let own = defining || mark.text.trim_end() == DEFINITIONS || mark.text.starts_with(RESOLUTION);
        mark.code == NOTE && own
    }) {
        let text = note.text.trim_end();
        if let Some(ticks) = text.strip_prefix(RESOLUTION) {
            found.ticks = ticks.trim().parse().ok().filter(|ticks: &f64| ticks.is_finite() && *ticks > 0.0);
            continue;
        }
        if !matches!(text, DEFINITIONS | END_OF_DEFINITIONS) {
            found.definitions.push(text.to_owned());
        }
        defining = text != END_OF_DEFINITIONS;
    }
    found.marks = rest.collect();
    found
}

fn stray(at: usize, code: u16) -> Fault {
    Fault::malformed(
        At::Byte(at as u64),
        format!("an annotation's code (1 to {MAX_CODE}), or what belongs to the annotation before"),
        code.to_string(),
        "name an annotation file in WFDB's MIT format, such as NAME.atr",
    )
}

/// Words of 16 bit, low byte first.
struct Words<'a> {
    bytes: &'a [u8],
    position: usize,
}

impl<'a> Words<'a> {
    fn next(&mut self) -> Result<u16, Fault> {
        match *self.text(2)? {
            [low, high] => Ok(u16::from_le_bytes([low, high])),
            _ => Err(self.end()),
        }
    }

    /// So many bytes; what fills them up to an even count is passed over.
    fn text(&mut self, count: usize) -> Result<&'a [u8], Fault> {
        let text = self.position.checked_add(count).and_then(|end| self.bytes.get(self.position..end));
        let text = text.ok_or_else(|| self.end())?;
        self.position += count.next_multiple_of(2);
        Ok(text)
    }

    fn end(&self) -> Fault {
        Fault::malformed(
            At::Byte(self.bytes.len() as u64),
            "two bytes of 0 behind the last annotation",
            "the end of the file",
            "the file is cut short, or no annotation file in WFDB's MIT format",
        )
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_note_at_the_front_states_the_ticks_and_is_no_mark() {
        // Source: annot(5), "Time resolution"; the bytes are put together by hand.
        let mut bytes = vec![0, 22 << 2, 24, 63 << 2];
        bytes.extend(b"## time resolution: 1000");
        bytes.extend([5, 1 << 2, 0, 0]);
        let marks = parse(&bytes).expect("annotations");
        assert_eq!(marks.ticks, Some(1000.0));
        assert_eq!(marks.marks.iter().map(|mark| (mark.tick, mark.code)).collect::<Vec<_>>(), [(5, 1)]);
    }

    #[test]
    fn a_file_cut_short_is_refused() {
        let bytes = [5, 1 << 2, 4, 63 << 2, b'(', b'N', b'O', b'R', 0, 0];
        assert_eq!(parse(&bytes).expect("annotations").marks[0].text, "(NOR");
        for length in 0..bytes.len() {
            assert!(parse(&bytes[..length]).is_err(), "{length} bytes");
        }
    }
}
