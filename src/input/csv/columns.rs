//! What each column is.

use super::asking::{Asking, together};
use super::sidecar::Sidecar;
use super::table::Table;
use crate::input::voltage::millivolts_per;
use crate::input::{At, Fault};

/// A column with its meaning.
#[derive(Debug)]
pub(super) struct Column {
    pub name: String,
    pub unit: Option<String>,
    pub role: Role,
    /// NaN for an empty cell.
    pub values: Vec<f64>,
    /// The most digits behind the decimal mark.
    pub decimals: u32,
}

/// What a column is for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Role {
    Signal,
    Time,
    /// Counts the rows; nothing is made of it.
    Index,
}

/// Names, units and roles from the header row and the sidecar, and the line of each row.
pub(super) fn assign(
    table: Table,
    sidecar: &Sidecar,
    asking: &Asking,
) -> Result<(Vec<Column>, Vec<u32>), Fault> {
    let Table { headings, units, columns: cells, lines } = table;
    let width = cells.len();
    let headed = headings.is_some();
    let headings = match (headings, &sidecar.leads) {
        (Some(headings), _) => headings,
        (None, Some(leads)) => leads.clone(),
        (None, None) => {
            let rate = sidecar.rate.is_none().then(|| asking.rate());
            let unitless = sidecar.unit.is_none() && sidecar.counts_per_mv.is_none();
            let unit = unitless.then(|| asking.unit(None, ""));
            return Err(together([Some(asking.names(width)), rate, unit].into_iter().flatten().collect()));
        }
    };
    if headings.len() != width {
        return Err(wrong_count(width, headings.len(), asking));
    }
    let mut columns: Vec<Column> = Vec::with_capacity(width);
    for (index, (heading, cells)) in headings.iter().zip(cells).enumerate() {
        let (name, unit) = split(heading);
        let below = units.as_ref().and_then(|units| units.get(index)).filter(|unit| !unit.is_empty());
        let unit = unit.map(str::to_owned).or(below.cloned());
        let role = role(name, &unit, index, &cells.values);
        columns.push(Column {
            name: name.to_owned(),
            unit,
            role,
            values: cells.values,
            decimals: cells.decimals,
        });
    }
    if let (true, Some(leads)) = (headed, &sidecar.leads) {
        let signals: Vec<&mut Column> =
            columns.iter_mut().filter(|column| column.role == Role::Signal).collect();
        if signals.len() != leads.len() {
            return Err(wrong_count(signals.len(), leads.len(), asking));
        }
        for (column, lead) in signals.into_iter().zip(leads) {
            lead.trim().clone_into(&mut column.name);
        }
    }
    if !columns.iter().any(|column| column.role == Role::Signal) {
        return Err(Fault::unsupported(
            "no column holds a signal",
            "name the columns of leads I, II, III, aVR, aVL, aVF, V1 … V6",
        ));
    }
    Ok((columns, lines))
}

fn wrong_count(columns: usize, names: usize, asking: &Asking) -> Fault {
    Fault::malformed(
        At::File,
        format!("a name for each of {columns} columns in `leads` of {}", asking.sidecar),
        names.to_string(),
        "name every column in its order",
    )
}

/// `II [mV]`, `II (mV)`, `II_mV`: name and unit. Words in brackets that are known not to be a unit stay.
fn split(heading: &str) -> (&str, Option<&str>) {
    const NO_UNITS: [&str; 3] = ["einthoven", "goldberger", "wilson"];
    let heading = heading.trim().trim_matches('\'').trim();
    for (open, close) in [('[', ']'), ('(', ')')] {
        if let Some((name, unit)) = heading.strip_suffix(close).and_then(|rest| rest.rsplit_once(open))
            && !unit.trim().is_empty()
            && !NO_UNITS.contains(&unit.trim().to_lowercase().as_str())
        {
            return (name.trim(), Some(unit.trim()));
        }
    }
    match heading.rsplit_once('_') {
        // A bare V would rather be part of a name, and a bare s belongs to a time.
        Some((name, unit))
            if unit.len() > 1 && (millivolts_per(unit).is_some() || seconds_per(unit).is_some()) =>
        {
            (name, Some(unit))
        }
        Some((name, "s")) if is_time(name) => (name, Some("s")),
        _ => (heading, None),
    }
}

fn role(name: &str, unit: &Option<String>, index: usize, values: &[f64]) -> Role {
    let folded = name.to_lowercase();
    if is_time(&folded) && unit.as_deref().is_none_or(|unit| seconds_per(unit).is_some()) {
        return Role::Time;
    }
    let counts = || values.iter().zip(0u32..).all(|(value, row)| *value == f64::from(row));
    match folded.as_str() {
        _ if unit.is_some() => Role::Signal,
        "sample" | "samples" | "index" | "row" | "sample number" | "sample_number" | "sample index" => {
            Role::Index
        }
        "" if index == 0 && counts() => Role::Index,
        _ => Role::Signal,
    }
}

fn is_time(name: &str) -> bool {
    ["time", "t", "elapsed time", "elapsed", "seconds", "milliseconds"]
        .contains(&name.to_lowercase().as_str())
}

/// How many seconds one of a unit of time is.
pub(super) fn seconds_per(unit: &str) -> Option<f64> {
    match unit.to_lowercase().as_str() {
        "s" | "sec" | "second" | "seconds" => Some(1.0),
        "ms" | "msec" | "millisecond" | "milliseconds" => Some(1e-3),
        "us" | "\u{b5}s" | "\u{3bc}s" | "microseconds" => Some(1e-6),
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_accepted_spellings_of_headings() {
        for (heading, name, unit) in [
            ("I [uV]", "I", Some("uV")),
            ("II (mV)", "II", Some("mV")),
            ("V1_uV", "V1", Some("uV")),
            ("aVR[\u{b5}V]", "aVR", Some("\u{b5}V")),
            ("ABP (mmHg)", "ABP", Some("mmHg")),
            ("Lead I (Einthoven)", "Lead I (Einthoven)", None),
            ("lead_V", "lead_V", None),
            ("V1", "V1", None),
            ("'MLII'", "MLII", None),
            ("time_s", "time", Some("s")),
            ("t_ms", "t", Some("ms")),
            ("MDC_ECG_LEAD_V1", "MDC_ECG_LEAD_V1", None),
        ] {
            assert_eq!(split(heading), (name, unit), "{heading}");
        }
    }
}
