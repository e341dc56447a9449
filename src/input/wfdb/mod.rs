//! WFDB: a text header (`.hea`) that names binary signal files beside it.
//!
//! After the open specification, WFDB Applications Guide, header(5) and signal(5).

mod annotations;
mod checks;
mod comments;
mod counts;
mod flac;
mod groups;
mod header;
mod locate;
mod record_line;
mod segment_line;
mod segments;
mod signal_line;
mod signals;
mod storage;
mod track;
mod write;

pub use annotations::marks;
pub(super) use write::write;

use crate::input::Error;
use crate::input::files::{Candidate, Files, file_name, text_of};
use crate::input::table::{Format, FormatInfo};
use crate::recording::{Decoded, Note, Source, StartTime};
use comments::Stated;
use header::Header;
use record_line::RecordLine;
use std::path::Path;

pub(super) const FORMAT: Format = Format {
    info: FormatInfo {
        name: "wfdb",
        description: "WFDB record: a text header (.hea) with signal files beside it, of one or several segments",
    },
    score: locate::score,
    stands_alone: locate::is_header,
    read,
};

fn read(candidate: &Candidate) -> Result<Decoded, Error> {
    let path = locate::header_of(candidate);
    let mut files = Files::default();
    let header = load(&path, &mut files)?;
    let mut stated = Stated::of(&header.comments);
    let mut notes = header_notes(&header, &file_name(&path.with_extension("")));
    let mut signals = match header.record.segments {
        Some(_) => segments::read(&path, &header, &mut files, &mut notes, &mut stated)?,
        None => signals::read(&path, &header, &mut files, &mut notes)?,
    };
    signals::apply(&stated, &mut signals);
    let Stated { subject, mut occasion, zone, notes: stated_notes, .. } = stated;
    notes.extend(stated_notes);
    match (header.record.date, header.record.time) {
        (Some(date), Some(time)) => occasion.start = Some(StartTime { local: date.and_time(time), zone }),
        (Some(date), None) => {
            occasion.remarks.insert(0, format!("Day of the recording {date}, time not stated"))
        }
        (None, Some(time)) => {
            occasion.remarks.insert(0, format!("Time of the recording {time}, day not stated"))
        }
        (None, None) => {}
    }
    let source = Source { file: file_name(&path), format: FORMAT.info.name, sha256: files.sha256() };
    Ok(Decoded { source, signals, subject, occasion, notes })
}

fn load(path: &Path, files: &mut Files) -> Result<Header, Error> {
    let bytes = files.text(path)?;
    Header::parse(&text_of(&bytes)).map_err(|fault| fault.within(path))
}

/// The names of the segments, when the file is the header of a record made of them.
pub(super) fn segments_of(candidate: &Candidate) -> Vec<String> {
    if !locate::is_header(candidate) {
        return Vec::new();
    }
    let header = Header::parse(&text_of(candidate.head()));
    header.map_or(Vec::new(), |header| header.segments.into_iter().filter_map(|line| line.name).collect())
}

fn header_notes(header: &Header, stem: &str) -> Vec<Note> {
    let mut notes = Vec::new();
    let RecordLine { name, rate_stated, unreadable_start, .. } = &header.record;
    if name != stem {
        notes.push(Note::information(format!("the header names the record {name}")));
    }
    if !rate_stated {
        notes.push(Note::caution("the header states no sampling rate; WFDB's default of 250/s was taken"));
    }
    if let Some(text) = unreadable_start {
        notes.push(Note::information(format!("the start time `{text}` can't be read and is left out")));
    }
    notes
}
