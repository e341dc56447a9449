//! What stands beside the traces: measurements, findings with the beats that show them, notes and the
//! reader's block. What doesn't fit goes to a page of its own; nothing is left out.

mod beat;
mod findings;
mod measurements;
pub(super) mod notes;

use super::draw::{artifact, pen, polyline};
use super::layout::Area;
use super::sheet::Sheet;
use super::{ComposeError, Element, Shape};

/// From the panel's top to the first line below its heading.
const HEADING: f64 = 4.6;

/// Adds the panels to the first page or to a page of their own, and a page for what doesn't fit.
pub(super) fn add(
    sheet: &Sheet,
    halved: &[String],
    pages: &mut Vec<Vec<Element>>,
) -> Result<(), ComposeError> {
    let geometry = sheet.geometry;
    let mut elements = measurements::elements(sheet, geometry.measurements)?;
    let (shown, findings_left) = findings::elements(sheet, geometry.findings)?;
    elements.extend(shown);
    let (shown, notes_left) = notes::elements(sheet, geometry.notes, halved)?;
    elements.extend(shown);
    if geometry.panels_on_own_page {
        pages.push(elements);
    } else if let Some(first) = pages.first_mut() {
        first.extend(elements);
    }
    if findings_left.is_empty() && notes_left.is_empty() {
        return Ok(());
    }
    let top = geometry.field.top + 2.0;
    let bottom = geometry.caution.top - 2.0;
    let (left, right) = (geometry.identification.left, geometry.caution.right());
    let for_notes = geometry.notes.width;
    let whole = Area { left, top, width: right - left - for_notes - 4.0, height: bottom - top };
    let mut elements = findings::continued(sheet, whole, &findings_left)?;
    let beside = Area { left: right - for_notes, width: for_notes, ..whole };
    elements.extend(notes::continued(sheet, beside, &notes_left)?);
    pages.push(elements);
    Ok(())
}

/// A panel's heading, with a rule under it; more texts may stand on the same line.
fn heading(sheet: &Sheet, area: Area, text: &str) -> (Vec<Shape>, Element) {
    let style = sheet.heading();
    let y = area.top + style.cap() + 0.2;
    let rule = area.top + style.cap() + 1.3;
    (
        vec![style.left(area.left, y, text)],
        artifact(vec![polyline(&[(area.left, rule), (area.right(), rule)], pen(sheet.layout.lines.rule))]),
    )
}
