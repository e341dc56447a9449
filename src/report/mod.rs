//! What was measured, as JSON, plain text and CSV.
//!
//! The JSON is described by `document.schema.json` beside this file; [`SCHEMA`] is its name.

mod csv;
mod document;
mod json;
mod text;

pub use csv::csv;
pub use document::{Document, SCHEMA};
pub use text::text;

use crate::case::Case;

/// The schema of the JSON, as a JSON Schema (draft 2020-12).
pub const JSON_SCHEMA: &str = include_str!("document.schema.json");

/// The JSON of a case, indented, with a line break at its end.
///
/// # Errors
/// Only when a number is not finite, which the unit types exclude.
pub fn json(case: &Case) -> serde_json::Result<String> {
    let mut text = serde_json::to_string_pretty(&Document::of(case))?;
    text.push('\n');
    Ok(text)
}
