//! The record line: `name[/segments] signals [rate[/counter[(base)]] [samples [time [date]]]]`.

use crate::input::stated::date_of;
use crate::input::{At, Fault};
use crate::units::SampleRate;
use chrono::{NaiveDate, NaiveTime};

/// What the record line states.
#[derive(Debug)]
pub(super) struct RecordLine {
    pub name: String,
    /// Present when the record is made of several segments.
    pub segments: Option<u64>,
    pub signals: u64,
    /// Frames per second.
    pub rate: SampleRate,
    /// Whether the line states the rate; else it is the specification's default.
    pub rate_stated: bool,
    /// Frames; `None` when absent or 0, which means "as many as the signal files hold".
    pub frames: Option<u64>,
    pub time: Option<NaiveTime>,
    pub date: Option<NaiveDate>,
    /// A time or date that can't be read, as written.
    pub unreadable_start: Option<String>,
}

/// header(5): "if it is missing, a value of 250 […] is assumed" (r).
const DEFAULT_RATE: f64 = 250.0;

impl RecordLine {
    pub fn parse(line: &str, number: u64) -> Result<Self, Fault> {
        let at = At::Line(number);
        let mut tokens = line.split_ascii_whitespace();
        let first = tokens.next().unwrap_or_default();
        let (name, segments) = match first.rsplit_once('/') {
            Some((name, count)) => (name, Some(whole(count, "a number of segments behind the `/`", at)?)),
            None => (first, None),
        };
        let signals = match tokens.next() {
            Some(count) => whole(count, "the number of signals", at)?,
            None => return Err(wrong(at, "the number of signals", "the end of the line")),
        };
        let rate_text = tokens.next();
        let rate = rate_of(rate_text, at)?;
        let frames = match tokens.next() {
            Some(count) => Some(whole(count, "the number of samples", at)?).filter(|&count| count > 0),
            None => None,
        };
        let (time_text, date_text) = (tokens.next(), tokens.next());
        let (time, date) = (time_text.and_then(time_of), date_text.and_then(date_of));
        // Some writers give the date first.
        let swapped = (time_text.and_then(date_of), date_text.and_then(time_of));
        let (time, date) =
            if time.is_none() && swapped.0.is_some() { (swapped.1, swapped.0) } else { (time, date) };
        let read = usize::from(time.is_some()) + usize::from(date.is_some());
        let written = usize::from(time_text.is_some()) + usize::from(date_text.is_some());
        let unreadable_start = (read < written)
            .then(|| [time_text, date_text].into_iter().flatten().collect::<Vec<_>>().join(" "));
        Ok(Self {
            name: name.to_owned(),
            segments,
            signals,
            rate,
            rate_stated: rate_text.is_some(),
            frames,
            time,
            date,
            unreadable_start,
        })
    }
}

fn rate_of(text: Option<&str>, at: At) -> Result<SampleRate, Fault> {
    let frames = match text {
        Some(text) => text.split('/').next().unwrap_or_default().parse().ok(),
        None => Some(DEFAULT_RATE),
    };
    frames.and_then(SampleRate::new).ok_or_else(|| {
        wrong(at, "a sampling rate above 0 per second", &format!("`{}`", text.unwrap_or_default()))
    })
}

/// `[[HH:]MM:]SS[.fraction]`; a bare number of seconds is not taken for a time.
fn time_of(text: &str) -> Option<NaiveTime> {
    let parts: Vec<&str> = text.split(':').collect();
    let (hours, minutes, seconds) = match parts[..] {
        [h, m, s] => (h.parse().ok()?, m.parse().ok()?, s),
        [m, s] => (0, m.parse().ok()?, s),
        _ => return None,
    };
    let (seconds, fraction) = seconds.split_once('.').unwrap_or((seconds, ""));
    if fraction.len() > 9 || !fraction.bytes().all(|digit| digit.is_ascii_digit()) {
        return None;
    }
    let nanoseconds = format!("{fraction:0<9}").parse().ok()?;
    NaiveTime::from_hms_nano_opt(hours, minutes, seconds.parse().ok()?, nanoseconds)
}

fn whole(text: &str, expected: &str, at: At) -> Result<u64, Fault> {
    text.parse().map_err(|_| wrong(at, expected, &format!("`{text}`")))
}

fn wrong(at: At, expected: &str, found: &str) -> Fault {
    Fault::malformed(at, expected, found, "correct the record line, as header(5) of WFDB describes it")
}
