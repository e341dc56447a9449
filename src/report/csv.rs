//! The measurements as one CSV table: quantity, value, unit, spread over beats, expected error, reason.

use crate::case::{Case, Entry, table};

/// The table with a header row; an empty cell is "none".
///
/// # Errors
/// Only when the writer in memory fails.
pub fn csv(case: &Case) -> Result<String, csv::Error> {
    let mut writer = csv::Writer::from_writer(Vec::new());
    writer.write_record(["file", "quantity", "value", "unit", "spread", "expected_error", "reason"])?;
    let file = case.recording.source.file.as_str();
    for row in table(case) {
        let (value, spread, error, reason) = match row.entry {
            // A minus sign that a spreadsheet reads.
            Entry::Value { value, expected_error, over_beats } => {
                let none = String::new;
                (
                    value.replace('−', "-"),
                    over_beats.unwrap_or_else(none),
                    expected_error.unwrap_or_else(none),
                    none(),
                )
            }
            Entry::Reason(reason) => (String::new(), String::new(), String::new(), reason),
        };
        writer.write_record([file, row.quantity, &value, row.unit, &spread, &error, &reason])?;
    }
    let bytes = writer.into_inner().map_err(|error| csv::Error::from(error.into_error()))?;
    Ok(String::from_utf8_lossy(&bytes).into_owned())
}
