//! Age from the birth date.

use super::{Age, AgeOrigin, Note, Occasion, Subject};
use chrono::{Datelike, NaiveDate};

/// Years of a true recording. De-identified databases shift dates beyond them, and a shifted date tells no age.
const YEARS: std::ops::RangeInclusive<i32> = 1900..=2099;

/// Fills the age where it is not stated and both dates are there; a note where they contradict each other.
pub(super) fn complete(subject: &mut Subject, occasion: &Occasion) -> Option<Note> {
    let (None, Some(birth), Some(start)) = (subject.age, subject.birth_date, occasion.start) else {
        return None;
    };
    let day = start.local.date();
    if !YEARS.contains(&day.year()) || !YEARS.contains(&birth.year()) {
        return None;
    }
    match years_between(birth, day) {
        Some(years) => subject.age = Some(Age { years, origin: AgeOrigin::Computed }),
        None => {
            return Some(Note::caution(format!(
                "birth date {birth} and recording date {day} do not go together, so the age is not known"
            )));
        }
    }
    None
}

/// Completed years, below 2 with their fraction; `None` beyond 0 to 130.
fn years_between(birth: NaiveDate, day: NaiveDate) -> Option<f64> {
    let days = (day - birth).num_days();
    let before_birthday = (day.month(), day.day()) < (birth.month(), birth.day());
    let whole = day.year() - birth.year() - i32::from(before_birthday);
    if days < 0 || whole > 130 {
        return None;
    }
    Some(if whole < 2 { days as f64 / 365.25 } else { f64::from(whole) })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn an_age_is_completed_years() {
        let day = |year, month, day| NaiveDate::from_ymd_opt(year, month, day).expect("a day");
        assert_eq!(years_between(day(1970, 6, 15), day(2024, 6, 14)), Some(53.0));
        assert_eq!(years_between(day(1970, 6, 15), day(2024, 6, 15)), Some(54.0));
        assert_eq!(years_between(day(2024, 1, 1), day(2024, 4, 1)), Some(91.0 / 365.25));
        assert_eq!(years_between(day(2024, 1, 2), day(2024, 1, 1)), None);
        assert_eq!(years_between(day(1880, 1, 2), day(2024, 1, 1)), None);
    }
}
