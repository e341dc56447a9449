//! The sidecar of a table.

use crate::input::files::plain;
use crate::input::stated::{OLDEST, sex_of};
use crate::input::{At, Fault};
use crate::recording::{
    Age, AgeOrigin, Decoded, Note, Occasion, Quantity, Signal, SourceFilters, StartTime, Subject, Weight,
};
use crate::units::{Hertz, SampleRate, Span, Spans};
use chrono::{FixedOffset, NaiveDate, NaiveDateTime, NaiveTime};
use serde::de::Error as _;
use serde::{Deserialize, Deserializer, Serialize};
use toml::value::Datetime;

/// The keys of a sidecar, all of them optional; an unknown key is an error.
#[derive(Debug, Default, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
pub(super) struct Sidecar {
    /// Samples per second.
    #[serde(default, deserialize_with = "above_zero")]
    pub rate: Option<f64>,
    /// Unit of every column whose heading states none.
    pub unit: Option<String>,
    /// For tables of raw counts: counts per mV, instead of a unit.
    #[serde(default, deserialize_with = "above_zero")]
    pub counts_per_mv: Option<f64>,
    /// Names of the columns in a table without a header row; of the signals where there is one.
    pub leads: Option<Vec<String>>,
    /// The smallest step of the converter, for each signal or one for all, in the unit of the column.
    resolution: Option<Resolution>,
    /// Signals (1 is the first) whose scale is not calibrated.
    not_calibrated: Option<Vec<usize>>,
    /// Clipped spans: signal, first and last sample (0 is the first). When given, they are all.
    clipped: Option<Vec<[usize; 3]>>,
    /// Local date and time of the first sample, with or without the offset from UTC.
    #[serde(default, deserialize_with = "date_and_time")]
    start: Option<Datetime>,
    place: Option<String>,
    operator: Option<String>,
    device: Option<String>,
    /// Electrode placement other than standard.
    placement: Option<String>,
    manoeuvre: Option<String>,
    drug: Option<String>,
    /// Free text, over several lines if need be.
    note: Option<String>,
    /// Sentences that must be seen before the sheet is read.
    cautions: Option<Vec<String>>,
    subject: Option<SubjectTable>,
    filters: Option<FilterTable>,
}

#[derive(Debug, Deserialize, Serialize)]
#[serde(untagged)]
enum Resolution {
    All(f64),
    Each(Vec<f64>),
}

#[derive(Debug, Default, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
struct SubjectTable {
    name: Option<String>,
    id: Option<String>,
    #[serde(default, deserialize_with = "day")]
    birth_date: Option<Datetime>,
    sex: Option<String>,
    /// Years.
    #[serde(default, deserialize_with = "years")]
    age: Option<f64>,
}

/// What was applied before the recording was stored, in Hz.
#[derive(Debug, Default, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
struct FilterTable {
    #[serde(default, deserialize_with = "above_zero")]
    low_cut: Option<f64>,
    #[serde(default, deserialize_with = "above_zero")]
    high_cut: Option<f64>,
    #[serde(default, deserialize_with = "above_zero")]
    mains: Option<f64>,
}

const KEYS: [&str; 17] = [
    "rate",
    "unit",
    "counts_per_mv",
    "leads",
    "resolution",
    "not_calibrated",
    "clipped",
    "start",
    "place",
    "operator",
    "device",
    "placement",
    "manoeuvre",
    "drug",
    "note",
    "cautions",
    "[subject]",
];

/// Whether the first line that says something sets one of the keys.
pub(super) fn looks_like_one(head: &str) -> bool {
    let first = head.lines().map(str::trim).find(|line| !line.is_empty() && !line.starts_with('#'));
    let Some(first) = first else { return false };
    let key = first.split('=').next().unwrap_or_default().trim();
    (first.contains('=') || first.starts_with('[')) && (KEYS.contains(&key) || key == "[filters]")
}

impl Sidecar {
    pub fn parse(text: &str) -> Result<Self, Fault> {
        let mut sidecar: Self = toml::from_str(text).map_err(|error| {
            let at = error.span().map_or(At::File, |span| cell_of(text, span.start));
            let found =
                error.message().trim_end().replace('\n', " ").replace("expected f64", "expected a number");
            Fault::malformed(at, "the keys and values of a sidecar", found, "correct the sidecar")
        })?;
        sidecar.leads.iter_mut().flatten().for_each(|lead| *lead = plain(lead));
        sidecar.unit = filled(&sidecar.unit);
        if sidecar.unit.is_some() && sidecar.counts_per_mv.is_some() {
            return Err(Fault::malformed(
                At::File,
                "`unit` or `counts_per_mv`",
                "both",
                "keep `unit` for values in a unit, `counts_per_mv` for raw counts",
            ));
        }
        Ok(sidecar)
    }

