//! `leadsheet measure`.

use super::args::{FormatArg, MeasureArgs};
use super::{Failure, inputs, terminal};
use crate::case::{Case, Settings};
use crate::report;

pub(super) fn measure(args: &MeasureArgs) -> Result<(), Failure> {
    let recording = inputs::read(&args.recording).map_err(Failure::Because)?;
    let sinus = args.sinus.as_deref().map(inputs::read).transpose().map_err(Failure::Because)?;
    let case = Case::analyse(recording, sinus, Settings::default())
        .map_err(|error| Failure::Because(format!("{}: {error}", args.recording.display())))?;
    let text = match args.format {
        FormatArg::Text => report::text(&case),
        FormatArg::Json => report::json(&case).map_err(|error| Failure::Because(error.to_string()))?,
        FormatArg::Csv => report::csv(&case).map_err(|error| Failure::Because(error.to_string()))?,
    };
    terminal::say(&text)
}
