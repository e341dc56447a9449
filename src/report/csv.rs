//! The measurements as one CSV table: quantity, value, unit, spread over beats, expected error, reason.

use crate::case::{Case, Entry, Spread, table};

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
            Entry::Value { value, spread } => {
                let value = value.replace('−', "-");
                match spread {
                    Some(Spread::OverBeats(spread)) => (value, spread, String::new(), String::new()),
                    Some(Spread::ExpectedError(error)) => (value, String::new(), error, String::new()),
                    None => (value, String::new(), String::new(), String::new()),
                }
            }
            Entry::Reason(reason) => (String::new(), String::new(), String::new(), reason),
        };
        writer.write_record([file, row.quantity, &value, row.unit, &spread, &error, &reason])?;
    }
    let bytes = writer.into_inner().map_err(|error| csv::Error::from(error.into_error()))?;
    Ok(String::from_utf8_lossy(&bytes).into_owned())
}