    pub fn subject(&self) -> Subject {
        let Some(table) = &self.subject else { return Subject::default() };
        Subject {
            name: filled(&table.name),
            id: filled(&table.id),
            birth_date: table.birth_date.and_then(date_of),
            sex: filled(&table.sex).as_deref().and_then(sex_of),
            age: table.age.map(|years| Age { years, origin: AgeOrigin::Stated }),
        }
    }

    pub fn occasion(&self) -> Occasion {
        let hertz = |value: Option<f64>| value.and_then(Hertz::new);
        let filters = self.filters.as_ref().map_or_else(SourceFilters::default, |table| SourceFilters {
            low_cut: hertz(table.low_cut),
            high_cut: hertz(table.high_cut),
            mains: hertz(table.mains),
        });
        let note = filled(&self.note).unwrap_or_default();
        let remarks = note.lines().map(str::trim).filter(|line| !line.is_empty());
        Occasion {
            start: self.start.and_then(start_of),
            place: filled(&self.place),
            operator: filled(&self.operator),
            device: filled(&self.device),
            placement: filled(&self.placement),
            manoeuvre: filled(&self.manoeuvre),
            drug: filled(&self.drug),
            filters,
            remarks: remarks.map(str::to_owned).collect(),
        }
    }

    pub fn notes(&self) -> Vec<Note> {
        self.cautions.iter().flatten().map(|text| Note::caution(plain(text))).collect()
    }

    /// Of the signal at `index`, counted from 0.
    pub fn resolution_of(&self, index: usize) -> Option<f64> {
        let step = match self.resolution.as_ref()? {
            Resolution::All(step) => *step,
            Resolution::Each(steps) => *steps.get(index)?,
        };
        (step.is_finite() && step > 0.0).then_some(step)
    }

    pub fn is_uncalibrated(&self, index: usize) -> bool {
        self.not_calibrated.iter().flatten().any(|number| *number == index + 1)
    }

    /// `None` when the sidecar says nothing about clipping.
    pub fn clipped_of(&self, index: usize, length: usize) -> Option<Spans> {
        let spans = self.clipped.as_ref()?.iter().filter(|[number, ..]| *number == index + 1);
        let spans = spans.map(|&[_, start, last]| Span { start, end: last.saturating_add(1).min(length) });
        Some(Spans::from_unordered(spans.collect()))
    }
}

impl Sidecar {
    /// What a table of `signals` does not say itself.
    pub fn of(decoded: &Decoded, signals: &[&Signal], rate: SampleRate) -> Self {
        let Decoded { subject, occasion, notes, .. } = decoded;
        let steps: Vec<f64> = signals.iter().map(|signal| signal.resolution.unwrap_or(0.0)).collect();
        let resolution = match steps.first() {
            Some(first) if steps.iter().all(|step| step == first) => {
                (*first > 0.0).then_some(Resolution::All(*first))
            }
            _ => Some(Resolution::Each(steps)),
        };
        let numbered = || (1..).zip(signals);
        let uncalibrated = numbered().filter(|(_, signal)| signal.quantity == Quantity::UncalibratedVoltage);
        let uncalibrated: Vec<usize> = uncalibrated.map(|(number, _)| number).collect();
        let clipped = numbered().flat_map(|(number, signal)| {
            signal.samples.saturated().iter().map(move |span| [number, span.start, span.end - 1])
        });
        let clipped: Vec<[usize; 3]> = clipped.collect();
        let cautions = notes.iter().filter(|note| note.weight == Weight::Caution);
        let cautions: Vec<String> = cautions.map(|note| note.text.clone()).collect();
        Self {
            rate: Some(rate.get()),
            leads: Some(signals.iter().map(|signal| signal.name.clone()).collect()),
            resolution,
            not_calibrated: Some(uncalibrated).filter(|list| !list.is_empty()),
            clipped: Some(clipped).filter(|list| !list.is_empty()),
            start: occasion.start.and_then(written_start),
            place: occasion.place.clone(),
            operator: occasion.operator.clone(),
            device: occasion.device.clone(),
            placement: occasion.placement.clone(),
            manoeuvre: occasion.manoeuvre.clone(),
            drug: occasion.drug.clone(),
            note: Some(occasion.remarks.join("\n")).filter(|note| !note.is_empty()),
            cautions: Some(cautions).filter(|list| !list.is_empty()),
            subject: SubjectTable::of(subject),
            filters: FilterTable::of(&occasion.filters),
            ..Self::default()
        }
    }

