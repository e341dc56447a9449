//! Ages, sexes and dates as sources spell them.

use crate::recording::{Age, AgeOrigin, Sex};
use chrono::{FixedOffset, NaiveDate};

const MONTHS: [&str; 12] =
    ["jan", "feb", "mar", "apr", "may", "jun", "jul", "aug", "sep", "oct", "nov", "dec"];

/// Nobody grew older; what is above is a code for something else.
pub(super) const OLDEST: f64 = 130.0;

/// `74`, `74 years`, `5 months`, `3 weeks`, `12 days`; `None` when it is none of these or beyond
/// [`OLDEST`].
pub(super) fn age_of(text: &str) -> Option<Age> {
    let text = text.trim().to_lowercase();
    let end = text.find(|c: char| !c.is_ascii_digit() && c != '.').unwrap_or(text.len());
    let (number, unit) = text.split_at(end);
    let per_year = match unit.trim() {
        "" | "y" | "yr" | "yrs" | "year" | "years" => 1.0,
        "mo" | "month" | "months" => 12.0,
        "w" | "week" | "weeks" => 365.25 / 7.0,
        "d" | "day" | "days" => 365.25,
        _ => return None,
    };
    let years = number.parse::<f64>().ok()? / per_year;
    (0.0..=OLDEST).contains(&years).then_some(Age { years, origin: AgeOrigin::Stated })
}

/// Female or male in words or letters, otherwise as written; `None` when it says nothing.
pub(super) fn sex_of(text: &str) -> Option<Sex> {
    let text = text.trim();
    if says_nothing(text) {
        return None;
    }
    Some(match text.to_lowercase().as_str() {
        "f" | "female" | "woman" => Sex::Female,
        "m" | "male" | "man" => Sex::Male,
        _ => Sex::Other(text.to_owned()),
    })
}

/// Words and signs that stand for "not stated".
pub(super) fn says_nothing(text: &str) -> bool {
    let text = text.trim();
    text.chars().all(|c| matches!(c, '?' | '-' | '.'))
        || ["unknown", "unknows", "n/a", "na", "nan", "-1", "not stated"]
            .contains(&text.to_lowercase().as_str())
}

/// `DD/MM/YYYY`, `DD-Mon-YYYY` or `YYYY-MM-DD`.
pub(super) fn date_of(text: &str) -> Option<NaiveDate> {
    let parts: Vec<&str> = text.trim().split(['/', '-']).collect();
    let [first, month, last] = parts[..] else { return None };
    let month = match month.parse::<u32>() {
        Ok(month) => month,
        Err(_) => MONTHS.iter().zip(1..).find(|(name, _)| month.eq_ignore_ascii_case(name))?.1,
    };
    let (year, day) = if first.len() == 4 { (first, last) } else { (last, first) };
    // A year of two digits could be of any century.
    if year.len() != 4 {
        return None;
    }
    NaiveDate::from_ymd_opt(year.parse().ok()?, month, day.parse().ok()?)
}

/// `+02:00`, `-05:30`, `Z`.
pub(super) fn zone_of(text: &str) -> Option<FixedOffset> {
    let text = text.trim();
    if text.eq_ignore_ascii_case("z") {
        return FixedOffset::east_opt(0);
    }
    let (sign, rest) = match text.split_at_checked(1)? {
        ("+", rest) => (1, rest),
        ("-", rest) => (-1, rest),
        _ => return None,
    };
    let (hours, minutes) = rest.split_once(':')?;
    let (hours, minutes): (i32, i32) = (hours.parse().ok()?, minutes.parse().ok()?);
    if !(0..24).contains(&hours) || !(0..60).contains(&minutes) {
        return None;
    }
    FixedOffset::east_opt(sign * (hours * 3600 + minutes * 60))
}

#[cfg(test)]
mod tests {
    use super::*;

    // Source: spellings met in the headers of open databases.
    #[test]
    fn ages_in_every_spelling_met() {
        let years = |text| age_of(text).map(|age| age.years);
        assert_eq!(years(" 74"), Some(74.0));
        assert_eq!(years("6 months"), Some(0.5));
        // A code for "90 or older" in one database.
        assert_eq!(years("300"), None);
        for text in ["NaN", "??", "-1", "", "about 30"] {
            assert_eq!(years(text), None, "{text}");
        }
    }

    #[test]
    fn dates_with_a_century_only() {
        let date = NaiveDate::from_ymd_opt(2020, 2, 5);
        assert_eq!(date_of("05-Feb-2020"), date);
        assert_eq!(date_of("5/2/2020"), date);
        assert_eq!(date_of("2020-02-05"), date);
        assert_eq!(date_of("29-Sep-90"), None);
        assert_eq!(date_of("31/02/2020"), None);
    }

    #[test]
    fn zones_as_offsets() {
        assert_eq!(zone_of("+02:00"), FixedOffset::east_opt(7200));
        assert_eq!(zone_of("-03:30"), FixedOffset::east_opt(-12600));
        for text in ["CET", "+25:00", "", "+0200", "-1:-30"] {
            assert_eq!(zone_of(text), None, "{text}");
        }
    }
}
