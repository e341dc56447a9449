//! Records made of segments, each a record of its own.
//!
//! In a fixed layout every segment holds the same signals in the same order. In a variable layout the first
//! segment has no samples and names all signals; each other segment holds some of them, known by name, each
//! with a gain of its own. A segment named `~` is a gap.

use super::comments::Stated;
use super::header::Header;
use super::segment_line::SegmentLine;
use super::track::Track;
use super::{load, signals};
use crate::input::files::{Files, beside};
use crate::input::limits::{MAX_SAMPLES, at_most, most_missing};
use crate::input::{Error, Fault};
use crate::recording::{Note, Signal, Weight};
use std::collections::BTreeMap;
use std::path::{Path, PathBuf};

/// Every signal of the record, and into `stated` what the segments say beyond the record's own header.
pub(super) fn read(
    path: &Path,
    header: &Header,
    files: &mut Files,
    notes: &mut Vec<Note>,
    stated: &mut Stated,
) -> Result<Vec<Signal>, Error> {
    let within = |fault: Fault| fault.within(path);
    let frames = header.segments.iter().map(|segment| segment.frames).fold(0, u64::saturating_add);
    let mut segments =
        header.segments.iter().filter_map(|line| Some((line, line.name.as_deref()?))).peekable();
    let Some(&(first, name)) = segments.peek() else {
        let fault = Fault::unsupported("the record holds no segment but gaps", "check its header");
        return Err(within(fault));
    };
    let (_, layout) = open(path, header, first, name, files)?;
    let variable = first.frames == 0;
    let frame: u64 = layout.signals.iter().map(|line| u64::from(line.samples_per_frame)).sum();
    at_most(MAX_SAMPLES, "samples in the record", frames.saturating_mul(frame)).map_err(within)?;
    let mut tracks: Vec<Track> = layout
        .signals
        .iter()
        .map(|line| Track::new(line, header.record.rate))
        .collect::<Result<_, _>>()
        .map_err(within)?;
    let mut said = Said::default();
    let mut start = 0;
    for line in &header.segments {
        let end = start + line.frames;
        if let Some(name) = line.name.as_deref().filter(|_| line.frames > 0) {
            let (segment, segment_header) = open(path, header, line, name, files)?;
            let mut own_notes = Vec::new();
            let mut decoded = signals::read(&segment, &segment_header, files, &mut own_notes)?;
            let own = Stated::of(&segment_header.comments);
            signals::apply(&own, &mut decoded);
            stated.add(own);
            let mut places = Places::new(variable, &tracks);
            for (signal, own_line) in decoded.into_iter().zip(&segment_header.signals) {
                let Some(track) = places.next(&signal.name).and_then(|place| tracks.get_mut(place)) else {
                    let what =
                        format!("{} is not named by the layout of the record and left out", signal.name);
                    own_notes.push(Note::caution(what));
                    continue;
                };
                let refused = track
                    .add(start, own_line.samples_per_frame, signal)
                    .map_err(|fault| fault.within(&segment))?;
                own_notes.extend(refused);
            }
            said.add(name, own_notes);
        }
        start = end;
    }
    let held = tracks.iter().map(Track::held).fold(0, u64::saturating_add);
    let missing = frames.saturating_mul(frame).saturating_sub(held);
    at_most(most_missing(held), "samples in gaps", missing).map_err(within)?;
    if let Some(stated) = header.record.frames.filter(|stated| *stated != frames) {
        let text =
            format!("the header states {stated} samples, but its segments {frames}: the segments are shown");
        notes.push(Note::caution(text));
    }
    said.report(notes);
    Ok(tracks.into_iter().map(|track| track.signal(frames)).collect())
}

/// The header of a segment, which must be in accord with what the record's own header says of it.
fn open(
    path: &Path,
    whole: &Header,
    line: &SegmentLine,
    name: &str,
    files: &mut Files,
) -> Result<(PathBuf, Header), Error> {
    let within = |fault: Fault| fault.within(path);
    let segment = beside(path, &format!("{name}.hea"), line.at).map_err(within)?;
    let mut header = load(&segment, files).map_err(|error| match &error.fault {
        Fault::Io(io) if io.kind() == std::io::ErrorKind::NotFound => within(Fault::malformed(
            line.at,
            format!("the header {name}.hea of the segment beside this one"),
            "no such file",
            "put it there, or correct the name",
        )),
        _ => error,
    })?;
    let wrong = |expected: String, found: String| {
        let advice = "the segment belongs to another record: copy the record again";
        Err(Fault::malformed(crate::input::At::File, expected, found, advice).within(&segment))
    };
    let record = &header.record;
    if record.segments.is_some() {
        return wrong(
            "a record of its own, as a segment is".to_owned(),
            "a record made of segments".to_owned(),
        );
    }
    if record.rate_stated && record.rate != whole.record.rate {
        return wrong(
            format!("{}/s, as the whole record", whole.record.rate.get()),
            format!("{}/s", record.rate.get()),
        );
    }
    if let Some(own) = record.frames.filter(|own| *own != line.frames) {
        return wrong(format!("{} samples, as the whole record states", line.frames), own.to_string());
    }
    // In a variable layout only the layout itself names all signals.
    let variable = whole.segments.first().is_some_and(|first| first.frames == 0);
    if (!variable || line.frames == 0) && record.signals != whole.record.signals {
        return wrong(
            format!("{} signals, as the whole record", whole.record.signals),
            record.signals.to_string(),
        );
    }
    header.record.frames = Some(line.frames);
    Ok((segment, header))
}

/// Which track the next signal of a segment belongs to.
struct Places {
    /// Names of the tracks that are still free; none in a fixed layout, where the order says it.
    free: Option<Vec<Option<String>>>,
    next: usize,
}

impl Places {
    fn new(variable: bool, tracks: &[Track]) -> Self {
        Self {
            free: variable.then(|| tracks.iter().map(|track| Some(track.name().to_owned())).collect()),
            next: 0,
        }
    }

    fn next(&mut self, name: &str) -> Option<usize> {
        let Some(free) = &mut self.free else {
            self.next += 1;
            return Some(self.next - 1);
        };
        let place = free.iter().position(|own| own.as_deref() == Some(name))?;
        free[place] = None;
        Some(place)
    }
}

/// What the segments' notes say, each text once with the segments that say it.
#[derive(Default)]
struct Said(BTreeMap<(Weight, String), Vec<String>>);

/// Segments that are named with a note.
const MOST_NAMED: usize = 3;

impl Said {
    fn add(&mut self, segment: &str, notes: Vec<Note>) {
        for Note { weight, text } in notes {
            self.0.entry((weight, text)).or_default().push(segment.to_owned());
        }
    }

    fn report(self, notes: &mut Vec<Note>) {
        for ((weight, text), segments) in self.0 {
            let named = segments.iter().take(MOST_NAMED).map(String::as_str).collect::<Vec<_>>().join(", ");
            let others = match segments.len().saturating_sub(MOST_NAMED) {
                0 => String::new(),
                more => format!(" and {more} more"),
            };
            notes.push(Note { weight, text: format!("in segment {named}{others}: {text}") });
        }
    }
}
