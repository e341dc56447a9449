//! The time of the first sample.

use super::header::Header;
use super::identification::Day;
use crate::recording::{Note, Occasion, StartTime};
use chrono::{Datelike, NaiveDate, NaiveTime, TimeDelta};

/// From the header's date and time, the day in the recording field, and the time that the first data record
/// states. The formats hold no zone.
pub(super) fn apply(
    header: &Header,
    stated: Day,
    first_onset: f64,
    occasion: &mut Occasion,
    notes: &mut Vec<Note>,
) {
    let written = format!("{} {}", header.date, header.time);
    let (own, time) = (date_of(&header.date), time_of(&header.time));
    let day = match stated {
        Day::NotStated => own,
        Day::Unknown => {
            if let Some(time) = time {
                occasion.remarks.insert(0, format!("Time of the recording {time}, day not stated"));
            }
            return;
        }
        Day::Stated(day) => {
            if own.is_some_and(|own| !same_but_century(own, day)) {
                notes.push(Note::information(format!(
                    "the header's date {} is not that of its recording field, {day}, which was taken",
                    header.date
                )));
            }
            Some(day)
        }
        Day::Unreadable(text) => {
            notes.push(Note::information(format!("the start date `{text}` can't be read and is left out")));
            own
        }
    };
    let start =
        day.zip(time).and_then(|(day, time)| day.and_time(time).checked_add_signed(delta(first_onset)));
    match start {
        Some(local) => occasion.start = Some(StartTime { local, zone: None }),
        None if written.trim().is_empty() => {}
        None => notes.push(Note::information(format!(
            "the start time `{}` can't be read and is left out",
            written.trim()
        ))),
    }
}

/// The header has two digits of the year.
fn same_but_century(a: NaiveDate, b: NaiveDate) -> bool {
    (a.year().rem_euclid(100), a.ordinal()) == (b.year().rem_euclid(100), b.ordinal())
}

fn delta(seconds: f64) -> TimeDelta {
    TimeDelta::nanoseconds((seconds * 1e9).round() as i64)
}

/// `dd.mm.yy`; years 85 to 99 are of the 20th century (EDF+ 2.1.3.2 (r)).
fn date_of(text: &str) -> Option<NaiveDate> {
    let [day, month, year] = three(text)?;
    let year = match year {
        85..=99 => 1900 + year,
        0..=84 => 2000 + year,
        _ => return None,
    };
    NaiveDate::from_ymd_opt(year as i32, month, day)
}

/// `hh.mm.ss`.
fn time_of(text: &str) -> Option<NaiveTime> {
    let [hour, minute, second] = three(text)?;
    NaiveTime::from_hms_opt(hour, minute, second)
}

/// Three numbers with points between; other marks occur.
fn three(text: &str) -> Option<[u32; 3]> {
    let numbers: Option<Vec<u32>> =
        text.split(['.', ':', '/', '-']).map(|part| part.trim().parse().ok()).collect();
    numbers?.try_into().ok()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_year_of_two_digits_is_of_1985_to_2084() {
        for (text, year) in [("16.09.85", 1985), ("01.01.99", 1999), ("01.01.00", 2000), ("31:12:84", 2084)] {
            assert_eq!(date_of(text).map(|date| date.year()), Some(year), "{text}");
        }
        for text in ["31.02.20", "1.1", "", "aa.bb.cc", "01.01.yy", "01.01.2020"] {
            assert_eq!(date_of(text), None, "{text}");
        }
        assert_eq!(time_of("24.00.00"), None);
    }
}
