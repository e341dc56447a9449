//! EDF and BDF, plain and plus: a header of text, then data records of 16 or 24 bit.
//!
//! After the open specifications: EDF (Kemp and others 1992), EDF+ (Kemp and Olivan 2003), both with their additional
//! texts, and the description of BDF by its makers. Text is read leniently, numbers strictly.

mod annotations;
mod field;
mod header;
mod identification;
mod prefilter;
mod records;
mod signal_header;
mod start;
mod timeline;

use crate::input::Error;
use crate::input::files::{Candidate, Files, file_name};
use crate::input::table::{Format, FormatInfo, Score};
use crate::recording::{Decoded, Note, Occasion, Source, Subject};
use header::{Continuity, Header, Width};

pub(super) const FORMAT: Format = Format {
    info: FormatInfo {
        name: "edf",
        description: "EDF, EDF+, BDF and BDF+, gaps between data records included",
    },
    score,
    stands_alone: |candidate| score(candidate) > 0,
    read,
};

/// The version field alone could be the first row of a table.
fn score(candidate: &Candidate) -> Score {
    let head = candidate.head();
    match Width::of(head) {
        Some(Width::Bits24) => 100,
        Some(Width::Bits16) if header::is_plausible(head) => 100,
        _ => 0,
    }
}

fn read(candidate: &Candidate) -> Result<Decoded, Error> {
    let path = candidate.path();
    let mut files = Files::default();
    let mut pieces = files.pieces(path)?;
    let header = Header::read(&mut pieces, path)?;
    let mut notes = Vec::new();
    let count = header.records(pieces.length(), &mut notes).map_err(|fault| fault.within(path))?;
    let held = records::read(&header, count, &mut pieces)?;
    pieces.finish()?;
    let timeline = timeline::of(&header, &held, &mut notes).map_err(|fault| fault.within(path))?;
    let signals = records::signals(&header, held.values, &timeline);
    let mut subject = Subject::default();
    let mut occasion = Occasion::default();
    identification::patient(&header, &mut subject, &mut occasion, &mut notes);
    let stated = identification::recording(&header, &mut occasion);
    start::apply(&header, stated, timeline.first_onset, &mut occasion, &mut notes);
    prefilter::apply(&header, &mut occasion, &mut notes);
    held.annotations.apply(timeline.first_onset, &mut occasion, &mut notes);
    if header.continuity == Continuity::Continuous && header.annotations().next().is_none() {
        notes.push(Note::information(format!(
            "the header says {}, which promises a signal of annotations, and there is none",
            header.reserved
        )));
    }
    let source = Source { file: file_name(path), format: FORMAT.info.name, sha256: files.sha256() };
    Ok(Decoded { source, signals, subject, occasion, notes })
}
