//! The fixed header.

use super::checksum::crc_ccitt;
use super::leads::{lead, poor_quality};
use crate::input::files::text_of;
use crate::input::limits::at_most;
use crate::input::pieces::Pieces;
use crate::input::{At, Error, Fault};
use crate::recording::{Note, Occasion, Sex, StartTime, Subject};
use crate::units::SampleRate;
use chrono::{NaiveDate, NaiveTime};
use std::path::Path;

/// What the header states.
pub(super) struct Header {
    pub leads: Vec<LeadHeader>,
    pub rate: SampleRate,
    /// Where the samples start, in bytes.
    pub samples_at: u64,
    /// `None` when the count is 0 or unknown.
    pub stated_samples: Option<u64>,
    pub subject: Subject,
    pub occasion: Occasion,
}

/// One lead.
pub(super) struct LeadHeader {
    pub name: String,
    /// mV of one count.
    pub step: f64,
}

const FIXED: u64 = 522;

/// The checksum covers what stands behind it.
const CHECKSUM_FROM: usize = 10;

/// The free text behind the fixed header is small.
const MAX_HEADER: u64 = 4 * 1024 * 1024;

const MOST_LEADS: i16 = 12;

const MILLIVOLTS_PER_NANOVOLT: f64 = 1e-6;

impl Header {
    /// From the front of the file.
    pub fn read(pieces: &mut Pieces, path: &Path, notes: &mut Vec<Note>) -> Result<Self, Error> {
        let mut bytes = pieces.take(FIXED, "the header")?.to_vec();
        let header = Self::parse(&Fixed(&bytes), notes).map_err(|fault| fault.within(path))?;
        bytes.extend_from_slice(pieces.take(header.samples_at - FIXED, "the header")?);
        let stated = Fixed(&bytes).i16(8) as u16;
        let own = crc_ccitt(bytes.get(CHECKSUM_FROM..).unwrap_or_default());
        // Some writers leave it empty, some swap its bytes.
        if ![0, own, own.swap_bytes()].contains(&stated) {
            notes.push(Note::caution("the header's checksum does not match: what it states may be damaged"));
        }
        Ok(header)
    }

    fn parse(fixed: &Fixed, notes: &mut Vec<Note>) -> Result<Self, Fault> {
        let wrong = |at: usize, expected: &str, found: i64| {
            let advice = "correct the header, as the description of ISHNE 1.0 has it";
            Fault::malformed(At::Byte(at as u64), expected, found.to_string(), advice)
        };
        let start = fixed.i32(22);
        let samples_at = u64::try_from(start)
            .ok()
            .filter(|&at| at >= FIXED)
            .ok_or_else(|| wrong(22, "the place of the samples, at least 522", start.into()))?;
        at_most(MAX_HEADER, "bytes before the samples", samples_at)?;
        let count = fixed.i16(156);
        if !(1..=MOST_LEADS).contains(&count) {
            return Err(wrong(156, "the number of leads, 1 to 12", count.into()));
        }
        let rate = fixed.i16(272);
        let rate = SampleRate::new(rate.into())
            .ok_or_else(|| wrong(272, "a sampling rate above 0 per second", rate.into()))?;
        let mut leads = Vec::new();
        for index in 0..count as usize {
            let name = lead(fixed.i16(158 + 2 * index));
            let at = 206 + 2 * index;
            let resolution = fixed.i16(at);
            if resolution <= 0 {
                return Err(wrong(at, &format!("the nV of a count of {name}, above 0"), resolution.into()));
            }
            if let Some(quality) = poor_quality(fixed.i16(182 + 2 * index)) {
                notes.push(Note::information(format!("the source says of {name}: {quality}")));
            }
            leads.push(LeadHeader { name, step: f64::from(resolution) * MILLIVOLTS_PER_NANOVOLT });
        }
        Ok(Self {
            leads,
            rate,
            samples_at,
            stated_samples: u64::try_from(fixed.i32(14)).ok().filter(|&count| count > 0),
            subject: subject(fixed),
            occasion: occasion(fixed, notes),
        })
    }
}

fn subject(fixed: &Fixed) -> Subject {
    let name = [fixed.text(28, 40), fixed.text(68, 40)].into_iter().flatten().collect::<Vec<_>>().join(" ");
    let sex = match fixed.i16(128) {
        1 => Some(Sex::Male),
        2 => Some(Sex::Female),
        _ => None,
    };
    Subject {
        name: (!name.is_empty()).then_some(name),
        id: fixed.text(108, 20),
        birth_date: fixed.date(132),
        sex,
        age: None,
    }
}

fn occasion(fixed: &Fixed, notes: &mut Vec<Note>) -> Occasion {
    let mut occasion = Occasion { device: fixed.text(232, 40), ..Occasion::default() };
    let [hour, minute, second] = fixed.three(150).map(|part| u32::try_from(part).unwrap_or(u32::MAX));
    let time = NaiveTime::from_hms_opt(hour, minute, second);
    match (fixed.date(138), time) {
        (Some(day), Some(time)) => {
            occasion.start = Some(StartTime { local: day.and_time(time), zone: None });
        }
        (Some(day), None) => occasion.remarks.push(format!("Day of the recording {day}, time not stated")),
        (None, _) => {}
    }
    if fixed.i16(230) > 0 {
        occasion.remarks.push("A pacemaker is stated".to_owned());
    }
    let length = fixed.i32(10);
    if length > 0 {
        notes.push(Note::information(format!("a text of {length} bytes in the header is left out")));
    }
    occasion
}

/// The fixed header, little-endian. -9 and 0 stand for unknown.
struct Fixed<'a>(&'a [u8]);

impl Fixed<'_> {
    fn i16(&self, at: usize) -> i16 {
        self.0.get(at..).and_then(|bytes| bytes.first_chunk()).map_or(0, |&word| i16::from_le_bytes(word))
    }

    fn i32(&self, at: usize) -> i32 {
        self.0.get(at..).and_then(|bytes| bytes.first_chunk()).map_or(0, |&word| i32::from_le_bytes(word))
    }

    fn three(&self, at: usize) -> [i16; 3] {
        [at, at + 2, at + 4].map(|at| self.i16(at))
    }

    /// Day, month, year.
    fn date(&self, at: usize) -> Option<NaiveDate> {
        let [day, month, year] = self.three(at).map(i32::from);
        NaiveDate::from_ymd_opt(year, u32::try_from(month).ok()?, u32::try_from(day).ok()?)
    }

    /// Up to the first zero; `None` when there is nothing in it.
    fn text(&self, at: usize, width: usize) -> Option<String> {
        let field = self.0.get(at..at + width)?;
        let text = text_of(field.split(|&byte| byte == 0).next().unwrap_or_default()).trim().to_owned();
        let unknown = ["", "-9"].contains(&text.as_str());
        (!unknown).then_some(text)
    }
}
