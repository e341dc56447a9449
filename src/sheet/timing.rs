//! Which part of a recording is shown, and when on the sheet.

use super::layout::{Shown, Strips};
use super::options::SheetOptions;
use crate::case::Case;
use crate::units::Seconds;

/// A sheet is laid out for this speed: the time that its rows hold is shown at a faster one too, on more pages.
const USUAL_SPEED: f64 = 25.0;
/// The least that is shown of a lead.
const COLUMN: f64 = 2.5;
/// Columns may be shortened to this part of it before they show the same time instead (own choice).
const SHORTENED: f64 = 0.9;
/// How much is shown before the start, or after the end, of a tachycardia (own choice).
const LEAD_IN: f64 = 4.0;
/// Rounding of products of times, in s.
const ROUNDING: f64 = 1e-6;

/// One lead's stay on a row, in s. Sheet time runs on over the pages.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Stay {
    pub shown: Shown,
    /// From the first sample of the recording.
    pub source_from: f64,
    /// From the left end of the first page's traces.
    pub sheet_from: f64,
    pub length: f64,
}

/// The part that is shown and its arrangement.
#[derive(Clone, Debug)]
pub(super) struct Timing {
    /// Where the shown part starts, in s from the first sample of the recording.
    pub start: f64,
    /// How much is shown.
    pub length: f64,
    /// How much the recording holds.
    pub duration: f64,
    /// What a row of one page holds.
    pub row: f64,
    pub pages: usize,
    /// Whether the columns follow each other in time; otherwise all show the same.
    pub sequential: bool,
    /// Every row, rhythm rows last.
    pub rows: Vec<Vec<Stay>>,
    /// Why the part was chosen.
    around: Option<&'static str>,
}

impl Timing {
    pub fn of(case: &Case, strips: &Strips, rhythm: &[Shown], options: &SheetOptions) -> Self {
        let row = strips.trace_width / options.speed.get();
        let capacity = row.max(strips.trace_width / USUAL_SPEED);
        let duration = case.recording.duration().get();
        let (start, around) = start(case, duration, capacity);
        let length = capacity.min(duration - start);
        let columns = strips.rows.iter().map(Vec::len).max().unwrap_or(1);
        let sequential = length / columns as f64 >= SHORTENED * COLUMN - ROUNDING;
        let stays = |leads: &[Shown]| -> Vec<Stay> {
            let count = leads.len() as f64;
            let follow = sequential || leads.len() == 1;
            let part = if follow { length / count } else { COLUMN.min(length) };
            let slot = if follow { part } else { COLUMN };
            (0u32..)
                .zip(leads)
                .map(|(index, &shown)| Stay {
                    shown,
                    source_from: start + if follow { f64::from(index) * part } else { 0.0 },
                    sheet_from: f64::from(index) * slot,
                    length: part,
                })
                .collect()
        };
        let rows: Vec<Vec<Stay>> = strips
            .rows
            .iter()
            .map(|leads| stays(leads))
            .chain(rhythm.iter().map(|&shown| stays(&[shown])))
            .collect();
        let end = rows.iter().flatten().map(|stay| stay.sheet_from + stay.length).fold(0.0, f64::max);
        let pages = ((end / row - ROUNDING).ceil() as usize).max(1);
        Self { start, length, duration, row, pages, sequential, rows, around }
    }

    /// Which part of the recording is shown, as printed.
    pub fn part(&self) -> String {
        let (from, to) = (self.start, self.start + self.length);
        if self.length > self.duration - 0.05 {
            return format!("the whole recording of {:.1} s", self.duration);
        }
        let around = self.around.map_or(String::new(), |around| format!(", around the {around}"));
        format!("{from:.1} to {to:.1} s of {:.1} s{around}", self.duration)
    }

    /// How the columns lie in time, as printed; nothing where there is but one.
    pub fn columns(&self) -> Option<String> {
        let widest = self.rows.iter().max_by_key(|row| row.len()).filter(|row| row.len() > 1)?;
        let length = widest[0].length;
        Some(if self.sequential {
            format!("columns follow each other in time, {length:.1} s each")
        } else {
            format!(
                "all columns show the same {length:.1} s; the recording is too short for columns in sequence"
            )
        })
    }
}

/// Where the shown part starts, on a whole second, and around what.
fn start(case: &Case, duration: f64, capacity: f64) -> (f64, Option<&'static str>) {
    if duration <= capacity + ROUNDING {
        return (0.0, None);
    }
    let earliest = |pick: fn(&crate::findings::Tachycardia) -> Option<Seconds>| {
        case.analysis.findings.tachycardias.iter().find_map(pick).map(Seconds::get)
    };
    let latest_start = (duration - capacity).floor().max(0.0);
    let clamped = |time: f64| time.floor().clamp(0.0, latest_start);
    if let Some(onset) = earliest(|tachycardia| tachycardia.start) {
        return (clamped(onset - LEAD_IN), Some("start of the tachycardia"));
    }
    if let Some(end) = earliest(|tachycardia| tachycardia.end) {
        return (clamped(end + LEAD_IN - capacity), Some("end of the tachycardia"));
    }
    (0.0, None)
}