    /// As TOML.
    pub fn text(&self) -> String {
        toml::to_string(self).unwrap_or_default()
    }
}

impl SubjectTable {
    /// `None` when nothing is known.
    fn of(subject: &Subject) -> Option<Self> {
        let Subject { name, id, birth_date, sex, age } = subject.clone();
        (subject != &Subject::default()).then(|| Self {
            name,
            id,
            birth_date: birth_date.and_then(|date| date.to_string().parse().ok()),
            sex: sex.map(|sex| sex.to_string()),
            age: age.map(|age| age.years),
        })
    }
}

impl FilterTable {
    /// `None` when nothing is known.
    fn of(filters: &SourceFilters) -> Option<Self> {
        let number = |frequency: Option<Hertz>| frequency.map(Hertz::get);
        (filters != &SourceFilters::default()).then(|| Self {
            low_cut: number(filters.low_cut),
            high_cut: number(filters.high_cut),
            mains: number(filters.mains),
        })
    }
}

fn written_start(start: StartTime) -> Option<Datetime> {
    let local = start.local.format("%Y-%m-%dT%H:%M:%S%.f");
    let zone = start.zone.map(|zone| zone.to_string()).unwrap_or_default();
    format!("{local}{zone}").parse().ok()
}

fn filled(text: &Option<String>) -> Option<String> {
    text.as_deref().map(plain).map(|text| text.trim().to_owned()).filter(|text| !text.is_empty())
}

fn date_of(written: Datetime) -> Option<NaiveDate> {
    let date = written.date?;
    NaiveDate::from_ymd_opt(date.year.into(), date.month.into(), date.day.into())
}

fn start_of(written: Datetime) -> Option<StartTime> {
    let time = written.time?;
    let time = NaiveTime::from_hms_nano_opt(
        time.hour.into(),
        time.minute.into(),
        time.second.into(),
        time.nanosecond,
    )?;
    let zone = match written.offset {
        None => None,
        Some(toml::value::Offset::Z) => FixedOffset::east_opt(0),
        Some(toml::value::Offset::Custom { minutes }) => FixedOffset::east_opt(i32::from(minutes) * 60),
    };
    Some(StartTime { local: NaiveDateTime::new(date_of(written)?, time), zone })
}

/// Line and column of a byte.
fn cell_of(text: &str, byte: usize) -> At {
    let before = text.get(..byte).unwrap_or(text);
    let line = before.matches('\n').count() as u64 + 1;
    let column = before.rsplit('\n').next().unwrap_or_default().chars().count() as u64 + 1;
    At::Cell { line, column }
}

fn above_zero<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Option<f64>, D::Error> {
    let value = f64::deserialize(deserializer)?;
    if value.is_finite() && value > 0.0 {
        return Ok(Some(value));
    }
    Err(D::Error::custom(format!("{value}, which must be above 0")))
}

fn years<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Option<f64>, D::Error> {
    let value = f64::deserialize(deserializer)?;
    if (0.0..=OLDEST).contains(&value) {
        return Ok(Some(value));
    }
    Err(D::Error::custom(format!("an age of {value}, which must be 0 to {OLDEST} years")))
}

fn day<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Option<Datetime>, D::Error> {
    let value = Datetime::deserialize(deserializer)?;
    if date_of(value).is_some() && value.time.is_none() {
        return Ok(Some(value));
    }
    Err(D::Error::custom(format!("`{value}`, which must be a day such as 1970-12-31")))
}

fn date_and_time<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Option<Datetime>, D::Error> {
    let value = Datetime::deserialize(deserializer)?;
    if start_of(value).is_some() {
        return Ok(Some(value));
    }
    let form = "2024-05-01T10:20:30, or with its zone 2024-05-01T10:20:30+02:00";
    Err(D::Error::custom(format!("`{value}`, which must be day and time such as {form}")))
}
