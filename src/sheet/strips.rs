//! The grid field: grid, calibration pulses, traces, separators, lead names.

use super::draw::{artifact, paragraph, pen, polyline, rect};
use super::given::{Sheet, plain};
use super::layout::Area;
use super::occupied::Occupied;
use super::thin;
use super::trace::{Content, PULSE_MILLIVOLTS, Row, Segment};
use super::{ComposeError, Element, Grid, Role, Shape};

/// Duration of the calibration pulse (a square of 1 mV and 200 ms).
const PULSE_SECONDS: f64 = 0.2;
/// Flat line before and after the pulse.
const PULSE_FOOT: f64 = 1.5;
/// A separator's strokes, from and to this far from the zero line.
const SEPARATOR: (f64, f64) = (4.0, 7.0);
/// Least distance between a text and a line.
const CLEAR: f64 = 0.4;

/// All of a page's grid field, bottom first.
pub(super) fn elements(sheet: &Sheet, rows: &[Row]) -> Result<Vec<Element>, ComposeError> {
    let field = sheet.geometry.field;
    let lines = sheet.layout.lines;
    let mut occupied = Occupied::new(field.left, field.right());
    let mut elements = vec![artifact(vec![Shape::Grid(Grid {
        field: rect(field),
        fine: pen(lines.fine_ruling),
        coarse: pen(lines.coarse_ruling),
    })])];
    let mut marks = Vec::new();
    for row in rows {
        for stroke in separators(row) {
            occupied.line(&stroke, lines.separator.width / 2.0);
            marks.push(polyline(&stroke, pen(lines.separator)));
        }
        let pulse = pulse(sheet, row);
        occupied.line(&pulse, lines.pulse.width / 2.0);
        marks.push(polyline(&pulse, pen(lines.pulse)));
    }
    elements.push(artifact(marks));
    for row in rows {
        elements.extend(row.segments.iter().filter_map(|segment| figure(sheet, row, segment, &mut occupied)));
    }
    let mut names = Vec::new();
    for row in rows {
        for segment in &row.segments {
            names.extend(label(sheet, row, segment, &mut occupied)?);
            names.extend(breaks(sheet, row, segment, &mut occupied)?);
        }
        if row.gain != sheet.options.gain.get() {
            names.push(own_gain(sheet, row));
        }
    }
    elements.push(paragraph(names));
    Ok(elements)
}

/// The pulse of a row, in the middle of its column, at the row's gain.
fn pulse(sheet: &Sheet, row: &Row) -> Vec<(f64, f64)> {
    let width = PULSE_SECONDS * sheet.options.speed.get();
    let left = sheet.geometry.field.left + (sheet.layout.strips.pulse_column - width) / 2.0;
    let top = row.base - PULSE_MILLIVOLTS * row.gain;
    vec![
        (left - PULSE_FOOT, row.base),
        (left, row.base),
        (left, top),
        (left + width, top),
        (left + width, row.base),
        (left + width + PULSE_FOOT, row.base),
    ]
}

/// Short strokes above and below the zero line between one lead and the next.
fn separators(row: &Row) -> impl Iterator<Item = [(f64, f64); 2]> {
    let between = row.segments.iter().skip(1).map(|segment| segment.left);
    let (near, far) = SEPARATOR;
    between.flat_map(move |x| {
        [[(x, row.base - far), (x, row.base - near)], [(x, row.base + near), (x, row.base + far)]]
    })
}

/// A lead's trace, its vertices at sample times.
fn figure(sheet: &Sheet, row: &Row, segment: &Segment, occupied: &mut Occupied) -> Option<Element> {
    let Content::Trace { pieces, .. } = &segment.content else { return None };
    let line = sheet.layout.lines.trace;
    let mut shapes = Vec::with_capacity(pieces.len());
    for piece in pieces {
        let heights: Vec<f64> = piece.iter().map(|(_, value)| row.base - value * row.gain).collect();
        let points: Vec<(f64, f64)> =
            thin::kept(&heights).into_iter().map(|(index, y)| (piece[index].0, y)).collect();
        occupied.line(&points, line.width / 2.0);
        shapes.push(polyline(&points, pen(line)));
    }
    let alt = format!(
        "Lead {}, {:.1} to {:.1} s, {} mm/s, {} mm/mV",
        name(segment),
        segment.from,
        segment.to,
        plain(sheet.options.speed.get()),
        plain(row.gain)
    );
    Some(Element { role: Role::Figure { alt }, shapes })
}

