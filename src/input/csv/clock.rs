//! The sampling rate, from the sidecar or a time column.

use super::asking::Asking;
use super::columns::{Column, Role, seconds_per};
use super::sidecar::Sidecar;
use crate::input::{At, Fault};
use crate::recording::Note;
use crate::units::SampleRate;

/// A time step may differ from the usual one by this part of it, or by the last digit written (own choice).
const UNSTEADY: f64 = 0.1;

/// All steps together may be off by this part of one, or by the last digit written (own choice).
const DRIFTED: f64 = 0.5;

/// The stated and the found rate may differ by this part (own choice).
const SAME_RATE: f64 = 1e-3;

/// The stated rate, checked against the time column where there is one; or the rate of the time column.
pub(super) fn rate(
    columns: &[Column],
    lines: &[u32],
    sidecar: &Sidecar,
    asking: &Asking,
    notes: &mut Vec<Note>,
) -> Result<SampleRate, Fault> {
    let stated = sidecar.rate.and_then(SampleRate::new);
    let Some(column) = columns.iter().find(|column| column.role == Role::Time) else {
        return stated.ok_or_else(|| asking.rate());
    };
    let Some(unit) = unit_of(column) else {
        let stated = stated.ok_or_else(|| asking.time_unit(&column.name))?;
        notes.push(Note::information(format!(
            "the column `{}` states no unit and was left out; the rate is that of {}",
            column.name, asking.sidecar
        )));
        return Ok(stated);
    };
    let found = TimeColumn { column, lines, unit }.rate()?;
    match stated {
        Some(stated) if found.agrees_with(stated) => Ok(stated),
        Some(stated) => Err(Fault::unsupported(
            format!(
                "the time column goes with {:.6} samples per second, but {} states {}",
                found.per_second,
                asking.sidecar,
                stated.get()
            ),
            "correct the one that is wrong",
        )),
        None => SampleRate::new(found.rounded()).ok_or_else(|| does_not_advance(column)),
    }
}

/// Seconds in one of the column's unit; a column named `seconds` states it by its name.
fn unit_of(column: &Column) -> Option<f64> {
    let named = || Some(&column.name).filter(|name| name.len() > 2).and_then(|name| seconds_per(name));
    column.unit.as_deref().and_then(seconds_per).or_else(named)
}

/// A rate that was found.
struct Found {
    per_second: f64,
    /// What the last digit written leaves open.
    uncertainty: f64,
}

impl Found {
    fn agrees_with(&self, stated: SampleRate) -> bool {
        (stated.get() - self.per_second).abs() <= self.uncertainty + SAME_RATE * self.per_second
    }

    /// The whole number, where the digits leave that open.
    fn rounded(&self) -> f64 {
        let whole = self.per_second.round();
        if (self.per_second - whole).abs() <= self.uncertainty { whole } else { self.per_second }
    }
}

struct TimeColumn<'a> {
    column: &'a Column,
    lines: &'a [u32],
    /// Seconds in one of the column's unit.
    unit: f64,
}

impl TimeColumn<'_> {
    /// From first to last row, if all steps are equal as far as the digits tell.
    fn rate(&self) -> Result<Found, Fault> {
        let times = &self.column.values;
        if let Some(row) = times.iter().position(|time| time.is_nan()) {
            return Err(self.unsteady(row, "a time", "an empty cell"));
        }
        let (Some(first), Some(last), true) = (times.first(), times.last(), times.len() >= 2) else {
            return Err(Fault::unsupported(
                "one row can't tell a sampling rate",
                "state `rate` in the sidecar",
            ));
        };
        let digit = self.unit * 10f64.powi(-(self.column.decimals.min(15) as i32));
        self.check_steps(digit)?;
        let (duration, count) = ((last - first) * self.unit, (times.len() - 1) as f64);
        self.check_drift(duration / count, digit)?;
        let per_second = count / duration;
        Ok(Found { per_second, uncertainty: per_second * (digit / duration + 1e-9) })
    }

    fn check_steps(&self, digit: f64) -> Result<(), Fault> {
        let steps: Vec<f64> =
            self.column.values.windows(2).map(|pair| (pair[1] - pair[0]) * self.unit).collect();
        let middle = steps.len() / 2;
        let usual = *steps.clone().select_nth_unstable_by(middle, f64::total_cmp).1;
        if usual < digit / 2.0 {
            return Err(does_not_advance(self.column));
        }
        let allowed = (UNSTEADY * usual).max(1.01 * digit);
        match steps.iter().position(|step| (step - usual).abs() > allowed) {
            None => Ok(()),
            Some(row) => Err(self.unsteady(
                row + 1,
                &format!("a step of {usual:.6} s, as between most rows"),
                &format!("{:.6} s", steps[row]),
            )),
        }
    }

    /// Small differences must not add up.
    fn check_drift(&self, step: f64, digit: f64) -> Result<(), Fault> {
        let times = &self.column.values;
        let off = |row: usize| (times[row] - times[0]) * self.unit - step * row as f64;
        let allowed = (DRIFTED * step).max(1.01 * digit);
        match (0..times.len()).find(|&row| off(row).abs() > allowed) {
            None => Ok(()),
            Some(row) => Err(self.unsteady(
                row,
                &format!("rows {step:.6} s apart from first to last"),
                &format!("a time {:.6} s off", off(row)),
            )),
        }
    }

    fn unsteady(&self, row: usize, expected: &str, found: &str) -> Fault {
        Fault::malformed(
            self.lines.get(row).map_or(At::File, |&line| At::Line(line.into())),
            format!("{expected}, in column `{}`", self.column.name),
            found,
            "put in the missing rows with empty cells; if all samples are equally spaced, state `rate` in the sidecar and leave the time column out",
        )
    }
}

fn does_not_advance(column: &Column) -> Fault {
    Fault::unsupported(
        format!("the column `{}` does not advance from row to row", column.name),
        "write the time with more digits, or state `rate` in the sidecar and leave the column out",
    )
}
