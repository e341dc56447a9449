//! Who was recorded, when, where, and how: as the source states it, never invented.

use crate::units::Hertz;
use chrono::{FixedOffset, NaiveDate, NaiveDateTime};
use std::fmt;

/// The subject as the source names it. `None` is "not stated".
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Subject {
    /// Name, in reading order.
    pub name: Option<String>,
    /// Patient or study number.
    pub id: Option<String>,
    /// Date of birth.
    pub birth_date: Option<NaiveDate>,
    /// Sex as stated.
    pub sex: Option<Sex>,
    /// Age as stated or computed.
    pub age: Option<Age>,
}

/// Sex as the source states it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Sex {
    /// Female.
    Female,
    /// Male.
    Male,
    /// Any other statement, as written.
    Other(String),
}

impl fmt::Display for Sex {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.pad(match self {
            Sex::Female => "female",
            Sex::Male => "male",
            Sex::Other(text) => text,
        })
    }
}

/// Age at the time of recording.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Age {
    /// In years, 0 to 130; a fraction for infants.
    pub years: f64,
    /// Where it comes from.
    pub origin: AgeOrigin,
}

/// Where an age comes from.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum AgeOrigin {
    /// The source states it.
    Stated,
    /// Recording date less birth date.
    Computed,
}

/// When the first sample was taken, in local time.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct StartTime {
    /// Local date and time.
    pub local: NaiveDateTime,
    /// Offset from UTC; `None` is "zone not stated".
    pub zone: Option<FixedOffset>,
}

/// The circumstances of the recording, as stated by the source or the command line.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Occasion {
    /// Time of the first sample.
    pub start: Option<StartTime>,
    /// Ward or site.
    pub place: Option<String>,
    /// Who recorded it.
    pub operator: Option<String>,
    /// The recorder.
    pub device: Option<String>,
    /// Electrode placement other than standard (torso, right-sided, Lewis …); `None` is standard or not stated.
    pub placement: Option<String>,
    /// A manoeuvre during the recording.
    pub manoeuvre: Option<String>,
    /// A drug given before or during the recording.
    pub drug: Option<String>,
    /// Filters that the source says were applied before storing.
    pub filters: SourceFilters,
    /// Free text of the source.
    pub remarks: Vec<String>,
}

/// Filters applied before the recording was stored. `None` is "not stated".
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct SourceFilters {
    /// High-pass corner.
    pub low_cut: Option<Hertz>,
    /// Low-pass corner.
    pub high_cut: Option<Hertz>,
    /// Mains rejection.
    pub mains: Option<Hertz>,
}

/// A sentence that travels with the recording onto the sheet.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Note {
    /// How much it matters to the reader.
    pub weight: Weight,
    /// One sentence without a full stop at its end.
    pub text: String,
}

/// How much a note matters.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Weight {
    /// Good to know.
    Information,
    /// Must be seen before the sheet is read.
    Caution,
}

impl Note {
    /// Good to know.
    pub fn information(text: impl Into<String>) -> Self {
        Self { weight: Weight::Information, text: text.into() }
    }

    /// Must be seen before the sheet is read.
    pub fn caution(text: impl Into<String>) -> Self {
        Self { weight: Weight::Caution, text: text.into() }
    }
}