/// As printed: −aVR when turned round.
fn name(segment: &Segment) -> String {
    let sign = if segment.shown.inverted { "−" } else { "" };
    format!("{sign}{}", segment.shown.lead)
}

/// The lead's name and what must be said beside it, where no trace runs.
fn label(
    sheet: &Sheet,
    row: &Row,
    segment: &Segment,
    occupied: &mut Occupied,
) -> Result<Vec<Shape>, ComposeError> {
    let (name_style, beside) = (sheet.lead_name(), sheet.label());
    let name = name(segment);
    let mut said: Vec<String> = Vec::new();
    if sheet.derived(segment.shown.lead) {
        said.push("derived".to_owned());
    }
    if segment.offset != 0.0 {
        said.push(format!("moved by {} mV", plain(-segment.offset).replace('-', "−")));
    }
    if let Content::Nothing(why) = &segment.content {
        said.push(format!("absent: {why}"));
    }
    let said = said.join(", ");
    let name_width = name_style.width(&name)?;
    let gap = if said.is_empty() { 0.0 } else { 1.0 };
    let width = name_width + gap + beside.width(&said)?;
    let Some((x, y)) = place(row, segment, width, name_style.cap(), occupied) else {
        return Ok(Vec::new());
    };
    occupied.area(Area { left: x, top: y - name_style.cap(), width, height: name_style.cap() + 0.6 });
    let mut shapes = vec![name_style.left(x, y, &name)];
    if !said.is_empty() {
        shapes.push(beside.left(x + name_width + gap, y, &said));
    }
    Ok(shapes)
}

/// Says in a break what broke the trace, where there is room.
fn breaks(
    sheet: &Sheet,
    row: &Row,
    segment: &Segment,
    occupied: &mut Occupied,
) -> Result<Vec<Shape>, ComposeError> {
    let Content::Trace { breaks, .. } = &segment.content else { return Ok(Vec::new()) };
    let style = sheet.label();
    let mut shapes = Vec::new();
    for gap in breaks {
        let text = if gap.saturated { "at limit" } else { "no signal" };
        let width = style.width(text)?;
        let middle = (gap.left + gap.right) / 2.0;
        let area = Area {
            left: middle - width / 2.0 - CLEAR,
            top: row.base - style.cap() - CLEAR,
            width: width + 2.0 * CLEAR,
            height: style.cap() + 0.6 + 2.0 * CLEAR,
        };
        if gap.right - gap.left > area.width && occupied.taken(area) == 0 {
            occupied.area(area);
            shapes.push(style.middle(middle, row.base, text));
        }
    }
    Ok(shapes)
}

/// The place for a text of this size that is nearest to the segment's top left corner and free of lines;
/// where none is free, the one that touches least.
fn place(row: &Row, segment: &Segment, width: f64, cap: f64, occupied: &Occupied) -> Option<(f64, f64)> {
    let (first_x, last_x) = (segment.left + 1.0, segment.right - width - 1.0);
    let (first_y, last_y) = (row.top + cap + 0.8, row.bottom - 1.0);
    let steps = |from: f64, to: f64, step: f64| {
        let count = ((to - from) / step).floor().max(0.0) as u32;
        (0..=count).map(move |index| from + f64::from(index) * step)
    };
    let mut best: Option<(usize, f64, (f64, f64))> = None;
    for x in steps(first_x, last_x, 1.0) {
        let sideways = x - first_x;
        if best.is_some_and(|(taken, cost, _)| taken == 0 && cost <= sideways) {
            break;
        }
        for y in steps(first_y, last_y, 0.5) {
            let cost = sideways + (y - first_y) * 0.5;
            let area = Area {
                left: x - CLEAR,
                top: y - cap - CLEAR,
                width: width + 2.0 * CLEAR,
                height: cap + 0.6 + 2.0 * CLEAR,
            };
            let taken = occupied.taken(area);
            if best.is_none_or(|(least, lowest, _)| (taken, cost) < (least, lowest)) {
                best = Some((taken, cost, (x, y)));
            }
        }
    }
    best.map(|(_, _, at)| at)
}

/// Says below the pulse that a row has a gain of its own.
fn own_gain(sheet: &Sheet, row: &Row) -> Shape {
    let style = sheet.label().bold().inked(sheet.layout.texts.ink);
    let middle = sheet.geometry.field.left + sheet.layout.strips.pulse_column / 2.0;
    style.middle(middle, row.base + style.cap() + 1.2, &format!("{} mm/mV", plain(row.gain)))
}
