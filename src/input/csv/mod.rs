//! Tables of text: a column for each signal, a row for each sample, with the unit in the header row and the
//! rate in a time column, or both in a sidecar.
//!
//! - Cells stand between commas, semicolons or tabs; with the last two a decimal comma is read.
//! - An empty cell is a gap. Anything else that is no number stops the file.
//! - A heading names a lead and may state its unit: `II [mV]`, `II (mV)`, `II_mV`; a second row may hold
//!   nothing but units. `time [s]` or `t_ms` is the time, which must go in equal steps.
//! - `NAME.toml` beside `NAME.csv` is its sidecar, [`Sidecar`] lists the keys. Either may be named.
//! - No unit and no rate is ever guessed: what is missing is asked for.
//!
//! There is no standard for such tables; the spellings are own choices.

mod asking;
mod clock;
mod columns;
mod number;
mod sidecar;
mod table;
mod write;

pub(super) use write::write;

use crate::input::files::{Candidate, Files, file_name, text_of};
use crate::input::table::{Format, FormatInfo, Score};
use crate::input::voltage::millivolts_per;
use crate::input::{Error, Fault, clipping};
use crate::recording::{Decoded, Note, Quantity, Samples, Signal, Source};
use crate::units::{SampleRate, Spans};
use asking::{Asking, together};
use columns::{Column, Role};
use sidecar::Sidecar;
use std::path::PathBuf;
use table::Table;

pub(super) const FORMAT: Format = Format {
    info: FormatInfo {
        name: "csv",
        description: "table of text (CSV, TSV) with units in its header row, or with a sidecar (.toml)",
    },
    score,
    stands_alone,
    read,
};

/// A table is known by its rows of numbers, a sidecar by its keys; both less surely than any binary format.
fn score(candidate: &Candidate) -> Score {
    let head = candidate.head();
    if head.starts_with(&UTF16_LOW_FIRST) || head.starts_with(&UTF16_HIGH_FIRST) {
        return 10;
    }
    if head.contains(&0) {
        return 0;
    }
    let text = text_of(head);
    if sidecar::looks_like_one(&text) {
        return 60;
    }
    if table::looks_like_one(&text) { 40 } else { 0 }
}

/// A table with a sidecar, or with its units in the heading; any other may be a list of something else.
fn stands_alone(candidate: &Candidate) -> bool {
    if candidate.head().contains(&0) {
        return false;
    }
    let text = text_of(candidate.head());
    let heading =
        text.lines().find(|line| !line.trim().is_empty() && !line.starts_with('#')).unwrap_or_default();
    let units = ["v]", "v)", "_mv", "_uv"].iter().any(|unit| heading.to_lowercase().contains(unit));
    !sidecar::looks_like_one(&text)
        && table::looks_like_one(&text)
        && (units || candidate.path().with_extension("toml").is_file())
}

const UTF16_LOW_FIRST: [u8; 2] = [0xff, 0xfe];
const UTF16_HIGH_FIRST: [u8; 2] = [0xfe, 0xff];

fn read(candidate: &Candidate) -> Result<Decoded, Error> {
    let (table_path, sidecar_path) = pair(candidate)?;
    let mut files = Files::default();
    let bytes = files.data(&table_path)?;
    if bytes.starts_with(&UTF16_LOW_FIRST) || bytes.starts_with(&UTF16_HIGH_FIRST) {
        return Err(Fault::unsupported("the text is UTF-16", "save it as UTF-8").within(&table_path));
    }
    let sidecar = match sidecar_path.is_file() {
        true => {
            let bytes = files.text(&sidecar_path)?;
            Some(Sidecar::parse(&text_of(&bytes)).map_err(|fault| fault.within(&sidecar_path))?)
        }
        false => None,
    };
    let table = Table::parse(&text_of(&bytes)).map_err(|fault| fault.within(&table_path))?;
    let asking = Asking { sidecar: &file_name(&sidecar_path), present: sidecar.is_some() };
    let sidecar = sidecar.unwrap_or_default();
    let mut notes = sidecar.notes();
    let signals = signals(table, &sidecar, &asking, &mut notes).map_err(|fault| fault.within(&table_path))?;
    let source = Source { file: file_name(&table_path), format: FORMAT.info.name, sha256: files.sha256() };
    Ok(Decoded { source, signals, subject: sidecar.subject(), occasion: sidecar.occasion(), notes })
}

