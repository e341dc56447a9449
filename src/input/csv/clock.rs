//! The sampling rate, from the sidecar or a time column.

use super::asking::Asking;
use super::columns::{Column, Role, seconds_per};
use super::sidecar::Sidecar;
use crate::input::{At, Fault};
use crate::recording::Note;
use crate::units::SampleRate;

/// A time step may differ from the usual one by this part of it, or by the last digit written.
const UNSTEADY: f64 = 0.1;

/// The stated rate, checked against the time column where there is one; or the rate of the time column.
pub(super) fn rate(
    columns: &[Column],
    lines: &[u32],
    sidecar: &Sidecar,
    asking: &Asking,
    notes: &mut Vec<Note>,
) -> Result<SampleRate, Fault> {
    let stated = sidecar.rate.and_then(SampleRate::new);
    let column = columns.iter().find(|column| column.role == Role::Time);
    let unit = column.map(|column| {
        // A column named `seconds` states its unit by its name.
        column
            .unit
            .as_deref()
            .and_then(seconds_per)
            .or_else(|| seconds_per(&column.name).filter(|_| column.name.len() > 2))
    });
    let (column, unit) = match (column, unit.flatten(), stated) {
        (Some(column), Some(unit), _) => (column, unit),
        (None, _, Some(stated)) => return Ok(stated),
        (Some(column), None, Some(stated)) => {
            notes.push(Note::information(format!(
                "the column `{}` states no unit and was left out; the rate is that of {}",
                column.name, asking.sidecar
            )));
            return Ok(stated);
        }
        (Some(column), None, None) => {
            return Err(Fault::unsupported(
                format!(
                    "the time column `{}` states no unit, so the sampling rate is not known",
                    column.name
                ),
                format!("write its heading as `{0} [s]` or `{0} [ms]`", column.name),
            ));
        }
        (None, _, None) => {
            return Err(asking.rate());
        }
    };
    let found = Steady::of(column, unit, lines)?;
    if let Some(stated) = stated {
        if (stated.get() - found.rate).abs() > found.uncertainty + 1e-3 * found.rate {
            return Err(Fault::unsupported(
                format!(
                    "the time column goes with {:.6} samples per second, but {} states {}",
                    found.rate,
                    asking.sidecar,
                    stated.get()
                ),
                "correct the one that is wrong",
            ));
        }
        return Ok(stated);
    }
    let whole = found.rate.round();
    let rate = if (found.rate - whole).abs() <= found.uncertainty { whole } else { found.rate };
    SampleRate::new(rate).ok_or_else(|| found.unusable(column))
}

/// A time column that goes in equal steps.
struct Steady {
    /// Samples per second.
    rate: f64,
    /// What the last digit written leaves open.
    uncertainty: f64,
}

impl Steady {
    fn of(column: &Column, unit: f64, lines: &[u32]) -> Result<Self, Fault> {
        let times = &column.values;
        let digit = unit * 10f64.powi(-(column.decimals.min(15) as i32));
        if let Some(row) = times.iter().position(|time| time.is_nan()) {
            return Err(unsteady(column, lines, row, "a time".into(), "an empty cell".into()));
        }
        let (Some(first), Some(last), true) = (times.first(), times.last(), times.len() >= 2) else {
            return Err(Fault::unsupported(
                "one row can't tell a sampling rate",
                "state `rate` in the sidecar",
            ));
        };
        let mut steps: Vec<f64> = times.windows(2).map(|pair| (pair[1] - pair[0]) * unit).collect();
        let usual = {
            let middle = steps.len() / 2;
            *steps.clone().select_nth_unstable_by(middle, f64::total_cmp).1
        };
        if !(usual.is_finite() && usual > digit * 0.5) {
            return Err(Fault::unsupported(
                format!("the column `{}` does not advance from row to row", column.name),
                "write the time with more digits, or state `rate` in the sidecar and leave the column out",
            ));
        }
        let allowed = (UNSTEADY * usual).max(1.01 * digit);
        if let Some(row) = steps.iter().position(|step| (step - usual).abs() > allowed) {
            let expected = format!("a step of {:.6} s, as between most rows", usual);
            return Err(unsteady(column, lines, row + 1, expected, format!("{:.6} s", steps[row])));
        }
        let duration = (last - first) * unit;
        let count = (times.len() - 1) as f64;
        let mean = duration / count;
        // Small differences must not add up to a drift either.
        for (row, step) in steps.iter_mut().enumerate() {
            *step = (times[row + 1] - first) * unit - mean * (row + 1) as f64;
        }
        if let Some(row) = steps.iter().position(|off| off.abs() > (0.5 * mean).max(1.01 * digit)) {
            let expected = format!("rows {:.6} s apart from first to last", mean);
            return Err(unsteady(
                column,
                lines,
                row + 1,
                expected,
                format!("a time {:.6} s off", steps[row]),
            ));
        }
        let rate = count / duration;
        Ok(Self { rate, uncertainty: rate * digit / duration + 1e-9 * rate })
    }

    fn unusable(&self, column: &Column) -> Fault {
        Fault::unsupported(
            format!("the column `{}` goes with {} samples per second", column.name, self.rate),
            "correct the times, or state `rate` in the sidecar and leave the column out",
        )
    }
}

fn unsteady(column: &Column, lines: &[u32], row: usize, expected: String, found: String) -> Fault {
    Fault::malformed(
        lines.get(row).map_or(At::File, |&line| At::Line(line.into())),
        format!("{expected}, in column `{}`", column.name),
        found,
        "put in the missing rows with empty cells; if all samples are equally spaced, state `rate` in the sidecar and leave the time column out",
    )
}
