//! What stands beside the traces: measurements, findings with the beats that show them, notes and the
//! reader's block. What doesn't fit goes to a page of its own; nothing is left out.

mod beat;
mod findings;
mod measurements;
pub(super) mod notes;

use super::draw::{artifact, pen, polyline};
use super::given::Sheet;
use super::layout::Area;
use super::{ComposeError, Element, Shape};

/// From the panel's top to the first line below its heading.
const HEADING: f64 = 4.6;

/// Adds the panels to the first page or to a page of their own; what doesn't fit goes below the strips of
/// the next page, or to pages of its own.
pub(super) fn add(
    sheet: &Sheet,
    halved: &[String],
    pages: &mut Vec<Vec<Element>>,
) -> Result<(), ComposeError> {
    let geometry = sheet.geometry;
    let mut elements = measurements::elements(sheet, geometry.measurements)?;
    let (shown, mut findings) = findings::elements(sheet, geometry.findings)?;
    elements.extend(shown);
    let (shown, mut notes) = notes::elements(sheet, geometry.notes, halved)?;
    elements.extend(shown);
    let (left, right) = (geometry.measurements.left, geometry.notes.right());
    let top = geometry.field.top + 2.0;
    let whole = Area { left, top, width: right - left, height: geometry.caution.top - 2.0 - top };
    let below = Area { top: geometry.notes.top, height: geometry.notes.height, ..whole };
    let mut page = 1;
    if geometry.panels_on_own_page {
        pages.push(elements);
        page = pages.len();
    } else if let Some(first) = pages.first_mut() {
        first.extend(elements);
    }
    while !findings.is_empty() || !notes.is_empty() {
        let area = if page < pages.len() { below } else { whole };
        if page == pages.len() {
            pages.push(Vec::new());
        }
        let for_notes = geometry.notes.width;
        let beside = Area { left: right - for_notes, width: for_notes, ..area };
        let rest = Area { width: area.width - for_notes - 5.0, ..area };
        let (mut elements, shown) = findings::continued(sheet, rest, &findings)?;
        findings.drain(..shown);
        let (lines, shown) = notes::continued(sheet, beside, &notes)?;
        notes.drain(..shown);
        elements.extend(lines);
        pages[page].extend(elements);
        page += 1;
    }
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
