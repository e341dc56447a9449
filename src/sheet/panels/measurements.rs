//! The measurement table, and what the measurements rest on.

use super::super::draw::paragraph;
use super::super::given::Sheet;
use super::super::layout::Area;
use super::super::{ComposeError, Element, Role, Shape};
use super::HEADING;
use crate::beats::{Beats, Rhythm, RrRange};
use crate::case::{self, Entry};

/// Right edge of the values, left edges of units, errors and spreads: parts of the width.
const VALUE: f64 = 0.38;
const UNIT: f64 = 0.40;
const ERROR: f64 = 0.54;
const OVER_BEATS: f64 = 0.76;
/// Largest distance between rows.
const WIDEST_ROW: f64 = 3.6;

/// The panel.
pub(super) fn elements(sheet: &Sheet, area: Area) -> Result<Vec<Element>, ComposeError> {
    let (body, label) = (sheet.body(), sheet.label());
    let (mut heading, rule) = super::heading(sheet, area, "Measurements");
    let at = |part: f64| area.left + area.width * part;
    let caption = area.top + sheet.heading().cap() + 0.2;
    heading.push(label.left(at(ERROR), caption, "expected error"));
    heading.push(label.left(at(OVER_BEATS), caption, "SD over beats"));
    let basis = basis(sheet, area)?;
    let rows = case::table(sheet.case);
    let leading = body.size * 1.22;
    let below = leading * basis.len() as f64;
    let pitch = ((area.height - HEADING - below) / rows.len().max(1) as f64).min(WIDEST_ROW);
    let mut elements = vec![Element { role: Role::Heading, shapes: heading }, rule];
    let mut y = area.top + HEADING + body.cap() - 0.4;
    for row in rows {
        let mut cells = vec![body.left(area.left, y, row.quantity)];
        match &row.entry {
            Entry::Value { value, expected_error, over_beats } => {
                cells.push(body.bold().right(at(VALUE), y, value));
                cells.push(body.left(at(UNIT), y, row.unit));
                if let Some(error) = expected_error {
                    cells.push(label.left(at(ERROR), y, &format!("± {error}")));
                }
                if let Some(spread) = over_beats {
                    cells.push(label.left(at(OVER_BEATS), y, spread));
                }
            }
            Entry::Reason(reason) => {
                let from = at(VALUE) - body.width("000")?;
                let reason = label.fit(&format!("– {reason}"), area.right() - from)?;
                cells.push(label.left(from, y, &reason));
            }
        }
        elements.push(Element { role: Role::TableRow, shapes: cells });
        y += pitch;
    }
    y += 0.8;
    let mut lines: Vec<Shape> = Vec::new();
    for line in &basis {
        lines.push(label.left(area.left, y, line));
        y += leading;
    }
    elements.push(paragraph(lines));
    Ok(elements)
}

/// Beats, RR range and noise, as lines.
fn basis(sheet: &Sheet, area: Area) -> Result<Vec<String>, ComposeError> {
    let analysis = &sheet.case.analysis;
    let found = analysis.beats.all.len();
    let used = analysis.representative.as_ref().map_or(0, |beat| beat.used.len());
    let dominant = analysis.beats.of(Beats::DOMINANT).count();
    let other =
        if dominant < found { format!(", {} of other shape", found - dominant) } else { String::new() };
    let range = |range: &RrRange| format!("RR {:.0} to {:.0} ms", range.min.ms(), range.max.ms());
    let rhythm = match &analysis.beats.rhythm {
        Rhythm::Regular(rr) => format!("{}, regular", range(rr)),
        Rhythm::Irregular(rr) => format!("{}, irregular", range(rr)),
        Rhythm::Uncertain(why) => format!("rhythm uncertain: {why}"),
    };
    let label = sheet.label();
    let beats = format!("{used} of {found} beats averaged{other}; {rhythm}");
    let noise = |limb: bool| -> Vec<String> {
        let leads = analysis.measurements.noise.iter().filter(|(lead, _)| lead.is_limb() == limb);
        leads.filter_map(|(lead, noise)| Some(format!("{lead} {:.0}", (*noise)?.get() * 1000.0))).collect()
    };
    let mut lines = label.wrap(&beats, area.width)?;
    for (what, noises) in [("Noise, µV", noise(true)), ("Noise, µV", noise(false))] {
        if !noises.is_empty() {
            lines.push(label.fit(&format!("{what}: {}", noises.join(" · ")), area.width)?);
        }
    }
    Ok(lines)
}
