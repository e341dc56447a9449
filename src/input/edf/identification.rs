//! Who was recorded and how: two fields of 80 characters, which the plus formats divide by spaces.

use super::header::{Continuity, Header};
use crate::input::stated::{date_of, sex_of};
use crate::recording::{Note, Occasion, Subject};
use chrono::NaiveDate;

/// What the recording field says of the day.
#[derive(Debug, PartialEq)]
pub(super) enum Day {
    /// Nothing.
    NotStated,
    /// `X`: unknown or made anonymous, so that the date in the header is only a filling.
    Unknown,
    Stated(NaiveDate),
    /// As written.
    Unreadable(String),
}

/// `code sex birthdate name`; without that form it is one text of the source's own.
pub(super) fn patient(
    header: &Header,
    subject: &mut Subject,
    occasion: &mut Occasion,
    notes: &mut Vec<Note>,
) {
    let text = &header.patient;
    let mut words = text.split_ascii_whitespace();
    let (Some(code), Some(sex), Some(birth), Some(name), true) =
        (words.next(), words.next(), words.next(), words.next(), header.continuity != Continuity::Plain)
    else {
        subject.id = known(text);
        return;
    };
    subject.id = known(code);
    subject.sex = known(sex).and_then(|sex| sex_of(&sex));
    subject.name = known(name).map(|name| name.replace('_', " "));
    if let Some(birth) = known(birth) {
        subject.birth_date = date_of(&birth);
        if subject.birth_date.is_none() {
            notes.push(Note::information(format!("the birth date `{birth}` can't be read and is left out")));
        }
    }
    occasion.remarks.extend(known(&words.collect::<Vec<_>>().join(" ")));
}

/// `Startdate date code technician equipment`; without that form it is a remark.
pub(super) fn recording(header: &Header, occasion: &mut Occasion) -> Day {
    let text = &header.recording;
    let mut words = text.split_ascii_whitespace();
    if words.next() != Some("Startdate") {
        occasion.remarks.extend(known(text));
        return Day::NotStated;
    }
    let mut next = || words.next().and_then(known);
    let day = next();
    let code = next();
    occasion.operator = next().map(|technician| technician.replace('_', " "));
    occasion.device = next();
    occasion.remarks.extend(code.map(|code| format!("Investigation {code}")));
    occasion.remarks.extend(known(&words.collect::<Vec<_>>().join(" ")));
    match day {
        None => Day::Unknown,
        Some(text) => date_of(&text).map_or(Day::Unreadable(text), Day::Stated),
    }
}

/// `X` stands for unknown, alone or with marks between.
fn known(text: &str) -> Option<String> {
    let unknown = text.chars().all(|c| matches!(c, 'X' | 'x') || !c.is_alphanumeric());
    (!unknown).then(|| text.to_owned())
}