/// The table and where its sidecar would be.
fn pair(candidate: &Candidate) -> Result<(PathBuf, PathBuf), Error> {
    let path = candidate.path();
    if !sidecar::looks_like_one(&text_of(candidate.head())) {
        return Ok((path.to_path_buf(), path.with_extension("toml")));
    }
    let tables: Vec<PathBuf> = ["csv", "tsv", "txt", "CSV", "TSV", "TXT"]
        .into_iter()
        .map(|extension| path.with_extension(extension))
        .filter(|table| table.is_file())
        .collect();
    match &tables[..] {
        [] => Err(Fault::unsupported(
            "a sidecar without its table",
            format!("put the table beside it as {}", file_name(&path.with_extension("csv"))),
        )
        .within(path)),
        [table, ..] => Ok((table.clone(), path.to_path_buf())),
    }
}

fn signals(
    table: Table,
    sidecar: &Sidecar,
    asking: &Asking,
    notes: &mut Vec<Note>,
) -> Result<Vec<Signal>, Fault> {
    let (columns, lines) = columns::assign(table, sidecar, asking)?;
    let rate = clock::rate(&columns, &lines, sidecar, asking, notes);
    let units = units(&columns, sidecar, asking);
    let (rate, units) = match (rate, units) {
        (Ok(rate), Ok(units)) => (rate, units),
        (rate, units) => return Err(together([rate.err(), units.err()].into_iter().flatten().collect())),
    };
    let found = columns.into_iter().filter(|column| column.role == Role::Signal);
    let signals = found.zip(units).enumerate();
    Ok(signals.map(|(index, (column, unit))| signal(index, column, unit, rate, sidecar)).collect())
}

/// How the numbers of a column become values.
struct Unit {
    quantity: Quantity,
    factor: f64,
    /// Whether the numbers are counts, so that one is the smallest step.
    counts: bool,
}

/// The unit of each signal: from its heading, or else from the sidecar.
fn units(columns: &[Column], sidecar: &Sidecar, asking: &Asking) -> Result<Vec<Unit>, Fault> {
    let mut units = Vec::new();
    let mut without = Vec::new();
    for column in columns.iter().filter(|column| column.role == Role::Signal) {
        let unit = column.unit.as_deref().or(sidecar.unit.as_deref());
        units.push(match (unit, sidecar.counts_per_mv) {
            (Some(unit), _) => match millivolts_per(unit) {
                Some(factor) => Unit { quantity: Quantity::Voltage, factor, counts: false },
                None => Unit { quantity: Quantity::Other(unit.to_owned()), factor: 1.0, counts: false },
            },
            (None, Some(per_mv)) => Unit { quantity: Quantity::Voltage, factor: 1.0 / per_mv, counts: true },
            (None, None) => {
                without.push(column);
                continue;
            }
        });
    }
    match without.first() {
        None => Ok(units),
        Some(first) if units.is_empty() => Err(asking.unit(None, &first.name)),
        Some(first) => Err(asking.unit(Some(&first.name), &first.name)),
    }
}

fn signal(index: usize, column: Column, unit: Unit, rate: SampleRate, sidecar: &Sidecar) -> Signal {
    let Unit { mut quantity, factor, counts } = unit;
    if quantity == Quantity::Voltage && sidecar.is_uncalibrated(index) {
        quantity = Quantity::UncalibratedVoltage;
    }
    let resolution = sidecar.resolution_of(index).or(counts.then_some(1.0)).map(|step| step * factor);
    let values: Vec<f64> = match factor {
        1.0 => column.values,
        _ => column.values.into_iter().map(|value| value * factor).collect(),
    };
    let length = values.len();
    let samples = Samples::new(rate, values, Spans::none());
    let samples = match sidecar.clipped_of(index, length) {
        Some(spans) => samples.with_saturated(spans),
        None => clipping::marked(samples, [f64::NEG_INFINITY, f64::INFINITY]),
    };
    Signal { name: column.name, quantity, resolution, samples }
}
